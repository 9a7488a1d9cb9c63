"""Why this reading, what each outcome would say, and which entries carried the verdict: in sentences and
likelihood ratios.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import PLUG_FUNCTIONS
from triage.diagnosis.information import information
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.next_reading import Candidate
from triage.diagnosis.verdict import best_repair
from triage.diagnosis.words import NO_PART_FAULT, percent_words, probe_words, suspect_name
from triage.quantities import engineering

MOST_OUTCOMES = 3


@dataclass(frozen=True, slots=True)
class Outcome:
    """One band of outcomes of a reading."""

    text: str
    low: float
    """[SI]"""
    high: float
    """[SI]; ``inf`` takes OL in."""
    probability: float
    """[-]"""
    says: str


@dataclass(frozen=True, slots=True)
class Suggestion:
    """The next reading to take."""

    probe: Probe
    minutes: float
    """Work, set-up included [min]."""
    reason: str
    outcomes: tuple[Outcome, ...]
    hazard: str
    """What to mind; empty for an unpowered board."""
    gain: float
    """Expected fall of the impurity of the repair [-]."""
    bits: float = 0.0
    """Expected information about the repair [bit]."""
    again: bool = False
    """True when a reading already taken should be measured again, because it does not fit."""


def repair_words(refs: Sequence[str]) -> str:
    """A repair in words: ``replace C1 and D1``, or work on cord, plug and joints."""
    names = sorted(refs)
    if not names:
        return "no part: check cord, plug and joints"
    return "replace " + (names[0] if len(names) == 1 else ", ".join(names[:-1]) + " and " + names[-1])


def suggestion(model: ReadingModel, belief: NDArray[np.float64], actions: Actions, choice: Candidate) -> Suggestion:
    """A candidate with its reason and outcomes in words."""
    bands = outcomes(model, belief, actions, choice.column)
    return Suggestion(
        choice.probe,
        choice.minutes,
        _reason(model, belief, actions, choice, bands),
        bands,
        hazard_words(choice.probe),
        choice.gain,
        information(actions.joint(model.bins[model.owner == choice.column], belief)),
    )


def measure_again(
    model: ReadingModel, belief: NDArray[np.float64], actions: Actions, choice: Candidate, alone: bool = False
) -> Suggestion:
    """A reading to be taken a second time, because the best repair explains it only by a slip, or (``alone``) rests on it."""
    action, _ = best_repair(belief, actions)
    lead = "+".join(sorted(actions.repairs[action])) or NO_PART_FAULT
    probe = choice.probe
    odd = f"what was read does not fit {lead}, which all the rest points to"
    why = f"it alone speaks for more than one fault ({lead})" if alone else odd
    reason = f"Measure the {probe_words(probe)} again: {why}."
    bands = outcomes(model, belief, actions, choice.column)
    return Suggestion(probe, choice.minutes, reason, bands, hazard_words(probe), choice.gain, again=True)


def confirmation(model: ReadingModel, belief: NDArray[np.float64], actions: Actions, choice: Candidate, lead: int) -> Suggestion:
    """A reading at the suspected part itself, before it is unsoldered."""
    hypotheses = model.expectations.hypotheses
    name = suspect_name(hypotheses[lead])
    either = np.zeros(len(hypotheses))
    either[[lead, hypotheses.index(Hypothesis(()))]] = 0.5
    rows = model.bins[model.owner == choice.column]
    joint, own = actions.joint(rows, either), actions.of[lead]
    chances = rows.astype(float) @ belief
    bands = []
    for first, last in _bands(joint):
        confirms = int(np.argmax(joint[first:last].sum(axis=0))) == own
        says = f"confirms {name}" if confirms else f"contradicts {name}: look further"
        bands.append(_outcome(model, choice.column, first, last, float(chances[first:last].sum()), says))
    reason = f"Confirm {name} at the part itself before unsoldering it: {probe_words(choice.probe)}."
    return Suggestion(choice.probe, choice.minutes, reason, tuple(bands), hazard_words(choice.probe), choice.gain)


def against(
    model: ReadingModel,
    belief: NDArray[np.float64],
    actions: Actions,
    choice: Candidate,
    lead: int,
    rivals: NDArray[np.int64],
) -> Suggestion:
    """A reading that tells the leading suspect from what else would explain the readings so far."""
    name = suspect_name(model.expectations.hypotheses[lead])
    others = [suspect_name(model.expectations.hypotheses[i]) for i in rivals[np.argsort(-belief[rivals], kind="stable")]]
    few = ", ".join(list(dict.fromkeys(others))[:2])
    reason = f"All readings so far fit {few} as well as {name}: the {probe_words(choice.probe)} tells them apart."
    bands = outcomes(model, belief, actions, choice.column)
    return Suggestion(choice.probe, choice.minutes, reason, bands, hazard_words(choice.probe), choice.gain)


def outcomes(model: ReadingModel, belief: NDArray[np.float64], actions: Actions, column: int) -> tuple[Outcome, ...]:
    """At most three bands of a reading; neighbouring ones that lead to the same best repair are one band."""
    joint = actions.joint(model.bins[model.owner == column], belief)
    found = []
    for first, last in _bands(joint):
        weights = joint[first:last].sum(axis=0)
        total, best = float(weights.sum()), int(np.argmax(weights))
        says = f"{repair_words(sorted(actions.repairs[best]))}, {percent_words(weights[best] / max(total, 1e-30))}"
        found.append(_outcome(model, column, first, last, total, says))
    return tuple(found)


def _bands(joint: NDArray[np.float64]) -> list[tuple[int, int]]:
    """(first bin, bin behind the last) of each band, from P(bin and repair).

    Neighbours with the same best repair are joined; while there are too many bands, the two whose joining
    costs least purity.
    """
    bands = [(i, i + 1) for i in range(len(joint))]

    def weights(band: tuple[int, int]) -> NDArray[np.float64]:
        return np.asarray(joint[band[0] : band[1]].sum(axis=0))

    while len(bands) > 1:
        rows = [weights(band) for band in bands]
        same = [i for i, (a, b) in enumerate(pairwise(rows)) if int(np.argmax(a)) == int(np.argmax(b))]
        if not same and len(bands) <= MOST_OUTCOMES:
            break
        loss = [_purity(a) + _purity(b) - _purity(a + b) for a, b in pairwise(rows)]
        place = same[0] if same else int(np.argmin(loss))
        bands[place : place + 2] = [(bands[place][0], bands[place + 1][1])]
    return bands


def _purity(weights: NDArray[np.float64]) -> float:
    return float((weights**2).sum() / max(weights.sum(), 1e-30))


def _outcome(model: ReadingModel, column: int, first: int, last: int, probability: float, says: str) -> Outcome:
    """The band from bin ``first`` to the bin before ``last``."""
    axis, edges = model.axes[column], model.edges[column]
    low = math.inf if edges[first] >= axis.cells else axis.edge(edges[first])
    high = math.inf if edges[last] > axis.cells else axis.edge(edges[last])
    return Outcome(_band_words(model.expectations.probes[column], low, high), low, high, probability, says)


def _band_words(probe: Probe, low: float, high: float) -> str:
    """A band as a person reads a meter. A reading that cannot be negative has no lower end below zero."""
    low = -math.inf if low <= 0 and probe.function != "volts_dc" else low

    def show(value: float) -> str:
        return engineering(value, probe.unit, 2)

    if math.isinf(low) and low > 0:
        return "OL"
    if math.isinf(low):
        return "any value" if math.isinf(high) else f"below {show(high)}"
    return f"above {show(low)}" if math.isinf(high) else f"{show(low)} to {show(high)}"


def _reason(
    model: ReadingModel,
    belief: NDArray[np.float64],
    actions: Actions,
    choice: Candidate,
    bands: tuple[Outcome, ...],
) -> str:
    """One sentence: what is undecided, and what this reading does about it."""
    chances = actions.chances(belief)
    order = [int(a) for a in np.argsort(-chances, kind="stable")[:3] if chances[a] >= 0.01]
    names = [("+".join(sorted(actions.repairs[a])) or NO_PART_FAULT) + f" {percent_words(chances[a])}" for a in order]
    if len({band.says.split(",")[0] for band in bands}) > 1:
        does = "tells most for its time"
    else:
        does = "makes the likeliest repair surer or doubtful"
    return f"The {probe_words(choice.probe)} {does}. Repairs open now: {', '.join(names)}."


def hazard_words(probe: Probe) -> str:
    """What to mind while taking a reading; empty for the unpowered board."""
    if not probe.live:
        return ""
    if probe.function in PLUG_FUNCTIONS:
        return "mains powered: case closed or covered, read at the plug only"
    return (
        "mains powered: feed through an isolating transformer and current limit, clip the leads on with the "
        "power off, one hand, rated probes"
    )
