"""What lies ahead of a job: what the meter should show under each suspect, which repair to try in which
order, what is left.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.diagnosis.actions import Actions
from triage.diagnosis.ambiguity import ambiguity_sets
from triage.diagnosis.axis import to_axis
from triage.diagnosis.costs import Costs
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.repair_order import order
from triage.diagnosis.verdict import Roots
from triage.diagnosis.words import suspect_name

APART = 2.0
"""Two expected readings tell suspects apart when windows of this many standard errors around them do not
touch.
"""


@dataclass(frozen=True, slots=True)
class Expected:
    """What the meter should show under one suspect."""

    suspect: str
    probability: float
    """[-]"""
    value: float
    """Median of the draws [SI]; ``inf`` for OL."""
    group: int
    """Suspects with the same number cannot be told apart by this reading."""


@dataclass(frozen=True, slots=True)
class RepairStep:
    """One repair to try."""

    refs: tuple[str, ...]
    """Parts to replace; empty for work on cord, plug and joints."""
    probability: float
    """Chance that exactly this is needed [-]."""
    minutes: float


def expected_values(
    model: ReadingModel, column: int, belief: NDArray[np.float64], roots: Roots, count: int
) -> tuple[Expected, ...]:
    """Expected reading of one probe under the ``count`` leading suspects, the likeliest first."""
    leading = [s for s in roots.suspects(belief) if s.probability > 0][:count]
    values = {}
    for place, suspect in enumerate(leading):
        draws = model.expectations.samples[suspect.index, column]
        known = np.sort(draws[~np.isnan(draws)])
        if known.size:
            values[place] = float(known[(known.size - 1) // 2])
    instrument = model.axes[column].instrument
    sets = ambiguity_sets({k: float(to_axis(v, instrument)) for k, v in values.items()}, APART)
    group = {place: number for number, members in enumerate(sets, start=1) for place in members}
    hypotheses = model.expectations.hypotheses
    return tuple(
        Expected(suspect_name(hypotheses[leading[k].index]), leading[k].probability, v, group[k]) for k, v in values.items()
    )


def repair_plan(
    actions: Actions, belief: NDArray[np.float64], costs: Costs, kinds: Mapping[str, str], least: float = 0.02
) -> tuple[RepairStep, ...]:
    """The repairs in the order in which to try them, by chance per minute; those below ``least`` are left
    out.
    """
    chances = actions.chances(belief)
    kept: Sequence[int] = [a for a in range(len(chances)) if chances[a] >= least]
    minutes = [costs.repair_minutes(actions.repairs[a], kinds) for a in kept]
    steps = [RepairStep(tuple(sorted(actions.repairs[a])), float(chances[a]), m) for a, m in zip(kept, minutes, strict=True)]
    return tuple(steps[i] for i in order([s.probability for s in steps], minutes))
