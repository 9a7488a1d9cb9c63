"""Waveforms and load line, sound and under the leading suspect, with their limits."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Line, Span, line
from triage.app.text.waveforms import chart_lines, charts_at_once
from triage.app.widgets.panel import Panel
from triage.job.views import ChartView, JobView

_AROUND = 4
"""Rows of status, message and keys."""


class WaveformsScreen(Frame):
    """One chart at a time, or several where there is room."""

    PLACE: ClassVar[str] = "waveforms"
    NAME: ClassVar[str] = "waveforms"
    CSS_PATH = "waveforms.tcss"
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        *((key, "other(-1)", "chart before") for key in ("up", "left", "pageup")),
        *((key, "other(1)", "next chart") for key in ("down", "right", "pagedown", "enter", "space")),
    ]

    def __init__(self) -> None:
        super().__init__()
        self._found: tuple[ChartView, ...] = ()
        self._first = 0
        self._asked_for: str | None = None

    def body(self) -> ComposeResult:
        """The charts."""
        yield Panel(id="charts")

    def entered(self) -> None:
        """Another suspect may lead by now."""
        self._asked_for = None

    def refresh_body(self, view: JobView | None) -> None:
        """Ask anew when another suspect leads; show what there is for this size."""
        lead = next((f"{one.ref} {one.mode}" for one in view.suspects if one.ref), "") if view else ""
        if lead != self._asked_for:
            self._asked_for = lead
            if not self._found:
                self.panel("charts").show((line(Span("solving the waveforms; Esc stops", "near")),))
            self.ask("waveforms", lambda bench: bench.charts(), self._show, self._failed, long=True)
        if self._found:
            self._draw()

    def _failed(self, text: str) -> None:
        self._found = ()
        self.panel("charts").show((line(Span(text, "bad")),))

    def _show(self, found: tuple[ChartView, ...]) -> None:
        self._found = found
        self._first = min(self._first, len(found) - 1)
        self._draw()

    def _draw(self) -> None:
        rows = self.app.size.height - _AROUND
        count = charts_at_once(len(self._found), rows)
        first = min(self._first, len(self._found) - count)
        lines: list[Line] = []
        for number in range(first, first + count):
            lines += chart_lines(self._found[number], self.wide, rows // count, self.glyphs)
        self.panel("charts").show(lines, top=0)
        if count < len(self._found):
            self.show_message(f"chart {first + 1} of {len(self._found)}; up and down show the others")

    def action_other(self, by: int) -> None:
        """Go to another chart."""
        if self._found:
            self._first = (self._first + by) % len(self._found)
            self._draw()
