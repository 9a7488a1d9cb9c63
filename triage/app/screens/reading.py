"""Any reading: function, the two leads, condition and value, as the technician chose to take it."""

from collections.abc import Sequence
from typing import ClassVar

from triage.app.screens.entry_form import Asked, EntryForm
from triage.app.typed import understand
from triage.board.probe import COLD_FUNCTIONS, CONDITIONS, LIVE_FUNCTIONS


class ReadingScreen(EntryForm):
    """Form for a reading."""

    PLACE: ClassVar[str] = "reading"
    NAME: ClassVar[str] = "any reading"
    HEAD = "A reading of your own choice: what the meter was set to, where the leads were, what it showed."

    def asked(self) -> Sequence[Asked]:
        """Function, red, black, condition, value; begun with the suggested reading's function."""
        bench, view = self.desk.bench, self.desk.view
        nodes = tuple(node for side in bench.board.sides.values() for node in side) if bench else ()
        found = view.suggestion if view else None
        return (
            Asked("function", "function", COLD_FUNCTIONS + LIVE_FUNCTIONS, found.function if found else "ohms"),
            Asked("plus", "red lead on", nodes),
            Asked("minus", "black lead on", nodes),
            Asked("condition", "board is", CONDITIONS, found.condition if found else "cold"),
            Asked("value", "value"),
        )

    def enter(self, said: dict[str, str]) -> bool:
        """Enter the reading; ``*`` stands for OL here too."""
        value = understand(said["value"]).text or said["value"]
        return self.desk.enter(
            lambda bench: bench.read(said["function"], said["plus"], said["minus"], said["condition"], value),
            self.accepted,
        )
