"""The open job as the screens see it: the newest view, and the one way to ask the bench something.

Entries go through ``enter`` one after the other; what only looks goes through ``look``. The slow first
calculation runs in a thread of its own, so that cautions and signs can be entered meanwhile.
"""

from __future__ import annotations

import threading
from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING, TypeVar

from triage.app.back_room import Answer, BackRoom
from triage.app.contract import OpenJob
from triage.errors import TriageError
from triage.job.progress import Listener, heard_by

if TYPE_CHECKING:
    from triage.job.views import JobView

T = TypeVar("T")
_STEPS = 20
"""Times that a calculation shows how far it is: each costs a line on a slow link."""


class Stopped(Exception):
    """The technician stopped the calculation."""


Deliver = Callable[[Callable[[], None]], object]


class Desk:
    """Holds the open job and its newest view.

    Parameters
    ----------
    deliver : has a callable called on the screen's side; safe to call from a thread
    changed : called on the screen's side when there is a new view or a new message; with True when only the status line
        has something new
    fault : called with an exception that no person at the bench can mend
    """

    def __init__(self, deliver: Deliver, changed: Callable[..., None], fault: Callable[[Exception], None]) -> None:
        self._deliver = deliver
        self._changed = changed
        self._fault = fault
        self._quick = BackRoom()
        self._slow = BackRoom()
        self._long = BackRoom()
        self._beside = BackRoom()
        self.bench: OpenJob | None = None
        self.view: JobView | None = None
        self.message = ""
        """What the last question came to, for the message line."""
        self.refused = False
        """True when the message says that something was not accepted."""
        self.progress = ""
        """How far the calculation of what to expect is, or that of the powered board beside the work; empty when there is
        none."""
        self.looking = ""
        """How far a long look is; empty when there is none."""
        self._long_looks: dict[str, threading.Event] = {}
        self._stop = threading.Event()
        self.pending = False
        """True while an entry is being worked on."""
        self.half_typed = ""
        """What stands in the reading field."""

    @property
    def busy(self) -> bool:
        """True while something is being computed."""
        return any(room.busy for room in (self._quick, self._slow, self._long, self._beside))

    @property
    def pins(self) -> Mapping[str, tuple[str, ...]]:
        """Node -> the part pins that meet there, ``D1 cathode``."""
        found: dict[str, tuple[str, ...]] = {}
        for part in self.bench.board.parts if self.bench else ():
            for pin, node in part.pins.items():
                found[node] = (*found.get(node, ()), f"{part.ref} {pin}")
        return found

    def open(self, begin: Callable[[], OpenJob], then: Callable[[], None]) -> None:
        """Open or begin a job; ``then`` is called when its first view is there."""
        self.put_away()
        self.pending = True

        def work() -> tuple[OpenJob, JobView]:
            bench = begin()
            return bench, bench.view()

        def opened(answer: Answer[tuple[OpenJob, JobView]]) -> None:
            self.pending = False
            if answer.value is None:
                self._report(answer.error)
                return
            self.bench, view = answer.value
            self._take(view)
            self.message = view.message
            self.refused = False
            then()
            self._prepare(self.bench)

        self._quick.ask("open", work, opened, self._deliver)

    def compute(self) -> None:
        """Go on with a calculation that was stopped."""
        if self.bench is None or self.view is None:
            return
        if self.view.computing and not self._slow.busy:
            self._prepare(self.bench)
            self.say("")
        elif not self.view.computing and not self._beside.busy:
            self._work_out(self.bench)
            self.say("")

    def stop(self) -> None:
        """End the calculation of what to expect; entries can be made without it."""
        self._stop.set()

    def stop_looking(self) -> bool:
        """End the long looks that a screen waits for; False when there is none."""
        waiting = [stop for stop in self._long_looks.values() if not stop.is_set()]
        for stop in waiting:
            stop.set()
        self.looking = ""
        return bool(waiting)

    def _listener(self, stop: threading.Event, hear: Callable[[str], None]) -> Listener:
        """What hears of a calculation in its thread: tells the screen how far it is, and ends it once ``stop`` is set."""
        step: tuple[str, int] | None = None

        def listen(what: str, done: int, wanted: int) -> None:
            nonlocal step
            if stop.is_set():
                raise Stopped
            now = (what, done * _STEPS // wanted if wanted else 0)
            if now != step:
                step = now
                self._deliver(lambda: hear(f"computing {what}" + (f", {100 * done // wanted} %" if wanted else "")))

        return listen

    def _prepare(self, bench: OpenJob) -> None:
        self._stop = stop = threading.Event()
        self.progress = "computing..."

        def hear(text: str) -> None:
            if bench is self.bench and not stop.is_set():
                self.progress = text
                self._changed()

        listen = self._listener(stop, hear)

        def ready(answer: Answer[object]) -> None:
            if bench is not self.bench:
                return
            self.progress = ""
            if isinstance(answer.error, Stopped):
                self.progress = "stopped"
                self.say("stopped: nothing is suggested; type go to compute on, or enter readings of your own choice (+)")
            elif answer.error is not None:
                self._report(answer.error)
            elif self.pending:
                self._changed()
            else:
                self._quick.ask("entry", bench.view, self._accepted_quietly, self._deliver)
            if answer.error is None:
                self._work_out(bench)

        self._slow.ask("prepare", lambda: bench.prepare(listen), ready, self._deliver)

    def _work_out(self, bench: OpenJob) -> None:
        """Have the powered board solved beside the work: minutes for one that nobody has drawn, nothing for a shipped one."""
        self._stop = stop = threading.Event()

        def hear(text: str) -> None:
            if bench is self.bench and not stop.is_set():
                self.progress = text
                self._changed()

        def ready(answer: Answer[bool]) -> None:
            if bench is not self.bench:
                return
            self.progress = ""
            if isinstance(answer.error, Stopped):
                self.say("stopped: what mains on would show is known in part; type go to go on")
            elif answer.error is not None:
                self._report(answer.error)
            elif answer.value and self.view is not None and self.view.suggestion is None and not self.pending:
                # Nobody holds a probe to a suggestion: what is now known may bring one.
                self._quick.ask("entry", bench.take_up, self._accepted_quietly, self._deliver)
            else:
                self._changed()

        self._beside.ask("work out", lambda: bench.work_out(self._listener(stop, hear)), ready, self._deliver)

    def enter(self, call: Callable[[OpenJob], JobView], accepted: Callable[[], None] | None = None, queue: bool = False) -> bool:
        """Give the bench an entry; False when there is no job, or the entry before is still being worked on.

        ``accepted`` is called before the screens are told, when the bench has taken the entry. ``queue``:
        wait behind the entry before instead of being refused; of entries that wait only the last calls its
        ``accepted``.
        """
        bench = self.bench
        if bench is None or (self.pending and not queue):
            self.say("still working on the entry before" if bench else "no job is open", refused=True)
            return False
        self.pending = True

        def done(answer: Answer[JobView]) -> None:
            self.pending = False
            if answer.value is None:
                self._report(answer.error)
                return
            self._take(answer.value)
            if accepted is not None:
                accepted()
            self.say(answer.value.message)

        self._quick.ask("entry", lambda: call(bench), done, self._deliver, must_run=True)
        self._changed()
        return True

    def look(
        self,
        lane: str,
        call: Callable[[OpenJob], T],
        then: Callable[[T], None],
        failed: Callable[[str], None] | None = None,
        long: bool = False,
    ) -> None:
        """Ask the bench something that changes nothing; only the newest question of a lane is answered.

        ``long``: what may solve a circuit anew, which takes up to a minute and must not keep an entry waiting. It tells how
        far it is; a newer question of its lane ends it, and so does ``stop_looking``.
        """
        bench = self.bench
        if bench is not None:
            self._ask(lane, lambda: call(bench), then, failed or (lambda text: self.say(text, refused=True)), long)

    def work(
        self,
        lane: str,
        call: Callable[[], T],
        then: Callable[[T], None],
        failed: Callable[[str], None],
        long: bool = False,
        must_run: bool = False,
    ) -> None:
        """Have something done that needs no open job; the newest question of a lane is answered.

        ``long`` as for ``look``. ``must_run``: carry it out even when a newer one waits.
        """
        self._ask(lane, call, then, failed, long, must_run)

    def _ask(
        self,
        lane: str,
        call: Callable[[], T],
        then: Callable[[T], None],
        failed: Callable[[str], None],
        long: bool,
        must_run: bool = False,
    ) -> None:
        bench, stop = self.bench, threading.Event()

        def done(answer: Answer[T]) -> None:
            if self._long_looks.get(lane) is stop:
                del self._long_looks[lane]
                self.looking = ""
                self._changed(True)
            if isinstance(answer.error, Stopped):
                failed("stopped")
                return
            if answer.error is not None:
                self._report(answer.error, failed)
                return
            try:
                then(answer.value)  # type: ignore[arg-type]
            except Exception as error:
                # What cannot be shown must not take the screen down in the middle of a job.
                self._report(error, failed)

        if not long:
            self._quick.ask(lane, call, done, self._deliver, must_run)
            return

        def hear(text: str) -> None:
            if bench is self.bench and self._long_looks.get(lane) is stop and not stop.is_set():
                self.looking = text
                self._changed(True)

        def work() -> T:
            with heard_by(self._listener(stop, hear)):
                return call()

        if (before := self._long_looks.pop(lane, None)) is not None:
            before.set()
        self._long_looks[lane] = stop
        self._long.ask(lane, work, done, self._deliver, must_run)

    def put_away(self) -> None:
        """Let go of the job; answers still to come for it are dropped."""
        self._quick.forget()
        self._stop.set()
        self.stop_looking()
        self._long_looks.clear()
        self._slow.forget()
        self._long.forget()
        self._beside.forget()
        if self.bench is not None:
            self.bench.release()
        self.bench, self.view, self.message, self.refused, self.pending = None, None, "", False, False
        self.half_typed = ""

    def finish(self, seconds: float) -> bool:
        """Wait until every entry is with the bench, which writes each at once; False when that takes
        longer."""
        return self._quick.wait(seconds)

    def _accepted_quietly(self, answer: Answer[JobView]) -> None:
        if answer.value is None:
            self._report(answer.error)
            return
        self._take(answer.value)
        self._changed()

    def _take(self, view: JobView) -> None:
        self.view = view

    def say(self, text: str, refused: bool = False) -> None:
        """Put a message on the message line, whatever screen is in front."""
        self.message, self.refused = text, refused
        self._changed()

    def _report(self, error: Exception | None, failed: Callable[[str], None] | None = None) -> None:
        if isinstance(error, TriageError):
            from triage.app.text.bench import key_for

            text = str(error)
            key = key_for(text)
            text = f"{key}: {text}" if key else text
        else:
            text = f"fault in the program ({type(error).__name__}: {error}); the entries before are saved"
            if error is not None:
                self._fault(error)
        if failed is not None:
            failed(text)
        else:
            self.say(text, refused=True)
