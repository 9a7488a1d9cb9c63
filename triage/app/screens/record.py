"""The job as it is saved, and its report."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Span, line
from triage.app.widgets.panel import Panel
from triage.job.views import JobView


class RecordScreen(Frame):
    """Where the file lies, and the report to scroll through."""

    PLACE: ClassVar[str] = "record"
    NAME: ClassVar[str] = "record"
    CSS_PATH = "record.tcss"
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("pageup", "page(-10)", "up"),
        ("pagedown", "page(10)", "down"),
        ("up", "page(-1)", "up"),
        ("down", "page(1)", "down"),
        ("left", "pan(-16)", "left"),
        ("right", "pan(16)", "right"),
    ]

    def body(self) -> ComposeResult:
        """File and report."""
        yield Panel(id="file")
        yield Panel(id="report")

    def refresh_body(self, view: JobView | None) -> None:
        """The file at once, the report when it is written."""
        bench = self.desk.bench
        if bench is not None:
            self.panel("file").show((line("saved after every entry: ", Span(str(bench.path), "strong")),))
            self.ask("report", lambda one: one.report("text"), self._show, self._failed, long=True)

    def _show(self, text: str) -> None:
        self.panel("report").show(tuple(line(row) for row in text.splitlines()))

    def _failed(self, text: str) -> None:
        self.panel("report").show((line(Span(text, "bad")),))

    def action_pan(self, columns: int) -> None:
        """Move the report sideways."""
        self.panel("report").pan(columns)

    def action_page(self, rows: int) -> None:
        """Scroll the report."""
        self.panel("report").scroll_rows(rows)
