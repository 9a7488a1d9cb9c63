"""What a careful technician checks before believing a verdict: the odd reading once more, the suspected part
itself, and whatever else would explain the same readings.

Both catch slips of the probe and faults that are not on the list: a list without the real fault finds another
    one that explains the few readings taken,
and the reading at that part then contradicts it.
"""

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Reading, Sign, Symptom
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import Fit, fit_of

RULED_OUT = 10.0
"""A rival is ruled out by a single reading this many times likelier under the leading repair. Many readings that each say a
little do not rule out: they share the spread of the same parts."""
RIVAL = 0.01
"""Rivals with less than this share of the leading repair's belief are not looked for [-]."""
RIVAL_CAREFUL = 0.0005
"""The same in the careful way, where a wrong repair destroys parts [-]."""
BEHIND = 0.001
"""The same behind a fuse that stands open, as a share of what was believed before any reading [-]."""
PROTECTIVE = ("fuse", "fusible_resistor", "thermal_fuse")
"""Kinds that as a rule open because of something else: of 40 failed fuses in public repair records 8 were all that had to
be replaced, 26 stood beside another failed part or a short (Open Repair Data, Open Repair Alliance, CC BY-SA 4.0)."""
MOST = 24
"""Rivals that are looked at together."""
SHOWS = 0.5
"""A reading at a part shows its fault when the expectations with and without it overlap by less than this
[-].
"""


def odd_readings(fit: Fit | None, taken: Sequence[Probe], limit: float) -> tuple[Probe, ...]:
    """Readings taken once that fit less than ``limit``: to be measured again, worst first."""
    return tuple(p for p in fit.doubtful(limit) if taken.count(p) == 1) if fit else ()


def hinges(
    lead: int,
    hypotheses: Sequence[Hypothesis],
    start: NDArray[np.float64],
    terms: Mapping[Symptom | Sign | Probe, NDArray[np.float64]],
    actions: Actions,
    taken: Sequence[Probe],
) -> tuple[Probe, ...]:
    """Readings taken once without which a single fault would be believed instead of two independent ones, in their order.

    A slip of the probe is commoner than a second fault: such a reading is measured again before both are believed.

    Parameters
    ----------
    lead: index of the leading hypothesis.
    start: chances before the evidence, shape (H,) [-].
    terms: entry -> log-likelihoods, shape (H,).
    """
    if len(hypotheses[lead].root) < 2:
        return ()
    with np.errstate(divide="ignore"):
        total = np.log(start) + sum(terms.values())
    found = []
    for probe in (one for one in terms if isinstance(one, Probe) and taken.count(one) == 1):
        without = total - terms[probe]
        weight = actions.chances(np.exp(without - without.max()))
        if actions.repairs[int(np.argmax(weight))] < actions.repairs[actions.of[lead]]:
            found.append(probe)
    return tuple(found)


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
    """The reading across the leading root part itself that shows its fault best, then the one with a leg lifted: it comes out
    anyway, and alone it cannot borrow the fault of a neighbour. None when they were taken or there are none.

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
    ref = hypotheses[lead].root[0].ref
    nodes = pins.get(ref, frozenset())
    for lifted in (False, True):
        columns = [
            column
            for column, probe in enumerate(model.expectations.probes)
            if not probe.live and (probe.lifted == ref if lifted else {probe.plus, probe.minus} <= nodes)
        ]
        found = _showing(model, columns, lead, sound, taken, allowed)
        if found is not None:
            return found
    return None


def _showing(
    model: ReadingModel,
    columns: Sequence[int],
    lead: int,
    sound: int,
    taken: Sequence[Probe],
    allowed: Callable[[Probe], bool],
) -> Probe | None:
    """The reading of these columns that shows a fault best; None when one that shows it was taken, or none does."""
    shown = []
    for column in columns:
        probe = model.expectations.probes[column]
        common = overlaps(model, column, lead, sound) if model.known(column) else 1.0
        if common < SHOWS:
            if probe in taken:
                return None
            if allowed(probe):
                shown.append((common, column, probe))
    return min(shown)[2] if shown else None


def open_rivals(
    lead: int,
    belief: NDArray[np.float64],
    before: NDArray[np.float64],
    ratios: NDArray[np.float64],
    actions: Actions,
    kinds: Mapping[str, str],
    least: float = RIVAL,
) -> NDArray[np.int64]:
    """Hypotheses with another repair that no single reading rules out, in the order of the list.

    Behind a fuse that would be replaced alone everything that blows it counts, however little is believed of it.

    Parameters
    ----------
    lead: index of the leading hypothesis.
    belief: chances now, shape (H,) [-].
    before: chances before any reading, shape (H,) [-].
    ratios: strongest of the readings for the lead and against each hypothesis, shape (H,) [-].
    actions, kinds: repairs of the hypotheses; ref -> part kind.
    least: share of the leading repair's belief below which a rival is not looked for [-].
    """
    repair = actions.repairs[actions.of[lead]]
    other = actions.of != actions.of[lead]
    sought = belief >= least * belief[actions.of == actions.of[lead]].sum()
    if repair and all(kinds.get(ref) in PROTECTIVE for ref in repair):
        behind = np.array([repair < one for one in actions.repairs])[actions.of]
        sought |= behind & (before >= BEHIND * before[lead])
    return np.flatnonzero(other & sought & (ratios < RULED_OUT))


def reading_against(
    model: ReadingModel,
    lead: int,
    rivals: NDArray[np.int64],
    weights: NDArray[np.float64],
    minutes: Callable[[Probe], float],
    allowed: Callable[[Probe], bool],
) -> Probe | None:
    """The cold reading that best tells the leading hypothesis from these rivals for its minutes; None when none does.

    Parameters
    ----------
    weights: of all hypotheses, shape (H,) [-]; the heaviest MOST rivals are looked at.
    minutes: probe -> minutes it takes.
    allowed: says whether a reading may be suggested.
    """
    chosen = rivals[np.argsort(-weights[rivals], kind="stable")[:MOST]]
    share = weights[chosen] / max(weights[chosen].sum(), 1e-300)
    starts = np.flatnonzero(np.diff(model.owner, prepend=-1))
    common = np.add.reduceat(np.minimum(model.bins[:, [lead]], model.bins[:, chosen]).astype(float), starts, axis=0)
    told = np.where(common < SHOWS, 1.0 - common, 0.0) @ share
    best: tuple[bool, float, int] | None = None
    for column in np.flatnonzero(told > 0.0):
        probe = model.expectations.probes[column]
        if not probe.live and model.known(int(column)) and allowed(probe):
            offer = (bool(probe.lifted), -float(told[column]) / minutes(probe), int(column))
            best = offer if best is None else min(best, offer)
    return model.expectations.probes[best[2]] if best else None
