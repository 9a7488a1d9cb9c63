"""What can be seen or counted on an open board without reading a single value."""

from collections.abc import Iterable
from dataclasses import dataclass

from triage.errors import EntryError

FEATURES = (
    "controller", "optocoupler", "iron transformer", "regulator", "shunt reference", "field-effect switch", "half wave", "bridge",
    "centre tap", "fuse", "fusible resistor", "thermal fuse", "inrush limiter", "varistor", "X capacitor", "Y capacitor",
    "common-mode choke", "dropper capacitor", "output coil", "LED", "mains cord", "output cable",
)
"""Features a technician can tell by eye."""
COUNTS = ("windings", "transistors")
"""What is counted: windings of the transformer, transistors on the mains side."""
EXCLUSIVE = (("half wave", "bridge", "centre tap"), ("fuse", "fusible resistor"))
"""Of each group a board shows one at most."""
MOST_COUNTED = 9


@dataclass(frozen=True, slots=True)
class Seen:
    """Features seen, features looked for and not found, and counts; what is in none of them was not looked at."""

    present: frozenset[str] = frozenset()
    absent: frozenset[str] = frozenset()
    windings: int | None = None
    transistors: int | None = None

    def __post_init__(self) -> None:
        for feature in (*self.present, *self.absent):
            if feature not in FEATURES:
                raise EntryError("seen", repr(feature)[:60], "one of " + ", ".join(FEATURES))

    def counts(self) -> dict[str, int]:
        """What was counted."""
        return {name: value for name in COUNTS if (value := getattr(self, name)) is not None}


def parse_seen(words: Iterable[str]) -> Seen:
    """What was seen, one statement a text: ``optocoupler``, ``no Y capacitor``, ``3 windings``, ``1 transistor``.

    Raises EntryError for a statement that is none, or two that cannot both hold.
    """
    known = {feature.lower(): feature for feature in FEATURES}
    present: set[str] = set()
    absent: set[str] = set()
    counted: dict[str, int] = {}
    for word in words:
        text = " ".join(word.lower().replace("_", " ").split())
        number, _, noun = text.partition(" ")
        if number.isascii() and number.isdecimal() and (what := _counted(noun)) and int(number[:3]) <= MOST_COUNTED:
            counted[what] = int(number)
        elif text in known:
            present.add(known[text])
        elif text.startswith("no ") and text[3:] in known:
            absent.add(known[text[3:]])
        else:
            wanted = f"one of {', '.join(FEATURES)}, 'no' before what is missing, or a count such as '3 windings', '1 transistor'"
            raise EntryError("seen", repr(word)[:60], wanted)
    for group in EXCLUSIVE:
        here = [feature for feature in group if feature in present]
        if len(here) > 1:
            raise EntryError("seen", " and ".join(here), "one of the two")
        if here:
            absent.update(feature for feature in group if feature not in here)
    if both := present & absent:
        raise EntryError("seen", f"{', '.join(sorted(both))} both seen and missing", "one of the two")
    return Seen(frozenset(present), frozenset(absent), **counted)


def _counted(noun: str) -> str:
    """The count that a noun in singular or plural means, or empty."""
    return next((name for name in COUNTS if noun in (name, name[:-1])), "")
