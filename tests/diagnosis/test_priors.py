"""Hypotheses and their chances before anything was seen. Reasoned checks unless a source is named."""

from pathlib import Path

import numpy as np
import pytest

from triage.board.fault import Fault, Hypothesis
from triage.diagnosis.hypotheses import NO_PART_FAULT, NOT_COMPUTED, Collateral, pairs, shorts_behind, single_faults
from triage.diagnosis.learning import POOLED_STRENGTH, factors
from triage.diagnosis.priors import EVEN_SHARE, Weight, evened, outside_share, prior_of
from triage.errors import EntryError

A, B, C, D = (Fault(ref, "open") for ref in "ABCD")
A2 = Fault("A", "short")
WEIGHTS = {A: Weight(4.0), B: Weight(3.0), C: Weight(2.0), D: Weight(1.0), A2: Weight(1.0)}
CHAIN = {A: (Collateral((C, D), 0.8),)}


def test_chances_add_up_and_no_part_fault_has_its_share() -> None:
    prior = prior_of(WEIGHTS, CHAIN)
    assert prior.chance.sum() == pytest.approx(1.0, abs=1e-12)
    assert prior.hypotheses[0] == NO_PART_FAULT and prior.chance[0] == pytest.approx(outside_share())


def test_share_outside_the_board_follows_from_the_public_counts() -> None:
    """180 of 263 causes: Open Repair Data (Open Repair Alliance), data to July 2025; see outside_causes.toml.
    """
    assert outside_share() == pytest.approx(180 / 263, abs=1e-12)


def test_collateral_splits_a_root_by_its_chance() -> None:
    found = {w.hypothesis: w.weight for w in single_faults({A: 4.0, B: 3.0}, CHAIN)}
    assert found[Hypothesis((A,), (C, D))] == pytest.approx(3.2) and found[Hypothesis((A,))] == pytest.approx(0.8)
    assert found[Hypothesis((B,))] == 3.0


def test_ways_that_differ_with_the_load_share_the_chance() -> None:
    both = {A: (Collateral((C,), 0.5), Collateral((D,), 0.3), Collateral((C,), 0.1))}
    found = {w.hypothesis.collateral: w.weight for w in single_faults({A: 1.0}, both)}
    assert found == pytest.approx({(C,): 0.6, (D,): 0.3, (): 0.1})


def test_pairs_carry_their_share_and_the_chance_of_what_did_not_happen() -> None:
    weights = {A: 0.4, B: 0.3, C: 0.3}
    found = {w.hypothesis: w.weight for w in pairs(weights, {}, 0.04, 0.0)}
    assert sum(found.values()) == pytest.approx(0.04)
    split = {w.hypothesis: w.weight for w in pairs(weights, {A: (Collateral((D,), 0.9),)}, 0.04, 0.0)}
    assert split[Hypothesis((A, B))] == pytest.approx(0.1 * found[Hypothesis((A, B))])
    assert split[Hypothesis((A, B), (D,))] == pytest.approx(0.9 * found[Hypothesis((A, B))])


def test_a_root_and_its_own_collateral_are_no_pair() -> None:
    found = {w.hypothesis for w in pairs({A: 0.5, C: 0.5}, CHAIN, 0.04, 0.0)}
    assert found == {Hypothesis((A, C))}, "only the pair in which the collateral did not happen is left"


def test_two_modes_of_one_part_are_no_pair_and_the_floor_holds() -> None:
    found = pairs({A: 0.5, A2: 0.3, B: 0.2}, {}, 0.04, 0.0)
    assert all(len({f.ref for f in w.hypothesis.root}) == 2 for w in found)
    assert pairs({A: 0.5, B: 0.5}, {}, 0.04, 0.05) == ()


@pytest.mark.parametrize("floor", [1e-3, 3e-3, 8e-3])
def test_the_floor_cuts_exactly(floor: float) -> None:
    rng = np.random.default_rng(5)
    weights = {Fault(f"P{i}", "open"): float(w) for i, w in enumerate(rng.dirichlet(np.ones(12) * 0.5))}
    everything = pairs(weights, {}, 0.04, 0.0)
    assert {w.hypothesis for w in pairs(weights, {}, 0.04, floor)} == {w.hypothesis for w in everything if w.weight >= floor}


def test_an_even_share_bounds_every_fault_from_below() -> None:
    even = evened({A: 1e6, B: 1e-6})
    assert sum(even.values()) == pytest.approx(1.0) and even[B] == pytest.approx(EVEN_SHARE / 2, rel=1e-6)


@pytest.mark.parametrize("weight", [0.0, -1.0, float("inf"), float("nan")])
def test_a_weight_that_is_none_is_refused(weight: float) -> None:
    with pytest.raises(EntryError, match="above 0"):
        prior_of({A: Weight(weight), B: Weight(1.0)}, {})


def test_prior_over_another_list_keeps_the_ratios() -> None:
    prior = prior_of(WEIGHTS, CHAIN)
    some = prior.over((Hypothesis((B,)), NO_PART_FAULT, Hypothesis((Fault("Z", "open"),))))
    place = prior.hypotheses.index(Hypothesis((B,)))
    assert some[0] / some[1] == pytest.approx(prior.chance[place] / prior.chance[0]) and some[2] == 0
    with pytest.raises(EntryError, match="none of the expected"):
        prior.over((Hypothesis((Fault("Z", "open"),)),))


def test_closed_jobs_move_a_rate_as_far_as_they_count() -> None:
    """(s + n) / (s + E): the mean of Gamma(s, s) after n failures where E were expected."""
    got = factors({A: 0.2, B: 0.8}, 10, [A] * 6 + [B] * 4)
    assert got[A] == pytest.approx((POOLED_STRENGTH + 6) / (POOLED_STRENGTH + 2))
    assert got[B] == pytest.approx((POOLED_STRENGTH + 4) / (POOLED_STRENGTH + 8))
    prior = prior_of(WEIGHTS, {}, factors=got, pair_share=0.0)
    plain = prior_of(WEIGHTS, {}, pair_share=0.0)
    place = prior.hypotheses.index(Hypothesis((A,)))
    assert prior.chance[place] > plain.chance[place] and "own closed jobs x2.00" in prior.why[A]


def test_a_profile_starts_from_the_pooled_factor() -> None:
    family = factors({A: 0.5, B: 0.5}, 8, [A] * 8)
    both = factors({A: 0.5, B: 0.5}, 8, [A] * 8, 2, [B, B])
    alone = factors({A: 0.5, B: 0.5}, 2, [B, B], 2, [B, B])
    assert family[A] > family[B] and both[A] > alone[A] and both[B] < alone[B]


FUSE, SHORT, OTHER_SHORT, DRIFT = Fault("F", "open"), Fault("Q", "ce_short"), Fault("D", "short"), Fault("R", "high")


def _stands(weights: dict[Fault, float], chains: dict[Fault, tuple[Collateral, ...]]) -> tuple[float, float]:
    """Chance that an open fuse stands alone, and with a short, from the prior."""
    prior = prior_of({f: Weight(w) for f, w in weights.items()}, chains, fuses=[FUSE], pair_share=0.0)
    alone = sum(c for h, c in zip(prior.hypotheses, prior.chance, strict=True) if h.faults == (FUSE,))
    other = sum(c for h, c in zip(prior.hypotheses, prior.chance, strict=True) if FUSE in h.faults and len(h.faults) > 1)
    return float(alone), float(other)


def test_an_open_fuse_of_a_board_that_is_not_solved_stands_alone_as_seldom_as_in_repair_records() -> None:
    """8 of 34 failed fuses of which it is told: Open Repair Data (Open Repair Alliance, data to July 2025)."""
    alone, other = _stands({FUSE: 1.0, SHORT: 20.0, OTHER_SHORT: 10.0, DRIFT: 5.0}, {})
    assert alone / (alone + other) == pytest.approx(8 / 34, rel=1e-6)


def test_what_is_computed_to_blow_the_fuse_counts_as_computed() -> None:
    """With the computed shorts already beyond the records, the rest gets the small chance of a computation that is wrong."""
    weights = evened({FUSE: 1.0, SHORT: 50.0, OTHER_SHORT: 50.0})
    chains = {SHORT: (Collateral((FUSE,), 0.85),)}
    found = {w.hypothesis: w.weight for w in shorts_behind(weights, chains, [FUSE])}
    assert found == pytest.approx({Hypothesis((OTHER_SHORT, FUSE)): NOT_COMPUTED * weights[OTHER_SHORT]})


def test_only_shorts_blow_a_fuse() -> None:
    weights = evened({FUSE: 1.0, DRIFT: 50.0, SHORT: 5.0})
    assert {f for w in shorts_behind(weights, {}, [FUSE]) for f in w.hypothesis.root} == {FUSE, SHORT}
    assert shorts_behind(evened({FUSE: 1.0, DRIFT: 1.0}), {}, [FUSE]) == ()


def test_two_faults_at_once_weigh_a_twenty_fifth_of_one() -> None:
    """The shop's figure, common practice; and a fifth of the belief is spread evenly, because a rate may be far off."""
    weights = {A: Weight(4.0), B: Weight(3.0), C: Weight(2.0), D: Weight(1.0)}
    prior = prior_of(weights, {}, outside=0.5)
    two = sum(chance for hypothesis, chance in zip(prior.hypotheses, prior.chance, strict=True) if len(hypothesis.root) == 2)
    one = sum(chance for hypothesis, chance in zip(prior.hypotheses, prior.chance, strict=True) if len(hypothesis.root) == 1)
    assert two / one == pytest.approx(0.04) and one + two == pytest.approx(0.5) and prior.chance[0] == pytest.approx(0.5)
    place = prior.hypotheses.index(Hypothesis((A,)))
    assert prior.chance[place] / one == pytest.approx(0.8 * 0.4 + 0.2 / 4)
    assert "37 % of the single faults" in prior.why[A] and "weight 4" in prior.why[A] and "closed jobs" not in prior.why[A]
    told = prior_of({A: Weight(1.0, "by the sheet"), B: Weight(1.0)}, {}).why[A]
    assert told.startswith("by the sheet; 50 %")


def test_the_share_outside_is_counted_from_a_table_that_makes_sense(tmp_path: Path) -> None:
    path = tmp_path / "causes.toml"
    rows = '[[cause]]\nname = "cord"\nplace = "outside"\ncount = 3\n[[cause]]\nname = "part"\nplace = "inside"\ncount = 1\n'
    path.write_text(rows + '[[cause]]\nname = "untold"\nplace = "unknown"\ncount = 50\n', "utf-8")
    assert outside_share(path) == pytest.approx(0.75), "what was not told counts for neither"
    bad = tmp_path / "bad.toml"
    bad.write_text(rows.replace('"inside"', '"beside"'), "utf-8")
    with pytest.raises(EntryError, match="part"):
        outside_share(bad)
    less = tmp_path / "less.toml"
    less.write_text(rows.replace("count = 3", "count = -3"), "utf-8")
    with pytest.raises(EntryError, match="count"):
        outside_share(less)
