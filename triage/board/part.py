"""What an adapter is made of: parts, the board that joins them, its label and its mains.

Plain records without behaviour. Values are SI floats under spelled-out keys (``resistance``, ``capacitance``, ``esr`` ...);
which keys a part has is said by its kind (see ``triage.board.kinds``). Ratings use the keys ``voltage``, ``current``,
``power``, ``ripple_current``, ``temperature`` (degC), ``i2t`` (A²s), ``collector_emitter_voltage``, ``isolation_voltage``.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field

ORIGINS = ("marking", "measured", "estimated")
"""How a value is known, from the surest reading of the part itself to the program's own estimate from the label."""


@dataclass(frozen=True, slots=True)
class Part:
    """One part of a board."""

    ref: str
    """Reference designator, unique on the board: ``Q1``."""
    kind: str
    """Key of the part kind: ``resistor``, ``electrolytic``, ``bipolar_transistor`` ..."""
    role: str
    """What the part does in this circuit: ``bulk capacitor``, ``startup resistor`` ..."""
    pins: Mapping[str, str]
    """Pin name -> node, in the order of the kind."""
    value: Mapping[str, float] = field(default_factory=dict)
    """Electrical values in SI."""
    tolerance: Mapping[str, float] = field(default_factory=dict)
    """Relative half-width of the spread of a value, as a fraction."""
    ratings: Mapping[str, float] = field(default_factory=dict)
    """What the part is rated for, in SI (temperature in degC)."""
    type: str = ""
    """Type number or marking as read off the part."""
    origin: str = "marking"
    """How the values are known: one of ORIGINS."""
    fault_modes: tuple[str, ...] = ()
    """Fault modes to be considered; empty: all modes of the kind."""
    spread: Mapping[str, float] = field(default_factory=dict)
    """Factor, above 1, of a value that is only estimated: with a chance of 90 % the true one lies between the value divided by
    it and the value times it. Such a value has no tolerance."""


@dataclass(frozen=True, slots=True)
class Label:
    """What the label of the adapter says."""

    input: str
    """The input line as printed."""
    output_voltage: float
    """Rated output voltage [V]."""
    output_current: float
    """Rated output current [A]."""
    insulation_class: str = "II"
    """Protection class: ``I`` (earthed) or ``II`` (double insulated)."""
    marked_year: int | None = None
    """Year of manufacture where the label tells; limits in force depend on it."""


@dataclass(frozen=True, slots=True)
class Mains:
    """The mains the adapter is made for."""

    frequency: float
    """[Hz]"""
    low: float
    """Lowest rms voltage [V]."""
    nominal: float
    """Nominal rms voltage [V]."""
    high: float
    """Highest rms voltage [V]."""
    source_resistance: float = 0.8
    """Resistance of the mains and the cord [ohm]."""


@dataclass(frozen=True, slots=True)
class Board:
    """One adapter: what the technician has on the mat, as far as it is known."""

    id: str
    """Short name, also the profile's file name."""
    title: str
    family: str
    """Key of the adapter family: ``ringing_choke_zener`` ..."""
    label: Label
    mains: Mains
    parts: tuple[Part, ...]
    sides: Mapping[str, tuple[str, ...]]
    """Side (``primary``, ``secondary``) -> nodes a probe can reach."""
    ground: Mapping[str, str]
    """Side -> the node live voltages are read against."""
    drawing: str = ""
    """The board drawn as text; refs stand in it as words."""
    note: str = ""
    isolation_resistance: float = 100e6
    """Stray resistance across the barrier that defines the floating side [ohm]."""

    def part(self, ref: str) -> Part:
        """The part with this reference designator. Raises KeyError when there is none."""
        for part in self.parts:
            if part.ref == ref:
                return part
        raise KeyError(ref)

    def by_role(self, role: str) -> Part | None:
        """The first part with this role, or None."""
        return next((part for part in self.parts if part.role == role), None)

    def side_of(self, node: str) -> str | None:
        """The side a node belongs to, or None for a node no probe reaches."""
        return next((side for side, nodes in self.sides.items() if node in nodes), None)

    @property
    def full_load(self) -> float:
        """Resistance of the rated load [ohm]."""
        return self.label.output_voltage / self.label.output_current
