"""A remark for the next reader of the record."""

from collections.abc import Sequence
from typing import ClassVar

from triage.app.screens.entry_form import Asked, EntryForm


class NoteScreen(EntryForm):
    """Form for a remark."""

    PLACE: ClassVar[str] = "note"
    NAME: ClassVar[str] = "note"
    HEAD = "A remark for the next reader of the record."

    def asked(self) -> Sequence[Asked]:
        """The words."""
        return (Asked("words", "remark"),)

    def enter(self, said: dict[str, str]) -> bool:
        """Enter the remark."""
        return self.desk.enter(lambda bench: bench.note(said["words"]), self.accepted)
