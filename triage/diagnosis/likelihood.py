"""How probable each reading is under each hypothesis.

p(reading | h) = (1 - eps) mean over draws of the smeared expected reading + eps g: the tolerance draws carry
the spread of the parts, the smear carries meter and model, and the last term is the floor for grossly wrong
readings (contaminated normal; Box, Tiao, A Bayesian approach to some outlier problems, Biometrika 55 (1968)
119-129). A reading above the range counts as the event "above the range" (censored likelihood; Tobin,
Econometrica 26 (1958) 24-36).
"""

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from triage.diagnosis.axis import Axis, draw_width, to_axis
from triage.diagnosis.bins import bin_edges
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.settings import Instrument, Settings, instruments


class ReadingModel:
    """Expected readings as cells: the likelihood of what was read, and the bins that untaken readings are
    scored with.

    Built once for a board; all methods are pure.
    """

    def __init__(
        self, expectations: Expectations, settings: Settings, meters: Mapping[str, Instrument] | None = None
    ) -> None:
        """meters: function -> instrument; by default those of instruments.toml."""
        self.expectations = expectations
        self._settings = settings
        meters = meters or instruments()
        self.axes: list[Axis] = []
        """One axis for each probe."""
        self._cells: list[NDArray[np.int32]] = []
        self._widths: list[NDArray[np.uint8]] = []
        self._row: list[NDArray[np.int64]] = []
        # Most faults leave most readings as they are: equal rows of draws are kept and reckoned once.
        for column, probe in enumerate(expectations.probes):
            instrument = meters[probe.function]
            samples = expectations.samples[:, column, :]
            axis = Axis.spanning(samples, instrument)
            self.axes.append(axis)
            cells, first, row = _equal_rows(axis.place(samples))
            self._cells.append(cells)
            self._widths.append(draw_width(to_axis(samples[first], instrument)))
            self._row.append(row)
        self._known = [bool((cells >= 0).any()) for cells in self._cells]
        self._build_bins()

    @property
    def gross(self) -> float:
        """Share of readings that are grossly wrong [-]."""
        return self._settings.gross_error

    def known(self, column: int) -> bool:
        """True when the probe can be taken under at least one hypothesis."""
        return self._known[column]

    def apart(self, column: int, hypothesis: int) -> NDArray[np.bool_]:
        """True for the hypotheses that read a probe otherwise than this one, shape (H,)."""
        return self._row[column] != self._row[column][hypothesis]

    def commonest(self, column: int, order: NDArray[np.int64]) -> int:
        """Place in ``order`` of a hypothesis that reads as most of them do."""
        row = self._row[column][order]
        return int(np.argmax(row == np.bincount(row).argmax()))

    def _fit(self, column: int, first: int, last: int) -> NDArray[np.float64]:
        """Chance of a sound reading in cells ``first`` to ``last`` - 1, for each draw; shape (H, D), nan
        where unknown.

        ``last`` = cells + 1 takes OL in.
        """
        return _fit(self.axes[column], self._cells[column], self._widths[column], first, last)

    def slip(self, column: int, first: int, last: int) -> float:
        """Chance of a grossly wrong reading in cells ``first`` to ``last`` - 1 [-]."""
        axis = self.axes[column]
        limited = np.isfinite(axis.instrument.over)
        open_share = self._settings.gross_open_line if limited else 0.01
        zero = int(axis.index(0.0))
        near = max(0, zero - 6), min(axis.cells, zero + 7)
        has_zero = axis.start <= 0.0
        zero_share = self._settings.gross_zero if has_zero else 0.0
        upper = min(last, axis.cells)
        chance = (1 - open_share - zero_share) * max(0, upper - first) / axis.cells
        if has_zero:
            chance += zero_share * max(0, min(upper, near[1]) - max(first, near[0])) / (near[1] - near[0])
        return chance + (open_share if last > axis.cells >= first else 0.0)

    def likelihood(self, column: int, values: Sequence[float]) -> NDArray[np.float64]:
        """p(all readings taken with this probe | hypothesis), shape (H,) [-].

        Several readings of one probe share the draw: the part does not change between them, only the slips
            do.
        """
        return self.likelihood_of_draws(column, values, self._cells[column], self._widths[column])[self._row[column]]

    def likelihood_of_draws(
        self, column: int, values: Sequence[float], cells: NDArray[np.int32], widths: NDArray[np.uint8]
    ) -> NDArray[np.float64]:
        """The same for other draws than those expected of the probe, shape (H,) [-].

        cells: places of the draws on the axis of the probe, shape (H, D). widths: index into WIDTHS, shape (H,).
        """
        axis, eps, joint = self.axes[column], self.gross, np.ones(cells.shape)
        unknown = 1.0
        for value in sorted(values):
            cell = int(axis.index(value))
            slip = self.slip(column, cell, cell + 1)
            joint *= (1 - eps) * _fit(axis, cells, widths, cell, cell + 1) + eps * slip
            unknown *= slip
        return _mean_known(joint, unknown)

    def chance_of_slip(self, column: int, value: float) -> float:
        """p(this reading and grossly wrong), whatever the hypothesis [-]."""
        cell = int(self.axes[column].index(value))
        return self.gross * self.slip(column, cell, cell + 1)

    def sound_table(self, column: int, keep: NDArray[np.integer]) -> NDArray[np.float64]:
        """p(cell | hypothesis) of readings without gross errors for the hypotheses ``keep``, shape
        (len(keep), cells + 1).
        """
        axis = self.axes[column]
        edges = np.arange(axis.cells + 1)[:, None]
        rows = []
        for place in self._row[column][keep]:
            cell = self._cells[column][place]
            known = cell[cell >= 0]
            if not known.size:
                rows.append(np.full(axis.cells + 1, 1.0 / (axis.cells + 1)))
                continue
            values, counts = np.unique(known, return_counts=True)
            below = axis.below(edges, values[None, :], int(self._widths[column][place])) @ (counts / known.size)
            rows.append(np.append(np.diff(below), 1.0 - below[-1]))
        return np.stack(rows)

    def cell_table(self, column: int) -> NDArray[np.float64]:
        """p(cell | hypothesis) for every cell and OL, gross errors included; shape (H, cells + 1), rows sum
        to 1.
        """
        cells = self.axes[column].cells + 1
        table = np.stack([self._mixed(column, cell, cell + 1) for cell in range(cells)], axis=1)
        return table[self._row[column]]

    def _mixed(self, column: int, first: int, last: int) -> NDArray[np.float64]:
        slip = self.slip(column, first, last)
        return (1 - self.gross) * _mean_known(self._fit(column, first, last), slip) + self.gross * slip

    def _build_bins(self) -> None:
        edges, rows, owner = [], [], []
        for column, axis in enumerate(self.axes):
            cuts = bin_edges(self._cells[column], axis.cells)
            edges.append(cuts)
            table = np.stack(self._bin_rows(column, cuts)).astype(np.float32)
            rows.append(table[:, self._row[column]])
            owner += [column] * len(table)
        self.edges = edges
        """For each probe the cells at which its bins begin, and the end; the last bin is OL."""
        self.bins = np.concatenate(rows)
        """p(bin | hypothesis), gross errors included, shape (all bins of all probes, H)."""
        self.owner = np.asarray(owner, dtype=np.int64)
        """Probe of each row of ``bins``."""

    def _bin_rows(self, column: int, cuts: list[int]) -> list[NDArray[np.float64]]:
        axis, cell = self.axes[column], self._cells[column]
        width = self._widths[column][:, None]
        below = []
        for cut in cuts[:-1]:
            chance = axis.below(cut, cell, width)
            below.append(_mean_known(np.where(cell < 0, np.nan, chance), self.slip(column, 0, cut)))
        below.append(np.ones(len(cell)))
        return [
            (1 - self.gross) * (below[i + 1] - below[i]) + self.gross * self.slip(column, cuts[i], cuts[i + 1])
            for i in range(len(cuts) - 1)
        ]


def _fit(axis: Axis, cell: NDArray[np.int32], widths: NDArray[np.uint8], first: int, last: int) -> NDArray[np.float64]:
    """Chance of a sound reading in cells ``first`` to ``last`` - 1 for draws at ``cell``, shape (H, D); nan where unknown."""
    width = widths[:, None]
    top = np.ones(cell.shape) if last > axis.cells else axis.below(last, cell, width)
    bottom = np.zeros(cell.shape) if first <= 0 else axis.below(min(first, axis.cells), cell, width)
    return np.where(cell < 0, np.nan, top - bottom)


def _equal_rows(
    cells: NDArray[np.int32],
) -> tuple[NDArray[np.int32], NDArray[np.int64], NDArray[np.int64]]:
    """(different rows, where each first occurs, row of each hypothesis)."""
    packed = np.ascontiguousarray(cells).view(np.dtype((np.void, cells.dtype.itemsize * cells.shape[1]))).ravel()
    _, first, row = np.unique(packed, return_index=True, return_inverse=True)
    return cells[first], first.astype(np.int64), row.astype(np.int64)


def _mean_known(values: NDArray[np.float64], otherwise: float) -> NDArray[np.float64]:
    """Mean over the draws that are known, shape (H, D) -> (H,); ``otherwise`` where none is."""
    known = ~np.isnan(values)
    count = known.sum(axis=1)
    total = np.where(known, values, 0.0).sum(axis=1)
    return np.where(count > 0, total / np.maximum(count, 1), otherwise)
