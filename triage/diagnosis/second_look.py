"""What a careful technician checks before believing a verdict: the odd reading once more, and the suspected
part itself.

Both catch slips of the probe and faults that are not on the list: a list without the real fault finds another
    one that explains the few readings taken,
and the reading at that part then contradicts it.
"""

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Reading
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import Fit, fit_of

SHOWS = 0.5
"""A reading at a part shows its fault when the expectations with and without it overlap by less than this
[-].
"""


def odd_readings(fit: Fit | None, taken: Sequence[Probe], limit: float) -> tuple[Probe, ...]:
    """Readings taken once that fit less than ``limit``: to be measured again, worst first."""
    return tuple(p for p in fit.doubtful(limit) if taken.count(p) == 1) if fit else ()


def nothing_fits(
    model: ReadingModel, readings: Sequence[Reading], belief: NDArray[np.float64], limit: float
) -> tuple[Probe, ...]:
    """Readings measured at least twice that no hypothesis still in question explains, worst first."""
    taken = [reading.probe for reading in readings]
    repeated = [reading for reading in readings if taken.count(reading.probe) > 1]
    return fit_of(model, repeated, belief).doubtful(limit) if repeated else ()


def overlaps(model: ReadingModel, column: int, one: int, other: int) -> float:
    """Share of the readings that two hypotheses have in common [-]."""
    tables = model.sound_table(column, np.array([one, other]))
    return float(np.minimum(tables[0], tables[1]).sum())


def reading_at_part(
    model: ReadingModel,
    lead: int,
    pins: Mapping[str, frozenset[str]],
    taken: Sequence[Probe],
    allowed: Callable[[Probe], bool],
) -> Probe | None:
    """The reading across the leading root part itself that shows its fault best; None when it was taken or
    there is none.

    Parameters
    ----------
    lead: index of the leading hypothesis; with no or two root faults there is nothing to confirm.
    pins: ref -> nodes of the part.
    taken: readings so far.
    allowed: says whether a reading may be suggested.
    """
    hypotheses = model.expectations.hypotheses
    sound = next((i for i, h in enumerate(hypotheses) if h == Hypothesis(())), None)
    if sound is None or len(hypotheses[lead].root) != 1:
        return None
    nodes = pins.get(hypotheses[lead].root[0].ref, frozenset())
    shown = []
    for column, probe in enumerate(model.expectations.probes):
        if probe.live or not {probe.plus, probe.minus} <= nodes or not model.known(column):
            continue
        common = overlaps(model, column, lead, sound)
        if common < SHOWS:
            if probe in taken:
                return None
            if allowed(probe):
                shown.append((common, column, probe))
    return min(shown)[2] if shown else None
