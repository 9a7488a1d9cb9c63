"""What the technician has seen and measured, as the diagnosis takes it."""

from dataclasses import dataclass

from triage.board.probe import Probe

STATES = (
    "normal", "dead", "output low", "output high", "pulsing", "works only without load", "hum or ripple",
    "hot part", "fuse gone",
)
"""State of an adapter as a user or a first look describes it; ``fuse gone`` is dead with the input path open."""

SIGNS = ("bulging", "leaking", "charred", "cracked", "smell", "ticking", "hum", "hot", "led dim", "led pulsing",
         "bad joint", "broken cord", "intermittent when moved", "sound")
"""What can be seen, heard, smelt or felt; ``sound`` says that the part was looked at and nothing was found."""


@dataclass(frozen=True, slots=True)
class Symptom:
    """The complaint, as one of STATES."""

    state: str
    condition: str = "full"
    """Load under which it was seen: ``noload``, ``half`` or ``full``."""


@dataclass(frozen=True, slots=True)
class Sign:
    """One thing seen at a part, or on the whole adapter when ``ref`` is empty."""

    sign: str
    ref: str = ""


@dataclass(frozen=True, slots=True)
class Reading:
    """One value read off an instrument."""

    probe: Probe
    value: float
    """[SI]; ``inf`` for OL."""


Evidence = Symptom | Sign | Reading
