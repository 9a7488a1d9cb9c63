"""A line printed on a capacitor taken apart: ratings, class, dielectric, and the rest, which is the value."""

import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field

from triage.replacement.marking.tables import code_table

_SAFETY_CLASS = re.compile(r"(?<![A-UWZa-uwz\d])([XY][124])(?![\dA-Z])")
_VOLTAGE = re.compile(r"(\d+(?:[.,]\d+)?) ?(k)?V ?(ac|dc|~|=)?(?![a-z\d])", re.IGNORECASE)
_CERAMIC = re.compile(r"(?<![A-Z\d])(C0G|COG|NP0|NPO|U2J|[XYZ][4-9][A-FPRSTUV])(?![A-Z\d])")
_TEMPERATURE = re.compile(
    r"(?:-\d{2} ?(?:deg)?C? ?(?:\+-|\+|to|\.{2,3}|/|-)? ?)?"
    r"\+?(70|85|100|105|110|125|130|135|150|155|175) ?(?:deg)?C(?![\dA-Z])"
)
_PERCENT = re.compile(r"(?:\+/?-)? ?(\d+(?:[.,]\d+)?) ?%")
_CLIMATE = re.compile(r"(?<!\d)\d{2}/(\d{2,3})/\d{2}(?!\d)")
"""Climatic category of IEC 60068-1: lowest and highest temperature, days of damp heat."""


@dataclass(slots=True)
class CapacitorLine:
    """What a printed line says, filled piece by piece while the line is taken apart."""

    value: str = ""
    """What is left of the line, without spaces: the value in one of its forms."""
    voltages: list[float] = field(default_factory=list)
    """Rated voltages in the order of print [V]."""
    alternating: bool = False
    """True where a voltage is marked ac."""
    safety_classes: list[str] = field(default_factory=list)
    """``X1``, ``X2``, ``Y1``, ``Y2`` ... as printed."""
    dielectric: str = ""
    """Dielectric in words, or the letters of a ceramic class."""
    ceramic: bool = False
    """True where a ceramic class is printed."""
    temperature: float | None = None
    """Upper category temperature [degC]."""
    tolerance: float | None = None
    """Relative tolerance where it is printed in percent."""

    def keep_safety_class(self, match: re.Match[str]) -> None:
        """Take a class of IEC 60384-14."""
        self.safety_classes.append(match[1])

    def keep_voltage(self, match: re.Match[str]) -> None:
        """Take a rated voltage."""
        self.voltages.append(float(match[1].replace(",", ".")) * (1000 if match[2] else 1))
        self.alternating = self.alternating or (match[3] or "").lower() in ("ac", "~")

    def keep_ceramic(self, match: re.Match[str]) -> None:
        """Take a ceramic class; the letter O stands for the digit 0 on many bodies."""
        self.dielectric = f"ceramic {match[1].replace('COG', 'C0G').replace('NPO', 'NP0')}"
        self.ceramic = True

    def keep_dielectric(self, match: re.Match[str]) -> None:
        """Take the letters of a film dielectric."""
        self.dielectric = code_table("dielectric")["word"][match[1]]

    def keep_temperature(self, match: re.Match[str]) -> None:
        """Take the upper category temperature."""
        self.temperature = float(match[1])

    def keep_tolerance(self, match: re.Match[str]) -> None:
        """Take a tolerance in percent."""
        self.tolerance = float(match[1].replace(",", ".")) / 100


def split_line(text: str) -> CapacitorLine:
    """The line taken apart; every piece that is recognised is taken out, the rest is the value."""
    line = CapacitorLine()
    rest = re.sub(r"[()]", " ", text)
    for pattern, keep in _pieces():
        for match in pattern.finditer(rest):
            keep(line, match)
        rest = pattern.sub(" ", rest)
    line.value = re.sub(r"[ ;]", "", rest).strip("-/~")
    return line


def _pieces() -> Iterator[tuple[re.Pattern[str], Callable[[CapacitorLine, re.Match[str]], None]]]:
    """Pattern of each piece and what takes it, in the order in which they are safe to take out."""
    words = "|".join(sorted(code_table("dielectric")["word"], key=len, reverse=True))
    yield _SAFETY_CLASS, CapacitorLine.keep_safety_class
    yield _CERAMIC, CapacitorLine.keep_ceramic
    yield _CLIMATE, CapacitorLine.keep_temperature
    yield _TEMPERATURE, CapacitorLine.keep_temperature
    yield re.compile(rf"(?<![A-Z\d])({words})(?:\d{{2}})?(?![A-Z\d])"), CapacitorLine.keep_dielectric
    yield _VOLTAGE, CapacitorLine.keep_voltage
    yield _PERCENT, CapacitorLine.keep_tolerance
