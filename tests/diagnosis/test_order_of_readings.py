"""Which readings come first, and which are measured again before two faults are believed: by hand."""

from dataclasses import replace

import numpy as np
import pytest

from tests.diagnosis import small_board as sb
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import misfit
from triage.diagnosis.actions import Actions
from triage.diagnosis.costs import Costs
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import fit_of
from triage.diagnosis.next_reading import Offers, Ranking, Scorer
from triage.diagnosis.second_look import hinges
from triage.diagnosis.settings import Settings

COSTS = Costs.load()
LIFTED, PLUG = Probe("ohms", "R1.a", "R1.b"), Probe("watts", "a", "b", "full")
E = sb.expectations()
MORE = np.concatenate([E.samples, E.samples[:, :1], E.samples[:, 4:]], axis=1)
WIDE = replace(E, probes=(*E.probes, LIFTED, PLUG), samples=MORE)
MODEL = ReadingModel(WIDE, Settings.load())
ACTIONS = Actions.of_hypotheses(sb.HYPOTHESES)
SCORER = Scorer.of_model(MODEL, ACTIONS)
BELIEF = np.array([0.1, 0.3, 0.1, 0.2, 0.2, 0.1])


def ranked(taken: list[Probe], costs: Costs = COSTS) -> Ranking:
    return Ranking.of_belief(SCORER, Offers.of_model(MODEL, costs, sb.SIDES), BELIEF, taken)


def everything(probe: Probe) -> bool:
    """No gate is shut."""
    return True


def test_readings_are_ranked_by_what_they_tell_for_their_minutes() -> None:
    found = ranked([sb.OHMS_C1]).best(everything, 2.0, 99)
    assert {one.probe for one in found} == set(WIDE.probes) - {sb.OHMS_C1}, "nothing is worth that much: all are offered"
    gains = SCORER.gains(BELIEF)
    for one in found:
        assert one.gain == pytest.approx(float(gains[one.column])) and WIDE.probes[one.column] == one.probe
        assert one.minutes == pytest.approx(COSTS.minutes(one.probe, [sb.OHMS_C1]))
        assert one.danger == COSTS.danger(one.probe, sb.SIDES)
    assert [one.worth for one in found] == sorted((one.worth for one in found), reverse=True)


def test_the_board_as_it_is_comes_before_a_lifted_leg_and_that_before_power() -> None:
    order = ranked([])
    cold = {sb.OHMS_R1, sb.OHMS_C1, sb.DIODE_D1, sb.ESR_C1}
    worth = {one.probe: one.worth for one in order.best(everything, 2.0, 99)}
    best_cold = max(worth[probe] for probe in cold)
    assert {one.probe for one in order.best(everything, best_cold, 99)} == cold
    only_lifted = order.best(lambda probe: probe not in cold, 1e-6, 99)
    assert {one.probe for one in only_lifted} == {LIFTED}
    beyond = {one.probe for one in order.best(everything, 1.01 * max(best_cold, worth[LIFTED]), 99)}
    assert beyond == {*cold, LIFTED, sb.VOLTS, PLUG}
    powered = order.best(lambda probe: probe.live, 1e-6, 99)
    assert {one.probe for one in powered} == {sb.VOLTS, PLUG}
    assert order.best(lambda probe: False, 0.0, 99) == ()


def test_no_more_are_offered_than_were_asked_for_and_the_best_of_them() -> None:
    order = ranked([])
    everyone = order.best(everything, 2.0, 99)
    assert [one.probe for one in order.best(everything, 2.0, 3)] == [one.probe for one in everyone[:3]]
    second = order.best(lambda probe: probe != everyone[0].probe, 2.0, 1)
    assert [one.probe for one in second] == [everyone[1].probe]


def test_what_the_shop_has_no_meter_for_is_not_offered() -> None:
    poor = ranked([], replace(COSTS, owned=frozenset({"multimeter"}))).best(everything, 2.0, 99)
    assert sb.ESR_C1 not in [one.probe for one in poor] and sb.OHMS_C1 in [one.probe for one in poor]


def test_what_is_known_of_no_hypothesis_is_not_offered() -> None:
    blind = WIDE.samples.copy()
    blind[:, 1] = np.nan
    offers = Offers.of_model(ReadingModel(replace(WIDE, samples=blind), Settings.load()), COSTS, sb.SIDES)
    assert offers.possible.tolist() == [True, False, True, True, True, True, True]


def test_the_fit_is_taken_to_the_likeliest_only(monkeypatch: pytest.MonkeyPatch) -> None:
    """Where hundreds are believed a little the many unlikely ones do not excuse a reading."""
    from triage.board.evidence import Reading

    weights = np.array([0.0, 0.0, 0.0, 0.3, 0.7, 0.0])
    shorted = [Reading(sb.OHMS_C1, 0.1)]
    assert fit_of(MODEL, shorted, weights).overall > 0.05, "the capacitor's short is believed as well"
    monkeypatch.setattr(misfit, "MIXED", 1)
    assert fit_of(MODEL, shorted, weights).overall < 1e-3, "the likeliest alone does not give it"


def test_a_reading_without_which_one_fault_would_do_is_measured_again() -> None:
    """R1 and C1 at once: each by one reading; a slip of the probe is commoner than a second fault."""
    pair = Hypothesis((sb.R1_OPEN, sb.C1_SHORT))
    hypotheses = (*sb.HYPOTHESES, pair)
    actions = Actions.of_hypotheses(hypotheses)
    start = np.array([0.3, 0.3, 0.1, 0.2, 0.05, 0.049, 0.001])
    one = np.log([1e-6, 0.9, 1e-6, 1e-6, 1e-6, 1e-6, 0.9])
    other = np.log([1e-6, 1e-6, 1e-6, 0.9, 1e-6, 1e-6, 0.9])
    terms = {sb.OHMS_R1: one, sb.OHMS_C1: other}
    lead = hypotheses.index(pair)
    assert hinges(lead, hypotheses, start, terms, actions, [sb.OHMS_R1, sb.OHMS_C1]) == (sb.OHMS_R1, sb.OHMS_C1)
    assert hinges(lead, hypotheses, start, terms, actions, [sb.OHMS_R1, sb.OHMS_C1, sb.OHMS_C1]) == (sb.OHMS_R1,)
    assert hinges(1, hypotheses, start, terms, actions, [sb.OHMS_R1, sb.OHMS_C1]) == (), "a single fault hinges on nothing"
    more = {**terms, sb.DIODE_D1: one, sb.ESR_C1: other}
    taken = list(more)
    assert hinges(lead, hypotheses, start, more, actions, taken) == (), "each is seen twice"
