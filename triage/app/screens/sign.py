"""Something seen, heard, smelt or felt, at a part or on the whole adapter."""

from collections.abc import Sequence
from typing import ClassVar

from triage.app.screens.entry_form import Asked, EntryForm
from triage.board.evidence import SIGNS


class SignScreen(EntryForm):
    """Form for a sign."""

    PLACE: ClassVar[str] = "sign"
    NAME: ClassVar[str] = "seen"
    HEAD = "What was seen, heard, smelt or felt; `sound` says that the part was looked at and nothing was found."

    def asked(self) -> Sequence[Asked]:
        """Sign, then part."""
        bench = self.desk.bench
        refs = tuple(part.ref for part in bench.board.parts) if bench else ()
        return (Asked("sign", "sign", SIGNS), Asked("ref", "at part (or empty)", ("", *refs), optional=True))

    def enter(self, said: dict[str, str]) -> bool:
        """Enter the sign."""
        return self.desk.enter(lambda bench: bench.see(said["sign"], said["ref"]), self.accepted)
