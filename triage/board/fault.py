"""Faults of parts, and the hypotheses that are made of them."""

from dataclasses import dataclass
from typing import NamedTuple


class Fault(NamedTuple):
    """One part in one fault mode."""

    ref: str
    mode: str

    def __str__(self) -> str:
        return f"{self.ref}.{self.mode}"

    @classmethod
    def parse(cls, text: str) -> "Fault":
        """Read ``R1.open``. Raises ValueError when there is no dot."""
        ref, dot, mode = text.partition(".")
        if not dot or not ref or not mode:
            raise ValueError(f"{text!r} is not of the form REF.mode")
        return cls(ref, mode)


@dataclass(frozen=True, slots=True)
class Hypothesis:
    """What may be wrong: nothing on the board, a root fault, what it took with it, or two independent faults."""

    root: tuple[Fault, ...]
    """Faults that came by themselves; empty: no part of the board is at fault."""
    collateral: tuple[Fault, ...] = ()
    """Faults that follow from the root, in order of destruction."""

    @property
    def faults(self) -> tuple[Fault, ...]:
        """All faults present on the board, root first."""
        return self.root + self.collateral

    @property
    def repair(self) -> frozenset[str]:
        """Refs of the parts that must be replaced."""
        return frozenset(fault.ref for fault in self.faults)

    def __str__(self) -> str:
        return " + ".join(map(str, self.faults)) or "no part fault"
