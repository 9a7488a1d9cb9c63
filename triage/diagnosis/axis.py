"""Where a reading lies on the scale of its own error: the cells that the likelihoods are counted in.

A reading x with standard error sqrt(a^2 + (r x)^2) is carried to u = asinh(r x / a) / r, on which the error
is 1 everywhere (a variance-stabilising transformation; Bartlett, The use of transformations, Biometrics 3
(1947) 39-52): linear near zero, logarithmic far from it, and coarser logarithmic above a knee where other
things than the meter blur the reading. Cells of equal width on u therefore suit 0.02 ohm as well as 20 Mohm.
Open line is a cell of its own.
"""

import math
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from triage.diagnosis.settings import Instrument

CELL = 0.5
"""Width of a cell in standard errors: half an error loses 1 % of the variance (width^2 / 12)."""
MARGIN = 8.0
"""Cells reach this many standard errors beyond the outermost expected reading."""
WIDTHS = tuple(2.0 ** (0.5 * n) for n in range(11))
"""Standard errors for which smearing is tabulated: the error of the reading widened by the gaps between few
draws.
"""
_REACH = 6 * int(WIDTHS[-1] / CELL)


def to_axis(value: NDArray[np.floating] | float, instrument: Instrument) -> NDArray[np.floating]:
    """Reading(s) [SI] in standard errors from zero [-]; keeps ``inf`` and ``nan``; below zero only where the
    display does.
    """
    shown = np.asarray(value, dtype=float)
    shown = shown if instrument.signed else np.maximum(shown, 0.0)
    below = np.minimum(shown, instrument.knee)
    position = np.arcsinh(below * (instrument.relative / instrument.absolute)) / instrument.relative
    if np.isinf(instrument.knee):
        return position
    above = np.log(np.maximum(shown, instrument.knee) / instrument.knee) / instrument.relative_above_knee
    return position + above


def from_axis(position: float, instrument: Instrument) -> float:
    """Reading [SI] at a position on the axis; the inverse of ``to_axis``."""
    knee = float(to_axis(instrument.knee, instrument))
    if position > knee:
        return instrument.knee * math.exp((position - knee) * instrument.relative_above_knee)
    return math.sinh(position * instrument.relative) * instrument.absolute / instrument.relative


@cache
def smear_table() -> NDArray[np.float64]:
    """Normal distribution function at n cells plus a half, n = -_REACH.. _REACH, one row for each of WIDTHS
    [-].
    """
    steps = np.arange(-_REACH, _REACH + 1) + 0.5
    erf = np.frompyfunc(math.erf, 1, 1)
    rows = [0.5 * (1.0 + erf(steps * CELL / (width * math.sqrt(2.0))).astype(float)) for width in WIDTHS]
    table = np.stack(rows)
    table[:, 0], table[:, -1] = 0.0, 1.0
    table.flags.writeable = False
    return table


@dataclass(frozen=True, slots=True)
class Axis:
    """The cells of one probe: ``cells`` cells of CELL standard errors from ``start`` on, and behind them the
    OL cell.
    """

    instrument: Instrument
    start: float
    """Lower edge of cell 0 [standard errors]."""
    cells: int
    """Number of cells; the index ``cells`` itself means OL."""
    ends_at_limit: bool
    """True when the upper edge is the limit of the meter's range, so that what lies above reads OL."""

    @classmethod
    def spanning(cls, samples: NDArray[np.floating], instrument: Instrument) -> "Axis":
        """The axis that holds all finite samples [SI] and a margin, cut at the limit of the range."""
        finite = samples[np.isfinite(samples)]
        position = to_axis(finite, instrument) if finite.size else np.zeros(1)
        start = math.floor((float(position.min()) - MARGIN) / CELL) * CELL
        stop = float(position.max()) + MARGIN
        limit = float(to_axis(instrument.over, instrument))
        ends = math.isfinite(limit) and stop >= limit
        if ends:
            stop = limit
            start = min(start, stop - CELL)
        return cls(instrument, start, max(1, math.ceil((stop - start) / CELL)), ends)

    def index(self, value: NDArray[np.floating] | float) -> NDArray[np.int32]:
        """Cell in which each reading [SI] is shown; OL is ``cells``, unknown (nan) is -1.

        What lies outside the cells goes to the end cells.
        """
        return np.minimum(self.place(value), self.cells)

    def place(self, value: NDArray[np.floating] | float) -> NDArray[np.int32]:
        """Cell in which each true value [SI] lies, counted on beyond the limit of the range; unknown (nan) is
        -1.

        A value above the limit, but near it, may still be shown as a number; ``inf`` never is.
        """
        values = np.asarray(value, dtype=float)
        position = to_axis(values, self.instrument)
        with np.errstate(invalid="ignore"):
            cell = np.maximum(np.floor((position - self.start) / CELL), 0)
            over = values > self.instrument.over
            cell = np.where(over, np.clip(cell, self.cells, self.cells + _REACH), np.minimum(cell, self.cells - 1))
        cell = np.where(np.isposinf(values), self.cells + 2 * _REACH, cell)
        return np.where(np.isnan(values), -1, cell).astype(np.int32)

    def at(self, position: NDArray[np.floating]) -> NDArray[np.int32]:
        """The same as ``place`` for true values given in standard errors."""
        limit = float(to_axis(self.instrument.over, self.instrument))
        with np.errstate(invalid="ignore"):
            cell = np.maximum(np.floor((position - self.start) / CELL), 0)
            over = position > limit
            cell = np.where(over, np.clip(cell, self.cells, self.cells + _REACH), np.minimum(cell, self.cells - 1))
        cell = np.where(np.isposinf(position), self.cells + 2 * _REACH, cell)
        return np.where(np.isnan(position), -1, cell).astype(np.int32)

    def edge(self, cell: int) -> float:
        """Lower edge of a cell [SI]; the first and the last edge are open, hence -inf and inf."""
        if cell <= 0:
            return -math.inf
        if cell >= self.cells:
            return self.instrument.over if self.ends_at_limit else math.inf
        return from_axis(self.start + cell * CELL, self.instrument)

    def below(
        self, edge: int | NDArray[np.integer], cell: NDArray[np.integer], width: NDArray[np.integer] | int
    ) -> NDArray[np.floating]:
        """Chance that a reading falls below the lower edge of cell ``edge`` [-].

        Parameters
        ----------
        edge: 0 .. cells; 0 gives 0, ``cells`` gives the chance that the display does not show OL.
        cell: places of expected values (not unknown), broadcast against ``edge``.
        width: index into WIDTHS, broadcast against the others.
        """
        step = np.clip(np.asarray(edge) - 1 - cell, -_REACH, _REACH) + _REACH
        chance = smear_table()[width, step]
        chance = np.where(np.asarray(edge) <= 0, 0.0, chance)
        if self.ends_at_limit:
            return chance
        return np.where(np.asarray(edge) >= self.cells, np.where(cell >= self.cells, 0.0, 1.0), chance)


def draw_width(position: NDArray[np.floating]) -> NDArray[np.uint8]:
    """Index into WIDTHS for each row of draws on the axis, shape (H, D) -> (H,).

    One error widened by the bandwidth of a kernel estimate from few draws, 0.9 min(sd, IQR / 1.34) D^(-1/5)
    (Silverman, Density estimation (1986), equation 3.31).
    """
    finite = np.isfinite(position)
    count = np.maximum(finite.sum(axis=1), 1)
    ordered = np.sort(np.where(finite, position, np.inf), axis=1)
    rows = np.arange(len(position))
    quartile = [ordered[rows, np.minimum((count * share).astype(int), count - 1)] for share in (0.25, 0.75)]
    with np.errstate(invalid="ignore"):
        mean = np.where(finite, position, 0.0).sum(axis=1) / count
        spread = np.sqrt(np.where(finite, (position - mean[:, None]) ** 2, 0.0).sum(axis=1) / count)
        between = np.where(np.isfinite(quartile[0]) & np.isfinite(quartile[1]), (quartile[1] - quartile[0]) / 1.34, 0.0)
    bandwidth = 0.9 * np.where(between > 0, np.minimum(spread, between), 0.0) * count**-0.2
    exact = 2.0 * np.log2(np.sqrt(1.0 + bandwidth**2))
    return np.clip(np.rint(exact), 0, len(WIDTHS) - 1).astype(np.uint8)
