"""The board that is being made from its label, as the screens see it: what was typed and ticked, the newest view, and the
one way to change it."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, TypeVar

from triage.app.contract import OpenDraft
from triage.app.desk import Desk

if TYPE_CHECKING:
    from triage.job.draft_views import DraftView

T = TypeVar("T")


class Drafting:
    """Holds the draft and its newest view.

    Parameters
    ----------
    desk : whose thread does the work
    make : makes a new draft, or opens the profile given
    """

    def __init__(self, desk: Desk, make: Callable[[Path | None], OpenDraft]) -> None:
        self._desk = desk
        self._make = make
        self._draft: OpenDraft | None = None
        self.typed: dict[str, str] = {}
        """Field of the label -> what was typed."""
        self.seen: dict[str, str] = {}
        """Feature or count -> ``+`` seen, ``-`` not there, or a number."""
        self.view: DraftView | None = None
        self.path: Path | None = None
        """The profile it is kept in."""

    @property
    def statements(self) -> tuple[str, ...]:
        """What was seen and counted, as the estimate reads it."""
        words = {"+": "{}", "-": "no {}"}
        return tuple(words.get(said, f"{said} {{}}").format(what) for what, said in self.seen.items() if said)

    def ask(
        self, lane: str, call: Callable[[OpenDraft], T], then: Callable[[T], None], failed: Callable[[str], None]
    ) -> None:
        """Ask something that changes nothing; only the newest answer of a lane is shown."""
        self._desk.work(lane, lambda: call(self._opened()), then, failed)

    def change(
        self, call: Callable[[OpenDraft], DraftView], then: Callable[[DraftView], None], failed: Callable[[str], None]
    ) -> None:
        """Change the draft; ``then`` is called when the change is on the disk."""

        def work() -> tuple[DraftView, Path]:
            draft = self._opened()
            return call(draft), draft.keep()

        def changed(found: tuple[DraftView, Path]) -> None:
            self.view, self.path = found
            then(self.view)

        self._desk.work("draft", work, changed, failed, must_run=True)

    def begin(self) -> None:
        """Let go of the draft: the next estimate makes a new one."""
        self._draft, self.view, self.path = None, None, None

    def go_on(self, path: Path, then: Callable[[DraftView], None], failed: Callable[[str], None]) -> None:
        """Go on with a profile of the shop's own."""

        def work() -> tuple[OpenDraft, DraftView, Path]:
            draft = self._make(path)
            return draft, draft.view(), path

        def opened(found: tuple[OpenDraft, DraftView, Path]) -> None:
            self._draft, self.view, self.path = found
            then(self.view)

        self._desk.work("draft", work, opened, failed, must_run=True)

    def _opened(self) -> OpenDraft:
        """The draft, made when it is first needed (called in the thread)."""
        if self._draft is None:
            self._draft = self._make(None)
        return self._draft
