"""Stresses: every part against its derated limit and its rating, the worst first."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Span, line
from triage.app.text.stress import stress_detail, stress_head, stress_line, worst_first
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import JobView, StressView


class StressScreen(Frame):
    """The list with bars, and one stress in full."""

    PLACE: ClassVar[str] = "stress"
    NAME: ClassVar[str] = "stress"
    CSS_PATH = "stress.tcss"

    def __init__(self) -> None:
        super().__init__()
        self._found: tuple[StressView, ...] = ()
        self._asked = False

    def body(self) -> ComposeResult:
        """List and detail."""
        yield ListPanel(id="list")
        yield Panel(id="detail")

    def entered(self) -> None:
        """A part may have been fitted meanwhile."""
        self._asked = False

    def refresh_body(self, view: JobView | None) -> None:
        """Ask for the stresses once, then show them for this width."""
        if not self._asked:
            self._asked = True
            if not self._found:
                self.panel("detail").show((line(Span("computing the stresses...", "near")),))
            self.ask("stress", lambda bench: bench.stresses(), self._show, self._failed, long=True)
        if self._found:
            self._show(self._found)

    def _failed(self, text: str) -> None:
        self.panel("detail").show((line(Span(text, "bad")),))

    def _show(self, found: tuple[StressView, ...]) -> None:
        self._found = worst_first(found)
        rows = [(str(number), stress_line(one, self.wide, self.glyphs)) for number, one in enumerate(self._found)]
        self.query_one("#list", ListPanel).fill(rows, stress_head(self.wide))
        self._show_detail()

    def _show_detail(self) -> None:
        key = self.query_one("#list", ListPanel).key
        if key:
            self.panel("detail").show(stress_detail(self._found[int(key)], self.wide))

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """On to the waveforms behind the stresses."""
        self.triage.action_go("waveforms")

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the stress under the cursor in full."""
        self._show_detail()
