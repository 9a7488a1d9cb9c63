"""The chance of each hypothesis before anything was seen, and where each figure comes from.

weight of a fault = failure rate of the part at its stress and temperature x share of the mode x factor of the
bench's own closed jobs. The rates and shares are handed in (``Weight``), so that this module holds no
handbook. What lies outside the board has the share of public repair records. The weights of handbooks are
good within a factor of a few only; a fifth of the belief is therefore spread evenly over all faults (epsilon-
contaminated prior; Berger, Berliner, Annals of Statistics 14 (1986) 461-486).
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from triage.board.fault import Fault, Hypothesis
from triage.diagnosis.hypotheses import NO_PART_FAULT, CollateralMap, fuses_alone, pairs, shorts_behind, single_faults
from triage.diagnosis.settings import HERE, load_table, number
from triage.errors import EntryError

EVEN_SHARE = 0.2
"""Part of the belief spread evenly over all faults, because a rate may be wrong by any factor."""
PAIR_SHARE = 0.04
"""Weight of two independent faults together, relative to single ones. Common practice, no source."""
PAIR_FLOOR = 1e-6
"""Pairs less likely than this are not listed."""


@dataclass(frozen=True, slots=True)
class Weight:
    """Expected number of failures of one fault, with its derivation."""

    value: float
    """Relative to the other faults of the board, for instance failures per 1e6 h; larger than 0."""
    text: str = ""
    """One line that a person can check: rate, share, factor and their sources."""


@dataclass(frozen=True, slots=True)
class Prior:
    """Hypotheses with their chance before anything was seen."""

    hypotheses: tuple[Hypothesis, ...]
    chance: NDArray[np.float64]
    """Shape (H,), adds up to 1 [-]."""
    why: Mapping[Fault, str]
    """Root fault -> derivation of its weight."""

    def over(self, hypotheses: tuple[Hypothesis, ...]) -> NDArray[np.float64]:
        """Chances in the order of ``hypotheses``, made to add up to 1; one that is not listed gets 0.

        Raises EntryError when none of them is listed.
        """
        listed = dict(zip(self.hypotheses, self.chance, strict=True))
        chance = np.array([listed.get(hypothesis, 0.0) for hypothesis in hypotheses])
        if not chance.sum() > 0:
            raise EntryError("prior", "none of the expected hypotheses", "the hypotheses the prior was made for")
        return chance / chance.sum()


@cache
def outside_share(path: Path = HERE / "outside_causes.toml") -> float:
    """Share of adapters whose board is sound [-], from the counts of public repair records."""
    rows = load_table(path).get("cause", [])
    count = {"outside": 0.0, "inside": 0.0, "unknown": 0.0}
    for row in rows:
        where = f"{path.name}, {row.get('name')}"
        if row.get("place") not in count:
            raise EntryError(where, repr(row.get("place")), "outside, inside or unknown")
        count[row["place"]] += number(where, row, "count", 0, 1e9)
    return count["outside"] / (count["outside"] + count["inside"])


def evened(weights: Mapping[Fault, float], share: float = EVEN_SHARE) -> dict[Fault, float]:
    """Weights made to add up to 1, with ``share`` of it spread evenly [-]. Raises EntryError for a weight not
    above 0.
    """
    for fault, weight in weights.items():
        if not 0 < weight < float("inf"):
            raise EntryError(f"prior, {fault}", f"a weight of {weight}", "a number above 0")
    total = sum(weights.values())
    return {fault: (1 - share) * weight / total + share / len(weights) for fault, weight in weights.items()}


def prior_of(
    weights: Mapping[Fault, Weight],
    collateral: CollateralMap,
    factors: Mapping[Fault, float] | None = None,
    outside: float | None = None,
    pair_share: float = PAIR_SHARE,
    pair_floor: float = PAIR_FLOOR,
    fuses: Iterable[Fault] = (),
    blown: Iterable[Fault] = (),
) -> Prior:
    """All hypotheses of a board with their chances.

    Parameters
    ----------
    weights: every fault of the board.
    collateral: what each takes along.
    factors: fault -> factor from the bench's closed jobs (``learning.factors``); missing ones count as 1.
    outside: chance that no part of the board is at fault; by default the share of public repair records.
    pair_share, pair_floor: see ``hypotheses.pairs``; ``pair_share`` 0 lists no pairs.
    fuses: faults that are a fuse of any kind standing open, which is seldom a root; see ``hypotheses.shorts_behind``.
    blown: those of them that also open by age and inrush alone; see ``hypotheses.fuses_alone``.
    """
    factors = factors or {}
    raised = {fault: weight.value * factors.get(fault, 1.0) for fault, weight in weights.items()}
    even = fuses_alone(evened(raised), collateral, blown)
    singles = single_faults(even, collateral)
    doubles = pairs(even, collateral, pair_share, pair_floor)
    out = outside_share() if outside is None else outside
    merged = {NO_PART_FAULT: 0.0}
    for one in (*singles, *doubles, *shorts_behind(even, collateral, fuses)):
        merged[one.hypothesis] = merged.get(one.hypothesis, 0.0) + one.weight
    inside = np.array(list(merged.values()))
    inside = inside / inside.sum() * (1 - out)
    inside[0] = out
    why = {fault: _text(weight, factors.get(fault, 1.0), even[fault]) for fault, weight in weights.items()}
    return Prior(tuple(merged), inside, why)


def _text(weight: Weight, factor: float, share: float) -> str:
    own = "" if factor == 1.0 else f", own closed jobs x{factor:.2f}"
    return f"{weight.text or f'weight {weight.value:.3g}'}{own}; {100 * share:.2g} % of the single faults"
