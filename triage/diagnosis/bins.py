"""Into which outcomes the cells of a reading are gathered when readings are scored."""

from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

BINS = 16
"""Outcomes a probe is scored with, besides OL; 12 to 24 cost and gain the same on a prototype."""
FEW_BINS = 6
"""Outcomes a probe is scored with while very many hypotheses are in question, OL included."""
LOSS = 0.02
"""Share of the information that may be lost by merging even when there are fewer than FEW_BINS. The prototype
lost 3 % with 5 bins.
"""


def bin_edges(cells: NDArray[np.int32], count: int) -> list[int]:
    """Cells at which the bins of a probe begin, ending with ``count`` (OL) and ``count`` + 1.

    Quantiles of the largest density that any hypothesis has in a cell, so that every group of hypotheses that
    reads apart gets its own bin however few they are; each edge then moves to the emptiest cell nearby.
    """
    draws = cells.shape[1]
    envelope = np.zeros(count)
    for row in cells[:4000]:
        finite = row[(row >= 0) & (row < count)]
        if finite.size:
            np.maximum(envelope, np.bincount(finite, minlength=count) / draws, out=envelope)
    taps = np.exp(-0.5 * (np.arange(-6, 7) / 2.0) ** 2)
    smooth = np.convolve(envelope, taps / taps.sum(), mode="same") if count > taps.size else envelope + 1e-9
    share = np.cumsum(smooth) / max(smooth.sum(), 1e-300)
    raw = np.searchsorted(share, np.arange(1, BINS) / BINS)
    cuts = sorted({int(cut) for cut in raw if 0 < cut < count})
    moved = set()
    for left, cut, right in zip([0, *cuts], cuts, [*cuts[1:], count], strict=False):
        low, high = (left + cut + 1) // 2, (cut + right) // 2 + 1
        moved.add(low + int(np.argmin(smooth[low:high])) if high > low else cut)
    return [0, *sorted(cut for cut in moved if 0 < cut < count), count, count + 1]


def merged_bins(table: NDArray[np.floating]) -> NDArray[np.int64]:
    """First bin of each merged outcome: neighbours joined greedily by least loss of information, OL (the last
    bin) kept apart.

    (Agglomerative information bottleneck; Slonim, Tishby, NIPS 1999.)

    table: p(bin | group) for groups of hypotheses that read alike, shape (bins, groups); all groups count the
        same.
    """
    rows = [row.astype(float) / table.shape[1] for row in table]
    starts = list(range(len(rows)))
    whole = sum(map(_content, rows)) - _content(np.sum(rows, axis=0))
    lost = 0.0
    while len(rows) > 2:
        losses = [_content(a) + _content(b) - _content(a + b) for a, b in pairwise(rows[:-1])]
        place = int(np.argmin(losses))
        lost += losses[place]
        if len(rows) <= FEW_BINS and lost > LOSS * whole:
            break
        rows[place : place + 2] = [rows[place] + rows[place + 1]]
        del starts[place + 1]
    return np.asarray(starts, dtype=np.int64)


def _content(row: NDArray[np.float64]) -> float:
    """sum p log p - P log P of one outcome with P = sum p: its share of the information [nat]."""
    total = row.sum()
    return float((row * np.log(np.maximum(row, 1e-300))).sum() - total * np.log(max(total, 1e-300)))
