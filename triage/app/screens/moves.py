"""How the suspects moved over the entries of the job."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Span, line
from triage.app.text.moves import entry_lines, move_lines
from triage.app.widgets.panel import Panel
from triage.job.views import JobView, MoveView


class MovesScreen(Frame):
    """A row a suspect above, a row an entry below."""

    PLACE: ClassVar[str] = "moves"
    NAME: ClassVar[str] = "moves"
    CSS_PATH = "moves.tcss"
    BINDINGS = [("pageup", "page(-1)", "up"), ("pagedown", "page(1)", "down")]  # noqa: RUF012 (Textual's own way)

    def body(self) -> ComposeResult:
        """Suspects and entries."""
        yield Panel(id="suspects")
        yield Panel(id="entries")

    def refresh_body(self, view: JobView | None) -> None:
        """Ask for the moves; they are reckoned from the log, so that a resumed job has its whole way."""
        self.ask("moves", lambda bench: bench.moves(), self._show, self._failed)

    def _show(self, found: tuple[MoveView, ...]) -> None:
        self.panel("suspects").show(move_lines(found, self.wide, 8, self.glyphs))
        panel = self.panel("entries")
        panel.show(entry_lines(found, self.wide))
        panel.scroll_rows(len(found))

    def _failed(self, text: str) -> None:
        self.panel("suspects").show((line(Span(text, "bad")),))

    def action_page(self, by: int) -> None:
        """Scroll the entries."""
        self.panel("entries").scroll_rows(5 * by)
