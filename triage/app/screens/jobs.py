"""Find a job among many by half-remembered words: adapter, complaint, verdict."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Form
from triage.app.lines import Line, Span, columns, line
from triage.app.widgets.field import Field
from triage.app.widgets.panel import ListPanel, Panel

if TYPE_CHECKING:
    from triage.job.summary import Summary
    from triage.job.views import JobView


class JobsScreen(Form):
    """A field and the list of what fits, the latest first while nothing is typed."""

    PLACE: ClassVar[str] = "jobs"
    NAME: ClassVar[str] = "jobs"
    AUTO_FOCUS = "#words"
    CSS_PATH = "jobs.tcss"
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("up", "move(-1)", "up"),
        ("down", "move(1)", "down"),
        ("pageup", "move(-10)", "page up"),
        ("pagedown", "move(10)", "page down"),
    ]

    def __init__(self) -> None:
        super().__init__()
        self._found: tuple[Summary, ...] = ()

    def body(self) -> ComposeResult:
        """Field and list."""
        with Horizontal(classes="row"):
            yield Panel(id="words-label")
            yield Field(id="words")
            yield Panel(id="words-hint")
        yield ListPanel(id="list")

    def on_mount(self) -> None:
        """The latest jobs."""
        super().on_mount()
        self.panel("words-label").show((line(Span("find ", "strong")),))
        hint = "  adapter, complaint, verdict; Enter opens the line"
        self.panel("words-hint").show((line(Span(hint, "quiet")),))
        self._ask()

    def refresh_body(self, view: JobView | None) -> None:
        """The list for this width."""
        rows = [(one.id, self._row(one)) for one in self._found]
        text = f"{'changed':11}{'stage':9}{'adapter':31}complaint, verdict"
        self.query_one("#list", ListPanel).fill(rows, line(Span(text.ljust(self.wide), "head")))

    def _row(self, one: Summary) -> Line:
        told = ", ".join(filter(None, (one.complaint, one.verdict)))
        return columns([(one.changed[:10], 10), (Span(one.stage, "quiet"), 8), (one.adapter, 30), (told, max(self.wide - 52, 8))])

    def _ask(self) -> None:
        words = self.query_one("#words", Field).value
        self.desk.work("jobs", lambda: self.triage.shelf.find(words), self._show, self._failed, long=True)

    def _show(self, found: tuple[Summary, ...]) -> None:
        if self.is_attached:
            self._found = found
            self.refresh_body(None)
            self.query_one("#list", ListPanel).action_move(-len(found))
            self.show_message("" if found else "no job fits these words")

    def _failed(self, text: str) -> None:
        if self.is_attached:
            self.show_message(text, refused=True)

    def on_input_changed(self, event: Input.Changed) -> None:
        """Search as one types; only the newest answer is shown."""
        self._ask()

    def action_move(self, rows: int) -> None:
        """Move the list while the cursor stays in the field."""
        self.query_one("#list", ListPanel).action_move(rows)

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """Open the job under the cursor."""
        self._take_up(self.query_one("#list", ListPanel).key)

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Open it."""
        self._take_up(event.key)

    def _take_up(self, key: str) -> None:
        job = next((one for one in self._found if one.id == key), None)
        if job is None or self.desk.pending:
            return
        self.show_message("opening...")
        path = self.triage.shelf.path_of(job)
        self.triage.places.clear()
        self.triage.resume(path)

    def action_back(self) -> None:
        """End the search that is under way; else go back."""
        if self.desk.stop_looking():
            self.show_message("stopped; typing goes on with it")
            return
        super().action_back()
