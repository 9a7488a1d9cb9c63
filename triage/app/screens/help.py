"""The page on the screen in front of which it was asked for, and the keys that hold everywhere."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Form
from triage.app.help_pages import help_page
from triage.app.keys import COMMANDS
from triage.app.lines import Line, Span, columns, line, wrapped
from triage.app.widgets.panel import Panel
from triage.job.views import JobView


class HelpScreen(Form):
    """Text to scroll through."""

    PLACE: ClassVar[str] = "help"
    NAME: ClassVar[str] = "help"
    CSS_PATH = "help.tcss"
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("pageup", "page(-10)", "up"),
        ("pagedown", "page(10)", "down"),
        ("up", "page(-1)", "up"),
        ("down", "page(1)", "down"),
        ("enter", "back", "back"),
    ]

    def __init__(self, place: str) -> None:
        super().__init__()
        self._place = place

    def body(self) -> ComposeResult:
        """The page."""
        yield Panel(id="page")

    def refresh_body(self, view: JobView | None) -> None:
        """The page and the keys, wrapped to the screen."""
        rows: list[Line] = []
        for text in help_page(self._place).splitlines():
            if text.startswith(" ") or not text:
                rows.append(line(text))
            else:
                rows += wrapped(text, self.wide - 2, "strong" if text.endswith(":") else "")
        rows += [line(), line(Span("Keys that do the same on every screen:", "strong"))]
        rows += [
            columns([(Span(one.shown, "key"), 5), (one.label or "help", 10), (one.help, max(self.wide - 18, 20))])
            for one in COMMANDS
            if one.shown
        ]
        rows.append(line(Span("Esc ", "key"), "  back          one step back; up, down and page keys scroll"))
        self.panel("page").show(rows)

    def action_page(self, rows: int) -> None:
        """Scroll the page."""
        self.panel("page").scroll_rows(rows)
