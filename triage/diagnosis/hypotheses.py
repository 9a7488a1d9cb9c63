"""The list of what may be wrong: nothing on the board, one fault, a fault with what it took along, two
faults.

A hypothesis is only a set of faults with a weight. Completeness of this list is worth more than any
cleverness of the search: with single faults alone a prototype was right in 79 % of its verdicts and believed
99 %.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from itertools import combinations

from triage.board.fault import Fault, Hypothesis

NO_PART_FAULT = Hypothesis(())
"""The board is sound: cord, plug, connector, joint or load is at fault."""


@dataclass(frozen=True, slots=True)
class Collateral:
    """What a root fault takes along, with the chance that it does."""

    faults: tuple[Fault, ...]
    """In order of destruction."""
    chance: float = 0.85
    """Chance that the destruction ran its course before the adapter was switched off [-]. Common practice, no
    source.
    """


CollateralMap = Mapping[Fault, tuple[Collateral, ...]]
"""Root fault -> the ways its destruction may run (they differ with the load); chances add up to at most 1."""


@dataclass(frozen=True, slots=True)
class Weighted:
    """A hypothesis and its weight before anything was seen."""

    hypothesis: Hypothesis
    weight: float
    """Relative to the other hypotheses [-]."""


def outcomes_of(root: Fault, collateral: CollateralMap) -> tuple[tuple[tuple[Fault, ...], float], ...]:
    """(collateral faults, chance) for each way a root fault may end, the root alone last. Chances add up to
    1.
    """
    ways = [way for way in collateral.get(root, ()) if way.faults]
    alone = 1.0 - sum(way.chance for way in ways)
    merged: dict[tuple[Fault, ...], float] = {}
    for way in ways:
        merged[way.faults] = merged.get(way.faults, 0.0) + way.chance
    return (*merged.items(), ((), max(alone, 0.0)))


def single_faults(weights: Mapping[Fault, float], collateral: CollateralMap) -> tuple[Weighted, ...]:
    """Every root fault, with and without its collateral.

    Parameters
    ----------
    weights: root fault -> weight [-], larger than 0.
    collateral: what the roots take along.
    """
    found = []
    for root, weight in weights.items():
        for faults, chance in outcomes_of(root, collateral):
            if weight * chance > 0 or not faults:
                found.append(Weighted(Hypothesis((root,), faults), weight * chance))
    return tuple(found)


def pairs(weights: Mapping[Fault, float], collateral: CollateralMap, share: float, floor: float) -> tuple[Weighted, ...]:
    """Two independent faults, each with what it takes along, the likeliest first.

    A pair in which a collateral did not happen carries the chance that it did not: forgetting this makes
        masked doubles look likely.
    A pair that is a root with its own collateral is left to ``single_faults``.

    Parameters
    ----------
    weights: root fault -> weight; taken relative to their sum.
    share: weight of all pairs together, relative to all single faults [-].
    floor: pairs below this weight, relative to all single faults, are left out [-].
    """
    total = sum(weights.values())
    ordered = sorted(weights.items(), key=lambda item: -item[1])
    products = total**2 - sum(weight**2 for weight in weights.values())
    if products <= 0 or share <= 0:
        return ()
    scale = 2.0 * share / products
    found: dict[Hypothesis, float] = {}
    for (first, p), (second, q) in combinations(ordered, 2):
        if p * q * scale < floor:
            if p * p * scale < floor:
                break
            continue
        if first.ref == second.ref:
            continue
        for hypothesis, chance in _ways(first, second, collateral):
            weight = scale * p * q * chance
            if weight >= floor:
                found[hypothesis] = found.get(hypothesis, 0.0) + weight
    ranked = sorted(found.items(), key=lambda item: (-item[1], str(item[0])))
    return tuple(Weighted(hypothesis, weight * total) for hypothesis, weight in ranked)


def _ways(first: Fault, second: Fault, collateral: CollateralMap) -> Iterable[tuple[Hypothesis, float]]:
    """The ways a pair may end; a way that is no pair (one root is the other's collateral) is left out."""
    for taken, chance in outcomes_of(first, collateral):
        for also, other_chance in outcomes_of(second, collateral):
            if second.ref in {f.ref for f in taken} or first.ref in {f.ref for f in also}:
                continue
            joined = taken + tuple(f for f in also if f.ref not in {t.ref for t in taken})
            if chance * other_chance > 0:
                yield Hypothesis((first, second), joined), chance * other_chance


SHORTS = ("short", "ce_short", "d_short", "short_dgs", "out_short", "shorted_turns")
"""Fault modes that draw more current than a fuse before them carries."""
WITH_ANOTHER, ALONE = 26, 8
"""Failed fuses of public repair records: with another failed part or a short that was not located, and cured by the fuse alone
(Open Repair Data, Open Repair Alliance, data to July 2025, CC BY-SA 4.0; 40 fuses, the rest not told)."""
NOT_COMPUTED = 0.05
"""Chance that a short opens a fuse although the computed destruction does not say so [-]. Common practice, no source."""
AT_MOST = 0.5
"""The same where nothing was computed, at most [-]."""


def fuses_alone(weights: Mapping[Fault, float], collateral: CollateralMap, fuses: Iterable[Fault]) -> dict[Fault, float]:
    """The weights with those of fuses raised to where repair records find them: ALONE to WITH_ANOTHER computed to open them.

    Age, inrush and a surge open fuses too; the handbook's rate of a fuse, small beside those of what can short behind it, knows
    nothing of that. Parameters as in ``shorts_behind``.
    """
    raised = dict(weights)
    for fuse in (fault for fault in fuses if fault in weights):
        computed = sum(weight * chance for root, weight in weights.items() if root != fuse
                       for faults, chance in outcomes_of(root, collateral) if fuse in faults)
        raised[fuse] = max(weights[fuse], computed * ALONE / WITH_ANOTHER)
    return raised


def shorts_behind(weights: Mapping[Fault, float], collateral: CollateralMap, fuses: Iterable[Fault]) -> tuple[Weighted, ...]:
    """Shorts that opened a fuse without the computed destruction saying so: a fuse seldom opens by itself.

    Every short may have done it with NOT_COMPUTED; with more where the computed ones together leave an open fuse alone oftener
    than repair records find it, as on a board whose operating points are not solved.

    Parameters
    ----------
    weights: root fault -> weight.
    collateral: what the roots are computed to take along.
    fuses: faults that are a fuse of any kind standing open.
    """
    rank = {fault: place for place, fault in enumerate(sorted(weights, key=lambda fault: -weights[fault]))}
    found = []
    for fuse in (fault for fault in fuses if fault in weights):
        blown = {root: sum(chance for faults, chance in outcomes_of(root, collateral) if fuse in faults) for root in weights}
        behind = {root: weight for root, weight in weights.items()
                  if root.mode in SHORTS and root.ref != fuse.ref and not blown[root]}  # fmt: skip
        computed = sum(weights[root] * chance for root, chance in blown.items())
        lacking = weights[fuse] * WITH_ANOTHER / ALONE - computed
        total = sum(behind.values())
        chance = min(max(lacking / total, NOT_COMPUTED), AT_MOST) if total > 0 else 0.0
        for root, weight in behind.items():
            pair = tuple(sorted((root, fuse), key=rank.__getitem__))
            for faults, share in outcomes_of(root, collateral):
                if share > 0:
                    found.append(Weighted(Hypothesis(pair, faults), weight * share * chance))
    return tuple(found)
