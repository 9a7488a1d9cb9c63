"""Parts that stand between a person and the mains: X and Y capacitors and fuses, by their standard classes.

They are replaced like for like. This module says what a class must withstand, whether one class may take
another's place, what a fuse marking says, and between which times a fuse must open.
"""

import math
import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from triage.errors import TriageError
from triage.safety.limits import Source, source_of, table


class SafetyPartError(TriageError):
    """A class or marking that is not of the standard."""


def _capacitor(name: str) -> Mapping[str, Any]:
    rows = table("safety_parts")["capacitor"]
    for row in rows:
        if row["class"] == name.upper():
            return row
    raise SafetyPartError("capacitor class", repr(name), ", ".join(row["class"] for row in rows))


def class_source(name: str) -> Source:
    """Source of the figures of a capacitor class."""
    return source_of(_capacitor(name))


def impulse_voltage(name: str, capacitance: float = 1e-6) -> float:
    """Impulse [V] a class must withstand; X1, X2 and Y2 above 1 uF by Up / sqrt(C / 1 uF) for a capacitance
    [F].

    0 for a class without impulse test. Source: IEC 60384-14.

    >>> impulse_voltage("X2", 4e-6)
    1250.0
    """
    row = _capacitor(name)
    reduced = row["reduced_by_size"] and capacitance > 1e-6
    return float(row["impulse_V"]) / (math.sqrt(capacitance / 1e-6) if reduced else 1.0)


def proof_voltage(name: str) -> float | None:
    """Voltage proof of a Y class [V ac]; None for X classes, which are proved at 4.3 times their rated
    voltage in dc."""
    return _capacitor(name).get("proof_ac_V")


def bridges_reinforced(name: str) -> bool:
    """True when a single capacitor of the class may join mains and output. Source: IEC 60384-14."""
    return bool(_capacitor(name)["bridges"] == "reinforced")


def may_replace(new: str, old: str) -> bool:
    """True when a capacitor class may take the place of another: same letter and rank at least, or Y for X.

    Capacitance and rated voltage are looked at elsewhere. Source: IEC 60384-14.

    >>> may_replace("Y1", "Y2"), may_replace("X1", "Y2"), may_replace("Y2", "X2")
    (True, False, True)
    """
    newer, older = _capacitor(new), _capacitor(old)
    if newer["class"][0] != older["class"][0]:
        return bool(newer["class"][0] == "Y" and newer["impulse_V"] >= older["impulse_V"])
    return bool(newer["rank"] >= older["rank"])


@dataclass(frozen=True, slots=True)
class FuseMarking:
    """What is stamped on a fuse cap."""

    speed: str
    """``FF``, ``F``, ``M``, ``T`` or ``TT``; empty when not marked."""
    current: float
    """[A]"""
    breaking: str
    """``L``, ``E`` or ``H``; empty when not marked."""
    voltage: float | None
    """[V]"""

    @property
    def breaking_capacity(self) -> float | None:
        """Current it can break [A]; None when not marked. Source: IEC 60127-2."""
        row = next((row for row in table("safety_parts")["breaking"] if row["letter"] == self.breaking), None)
        return None if row is None else max(row["least_A"], row["times_rated"] * self.current)

    def gate(self, times_rated: float) -> tuple[float, float] | None:
        """Between which times it must open [s] at 2.1, 2.75, 4 or 10 times rated current; None where no
        sheet tells."""
        for row in table("safety_parts")["gate"]:
            low, high = row["rated_A"]
            if (row["speed"], row["breaking"]) == (self.speed, self.breaking) and low <= self.current <= high:
                found = row["times"].get(f"{times_rated:g}")
                return None if found is None else (found[0], found[1])
        return None


def parse_fuse(text: str) -> FuseMarking:
    """Read a fuse marking such as ``T1AL250V``, ``T 2.5 A 250 V``, ``F500mAL250V``.

    Raises SafetyPartError. Source: IEC 60127-1, marking.
    """
    compact = re.sub(r"\s+", "", text).replace(",", ".")
    match = re.fullmatch(r"(FF|TT|F|M|T)?(\d+(?:\.\d+)?)(mA|A)([LEH])?(?:/?(\d+)V~?)?", compact, re.IGNORECASE)
    if match is None:
        raise SafetyPartError("fuse marking", repr(text), "speed, amperes, breaking letter, volts as in T1AL250V")
    speed, number, unit, breaking, volts = match.groups()
    amps = float(number) * (1e-3 if unit.lower() == "ma" else 1.0)
    return FuseMarking((speed or "").upper(), amps, (breaking or "").upper(), float(volts) if volts else None)


def fuse_fits(new: FuseMarking, old: FuseMarking) -> tuple[str, ...]:
    """Why a fuse may not take another's place; empty when it may. Same current and speed, no less breaking
    and volts."""
    reasons = []
    if not math.isclose(new.current, old.current, rel_tol=0.02):
        reasons.append(f"{new.current:g} A is not {old.current:g} A")
    if new.speed != old.speed:
        reasons.append(f"speed {new.speed or 'not marked'} is not {old.speed or 'not marked'}")
    if (new.breaking_capacity or 0.0) < (old.breaking_capacity or 0.0):
        reasons.append(f"breaks {new.breaking_capacity or 0.0:g} A, not {old.breaking_capacity:g} A")
    if (new.voltage or 0.0) < (old.voltage or 0.0):
        reasons.append(f"{new.voltage or 0.0:g} V is below {old.voltage:g} V")
    return tuple(reasons)
