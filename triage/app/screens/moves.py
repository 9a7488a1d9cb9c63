"""How the suspects moved over the entries of the job."""

from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.text.moves import entry_lines, move_lines
from triage.app.widgets.panel import Panel
from triage.job.views import JobView


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
        """Show the track that the desk kept."""
        track = self.desk.track
        self.panel("suspects").show(move_lines(track, self.wide, 8, self.glyphs))
        self.panel("entries").show(entry_lines(track, self.wide, len(track)))

    def action_page(self, by: int) -> None:
        """Scroll the entries."""
        self.panel("entries").scroll_rows(5 * by)
