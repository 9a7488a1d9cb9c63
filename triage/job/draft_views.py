"""What a screen is shown of a board that is being made from its label: plain records, as in ``triage.job.views``."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class FamilyView:
    """One family that the board may belong to."""

    family: str
    title: str
    chance: float
    """[-]"""
    reasons: tuple[str, ...]
    """What speaks for and against it, the most telling first."""


@dataclass(frozen=True, slots=True)
class KnownView:
    """One value or rating of a part, as far as it is known."""

    key: str
    """``capacitance``, ``voltage`` ..."""
    value: float
    """[SI]"""
    unit: str
    low: float
    """Lower end of the range in which nine of ten such boards lie, or of the tolerance [SI]."""
    high: float
    known: str
    """``estimated``, ``marking``, ``measured``, or ``rating``."""
    reason: str = ""
    """Why it was estimated so; empty where it is known."""


@dataclass(frozen=True, slots=True)
class DraftPartView:
    """One part of the board."""

    ref: str
    kind: str
    role: str
    type: str
    origin: str
    """How its main value is known."""
    pins: tuple[tuple[str, str], ...]
    """Pin and node."""
    values: tuple[KnownView, ...]


@dataclass(frozen=True, slots=True)
class TurnCheckView:
    """What counted turns say, held against the rest of the board."""

    text: str
    shown: str
    """The figure with its bounds."""
    fits: bool
    note: str = ""


@dataclass(frozen=True, slots=True)
class DraftView:
    """The board as it stands."""

    title: str
    family: str
    parts: tuple[DraftPartView, ...]
    drawing: str
    message: str = ""
    """What the last change came to."""
    checks: tuple[TurnCheckView, ...] = ()
    """Of the turns counted last."""
    nodes: tuple[str, ...] = ()
    known: int = 0
    """Parts of which a marking or a value was entered."""
