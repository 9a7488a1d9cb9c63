"""The technician's own suspicion of a part."""

from collections.abc import Sequence
from typing import ClassVar

from triage.app.screens.entry_form import Asked, EntryForm


class HunchScreen(EntryForm):
    """Form for a hunch."""

    PLACE: ClassVar[str] = "hunch"
    NAME: ClassVar[str] = "suspect"
    HEAD = "A part that you suspect yourself; it weighs as a hint, the readings decide."

    def asked(self) -> Sequence[Asked]:
        """The part."""
        bench = self.desk.bench
        return (Asked("ref", "part", tuple(part.ref for part in bench.board.parts) if bench else ()),)

    def enter(self, said: dict[str, str]) -> bool:
        """Enter the hunch."""
        return self.desk.enter(lambda bench: bench.suspect(said["ref"]), self.accepted)
