"""Which entries carried the verdict, reading by reading, as likelihood ratios.

The ratios multiply: prior odds of the leading suspect x all ratios = its odds now (weight of evidence; Good,
    Probability and the weighing
of evidence (1950)).
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Evidence
from triage.diagnosis.words import entry_words


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


def _log_odds(prior: NDArray[np.float64], log_likelihood: NDArray[np.float64], members: NDArray[np.bool_]) -> float:
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
