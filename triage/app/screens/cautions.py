"""Cautions: each is read and acknowledged by itself before the readings begin."""

from collections.abc import Sequence
from typing import ClassVar

from textual.app import ComposeResult

from triage.app.frame import Frame
from triage.app.lines import Span, line, wrapped
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import CautionView, JobView


def _sign(one: CautionView, held: bool) -> tuple[str, str]:
    """Mark of one caution; those that stand before power can wait while the board may not be touched yet."""
    if one.acknowledged:
        return "ok ", "good"
    return (".  ", "quiet") if held and one.gate == "live" else ("!  ", "bad")


def _head(cautions: Sequence[CautionView]) -> str:
    """How many are to be acknowledged, and before what."""
    cold, live = (sum(one.gate == gate and not one.acknowledged for one in cautions) for gate in ("cold", "live"))
    if cold:
        later = f"; {live} more (.) before power" if live else ""
        return f"cautions: {cold} before touching, Enter acknowledges{later}"
    return f"cautions: {live} before power, Enter acknowledges" if live else "cautions: all acknowledged, F2 goes on"


class CautionsScreen(Frame):
    """The list above, the one under the cursor in full below."""

    PLACE: ClassVar[str] = "cautions"
    NAME: ClassVar[str] = "cautions"
    CSS_PATH = "cautions.tcss"

    def __init__(self) -> None:
        super().__init__()
        self._held = False
        """True while the cautions keep the job from the first look at the board."""

    def body(self) -> ComposeResult:
        """List and full text."""
        yield ListPanel(id="list")
        yield Panel(id="full")

    def entered(self) -> None:
        """The cursor goes to the first that is still open."""
        self._to_next()

    def _cautions(self) -> tuple[CautionView, ...]:
        return self.desk.view.cautions if self.desk.view else ()

    def refresh_body(self, view: JobView | None) -> None:
        """Acknowledged ones carry ``ok``, the others ``!``."""
        cautions = self._cautions()
        held = view is not None and view.stage == "cautions"
        rows = [
            (
                one.key,
                line(
                    Span(*_sign(one, held)),
                    Span(one.text, "quiet" if one.acknowledged or (held and one.gate == "live") else ""),
                ),
            )
            for one in cautions
        ]
        self.query_one("#list", ListPanel).fill(rows, line(Span(_head(cautions).ljust(self.wide), "head")))
        self._show_full()

    def _show_full(self) -> None:
        key = self.query_one("#list", ListPanel).key
        text = next((one.text for one in self._cautions() if one.key == key), "")
        self.panel("full").show(wrapped(text, self.wide - 4, "strong", first="  ", rest="  "))

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the caution under the cursor in full."""
        self._show_full()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Acknowledge; when none is left, go on to the bench."""
        if all(one.acknowledged for one in self._cautions()):
            self.triage.action_go(self.triage.place_of_stage())
        elif not next(one.acknowledged for one in self._cautions() if one.key == event.key):
            self._held = self.desk.view is not None and self.desk.view.stage == "cautions"
            self.desk.enter(lambda bench: bench.acknowledge(event.key), self._accepted)
        else:
            self._to_next()

    def _accepted(self) -> None:
        view = self.desk.view
        if view is not None and self._held and view.stage != "cautions":
            self.triage.action_go(self.triage.place_of_stage())
        elif any(not one.acknowledged for one in self._cautions()):
            self._to_next()
        else:
            self.triage.action_go(self.triage.place_of_stage())

    def _to_next(self) -> None:
        left = [one.key for one in self._cautions() if not one.acknowledged]
        if left:
            self.query_one("#list", ListPanel).go_to(left[0])
