"""What every instrument would show under every hypothesis: the one thing the diagnosis needs to know about a
board.

Families compute it (tolerance draws of the cold network and of the operating point); the diagnosis only
compares it with what was read. Nothing here knows what a resistor is.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import STATES
from triage.board.fault import Hypothesis
from triage.board.probe import CONDITIONS, Probe
from triage.errors import EntryError

LOADS = CONDITIONS[1:]
"""Order of the second axis of ``Expectations.states``: no load, half and full rated load."""
UNKNOWN_STATE = -1
"""State code of a draw whose operating point was not computed."""


@dataclass(frozen=True)
class Expectations:
    """Readings and states to expect, as arrays over hypotheses and tolerance draws."""

    hypotheses: tuple[Hypothesis, ...]
    """H different hypotheses."""
    probes: tuple[Probe, ...]
    """P different readings."""
    samples: NDArray[np.floating]
    """Shape (H, P, D) [SI of the probe]: ``inf`` = OL, ``nan`` = cannot be taken or not known."""
    states: NDArray[np.integer]
    """Shape (H, 3, D'): index into STATES under each of LOADS, or UNKNOWN_STATE. The number of draws may
    differ.
    """

    def __post_init__(self) -> None:
        count, probes = len(self.hypotheses), len(self.probes)
        if len(set(self.hypotheses)) != count or len(set(self.probes)) != probes:
            raise EntryError("expectations", "a hypothesis or a probe twice", "each of them once")
        if self.samples.ndim != 3 or self.samples.shape[:2] != (count, probes) or not self.samples.shape[2]:
            raise EntryError(
                "expectations, samples",
                f"shape {self.samples.shape}",
                f"({count}, {probes}, at least one draw)",
            )
        if self.states.ndim != 3 or self.states.shape[:2] != (count, len(LOADS)) or not self.states.shape[2]:
            raise EntryError(
                "expectations, states",
                f"shape {self.states.shape}",
                f"({count}, {len(LOADS)}, at least one draw)",
            )
        if self.states.size and not UNKNOWN_STATE <= self.states.min() <= self.states.max() < len(STATES):
            raise EntryError("expectations, states", "a code that is no state", f"-1 to {len(STATES) - 1}")

    def column(self, probe: Probe) -> int | None:
        """Place of a probe on the second axis of ``samples``, or None when nothing is known of it."""
        return self._columns.get(probe)

    @cached_property
    def _columns(self) -> dict[Probe, int]:
        return {probe: column for column, probe in enumerate(self.probes)}

    def joined(self, more: "Expectations") -> "Expectations":
        """These hypotheses and, behind them, those of ``more`` that are not among them (pairs solved later).

        Raises EntryError when the two were not computed for the same probes and numbers of draws.
        """
        if (
            more.probes != self.probes
            or more.samples.shape[2] != self.samples.shape[2]
            or more.states.shape[2] != self.states.shape[2]
        ):
            raise EntryError("expectations", "two sets with different probes or draws", "the same in both")
        known = set(self.hypotheses)
        new = [i for i, hypothesis in enumerate(more.hypotheses) if hypothesis not in known]
        return Expectations(
            self.hypotheses + tuple(more.hypotheses[i] for i in new),
            self.probes,
            np.concatenate([self.samples, more.samples[new]]),
            np.concatenate([self.states, more.states[new]]),
        )
