"""What all screens have in common: a status line above, a message line and the key line below, lines sized
to the screen."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, ClassVar, TypeVar, cast

from textual import events
from textual.app import ComposeResult
from textual.screen import Screen

from triage.app.contract import OpenJob
from triage.app.desk import Desk
from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, clip, line, wrapped
from triage.app.text.key_line import standard_keys
from triage.app.widgets.panel import ListPanel, Palette, Panel

if TYPE_CHECKING:
    from triage.app.app import TriageApp
    from triage.job.views import JobView

T = TypeVar("T")
U = TypeVar("U")


class Frame(Screen[None]):
    """A screen with status, body, message and keys. Subclasses write ``body`` and ``refresh_body``."""

    PLACE: ClassVar[str] = ""
    """Name in the key table; also the name of the help page."""
    NAME: ClassVar[str] = ""
    """Name on the status line."""
    AUTO_FOCUS = "Field, ListPanel"
    BINDINGS = [("escape", "back", "back")]  # noqa: RUF012 (Textual's own way)

    @property
    def triage(self) -> TriageApp:
        """The app."""
        return cast("TriageApp", self.app)

    @property
    def desk(self) -> Desk:
        """The open job."""
        return self.triage.desk

    @property
    def glyphs(self) -> Glyphs:
        """Characters of this terminal."""
        return self.triage.glyphs

    @property
    def wide(self) -> int:
        """Columns of the screen."""
        return self.app.size.width

    def compose(self) -> ComposeResult:
        """Status, body, message, keys."""
        yield Palette()
        yield Panel(id="status")
        yield from self.body()
        yield Panel(id="message")
        yield Panel(id="keys")

    def body(self) -> ComposeResult:
        """Widgets between status and message."""
        yield from ()

    def panel(self, name: str) -> Panel:
        """The panel with this id."""
        return self.query_one(f"#{name}", Panel)

    def on_mount(self) -> None:
        """Show what there is."""
        self.refresh_view()

    def on_screen_resume(self) -> None:
        """Show what changed while another screen was in front."""
        self.entered()
        self.refresh_view()

    def entered(self) -> None:
        """Forget what may be out of date when the screen comes to the front."""

    def on_resize(self, event: events.Resize) -> None:
        """Write every line anew for the new width, once the layout is done."""
        self.call_after_refresh(self.refresh_view)

    def refresh_view(self) -> None:
        """Show the newest view of the job."""
        if not self.refresh_status():
            return
        view = self.desk.view
        self.panel("keys").show((standard_keys(self.wide, view is not None),))
        self.show_message()
        self.refresh_body(view)

    def refresh_status(self) -> bool:
        """Write the status line anew; False while the screen is not there yet."""
        if not self.is_mounted or not self.query("#keys"):
            return False
        self.panel("status").show(self.status(self.desk.view))
        return True

    def status(self, view: JobView | None) -> tuple[Line, ...]:
        """The status lines."""
        if view is None:
            more = f"{self.desk.looking}; Esc stops" if self.desk.looking else ""
            return (line(Span(f" {self.NAME} ", "head"), "  ", Span(more, "near")),)
        from triage.app.text.frame import status_lines

        return status_lines(view, self.NAME, self.wide, self.desk.progress, self.desk.looking)

    def refresh_body(self, view: JobView | None) -> None:
        """Show the newest view in the body."""

    def ask(
        self,
        lane: str,
        call: Callable[[OpenJob], T],
        then: Callable[[T], None],
        failed: Callable[[str], None],
        long: bool = False,
    ) -> None:
        """Ask the bench something that changes nothing; nothing is shown when this screen is gone by then.

        ``long`` as for ``Desk.look``.
        """

        def while_here(show: Callable[[U], None]) -> Callable[[U], None]:
            return lambda answer: show(answer) if self.is_attached and self.is_running else None

        self.desk.look(lane, call, while_here(then), while_here(failed), long)

    def show_message(self, text: str = "", refused: bool = False) -> None:
        """Show a message, or the newest one of the desk; what it cannot hold is cut."""
        text, refused = (text, refused) if text else (self.desk.message, self.desk.refused)
        if self.desk.pending:
            text, refused = "computing...", False
        lead = Span("! ", "bad") if refused else Span("")
        panel = self.panel("message")
        rows = wrapped(text, self.wide - 2)[:2] if text else ()
        if refused and len(rows) > 1:
            panel.styles.height = 2
            panel.show([line(lead, Span(row[0].text, "bad")) for row in rows if row])
            return
        panel.styles.height = 1
        panel.show((clip(line(lead, Span(text, "bad" if refused else "near")), self.wide),))

    def action_back(self) -> None:
        """End a calculation that the screen waits for; from a field to the list of the screen; else to the screen
        before, or to the bench; from there nowhere."""
        if self.desk.stop_looking():
            self.show_message("stopped; come back to this screen to compute it again")
            return
        lists = self.query(ListPanel)
        if lists and self.focused is not None and not isinstance(self.focused, ListPanel):
            lists.first().focus()
            return
        if len(self.triage.screen_stack) > 3:
            self.triage.pop_screen()
        elif self.PLACE != "bench":
            self.triage.action_go("bench")


class Form(Frame):
    """A screen in front of another, for one entry; Escape puts it away."""

    def action_back(self) -> None:
        """Put the form away."""
        self.triage.pop_screen()
