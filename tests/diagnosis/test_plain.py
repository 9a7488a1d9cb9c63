"""Rooms of the diagnosis against a plain second way: loops, scipy's normal distribution, and small boards by hand."""

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.stats import iqr, norm

from tests.diagnosis import small_board as sb
from triage.board.evidence import Reading
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import look_ahead
from triage.diagnosis.actions import Actions
from triage.diagnosis.axis import CELL, WIDTHS, draw_width
from triage.diagnosis.bins import bin_edges
from triage.diagnosis.conflicts import conflicts_of, hitting_sets
from triage.diagnosis.costs import Costs
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import Fit, fit_of, tail
from triage.diagnosis.next_reading import Candidate, Scorer
from triage.diagnosis.second_look import nothing_fits, odd_readings, open_rivals, reading_against, reading_at_part
from triage.diagnosis.settings import Instrument, Settings

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
