"""Start page: open a job, begin one on a profile, and what to do first."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, ClassVar

from textual import work
from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Line, Span, columns, line
from triage.app.places import make_screen
from triage.app.shelf import Item
from triage.app.widgets.panel import ListPanel, Panel

if TYPE_CHECKING:
    from triage.job.draft_views import DraftView
    from triage.job.views import JobView

_LABEL = "label"
"""Key of the line that begins from a label."""
_WORDS = {"job": "go on ", "profile": "begin ", "own": "own   ", "find": "find  "}
_FIRST = (
    line(Span("First: ", "strong"), "pull the plug. The big capacitor counts as charged until it is read."),
    line("Choose a job to go on with, a profile, or begin from the label; Enter takes it."),
    line("Then: complaint, cautions, a look at the board, and readings as suggested."),
    line(Span("Work on mains parts only as your local code and your training allow.", "quiet")),
)


class StartScreen(Frame):
    """The list of jobs and profiles."""

    PLACE: ClassVar[str] = "start"
    NAME: ClassVar[str] = "triage"
    CSS_PATH = "start.tcss"
    BINDINGS = [("e", "edit", "change estimates")]  # noqa: RUF012 (Textual's own way)

    def __init__(self) -> None:
        super().__init__()
        self._items: tuple[Item, ...] = ()

    def body(self) -> ComposeResult:
        """What to do first, and the list."""
        yield Panel(id="first")
        yield ListPanel(id="items")

    def on_mount(self) -> None:
        """Look for jobs and profiles."""
        super().on_mount()
        self.look_again()

    def on_screen_resume(self) -> None:
        """Look again: a job may have been added."""
        super().on_screen_resume()
        self.look_again()

    @work(thread=True, exclusive=True)
    def look_again(self) -> None:
        """List the folder off the event loop."""
        found = self.triage.shelf.items()
        self.app.call_from_thread(self._list, found)

    def _list(self, found: tuple[Item, ...]) -> None:
        self._items = found
        rows: list[tuple[str, Line]] = []
        new = "a board nobody has drawn: begin from its label and from what can be seen"
        rows.append((_LABEL, columns([(Span("label ", "key"), 6), (new, self.wide - 7)])))
        for number, item in enumerate(found):
            word = _WORDS[item.kind]
            cells: list[tuple[str | Span, int]] = [(Span(word, "key"), 6), (item.title, self.wide - 7)]
            if self.wide >= 110:
                cells = [cells[0], (item.title, self.wide - 38), (Span(item.path.stem, "quiet"), 30)]
            rows.append((str(number), columns(cells)))
        head = line(Span("jobs and profiles".ljust(self.wide), "head"))
        if not found:
            self.show_message("no jobs and no profiles found: install triage again, or name a profile when starting")
        items = self.query_one("#items", ListPanel)
        begun = bool(items.key)
        items.fill(rows, head)
        if not begun and found:
            items.go_to("1" if found[0].kind == "find" else "0")

    def refresh_body(self, view: JobView | None) -> None:
        """The first words."""
        self.panel("first").show(_FIRST)
        if self._items:
            self._list(self._items)

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Open the job, or begin one on the profile."""
        if self.desk.pending:
            return
        if event.key == _LABEL:
            self.triage.action_form("label")
            return
        item = self._items[int(event.key)]
        if item.kind == "find":
            self.triage.action_form("jobs")
            return
        self.show_message("opening...")
        if item.kind == "job":
            self.triage.resume(Path(item.path))
        else:
            self.triage.begin(str(item.path))

    def action_edit(self) -> None:
        """Go on with the estimates of a profile of the shop's own."""
        key = self.query_one("#items", ListPanel).key
        item = self._items[int(key)] if key.isdecimal() else None
        if item is None or item.kind != "own":
            self.show_message("only profiles made here can be changed: those that begin with own", refused=True)
            return
        self.triage.drafting.go_on(item.path, self._opened, lambda text: self.show_message(text, refused=True))

    def _opened(self, view: DraftView) -> None:
        self.triage.push_screen(make_screen("draft"))

    def action_back(self) -> None:
        """Nothing lies behind the start page."""
