"""Runs the bench's work in one thread of its own, so that the screen never waits, and drops answers that come
too late.

A question belongs to a lane; of the questions in one lane only the newest is answered to the screen.
Questions that only look (a search while typing) are not even begun when a newer one waits; entries are always
carried out, in order, and a refused entry is always reported.
"""

import threading
from collections.abc import Callable
from queue import SimpleQueue
from typing import Any, Generic, NamedTuple, TypeVar

T = TypeVar("T")


class Answer(NamedTuple, Generic[T]):
    """What came of a question."""

    value: T | None
    error: Exception | None = None


class _Question(NamedTuple):
    lane: str
    ticket: int
    must_run: bool
    work: Callable[[], Any]
    deliver: Callable[[Callable[[], None]], object]
    then: Callable[[Answer[Any]], None]


class BackRoom:
    """One thread, one queue, one newest question a lane."""

    def __init__(self) -> None:
        self._queue: SimpleQueue[_Question | None] = SimpleQueue()
        self._newest: dict[str, int] = {}
        self._open = 0
        self._idle = threading.Condition()
        self.dropped = 0
        """Answers that were not shown because a newer question had been asked."""
        threading.Thread(target=self._serve, name="bench", daemon=True).start()

    def ask(
        self,
        lane: str,
        work: Callable[[], T],
        then: Callable[[Answer[T]], None],
        deliver: Callable[[Callable[[], None]], object],
        must_run: bool = False,
    ) -> None:
        """Have ``work`` done in the thread and its answer given to ``then`` through ``deliver``.

        ``deliver`` is called in the thread with a callable and must have it called on the screen's side.
        ``must_run``: carry the work out even when a newer question of the same lane waits (entries);
        otherwise it is left out.
        """
        ticket = self._newest.get(lane, 0) + 1
        self._newest[lane] = ticket
        with self._idle:
            self._open += 1
        self._queue.put(_Question(lane, ticket, must_run, work, deliver, then))

    def forget(self, *lanes: str) -> None:
        """Make every answer still to come in these lanes (all lanes when none is named) too late."""
        for lane in lanes or tuple(self._newest):
            self._newest[lane] = self._newest.get(lane, 0) + 1

    @property
    def busy(self) -> bool:
        """True while a question is open."""
        return self._open > 0

    def wait(self, seconds: float) -> bool:
        """Wait until everything asked has been done; False when that takes longer."""
        with self._idle:
            return self._idle.wait_for(lambda: self._open == 0, timeout=seconds)

    def close(self) -> None:
        """End the thread after what is queued."""
        self._queue.put(None)

    def _serve(self) -> None:
        while (question := self._queue.get()) is not None:
            if question.must_run or self._fresh(question):
                try:
                    answer = Answer(question.work())
                except Exception as error:
                    answer = Answer(None, error)
                question.deliver(lambda q=question, a=answer: self._hand_over(q, a))  # type: ignore[misc]
            else:
                self.dropped += 1
            with self._idle:
                self._open -= 1
                self._idle.notify_all()

    def _fresh(self, question: _Question) -> bool:
        return self._newest[question.lane] == question.ticket

    def _hand_over(self, question: _Question, answer: Answer[Any]) -> None:
        if self._fresh(question) or (question.must_run and answer.error is not None):
            question.then(answer)
        else:
            self.dropped += 1
