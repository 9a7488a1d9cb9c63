"""What the program tells a person who can do something about it.

Every error names the place (file, record, key), what was found, what was expected and, where it helps, what to do. The
parts are also attributes, so that a screen can put them beside the field without reading the text.
"""


class TriageError(Exception):
    """A condition that the person at the bench can mend; printed as one line, never as a traceback."""

    def __init__(self, where: str, found: str, expected: str = "", advice: str = "") -> None:
        self.where = where
        self.found = found
        self.expected = expected
        self.advice = advice
        text = f"{where}: {found}" if where else found
        if expected:
            text += f"; expected {expected}"
        if advice:
            text += f"; {advice}"
        super().__init__(text)

    def __reduce__(self) -> tuple[type["TriageError"], tuple[str, str, str, str]]:
        return type(self), (self.where, self.found, self.expected, self.advice)


class QuantityError(TriageError):
    """A typed value that cannot be read as the quantity asked for."""


class ProfileError(TriageError):
    """A board profile with a fault in it."""


class CatalogError(TriageError):
    """A part catalog file with a fault in it."""


class EntryError(TriageError):
    """An entry that does not belong to this job: an unknown node, part, function or condition."""


class JobError(TriageError):
    """A job file that cannot be read, written or continued."""


class GateError(TriageError):
    """A step that is not open yet for safety's sake."""
