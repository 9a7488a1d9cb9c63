"""What is believed after a repair that did not cure, and after a hunch: by hand on the small board."""

import numpy as np
import pytest

from tests.diagnosis.small_board import C1_SHORT, D1_SHORT, HYPOTHESES, R1_HIGH, R1_OPEN
from triage.board.fault import Fault, Hypothesis
from triage.diagnosis.after_repair import carry_over, remains
from triage.diagnosis.belief import posterior, with_hunches
from triage.diagnosis.hypotheses import (
    ALONE,
    AT_MOST,
    NOT_COMPUTED,
    WITH_ANOTHER,
    Collateral,
    fuses_alone,
    pairs,
    shorts_behind,
    single_faults,
)
from triage.diagnosis.settings import Settings

SETTINGS = Settings.load()
BAD, AGAIN = SETTINGS.bad_repair, SETTINGS.fails_again


def believed(*chances: float) -> np.ndarray:
    return np.array(chances)


def test_a_repair_that_should_have_cured_was_probably_not_the_fault() -> None:
    """R1 fitted: its faults keep the chance of a bad repair and count as no part fault from now on."""
    now = carry_over(believed(0.0, 0.8, 0.0, 0.2, 0.0, 0.0), HYPOTHESES, ["R1"], SETTINGS)
    left = 0.8 * BAD + 0.2
    assert now[0] == pytest.approx(0.8 * BAD / left) and now[3] == pytest.approx(0.2 / left)
    assert now.sum() == pytest.approx(1.0) and now[1] == now[2] == 0.0


def test_a_root_that_stays_may_take_its_collateral_along_again() -> None:
    """D1 shorted with R1 gone; only R1 was fitted."""
    now = carry_over(np.eye(6)[5], HYPOTHESES, ["R1"], SETTINGS)
    assert now[5] == pytest.approx(AGAIN) and now[4] == pytest.approx(1.0 - AGAIN)


def test_collateral_that_nobody_replaced_stands_by_itself() -> None:
    """D1 was the root and was fitted: R1, which it took along, is open still."""
    now = carry_over(np.eye(6)[5], HYPOTHESES, ["D1"], SETTINGS)
    assert now[1] == pytest.approx(1.0)


def test_other_parts_change_nothing() -> None:
    before = believed(0.1, 0.2, 0.3, 0.2, 0.2, 0.0)
    assert carry_over(before, HYPOTHESES, ["Q9"], SETTINGS) == pytest.approx(before)


def test_what_is_left_goes_to_the_nearest_that_is_listed() -> None:
    """The same parts at fault, else the root alone, else the first of its faults, else no part."""
    q1, d9 = Fault("Q1", "open"), Fault("D9", "short")
    both = Hypothesis((C1_SHORT, D1_SHORT), (R1_OPEN,))
    same_parts = (Hypothesis(()), Hypothesis((D1_SHORT, R1_OPEN)), Hypothesis((D1_SHORT,)), both)
    now = carry_over(np.eye(4)[3], same_parts, ["C1"], SETTINGS)
    assert now[1] == pytest.approx(1.0)
    root_alone = (Hypothesis(()), Hypothesis((R1_OPEN,)), Hypothesis((D1_SHORT,)), both)
    assert carry_over(np.eye(4)[3], root_alone, ["C1"], SETTINGS)[2] == pytest.approx(1.0)
    first_fault = (Hypothesis(()), Hypothesis((R1_OPEN,)), Hypothesis((q1,)), Hypothesis((C1_SHORT, q1, d9)))
    assert carry_over(np.eye(4)[3], first_fault, ["C1"], SETTINGS)[2] == pytest.approx(1.0)
    nothing = (Hypothesis(()), Hypothesis((C1_SHORT, d9)))
    assert carry_over(np.eye(2)[1], nothing, ["C1"], SETTINGS)[0] == pytest.approx(1.0)


def test_what_remains_of_a_hypothesis() -> None:
    whole = Hypothesis((D1_SHORT,), (R1_OPEN, C1_SHORT))
    assert remains(whole, frozenset({"R1"})) == (Hypothesis((D1_SHORT,), (C1_SHORT,)), whole)
    assert remains(whole, frozenset({"D1"})) == (Hypothesis((R1_OPEN, C1_SHORT)),) * 2
    assert remains(whole, frozenset({"D1", "R1"})) == (Hypothesis((C1_SHORT,)),) * 2


def test_a_hunch_multiplies_the_odds_once() -> None:
    prior = believed(0.4, 0.15, 0.15, 0.1, 0.1, 0.1)
    raised = with_hunches(prior, HYPOTHESES, ["R1", "R1"], 4.0)
    total = 0.4 + 4.0 * (0.15 + 0.15 + 0.1) + 0.1 + 0.1
    assert raised == pytest.approx(np.array([0.4, 0.6, 0.6, 0.1, 0.1, 0.4]) / total)
    assert with_hunches(prior, HYPOTHESES, [], 4.0) is prior


def test_the_posterior_is_prior_times_likelihood_however_small() -> None:
    prior, chance = believed(0.5, 0.3, 0.2), np.array([1e-250, 2e-250, 0.5e-250])
    assert posterior(prior, np.log(chance)) == pytest.approx(np.array([0.5, 0.6, 0.1]) / 1.2)


def test_pairs_share_their_weight_by_the_product_of_their_chances() -> None:
    weights = {R1_OPEN: 3.0, C1_SHORT: 2.0, D1_SHORT: 1.0}
    found = {one.hypothesis: one.weight for one in pairs(weights, {}, 0.05, 0.0)}
    scale = 0.05 * 6.0 / (3 * 2 + 3 * 1 + 2 * 1)
    assert found == pytest.approx({Hypothesis((R1_OPEN, C1_SHORT)): 6 * scale, Hypothesis((R1_OPEN, D1_SHORT)): 3 * scale,
                                   Hypothesis((C1_SHORT, D1_SHORT)): 2 * scale})
    assert list(found.values()) == sorted(found.values(), reverse=True)
    kept = pairs(weights, {}, 0.05, 2.9 * scale / 6.0)
    assert {one.hypothesis for one in kept} == {Hypothesis((R1_OPEN, C1_SHORT)), Hypothesis((R1_OPEN, D1_SHORT))}
    assert pairs(weights, {}, 0.0, 0.0) == () and pairs({R1_OPEN: 1.0}, {}, 0.05, 0.0) == ()


def test_both_halves_of_a_pair_may_take_parts_along() -> None:
    q1, d9 = Fault("Q1", "open"), Fault("D9", "open")
    chain = {C1_SHORT: (Collateral((q1,), 0.75),), D1_SHORT: (Collateral((d9, q1), 0.5),)}
    found = {one.hypothesis: one.weight for one in pairs({C1_SHORT: 1.0, D1_SHORT: 1.0}, chain, 0.04, 0.0)}
    total = 0.04 * 2.0
    pair = (C1_SHORT, D1_SHORT)
    assert found == pytest.approx({Hypothesis(pair, (q1, d9)): total * 0.375, Hypothesis(pair, (q1,)): total * 0.375,
                                   Hypothesis(pair, (d9, q1)): total * 0.125, Hypothesis(pair): total * 0.125})


def test_a_root_keeps_what_its_collateral_leaves() -> None:
    chain = {C1_SHORT: (Collateral((R1_OPEN,), 1.0),)}
    found = {one.hypothesis: one.weight for one in single_faults({C1_SHORT: 2.0, R1_HIGH: 1.0}, chain)}
    assert found == {Hypothesis((C1_SHORT,), (R1_OPEN,)): 2.0, Hypothesis((C1_SHORT,)): 0.0, Hypothesis((R1_HIGH,)): 1.0}


def test_an_open_fuse_is_laid_to_the_shorts_behind_it_as_records_lay_it() -> None:
    """26 of 34 failed fuses stood beside another failed part (Open Repair Data): what the computed destruction leaves of that
    share is spread over the shorts, a twentieth at least and a half at most."""
    fuse, diode, switch = Fault("F1", "open"), Fault("D1", "short"), Fault("Q1", "ce_short")
    weights = {diode: 2.0, switch: 1.0, fuse: 0.2, R1_OPEN: 1.0}
    found = {one.hypothesis: one.weight for one in shorts_behind(weights, {}, [fuse])}
    chance = (0.2 * WITH_ANOTHER / ALONE) / 3.0
    assert NOT_COMPUTED < chance < AT_MOST
    assert found == pytest.approx({Hypothesis((diode, fuse)): 2.0 * chance, Hypothesis((switch, fuse)): 1.0 * chance})
    computed = {switch: (Collateral((fuse,), 0.9),)}
    fewer = {one.hypothesis: one.weight for one in shorts_behind(weights, computed, [fuse])}
    assert fewer == pytest.approx({Hypothesis((diode, fuse)): 2.0 * max((0.2 * WITH_ANOTHER / ALONE - 0.9) / 2.0, NOT_COMPUTED)})
    often = {one.hypothesis: one.weight for one in shorts_behind({**weights, fuse: 5.0}, {}, [fuse])}
    assert often[Hypothesis((fuse, diode))] == pytest.approx(2.0 * AT_MOST)
    assert shorts_behind({fuse: 1.0, R1_OPEN: 1.0}, {}, [fuse]) == () and shorts_behind(weights, {}, []) == ()


def test_a_fuse_is_all_that_failed_as_often_as_records_find_it() -> None:
    """8 of 34 failed fuses whose company was told (Open Repair Data, Open Repair Alliance, data to July 2025, CC BY-SA 4.0)."""
    fuse, short, far = Fault("F1", "open"), Fault("Q1", "short"), Fault("C7", "open")
    blown = {short: (Collateral((fuse,), 1.0),)}
    raised = fuses_alone({fuse: 0.1, short: 26.0, far: 5.0}, blown, [fuse])
    assert raised[fuse] / (raised[fuse] + raised[short]) == pytest.approx(8 / 34)
    assert raised[short] == 26.0 and raised[far] == 5.0
    assert fuses_alone({fuse: 20.0, short: 26.0}, blown, [fuse])[fuse] == 20.0, "never lowered"
