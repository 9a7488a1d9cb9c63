"""A part that the estimate lacks: what it does, and which nodes its pins are on."""

from collections.abc import Mapping, Sequence
from typing import ClassVar

from triage.app.lines import wrapped
from triage.app.screens.entry_form import Asked, EntryForm
from triage.app.widgets.field import ChoiceField, Field
from triage.job.draft_views import DraftView


class RoleScreen(EntryForm):
    """Form for a part."""

    PLACE: ClassVar[str] = "role"
    NAME: ClassVar[str] = "a part more"
    HEAD = "A part that the list lacks: its role, then the nodes of its pins in their order, a space between them."

    def __init__(self) -> None:
        super().__init__()
        self._pins: Mapping[str, tuple[str, ...]] = {}

    def asked(self) -> Sequence[Asked]:
        """Role and nodes."""
        return (Asked("role", "role", tuple(self._pins) or ("",)), Asked("nodes", "nodes of its pins"))

    def on_mount(self) -> None:
        """Ask for the roles there are."""
        super().on_mount()
        self.triage.drafting.ask("roles", lambda draft: draft.role_pins(), self._known, self._refuse)

    def _known(self, pins: Mapping[str, tuple[str, ...]]) -> None:
        if self.is_attached:
            self._pins = pins
            self.query_one("#role", ChoiceField).choices = tuple(pins)
            self._show_choices()

    def _refuse(self, text: str) -> None:
        if self.is_attached:
            self.show_message(text, refused=True)

    def _show_choices(self) -> None:
        view = self.triage.drafting.view
        if self.focused is not None and self.focused.id == "nodes" and view is not None:
            role = self.query_one("#role", Field).value
            pins = ", ".join(self._pins.get(role, ())) or "unknown role"
            rows = wrapped(f"pins in their order: {pins}", self.wide, "strong")
            self.panel("choices").show((*rows, *wrapped("nodes of this board: " + " ".join(view.nodes), self.wide)))
            return
        super()._show_choices()

    def enter(self, said: dict[str, str]) -> bool:
        """Add the part."""
        names, nodes = self._pins.get(said["role"], ()), said["nodes"].split()
        if len(names) != len(nodes):
            wanted = ", ".join(names) or "a role of the list"
            self.show_message(f"{len(nodes)} nodes for the pins {wanted}", refused=True)
            return False
        self.triage.drafting.change(
            lambda draft: draft.add(said["role"], dict(zip(names, nodes, strict=True))), self._added, self._refuse
        )
        return True

    def _added(self, view: DraftView) -> None:
        if self.is_current:
            self.triage.pop_screen()
            self.desk.say(view.message)
