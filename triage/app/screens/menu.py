"""All commands by name: type a few letters, Enter runs the one under the cursor."""

from typing import ClassVar

from textual.app import ComposeResult
from textual.widgets import Input

from triage.app.frame import Form
from triage.app.keys import COMMANDS, Command
from triage.app.lines import Span, columns
from triage.app.widgets.field import Field
from triage.app.widgets.panel import ListPanel
from triage.job.views import JobView


class MenuScreen(Form):
    """A field and the list of what fits."""

    PLACE: ClassVar[str] = "menu"
    NAME: ClassVar[str] = "menu"
    CSS_PATH = "menu.tcss"
    BINDINGS = [("up", "step(-1)", "up"), ("down", "step(1)", "down")]  # noqa: RUF012 (Textual's own way)

    def body(self) -> ComposeResult:
        """Field and list."""
        yield Field(placeholder="type to narrow", id="wanted")
        yield ListPanel(id="list")

    def _fitting(self) -> list[Command]:
        """Commands that hold every word typed; those whose label begins with it first."""
        typed = self.query_one("#wanted", Field).value.lower().strip()
        job = self.desk.view is not None
        fits = [
            one
            for one in COMMANDS
            if (job or not one.job)
            and one.action != "menu"
            and all(word in f"{one.label} {one.help}".lower() for word in typed.split())
        ]
        return sorted(fits, key=lambda one: not one.label.startswith(typed))

    def refresh_body(self, view: JobView | None) -> None:
        """What fits the letters typed."""
        rows = [
            (
                one.action,
                columns(
                    [
                        (Span(one.shown, "key"), 5),
                        (Span(one.label or "help", "strong"), 12),
                        (one.help, max(self.wide - 20, 20)),
                    ]
                ),
            )
            for one in self._fitting()
        ]
        self.query_one("#list", ListPanel).fill(rows)

    def on_input_changed(self, event: Input.Changed) -> None:
        """Narrow the list and take the best of what fits."""
        self.refresh_body(None)
        self.query_one("#list", ListPanel).action_move(-len(COMMANDS))

    def action_step(self, by: int) -> None:
        """Move the cursor of the list while typing."""
        self.query_one("#list", ListPanel).action_move(by)

    async def on_input_submitted(self, event: Input.Submitted) -> None:
        """Run it."""
        await self._run(self.query_one("#list", ListPanel).key)

    async def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Run it."""
        await self._run(event.key)

    async def _run(self, action: str) -> None:
        if action:
            self.triage.pop_screen()
            await self.triage.run_action(action)
