"""Rooms of the diagnosis against a plain second way: loops, scipy's normal distribution, and small boards by hand."""

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.stats import iqr, norm

from tests.diagnosis import small_board as sb
from triage.board.evidence import STATES, Reading, Sign, Symptom
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import look_ahead
from triage.diagnosis.actions import Actions
from triage.diagnosis.ahead import repair_plan
from triage.diagnosis.ambiguity import ambiguity_sets
from triage.diagnosis.axis import CELL, WIDTHS, Axis, draw_width
from triage.diagnosis.bins import bin_edges
from triage.diagnosis.composed import with_pairs
from triage.diagnosis.conflicts import conflicts_of, hitting_sets
from triage.diagnosis.costs import Costs
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.explain import hazard_words, outcomes, repair_words, suggestion
from triage.diagnosis.learning import POOLED_STRENGTH, PROFILE_STRENGTH, factors
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import Fit, fit_of, tail
from triage.diagnosis.next_reading import Candidate, Scorer
from triage.diagnosis.priors import Prior
from triage.diagnosis.second_look import nothing_fits, odd_readings, open_rivals, reading_against, reading_at_part
from triage.diagnosis.settings import Instrument, Settings
from triage.diagnosis.verdict import settled
from triage.diagnosis.weigh import evidence_ratios
from triage.diagnosis.words import entry_words, percent_words, probe_words, suspect_name

SETTINGS, COSTS = Settings.load(), Costs.load()
E = sb.expectations()
MODEL = ReadingModel(E, SETTINGS)
ACTIONS = Actions.of_hypotheses(sb.HYPOTHESES)
PINS = {"R1": frozenset("ab"), "C1": frozenset("bg"), "D1": frozenset("bc")}


def everything(probe: Probe) -> bool:
    """No gate is shut."""
    return True


# ------------------------------------------------------------------ readings
def plain_cells(column: int, row: int) -> np.ndarray:
    """p(cell | draw) of sound readings, shape (D, cells + 1), by scipy; a draw stands in the middle of its cell."""
    axis = MODEL.axes[column]
    place = axis.place(E.samples[row, column])
    width = WIDTHS[int(draw_width(position(column, row)[None, :])[0])]
    edges = axis.start + CELL * np.arange(axis.cells + 1)
    edges[0] = -np.inf
    middle = axis.start + CELL * (place + 0.5)
    below = norm.cdf((edges[None, :] - middle[:, None]) / width)
    if not axis.ends_at_limit:
        below[:, -1] = np.where(place >= axis.cells, 0.0, 1.0)
    return np.concatenate([np.diff(below, axis=1), 1.0 - below[:, -1:]], axis=1)


def position(column: int, row: int) -> np.ndarray:
    """Draws in standard errors from zero."""
    from triage.diagnosis.axis import to_axis

    return np.asarray(to_axis(E.samples[row, column], MODEL.axes[column].instrument))


@pytest.mark.parametrize("column", range(len(sb.PROBES)))
def test_cells_are_the_normal_distribution_about_every_draw(column: int) -> None:
    table = MODEL.sound_table(column, np.arange(6))
    for row in range(6):
        assert table[row] == pytest.approx(plain_cells(column, row).mean(axis=0), abs=2e-4)


@pytest.mark.parametrize(("column", "values"), [
    (0, [1e3]), (0, [1e3, 1.02e3]), (0, [math.inf]), (1, [1e6, 0.0]), (4, [12.1, 11.9, 0.0]),
])
def test_readings_of_one_probe_share_the_specimen_and_slip_each_for_itself(column: int, values: list[float]) -> None:
    axis, eps, joint = MODEL.axes[column], SETTINGS.gross_error, []
    for row in range(6):
        chance = np.ones(E.samples.shape[2])
        for value in values:
            cell = int(axis.index(value))
            chance *= (1 - eps) * plain_cells(column, row)[:, cell] + eps * MODEL.slip(column, cell, cell + 1)
        joint.append(chance.mean())
    assert MODEL.likelihood(column, values) == pytest.approx(np.array(joint), rel=0.02, abs=1e-7)


@pytest.mark.parametrize("column", range(len(sb.PROBES)))
def test_gross_errors_go_to_open_line_to_zero_and_anywhere(column: int) -> None:
    """As settings.toml says; a meter without a limit seldom shows OL."""
    axis = MODEL.axes[column]
    limited = math.isfinite(axis.instrument.over)
    open_line = MODEL.slip(column, axis.cells, axis.cells + 1)
    assert open_line == pytest.approx(SETTINGS.gross_open_line if limited else 0.01)
    zero = int(axis.index(0.0))
    anywhere = MODEL.slip(column, axis.cells - 1, axis.cells)
    if axis.start > 0.0:
        assert MODEL.slip(column, 0, axis.cells) == pytest.approx(1.0 - open_line)
        return
    assert anywhere == pytest.approx((1.0 - open_line - SETTINGS.gross_zero) / axis.cells)
    low, high = max(0, zero - 6), min(axis.cells, zero + 7)
    assert MODEL.slip(column, low, high) == pytest.approx(SETTINGS.gross_zero + (high - low) * anywhere)
    assert MODEL.slip(column, high, high + 1) == pytest.approx(anywhere), "just beyond there is nothing special"


def test_the_width_of_draws_is_silvermans() -> None:
    """Silverman, Density estimation (1986), equation 3.31, with scipy's quartiles; widths are half powers of two."""
    chance, hits = np.random.default_rng(1), 0
    for number in range(200):
        draws = chance.normal(size=40) * 2.0 ** (0.02 * number)
        band = 0.9 * min(draws.std(), iqr(draws) / 1.34) * len(draws) ** -0.2
        wanted = min(max(round(2.0 * math.log2(math.sqrt(1.0 + band**2))), 0), len(WIDTHS) - 1)
        hits += wanted == int(draw_width(draws[None, :])[0])
    assert hits >= 190, "quartiles are defined in several ways: a few may fall to the next width"
    assert int(draw_width(np.full((1, 40), 3.0))[0]) == 0, "draws that are all alike are not widened"


def test_every_group_that_reads_apart_gets_its_own_bin() -> None:
    """However few they are: one hypothesis in forty far from the others."""
    cells = np.full((40, 20), 30, dtype=np.int32)
    cells[7], cells[11] = 90, 150
    edges = bin_edges(cells, 200)
    assert edges[0] == 0 and edges[-2:] == [200, 201] and edges == sorted(set(edges))
    bins = np.searchsorted(edges, [30, 90, 150], side="right")
    assert len(set(bins.tolist())) == 3
    assert any(45 < cut < 75 for cut in edges) and any(105 < cut < 135 for cut in edges), "an edge where nothing reads"


def test_meters_errors_add_by_root_sum_square() -> None:
    """JCGM 100:2008, 5.1.2; the model keeps its part whatever meter is used."""
    meter = Instrument("multimeter", 0.05, 0.5, 2e7, 0.1, model_relative=0.03, model_absolute=0.4)
    own = meter.read_with(0.04, 0.3, 6e7, 0.01)
    assert (own.relative, own.absolute) == (pytest.approx(0.05), pytest.approx(0.5))
    assert (own.over, own.step) == (6e7, 0.01)
    perfect = replace(meter, model_relative=0.0, model_absolute=0.0).read_with(0.0, 0.0, 6e7, 0.01)
    assert perfect.relative == pytest.approx(1e-3) and perfect.absolute == pytest.approx(1e-5)


# ------------------------------------------------------------------ what does not fit
def test_the_tail_is_the_chance_of_anything_as_odd() -> None:
    table = np.array([0.5, 0.3, 0.15, 0.05])
    assert [tail(table, cell) for cell in range(4)] == pytest.approx([1.0, 0.5, 0.2, 0.05])
    assert tail(np.array([0.4, 0.2, 0.2, 0.2]), 1) == pytest.approx(0.6), "equally odd ones count as well"


def test_the_worst_of_many_is_judged_as_the_worst_of_many() -> None:
    """Sidak: 1 - (1 - p)^n."""
    fit = Fit(((sb.OHMS_R1, 0.01), (sb.OHMS_C1, 0.3), (sb.VOLTS, 0.6)))
    assert fit.worst == (sb.OHMS_R1, 0.01) and fit.overall == pytest.approx(1.0 - 0.99**3)
    assert fit.doubtful(0.5) == (sb.OHMS_R1, sb.OHMS_C1) and fit.doubtful(0.01) == ()
    assert Fit(()).overall == 1.0 and Fit(()).worst is None


def test_odd_readings_are_measured_once_more_and_not_for_ever() -> None:
    fit = Fit(((sb.OHMS_R1, 0.001), (sb.OHMS_C1, 0.002)))
    assert odd_readings(fit, [sb.OHMS_R1, sb.OHMS_C1, sb.OHMS_C1], 0.01) == (sb.OHMS_R1,)
    assert odd_readings(None, [sb.OHMS_R1], 0.01) == ()


def test_what_was_measured_twice_and_fits_nothing_is_named() -> None:
    sound = np.eye(6)[0]
    once = [Reading(sb.OHMS_R1, 5e4), Reading(sb.OHMS_C1, 1e6)]
    assert nothing_fits(MODEL, once, sound, 1e-3) == ()
    assert nothing_fits(MODEL, [*once, once[0]], sound, 1e-3) == (sb.OHMS_R1,)
    assert nothing_fits(MODEL, [*once, once[1]], sound, 1e-3) == ()


def test_the_fit_is_taken_to_the_mixture_of_what_is_believed() -> None:
    """A reading that half of the belief expects is not odd; the latest reading of a probe counts."""
    between = np.array([0.0, 0.5, 0.0, 0.5, 0.0, 0.0])
    fit = fit_of(MODEL, [Reading(sb.OHMS_R1, 5e4), Reading(sb.OHMS_R1, math.inf)], between)
    assert fit.worst is not None and fit.worst[1] > 0.4
    assert fit_of(MODEL, [Reading(sb.OHMS_R1, 5e4)], between).overall < 1e-3


def test_a_reading_that_the_sound_board_does_not_give_blames_what_moves_it() -> None:
    readings = [Reading(sb.OHMS_R1, 3e3), Reading(sb.OHMS_C1, 1e6)]
    assert conflicts_of(MODEL, readings, 1e-3) == [frozenset({"R1"})]
    assert conflicts_of(MODEL, [Reading(sb.VOLTS, 0.0)], 1e-3) == [frozenset({"R1", "C1", "D1"})]
    assert conflicts_of(MODEL, [Reading(sb.OHMS_R1, 1e3)], 1e-3) == []
    assert conflicts_of(MODEL, [Reading(Probe("ohms", "x", "y"), 3e3)], 1e-3) == [], "a reading nobody expected blames nobody"


def test_hitting_sets_are_the_smallest_that_meet_every_conflict() -> None:
    assert hitting_sets([{"A", "B"}, {"B", "C"}]) == [frozenset("B"), frozenset("AC")]
    assert hitting_sets([{"A"}, {"B"}, {"A", "C"}]) == [frozenset("AB")]
    assert hitting_sets([{"A"}, {"B"}], largest=1) == [] and hitting_sets([]) == [] and hitting_sets([set()]) == []


# ------------------------------------------------------------------ what to read next
def offered(belief: np.ndarray) -> list[Candidate]:
    """All readings of the board with their prices, most gain per minute first."""
    gains = Scorer.of_model(MODEL, ACTIONS).gains(belief)
    found = [Candidate(column, probe, COSTS.minutes(probe, []), COSTS.danger(probe, sb.SIDES), float(gains[column]))
             for column, probe in enumerate(sb.PROBES)]
    return sorted(found, key=lambda one: (-one.worth, one.column))


def test_worth_is_gain_for_work_and_hazard() -> None:
    one = Candidate(0, sb.VOLTS, 6.0, 4.0, 0.5)
    assert one.worth == pytest.approx(0.05)


def test_looking_two_readings_ahead_against_all_ways_tried() -> None:
    """Every first and second reading and every repair behind every outcome, by plain loops."""
    belief = np.array([0.05, 0.3, 0.15, 0.2, 0.2, 0.1])
    ranked = offered(belief)
    penalty = 60.0

    def repair(weights: np.ndarray) -> float:
        costs = []
        for action, refs in enumerate(ACTIONS.repairs):
            minutes = COSTS.repair_minutes(refs, sb.KINDS) + penalty * ~ACTIONS.cures(action)
            costs.append(float(weights @ minutes))
        return min(costs)

    def rows(one: Candidate) -> np.ndarray:
        return MODEL.bins[MODEL.owner == one.column].astype(float)

    totals = []
    for first in ranked:
        total = first.minutes + first.danger
        for outcome in rows(first):
            ways = [repair(outcome * belief)]
            for second in ranked:
                if second is not first:
                    price = (second.minutes + second.danger) * float((outcome * belief).sum())
                    ways.append(price + sum(repair(outcome * further * belief) for further in rows(second)))
            total += min(ways)
        totals.append(total)
    chosen = look_ahead.best(MODEL, belief, ACTIONS, COSTS, sb.KINDS, penalty, ranked)
    assert min(totals) < repair(belief) and chosen is ranked[int(np.argmin(totals))]
    assert look_ahead.best(MODEL, belief, ACTIONS, COSTS, sb.KINDS, penalty, ()) is None
    sure = np.eye(6)[3]
    assert look_ahead.best(MODEL, sure, ACTIONS, COSTS, sb.KINDS, penalty, ranked) is None, "what is known needs no reading"


def test_the_reading_at_the_part_confirms_and_is_not_asked_twice() -> None:
    shorted = sb.HYPOTHESES.index(Hypothesis((sb.C1_SHORT,)))
    best = reading_at_part(MODEL, shorted, PINS, [], everything)
    assert best is not None and {best.plus, best.minus} == {"b", "g"} and not best.live
    assert reading_at_part(MODEL, shorted, PINS, [best], everything) is None
    other = reading_at_part(MODEL, shorted, PINS, [], lambda probe: probe != best)
    assert other is None or (other != best and {other.plus, other.minus} == {"b", "g"})
    assert reading_at_part(MODEL, shorted, PINS, [], lambda probe: False) is None
    assert reading_at_part(MODEL, 0, PINS, [], everything) is None, "no part, nothing to confirm"
    assert reading_at_part(MODEL, shorted, {}, [], everything) is None


def test_a_reading_against_rivals_is_cold_allowed_and_worth_its_minutes() -> None:
    lead, rivals = 1, np.array([3, 4])
    weights = np.array([0.0, 0.5, 0.0, 0.3, 0.2, 0.0])

    def alike(probe: Probe) -> float:
        return 1.0

    chosen = reading_against(MODEL, lead, rivals, weights, alike, everything)
    assert chosen == sb.OHMS_R1, "open R1 reads OL, with either rival it does not"
    dear = reading_against(MODEL, lead, rivals, weights, lambda probe: 100.0 if probe == sb.OHMS_R1 else 1.0, everything)
    assert dear in (sb.OHMS_C1, sb.ESR_C1, sb.DIODE_D1) and dear is not None
    shut = reading_against(MODEL, lead, rivals, weights, alike, lambda probe: probe != sb.OHMS_R1)
    assert shut is not None and shut != sb.OHMS_R1 and not shut.live
    assert reading_against(MODEL, lead, rivals, weights, alike, lambda probe: probe.live) is None


def test_rivals_stay_open_until_one_reading_rules_them_out() -> None:
    belief = np.array([0.0, 0.6, 0.0, 0.3, 0.1, 0.0])
    none = np.ones(6)
    assert open_rivals(1, belief, belief, none, ACTIONS, sb.KINDS).tolist() == [3, 4]
    ruled = np.array([1.0, 1.0, 1.0, 10.0, 9.9, 1.0])
    assert open_rivals(1, belief, belief, ruled, ACTIONS, sb.KINDS).tolist() == [4]
    small = np.array([0.0, 0.9, 0.0, 0.9 * 0.0099, 0.9 * 0.0101, 0.0])
    assert open_rivals(1, small, small, none, ACTIONS, sb.KINDS).tolist() == [4], "less than a hundredth is not looked for"
    before = np.array([0.1, 0.3, 0.1, 0.2, 0.2, 0.1])
    fused = {**sb.KINDS, "R1": "fusible_resistor"}
    sure = np.eye(6)[1]
    assert open_rivals(1, sure, before, none, ACTIONS, sb.KINDS).tolist() == []
    assert open_rivals(1, sure, before, none, ACTIONS, fused).tolist() == [5], "what blows the fuse and takes it along"


# ------------------------------------------------------------------ beliefs in words and verdicts
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


def test_a_fault_that_some_jobs_could_not_have_counts_for_the_others_only() -> None:
    """Ten jobs of which only four boards have the part: expected 4 x 0.5, found once."""
    with_it, without = {sb.R1_OPEN: 0.5, sb.C1_SHORT: 0.5}, {sb.C1_SHORT: 1.0}
    found = factors([with_it] * 4 + [without] * 6, [sb.R1_OPEN])
    assert found[sb.R1_OPEN] == pytest.approx((POOLED_STRENGTH + 1.0) / (POOLED_STRENGTH + 2.0))
    assert found[sb.C1_SHORT] == pytest.approx(POOLED_STRENGTH / (POOLED_STRENGTH + 8.0))
    here = factors([with_it] * 4, [], [with_it, without], [sb.R1_OPEN])
    pooled = POOLED_STRENGTH / (POOLED_STRENGTH + 2.0)
    assert here[sb.R1_OPEN] == pytest.approx((PROFILE_STRENGTH * pooled + 1.0) / (PROFILE_STRENGTH + 0.5))


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
