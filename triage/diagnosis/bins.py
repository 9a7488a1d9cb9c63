"""Into which outcomes the cells of a reading are gathered when readings are scored."""

import numpy as np
from numpy.typing import NDArray

BINS = 12
"""Outcomes a probe is scored with, besides OL; 12 to 24 cost and gain the same on a prototype."""


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
