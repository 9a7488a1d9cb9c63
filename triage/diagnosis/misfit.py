"""When a reading, or all of them together, do not fit what is believed.

A single reading that even the leading suspect explains only by a gross error asks to be measured again.
Readings that are together very improbable under the leading suspect say that the fault may not be on the list
at all.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Reading
from triage.board.probe import Probe
from triage.diagnosis.likelihood import ReadingModel

MIXED = 64
"""Hypotheses at most whose expectations are mixed; the others weigh too little to explain a reading."""


@dataclass(frozen=True, slots=True)
class Fit:
    """How well the readings fit one hypothesis, or a weighted set of them."""

    tails: tuple[tuple[Probe, float], ...]
    """Probe -> chance of a sound reading at least as improbable as the one taken [-], worst first."""

    @property
    def worst(self) -> tuple[Probe, float] | None:
        """The reading that fits least."""
        return self.tails[0] if self.tails else None

    def doubtful(self, limit: float) -> tuple[Probe, ...]:
        """Readings less probable than ``limit``, worst first."""
        return tuple(probe for probe, chance in self.tails if chance < limit)

    @property
    def overall(self) -> float:
        """Chance that the worst of as many sound readings is this improbable or more (Šidák's correction)
        [-].
        """
        return 1.0 - (1.0 - self.tails[0][1]) ** len(self.tails) if self.tails else 1.0


def tail(table: NDArray[np.float64], cell: int) -> float:
    """Chance of a cell at most as probable as ``cell`` [-]; ``table``: chances of the cells of one probe,
    adding up to 1.
    """
    return float(min(1.0, table[table <= table[cell] * (1 + 1e-9)].sum()))


def fit_of(model: ReadingModel, readings: Sequence[Reading], weights: NDArray[np.float64]) -> Fit:
    """Fit of the readings to the hypotheses with these weights, shape (H,).

    Each reading is held against the mixture of what the weighted hypotheses expect, without gross errors.
    """
    found = []
    likeliest = np.argsort(-weights, kind="stable")[:MIXED]
    keep = likeliest[weights[likeliest] > 1e-3 * weights[likeliest[0]]]
    share = weights[keep] / weights[keep].sum()
    latest = {reading.probe: reading.value for reading in readings}
    for probe in sorted(latest):
        column = model.expectations.column(probe)
        if column is None or not model.known(column):
            continue
        table = share @ model.sound_table(column, keep)
        found.append((probe, tail(table, int(model.axes[column].index(latest[probe])))))
    return Fit(tuple(sorted(found, key=lambda item: (item[1], item[0]))))
