"""Why this reading, what each outcome would say, and which entries carried the verdict: in sentences and
likelihood ratios.
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Evidence, Reading, Symptom
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import PLUG_FUNCTIONS
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.next_reading import Candidate
from triage.diagnosis.verdict import NO_PART_FAULT, best_repair, suspects
from triage.quantities import engineering

FUNCTION_WORDS = {
    "ohms": "resistance",
    "diode": "diode test",
    "esr": "ESR",
    "capacitance": "capacitance",
    "volts_dc": "dc voltage",
    "volts_ac": "ac voltage",
    "volts_pp": "peak-to-peak voltage",
    "watts": "input power",
    "amps_ac": "input current",
    "hertz": "frequency",
}
"""Meter function -> its name in a sentence."""
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
    again: bool = False
    """True when a reading already taken should be measured again, because it does not fit."""


def repair_words(refs: Sequence[str]) -> str:
    """A repair in words: ``replace C1 and D1``, or work on cord, plug and joints."""
    names = sorted(refs)
    if not names:
        return "no part: check cord, plug and joints"
    return "replace " + (names[0] if len(names) == 1 else ", ".join(names[:-1]) + " and " + names[-1])


def suggestion(
    model: ReadingModel, belief: NDArray[np.float64], actions: Actions, choice: Candidate
) -> Suggestion:
    """A candidate with its reason and outcomes in words."""
    bands = outcomes(model, belief, actions, choice.column)
    return Suggestion(
        choice.probe,
        choice.minutes,
        _reason(model, belief, actions, choice, bands),
        bands,
        hazard_words(choice.probe),
        choice.gain,
    )


def measure_again(
    model: ReadingModel, belief: NDArray[np.float64], actions: Actions, choice: Candidate
) -> Suggestion:
    """A reading to be taken a second time, because the best repair explains it only by a slip."""
    action, _ = best_repair(belief, actions)
    lead = "+".join(sorted(actions.repairs[action])) or NO_PART_FAULT
    probe = choice.probe
    reason = (
        f"Measure the {FUNCTION_WORDS[probe.function]} {probe.plus} to {probe.minus} again: what was read "
        f"does not fit {lead}, which all the rest points to."
    )
    bands = outcomes(model, belief, actions, choice.column)
    return Suggestion(probe, choice.minutes, reason, bands, hazard_words(probe), choice.gain, True)


def outcomes(
    model: ReadingModel, belief: NDArray[np.float64], actions: Actions, column: int
) -> tuple[Outcome, ...]:
    """At most three bands of a reading; neighbouring ones that lead to the same best repair are one band."""
    rows = np.flatnonzero(model.owner == column)
    joint = np.stack([actions.chances(model.bins[row].astype(float) * belief) for row in rows])
    edges = model.edges[column]
    bands = [[edges[i], edges[i + 1], joint[i]] for i in range(len(rows)) if edges[i] < edges[i + 1]]
    bands = _joined(bands, lambda a, b: int(np.argmax(a)) == int(np.argmax(b)))
    while len(bands) > MOST_OUTCOMES:
        loss = [_purity(a[2]) + _purity(b[2]) - _purity(a[2] + b[2]) for a, b in pairwise(bands)]
        place = int(np.argmin(loss))
        bands[place : place + 2] = [
            [bands[place][0], bands[place + 1][1], bands[place][2] + bands[place + 1][2]]
        ]
        bands = _joined(bands, lambda a, b: int(np.argmax(a)) == int(np.argmax(b)))
    return tuple(_outcome(model, actions, column, *band) for band in bands)


def _joined(
    bands: list[list], same: Callable[[NDArray[np.float64], NDArray[np.float64]], bool]
) -> list[list]:
    joined = [list(bands[0])]
    for low, high, weights in bands[1:]:
        if same(joined[-1][2], weights):
            joined[-1][1], joined[-1][2] = high, joined[-1][2] + weights
        else:
            joined.append([low, high, weights])
    return joined


def _purity(weights: NDArray[np.float64]) -> float:
    return float((weights**2).sum() / max(weights.sum(), 1e-30))


def _outcome(
    model: ReadingModel, actions: Actions, column: int, first: int, last: int, weights: NDArray[np.float64]
) -> Outcome:
    axis = model.axes[column]
    low = axis.edge(first) if first < axis.cells else math.inf
    high = math.inf if last > axis.cells else axis.edge(last)
    total = float(weights.sum())
    best = int(np.argmax(weights))
    says = f"{repair_words(sorted(actions.repairs[best]))}, {_percent(weights[best] / max(total, 1e-30))}"
    return Outcome(_band_words(model.expectations.probes[column], low, high), low, high, total, says)


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


def _percent(chance: float) -> str:
    percent = 100 * chance
    return "over 99 %" if percent > 99.5 else "under 1 %" if percent < 0.5 else f"{percent:.0f} %"


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
    names = [
        ("+".join(sorted(actions.repairs[a])) or NO_PART_FAULT) + f" {_percent(chances[a])}" for a in order
    ]
    word = FUNCTION_WORDS[choice.probe.function]
    where = "" if choice.probe.function in PLUG_FUNCTIONS else f" {choice.probe.plus} to {choice.probe.minus}"
    if len({band.says.split(",")[0] for band in bands}) > 1:
        does = "separates them best for its time"
    else:
        does = "makes the likeliest one surer or doubtful"
    return f"The {word}{where} {does}: now {', '.join(names)}; it takes {choice.minutes:.1f} min."


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


@dataclass(frozen=True, slots=True)
class Weighed:
    """One entry and what it did to the odds of the leading suspect against all others."""

    entry: Evidence
    ratio: float
    """p(entry | leading suspect) / p(entry | the others), as weighted by the entries before it [-]."""
    text: str


def evidence_ratios(
    entries: Sequence[Evidence],
    log_likelihood: Callable[[Sequence[Evidence]], NDArray[np.float64]],
    prior: NDArray[np.float64],
    members: NDArray[np.bool_],
    name: str,
) -> tuple[Weighed, ...]:
    """The likelihood ratio of each entry, in their order; their product takes the prior odds to the posterior
    odds.

    (Weight of evidence; Good, Probability and the weighing of evidence (1950).)

    Parameters
    ----------
    entries: the evidence in the order of entry.
    log_likelihood: entries -> log p(entries | hypothesis), shape (H,).
    prior: shape (H,).
    members: hypotheses that count as the leading suspect, shape (H,).
    name: what the suspect is called in the text.
    """
    found = []
    odds = _log_odds(prior, np.zeros(len(prior)), members)
    for count, entry in enumerate(entries, start=1):
        after = _log_odds(prior, log_likelihood(entries[:count]), members)
        ratio = math.exp(min(max(after - odds, -600.0), 600.0))
        found.append(Weighed(entry, ratio, f"{entry_words(entry)}: {_ratio_words(ratio)} {name}"))
        odds = after
    return tuple(found)


def _log_odds(
    prior: NDArray[np.float64], log_likelihood: NDArray[np.float64], members: NDArray[np.bool_]
) -> float:
    weight = np.log(np.maximum(prior, 1e-300)) + log_likelihood
    top = weight.max()
    inside, outside = (float(np.exp(weight[side] - top).sum()) for side in (members, ~members))
    return math.log(max(inside, 1e-280)) - math.log(max(outside, 1e-280))


def _ratio_words(ratio: float) -> str:
    if ratio >= 1.05:
        return f"{ratio:.3g} times for"
    if ratio <= 1 / 1.05:
        return f"{1 / ratio:.3g} times against"
    return "says nothing about"


def entry_words(entry: Evidence) -> str:
    """An entry as a person would say it."""
    if isinstance(entry, Reading):
        probe = entry.probe
        where = "" if probe.function in PLUG_FUNCTIONS else f" {probe.plus} to {probe.minus}"
        load = "" if not probe.live else f" ({probe.condition})"
        return f"{FUNCTION_WORDS[probe.function]}{where}{load} {engineering(entry.value, probe.unit)}"
    if isinstance(entry, Symptom):
        return f"complaint {entry.state} ({entry.condition})"
    return f"{entry.sign} at {entry.ref}" if entry.ref else f"{entry.sign} (adapter)"


def suspect_name(hypothesis: Hypothesis) -> str:
    """Root of a hypothesis in words: ``C1 short``, ``R1 open and C4 leaky``."""
    return " and ".join(f"{f.ref} {f.mode.replace('_', ' ')}" for f in hypothesis.root) or NO_PART_FAULT


def expected_values(
    model: ReadingModel, column: int, belief: NDArray[np.float64], count: int = 3
) -> tuple[tuple[str, float], ...]:
    """(suspect, median of the reading [SI]) for the leading suspects: what the meter should show under each.
    """
    found = []
    for suspect in suspects(belief, model.expectations.hypotheses)[:count]:
        draws = model.expectations.samples[suspect.index, column]
        known = np.sort(draws[~np.isnan(draws)])
        if known.size:
            found.append(
                (
                    suspect_name(model.expectations.hypotheses[suspect.index]),
                    float(known[(known.size - 1) // 2]),
                )
            )
    return tuple(found)
