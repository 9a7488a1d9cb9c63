"""The units a value can be asked for in, and how each is written at the bench.

Data only: for each SI unit key its noun, an example for error lines, the prefixes in use, and every spelling
a technician types. ``triage.quantities`` reads and writes text by these tables; physics never sees them.
Letters and prefixes follow IEC 60062 (letter and digit code) and the SI brochure; the extra spellings
(``mfd``, ``meg``) are common practice, no source.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field

PREFIXES: Mapping[str, int] = {"p": -12, "n": -9, "u": -6, "m": -3, "k": 3, "M": 6, "G": 9, "T": 12}
"""SI prefix -> power of ten. ``m`` and ``M`` are never exchanged; of the others capitals and small letters
are both read.
"""

TOLERANCE_LETTERS: Mapping[str, float] = {
    "E": 0.00005,
    "L": 0.0001,
    "P": 0.0002,
    "W": 0.0005,
    "B": 0.001,
    "C": 0.0025,
    "D": 0.005,
    "F": 0.01,
    "G": 0.02,
    "H": 0.03,
    "J": 0.05,
    "K": 0.10,
    "M": 0.20,
    "N": 0.30,
}
"""Tolerance letter -> relative half-width. IEC 60062, clause 5 (symmetrical relative tolerances)."""


@dataclass(frozen=True, slots=True, eq=False)
class Unit:
    """How one SI unit is read and written."""

    key: str
    """Symbol as used in the program and on screen."""
    noun: str
    """What it measures, with article: ``a resistance``."""
    example: str
    """A value as a technician would type it, for error lines."""
    names: Mapping[str, float]
    """Spelling (small letters) -> factor to this unit; prefixes are put before the spellings of factor 1."""
    prefixes: str = ""
    """Prefixes in use, ascending."""
    point_letters: Mapping[str, float] = field(default_factory=dict)
    """Letter that stands at the decimal point (``4k7``, ``5V1``) -> factor. Letters of PREFIXES in use are
    added by the reader.
    """
    point_prefixes: str = ""
    """Prefixes that may stand at the decimal point."""
    tolerance_letters: str = ""
    """Tolerance letters that may follow a value of this unit without being mistaken for a unit."""
    signed: bool = True
    """False where a negative value makes no sense."""
    definition: str = ""
    """The unit in the words of the unit library, where ``key`` is not one."""
    unwritten: str = ""
    """Those of ``prefixes`` that are read but not written: on the bench it is 0.47 ohm, not 470 mohm."""


def _names(*spellings: str, **factors: float) -> dict[str, float]:
    return {**dict.fromkeys(spellings, 1.0), **factors}


UNITS: Mapping[str, Unit] = {
    unit.key: unit
    for unit in (
        Unit(
            "ohm",
            "a resistance",
            "4k7",
            _names("ohm", "ohms", "r", meg=1e6, megohm=1e6, megohms=1e6),
            "umkMGT",
            unwritten="um",
            point_letters={"R": 1.0, "r": 1.0, "L": 1e-3, "ohm": 1.0},
            point_prefixes="kMGT",
            tolerance_letters="BCDFGJKM",
            signed=False,
        ),
        Unit(
            "F",
            "a capacitance",
            "4u7",
            _names("f", "farad", "farads", mfd=1e-6),
            "pnum",
            point_letters={"F": 1.0},
            point_prefixes="pnum",
            tolerance_letters="BCDGJKM",
            signed=False,
        ),
        Unit(
            "H",
            "an inductance",
            "100 uH",
            _names("h", "henry", "henries"),
            "num",
            {"H": 1.0},
            "num",
            "JKM",
            signed=False,
        ),
        Unit("V", "a voltage", "12.5 V", _names("v", "volt", "volts"), "numk", {"V": 1.0}, "mk"),
        Unit(
            "A",
            "a current",
            "150 mA",
            _names("a", "amp", "amps", "ampere", "amperes"),
            "pnumk",
            {"A": 1.0},
            "um",
        ),
        Unit("W", "a power", "2.5 W", _names("w", "watt", "watts"), "numk", {"W": 1.0}, "mk"),
        Unit("VA", "an apparent power", "10 VA", _names("va"), "mk"),
        Unit("Hz", "a frequency", "65 kHz", _names("hz", "hertz", cps=1.0), "kMG", {}, "kM", signed=False),
        Unit(
            "s",
            "a time",
            "20 ms",
            _names("s", "sec", "secs", "second", "seconds", min=60.0, minutes=60.0, h=3600.0, hours=3600.0),
            "num",
            signed=False,
        ),
        Unit(
            "h",
            "a time in hours",
            "2000 h",
            _names(
                "h", "hr", "hrs", "hour", "hours", min=1 / 60, minutes=1 / 60, s=1 / 3600, d=24.0, days=24.0
            ),
            signed=False,
            definition="hour",
        ),
        Unit(
            "m",
            "a length",
            "6.4 mm",
            _names("m", "metre", "metres", "meter", "meters", cm=0.01),
            "num",
            signed=False,
        ),
        Unit("degC", "a temperature", "105 degC", _names("degc", "c", "deg", "celsius")),
        Unit(
            "K",
            "a temperature difference",
            "15 K",
            _names("k", "kelvin", "degc", "c", "deg"),
            definition="kelvin",
        ),
        Unit("J", "an energy", "1.5 J", _names("j", "joule", "joules"), "numk"),
        Unit("C", "a charge", "100 nC", _names("c", "coulomb", "coulombs"), "pnum", definition="coulomb"),
        Unit(
            "A2s",
            "a melting integral (I2t)",
            "12 A2s",
            _names("a2s", "a^2s", "a²s", "a**2s"),
            signed=False,
            definition="ampere**2*second",
        ),
        Unit(
            "K/W",
            "a thermal resistance",
            "62 K/W",
            _names("k/w", "c/w", "degc/w"),
            signed=False,
            definition="kelvin/watt",
        ),
        Unit(
            "1",
            "a plain number",
            "0.9",
            {"": 1.0, "%": 0.01, "x": 1.0, "times": 1.0, "turns": 1.0, "t": 1.0},
            definition="dimensionless",
        ),
    )
}
"""Unit key -> Unit. A new unit is one more entry; ``definition`` must be known in unit_definitions.txt."""


def unit_of(key: str) -> Unit:
    """The unit with this key. Raises ValueError, naming the keys, for one that the program does not use."""
    try:
        return UNITS[key]
    except KeyError:
        raise ValueError(f"unit key {key!r} is not one of {', '.join(UNITS)}") from None
