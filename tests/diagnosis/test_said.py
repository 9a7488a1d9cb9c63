"""What the diagnosis says and decides, on the small board: ratios, verdicts, suggestions, plans, in words and by hand."""

import math
from dataclasses import replace

import numpy as np
import pytest

from tests.diagnosis import small_board as sb
from tests.diagnosis.test_plain import offered
from triage.board.evidence import STATES, Reading, Sign, Symptom
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import explain, look_ahead
from triage.diagnosis.actions import Actions
from triage.diagnosis.ahead import repair_plan
from triage.diagnosis.ambiguity import ambiguity_sets
from triage.diagnosis.axis import CELL, Axis
from triage.diagnosis.composed import with_pairs
from triage.diagnosis.costs import Costs
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.explain import hazard_words, outcomes, repair_words, suggestion
from triage.diagnosis.learning import PROFILE_STRENGTH, Gamma, Trust, factors
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.priors import Prior
from triage.diagnosis.settings import Instrument, Settings
from triage.diagnosis.verdict import settled
from triage.diagnosis.weigh import evidence_ratios
from triage.diagnosis.words import entry_words, percent_words, probe_words, suspect_name

SETTINGS, COSTS = Settings.load(), Costs.load()
E = sb.expectations()
MODEL = ReadingModel(E, SETTINGS)
ACTIONS = Actions.of_hypotheses(sb.HYPOTHESES)


def test_ratios_of_the_entries_multiply_to_the_odds() -> None:
    diagnosis = sb.diagnosis()
    prior, members = sb.CHANCE, np.array([False, True, False, False, False, False])
    entries = [Symptom("dead"), Reading(sb.OHMS_R1, math.inf), Reading(sb.OHMS_C1, 1e6)]
    table = {1: np.log([0.2, 0.4, 0.1, 0.1, 0.3, 0.2]), 2: np.log([0.02, 0.3, 0.01, 0.01, 0.01, 0.2]),
             3: np.log([0.02, 0.3, 0.01, 0.0001, 0.01, 0.2])}
    found = evidence_ratios(entries, lambda some: table[len(some)], prior, members, "R1 open")
    after = prior * np.exp(table[3])
    odds = after[1] / (after.sum() - after[1])
    assert math.prod(one.ratio for one in found) * 0.15 / 0.85 == pytest.approx(odds)
    assert found[0].text.endswith("times for R1 open") and "complaint dead (full)" in found[0].text
    against = evidence_ratios(entries[:1], lambda some: np.log([0.4, 0.1, 0.4, 0.4, 0.4, 0.4]), prior, members, "R1 open")
    assert against[0].text.endswith("4 times against R1 open") and against[0].ratio == pytest.approx(0.25)
    silent = evidence_ratios(entries[:1], lambda some: np.zeros(6), prior, members, "R1 open")
    assert silent[0].text.endswith("says nothing about R1 open")
    assert diagnosis.model.known(0)


@pytest.mark.parametrize(("chance", "words"), [
    (0.0, "under 1 %"), (0.004, "under 1 %"), (0.005, "under 1 %"), (0.006, "1 %"), (0.995, "over 99 %"),
    (0.5, "50 %"), (0.994, "99 %"), (0.996, "over 99 %"),
])
def test_chances_in_words_prove_nothing(chance: float, words: str) -> None:
    assert percent_words(chance) == words


def test_entries_and_probes_in_words() -> None:
    assert probe_words(sb.DIODE_D1) == "diode test b to c"
    assert probe_words(sb.VOLTS) == "dc voltage b to g (full)"
    assert probe_words(Probe("watts", "x", "y", "noload")) == "input power (noload)"
    assert probe_words(Probe("esr", "C1.plus", "C1.minus")) == "ESR of C1 with one leg lifted"
    assert probe_words(Probe("diode", "D1.anode", "D1.cathode")) == "diode test of D1 with one leg lifted, red to anode"
    assert entry_words(Symptom("dead", "half")) == "complaint dead (half)"
    assert entry_words(Sign("charred", "R1")) == "charred at R1" and entry_words(Sign("hum")) == "hum (adapter)"
    assert entry_words(Reading(sb.OHMS_R1, 4700.0)) == "resistance a to b 4.7 kohm"
    assert suspect_name(Hypothesis((sb.R1_OPEN, Fault("C1", "low_capacitance")))) == "R1 open and C1 low capacitance"
    assert suspect_name(Hypothesis(())) == "no part fault"
    assert repair_words(()) == "no part: check cord, plug and joints" and repair_words(("R1",)) == "replace R1"
    assert repair_words(("R1", "C1", "D1")) == "replace C1, D1 and R1"


def test_outcomes_are_bands_of_the_meter_with_what_each_would_mean() -> None:
    belief = np.array([0.0, 0.5, 0.0, 0.0, 0.5, 0.0])
    ohms = outcomes(MODEL, belief, ACTIONS, sb.PROBES.index(sb.OHMS_R1))
    assert sum(one.probability for one in ohms) == pytest.approx(1.0, abs=1e-6) and len(ohms) <= 3
    assert ohms[-1].text.startswith("above") and math.isinf(ohms[-1].high) and "replace R1" in ohms[-1].says
    assert ohms[0].text.startswith("below") and "replace D1" in ohms[0].says and ohms[0].high == ohms[1].low
    diode = outcomes(MODEL, belief, ACTIONS, sb.PROBES.index(sb.DIODE_D1))
    assert "replace D1" in diode[0].says and "replace R1" in diode[-1 if diode[-1].text != "OL" else 1].says
    same = outcomes(MODEL, np.eye(6)[1], ACTIONS, 0)
    assert [one.text for one in same] == ["any value"] and same[0].says == "replace R1, over 99 %"


def test_it_is_enough_when_sure_enough_or_nothing_is_worth_reading() -> None:
    target, careful, worth = SETTINGS.stop_target, SETTINGS.careful_target, SETTINGS.least_worth_per_minute

    def believed(cure: float) -> np.ndarray:
        return np.array([0.0, cure, 0.0, 1.0 - cure, 0.0, 0.0])

    assert settled(believed(target), ACTIONS, SETTINGS, False, 1.0) == (True, False)
    assert settled(believed(target - 0.001), ACTIONS, SETTINGS, False, 1.0) == (False, False)
    assert settled(believed(target), ACTIONS, SETTINGS, True, 1.0) == (False, False)
    assert settled(believed(careful), ACTIONS, SETTINGS, True, 1.0) == (True, False)
    assert settled(believed(0.6), ACTIONS, SETTINGS, False, worth) == (False, False)
    assert settled(believed(0.6), ACTIONS, SETTINGS, False, 0.99 * worth) == (True, True)
    sound = np.eye(6)[0]
    assert settled(sound, ACTIONS, SETTINGS, False, SETTINGS.least_worth_when_sound_per_minute) == (False, False)
    assert settled(sound, ACTIONS, SETTINGS, False, 0.99 * SETTINGS.least_worth_when_sound_per_minute) == (True, True)


def test_suspects_gather_the_forms_of_a_root() -> None:
    """A shorted D1 alone and with R1 taken along are one suspect, before anything was seen."""
    found = sb.diagnosis().suspects(Job(()))
    assert [one.ref for one in found] == ["", "D1", "R1", "R1", "C1"]
    assert [one.probability for one in found] == pytest.approx([0.4, 0.2, 0.15, 0.15, 0.1])
    assert found[0].mode == "no part fault" and found[1].index == 4, "of equal forms the first of the list leads"
    assert [one.mode for one in found[2:4]] == ["open", "high"], "equal ones in the order of the list"


def test_two_faults_together_stop_hide_or_stay_unknown() -> None:
    """States of pairs, by hand: a blown fuse hides everything, a dead adapter all but that, two troubles say nothing."""
    names = ("normal", "dead", "output low", "fuse gone", "output high", "hum or ripple")
    states = np.array([[[STATES.index(name)] for _ in range(3)] for name in names])
    roots = (sb.R1_OPEN, sb.R1_HIGH, sb.C1_SHORT, sb.D1_SHORT, Fault("Q1", "open"))
    hypotheses = (Hypothesis(()), *(Hypothesis((root,)) for root in roots))
    made = replace(E, hypotheses=hypotheses, states=states)

    def together(one: Fault, other: Fault) -> int:
        both = with_pairs(made, [Hypothesis((one, other))])
        return int(both.states[-1, 0, 0])

    dead, low, gone, high, hum = roots[0], roots[1], roots[2], roots[3], roots[4]
    assert together(gone, dead) == STATES.index("fuse gone") == together(dead, gone)
    assert together(dead, low) == STATES.index("dead") and together(low, hum) == -1 and together(high, low) == -1
    same = replace(made, states=np.where(states == STATES.index("output high"), STATES.index("output low"), states))
    assert int(with_pairs(same, [Hypothesis((low, high))]).states[-1, 0, 0]) == STATES.index("output low")


def test_an_axis_holds_all_draws_with_a_margin_or_ends_where_the_meter_does() -> None:
    meter = Instrument("multimeter", 0.02, 0.1, 2e6, 0.1)
    free = Axis.spanning(np.array([100.0, 1e3, np.nan]), meter)
    assert not free.ends_at_limit and free.edge(0) == -math.inf and free.edge(free.cells) == math.inf
    first, last = int(free.index(100.0)), int(free.index(1e3))
    assert 8.0 / CELL - 1 <= first <= 8.0 / CELL + 1 and free.cells - last == pytest.approx(8.0 / CELL, abs=2)
    cut = Axis.spanning(np.array([1e6, 1.9e6]), meter)
    assert cut.ends_at_limit and cut.edge(cut.cells) == 2e6 and int(cut.index(2.1e6)) == cut.cells


def test_a_suggestion_says_what_is_undecided_and_what_the_reading_does_about_it() -> None:
    """The three likeliest repairs from one in a hundred on; a reading whose outcomes all mean the same repair only sharpens."""
    belief = np.array([0.005, 0.5, 0.1, 0.2, 0.15, 0.045])
    choice = next(one for one in offered(belief) if one.probe == sb.OHMS_R1)
    told = suggestion(MODEL, belief, ACTIONS, choice)
    assert "resistance a to b tells most for its time" in told.reason
    assert told.reason.endswith("Repairs open now: R1 60 %, C1 20 %, D1 15 %.")
    assert told.probe == sb.OHMS_R1 and told.minutes == choice.minutes and told.gain == choice.gain and not told.again
    assert told.bits > 0.3 and told.hazard == ""
    sure = np.array([0.0, 0.995, 0.0, 0.005, 0.0, 0.0])
    dull = suggestion(MODEL, sure, ACTIONS, next(one for one in offered(sure) if one.probe == sb.VOLTS))
    assert "makes the likeliest repair surer or doubtful" in dull.reason
    assert dull.reason.endswith("Repairs open now: R1 over 99 %.")
    assert "one hand" in dull.hazard
    plug = hazard_words(Probe("watts", "a", "b", "full"))
    assert "at the plug only" in plug and hazard_words(sb.OHMS_R1) == ""


def test_only_the_likeliest_repairs_are_weighed(monkeypatch: pytest.MonkeyPatch) -> None:
    """Minutes of each, dearer by the failed repair where it does not cure; by hand."""
    belief = np.array([0.0, 0.1, 0.0, 0.5, 0.4, 0.0])
    keep = np.array([1, 3, 4])
    rows = look_ahead.repair_costs(ACTIONS, keep, belief, COSTS, sb.KINDS, 40.0)
    assert rows.tolist() == [[49.0, 9.0, 49.0], [49.0, 49.0, 9.0], [9.0, 49.0, 49.0]], "C1, D1, R1; none that nobody believes"
    monkeypatch.setattr(look_ahead, "REPAIRS", 2)
    assert look_ahead.repair_costs(ACTIONS, keep, belief, COSTS, sb.KINDS, 40.0).tolist() == rows[:2].tolist()
    assert look_ahead.expected_cost(rows, belief[keep]) == pytest.approx(0.1 * 49.0 + 0.5 * 9.0 + 0.4 * 49.0)


def test_a_repair_that_came_back_counts_for_the_other_faults_by_their_shares() -> None:
    """Two jobs here: R1 found once, and once named in vain, so that it was C1 or D1, three to one by the handbook."""
    handbook = {sb.R1_OPEN: 0.2, sb.C1_SHORT: 0.6, sb.D1_SHORT: 0.2}
    trust = Trust(Gamma(1e15, 1e15))
    found = factors(handbook, 1, [], 2, [sb.R1_OPEN], [sb.R1_OPEN], trust)
    weight = PROFILE_STRENGTH + 2.0
    assert found[sb.R1_OPEN] * 0.2 == pytest.approx((PROFILE_STRENGTH * 0.2 + 1.0) / weight)
    assert found[sb.C1_SHORT] * 0.6 == pytest.approx((PROFILE_STRENGTH * 0.6 + 0.75) / weight)
    assert found[sb.D1_SHORT] * 0.2 == pytest.approx((PROFILE_STRENGTH * 0.2 + 0.25) / weight)
    only = factors({sb.R1_OPEN: 1.0}, 1, [], 1, [], [sb.R1_OPEN], trust)
    assert only[sb.R1_OPEN] == pytest.approx(1.0), "nothing else can have been it"


def test_what_nothing_listed_explains_is_laid_to_at_most_two_parts() -> None:
    """R1 and C1 read wrong at once, each measured; together they explain it, and no three are named."""
    entries = (Reading(sb.OHMS_R1, 5e4), Reading(sb.OHMS_C1, 2e3), Reading(sb.DIODE_D1, 0.6))
    left = sb.diagnosis().what_is_left(Job(entries))
    assert frozenset({"R1", "C1"}) in left and all(len(one) <= 2 for one in left)
    assert sb.diagnosis().what_is_left(Job((Reading(sb.OHMS_R1, 1e3),))) == []


def test_repairs_are_tried_by_chance_for_their_minutes() -> None:
    """Before anything was seen, by hand: 0.4/10, 0.3/9, twice 0.1/9, 0.1/14; none below a fiftieth."""
    steps = sb.diagnosis().repair_plan(Job(()))
    assert [one.refs for one in steps] == [(), ("R1",), ("C1",), ("D1",), ("D1", "R1")]
    assert [one.minutes for one in steps] == [10.0, 9.0, 9.0, 9.0, 14.0]
    assert [one.probability for one in steps] == pytest.approx([0.4, 0.3, 0.1, 0.1, 0.1])
    few = repair_plan(ACTIONS, np.array([0.0, 0.97, 0.0, 0.02, 0.01, 0.0]), COSTS, sb.KINDS)
    assert [one.refs for one in few] == [("R1",), ("C1",)]


def test_sets_that_no_reading_tells_apart_chain_by_twice_the_window() -> None:
    values = {"a": 0.0, "b": 2.0, "c": 4.1, "d": math.inf, "e": math.inf, "f": 4.1}
    assert ambiguity_sets(values, 1.0) == [["a", "b"], ["c", "f"], ["d", "e"]]
    assert ambiguity_sets(values, 1.1) == [["a", "b", "c", "f"], ["d", "e"]]
    assert ambiguity_sets({}, 1.0) == [] and ambiguity_sets({"a": math.inf, "b": 1.0}, 5.0) == [["b"], ["a"]]


def test_what_the_leading_suspects_would_show_is_their_middle_draw() -> None:
    """Of an even number of draws the lower middle one; draws that cannot be taken are left out."""
    samples = E.samples.copy()
    samples[1, 1, :4], samples[1, 1, 4:] = [4.0, 1.0, 3.0, 2.0], np.nan
    found = Diagnosis(replace(E, samples=samples), Prior(sb.HYPOTHESES, np.eye(6)[1], {}), sb.KINDS, sb.SIDES)
    (only,) = found.expected(Job(()), sb.OHMS_C1)
    assert only.value == 2.0 and only.suspect == "R1 open" and only.probability == pytest.approx(1.0)


@pytest.mark.parametrize(("probe", "low", "high", "words"), [
    (sb.DIODE_D1, 0.3, 0.62, "300 mV to 620 mV"), (sb.OHMS_R1, 0.5, 4700.0, "0.5 ohm to 4.7 kohm"),
    (sb.OHMS_R1, -0.2, 10.0, "below 10 ohm"), (sb.OHMS_R1, 0.0, 10.0, "below 10 ohm"), (sb.VOLTS, -0.5, 2.0, "-500 mV to 2 V"),
    (sb.OHMS_R1, 1e6, math.inf, "above 1 Mohm"), (sb.OHMS_R1, math.inf, math.inf, "OL"),
    (sb.OHMS_R1, -math.inf, math.inf, "any value"),
    (sb.OHMS_R1, 1234.0, 5678.0, "1.2 kohm to 5.7 kohm"),
])
def test_a_band_is_said_as_a_person_reads_a_meter(probe: Probe, low: float, high: float, words: str) -> None:
    assert explain._band_words(probe, low, high) == words


def test_other_repairs_are_named_from_one_in_twenty_on() -> None:
    """Likeliest first, the best one itself left out."""
    chances = np.array([0.0, 0.83, 0.0, 0.07, 0.051, 0.049])
    verdict = Diagnosis(E, Prior(sb.HYPOTHESES, chances, {}), sb.KINDS, sb.SIDES).verdict(Job(()))
    assert verdict.repair == ("R1",) and verdict.rivals == ((("C1",), pytest.approx(0.07)), (("D1",), pytest.approx(0.051)))
    assert verdict.probability == pytest.approx(0.83)


def test_a_reading_against_rivals_names_the_two_likeliest_of_them() -> None:
    belief = np.array([0.0, 0.6, 0.05, 0.1, 0.2, 0.05])
    choice = next(one for one in offered(belief) if one.probe == sb.OHMS_R1)
    told = explain.against(MODEL, belief, ACTIONS, choice, 1, np.array([3, 4, 5]))
    assert told.reason == "All readings so far fit D1 short, C1 short as well as R1 open: the resistance a to b tells them apart."
    assert told.probe == sb.OHMS_R1 and told.minutes == choice.minutes and told.hazard == ""


def test_a_reading_to_be_taken_again_says_what_it_does_not_fit() -> None:
    belief = np.array([0.0, 0.0, 0.0, 0.9, 0.1, 0.0])
    choice = next(one for one in offered(belief) if one.probe == sb.OHMS_R1)
    told = explain.measure_again(MODEL, belief, ACTIONS, choice)
    assert told.again and "Measure the resistance a to b again" in told.reason and "does not fit C1" in told.reason
    whole = explain.measure_again(MODEL, np.eye(6)[0], ACTIONS, choice)
    assert "does not fit no part fault" in whole.reason
