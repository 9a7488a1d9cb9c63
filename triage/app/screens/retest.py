"""After the repair: what it led to, and closing the job."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Line, Span, line
from triage.app.text.bench import mode_words
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import JobView

_RESULTS = (
    ("works", "the adapter works again"),
    ("still faulty", "the same or another fault is there: the readings go on"),
    ("given up", "not worth while, or not safe to repair"),
)


class RetestScreen(Frame):
    """Results of the repair, then the close."""

    PLACE: ClassVar[str] = "retest"
    NAME: ClassVar[str] = "retest"
    CSS_PATH = "retest.tcss"

    def body(self) -> ComposeResult:
        """What stands, and what can be said now."""
        yield Panel(id="stands")
        yield ListPanel(id="list")

    def refresh_body(self, view: JobView | None) -> None:
        """The verdict, then the choices."""
        if view is None:
            return
        fault = f"{view.verdict.ref} {mode_words(view.verdict.mode)}".strip() or view.verdict.status
        self.panel("stands").show((line("fault found: ", Span(fault, "strong")),))
        rows: list[tuple[str, Line]] = [
            (key, line(Span(key.ljust(16), "strong"), text)) for key, text in _RESULTS
        ]
        rows.append(
            (
                "close",
                line(
                    Span("close the job".ljust(16), "strong"), "keep the verdict and the record as they stand"
                ),
            )
        )
        self.query_one("#list", ListPanel).fill(
            rows, line(Span("after the repair: Enter on what is true".ljust(self.wide), "head"))
        )

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Say it to the bench."""
        key = event.key
        view = self.desk.view
        if view is None:
            return
        if key == "close":
            verdict = f"{view.verdict.ref} {view.verdict.mode}".strip() or view.verdict.status
            self.desk.enter(lambda bench: bench.close(verdict), lambda: self.triage.action_go("record"))
        else:
            self.desk.enter(lambda bench: bench.repaired(key))
