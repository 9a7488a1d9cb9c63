"""How readings move along with each other, against numpy's correlation and a regression line; what a shop reads; odd readings."""

import math
from dataclasses import replace

import numpy as np
import pytest

from tests.diagnosis import small_board as sb
from triage.board.fault import Fault
from triage.board.part import Board, Label, Mains, Part
from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.companion import FEWEST, _correlation, _moved
from triage.diagnosis.costs import Costs
from triage.diagnosis.handbook import fault_weights
from triage.diagnosis.misfit import Fit
from triage.diagnosis.settings import Settings
from triage.diagnosis.verdict import Roots, conclude

CHANCE = np.random.default_rng(12)


def test_the_correlation_of_two_readings_is_that_of_their_draws() -> None:
    one = CHANCE.normal(size=24) * 4.0
    other = 0.8 * one + CHANCE.normal(size=24) * 2.0
    assert _correlation(one, other) == pytest.approx(float(np.corrcoef(one, other)[0, 1]))
    assert _correlation(one, -other) == pytest.approx(-float(np.corrcoef(one, other)[0, 1]))
    gaps = other.copy()
    gaps[:5] = np.nan
    assert _correlation(one, gaps) == pytest.approx(float(np.corrcoef(one[5:], other[5:])[0, 1]))


def test_what_moves_by_less_than_its_own_error_or_is_seldom_known_has_no_companion() -> None:
    one = CHANCE.normal(size=24) * 4.0
    still = one / one.std() * 0.99
    assert _correlation(one, still) == 0.0 and _correlation(still, one) == 0.0
    assert _correlation(one, one / one.std() * 1.01) == pytest.approx(1.0)
    few = np.full(24, np.nan)
    few[: FEWEST - 1] = one[: FEWEST - 1]
    assert _correlation(few, one) == 0.0
    few[FEWEST - 1] = one[FEWEST - 1]
    assert _correlation(few, one) == pytest.approx(1.0)


def test_draws_follow_the_line_through_them_to_where_the_companion_was_read() -> None:
    """Slope of the least squares, less by the companion's own error; hypotheses by rows."""
    other = CHANCE.normal(size=(2, 24)) * 3.0 + 10.0
    own = np.stack([2.0 * other[0] + 5.0, CHANCE.normal(size=24)])
    moved = _moved(own, other, 12.0)
    for row in range(2):
        spread = other[row].var()
        slope = float(np.cov(own[row], other[row], bias=True)[0, 1]) / (spread + 1.0)
        assert moved[row] == pytest.approx(own[row] + slope * (12.0 - other[row]))
    blind = other.copy()
    blind[0, 3:], blind[1, 0] = np.nan, np.nan
    held = _moved(own, blind, 12.0)
    assert held[0] == pytest.approx(own[0]), "three draws make no line"
    assert held[1, 0] == own[1, 0] and not np.allclose(held[1, 1:], own[1, 1:])


def test_a_shop_takes_what_one_of_its_meters_reads() -> None:
    poor = Costs.load().for_functions({"ohms", "volts_dc"})
    assert poor.can_take(sb.OHMS_R1) and poor.can_take(sb.VOLTS)
    assert not any(poor.can_take(probe) for probe in (sb.DIODE_D1, sb.ESR_C1, Probe("watts", "a", "b", "full")))
    rich = Costs.load().for_functions({"volts_pp", "esr"})
    assert rich.can_take(Probe("volts_pp", "a", "b", "full")), "a shop that has a scope has it, whatever the usual shop owns"
    assert rich.reading == Costs.load().reading


def test_readings_that_nothing_explains_are_named_before_those_that_only_do_not_fit_the_lead() -> None:
    actions, roots, settings = Actions.of_hypotheses(sb.HYPOTHESES), Roots.of_hypotheses(sb.HYPOTHESES), Settings.load()
    sure, fit = np.eye(6)[3], Fit(((sb.OHMS_R1, 1e-9), (sb.OHMS_C1, 0.5)))
    plain = conclude(sure, roots, actions, settings, False, 0.0, fit)
    assert plain.status == "does not fit" and plain.odd == (str(sb.OHMS_R1),)
    told = conclude(sure, roots, actions, settings, False, 0.0, fit, (sb.VOLTS,))
    assert told.status == "does not fit" and told.odd == (str(sb.VOLTS),)
    good = conclude(sure, roots, actions, settings, False, 0.0, Fit(((sb.OHMS_C1, 0.5),)))
    assert good.status == "found" and good.odd == () and good.repair == ("C1",)
    assert conclude(sure, roots, actions, settings, False, 0.0, None).status == "found"
    open_ = conclude(sb.CHANCE, roots, actions, settings, False, 1.0, fit)
    assert open_.status == "open" and open_.odd == (str(sb.OHMS_R1),)


def test_a_resistor_without_a_rating_counts_as_the_usual_quarter_watt() -> None:
    """Common practice: the part that is fitted where nothing is printed; capacitors without a value as a microfarad."""
    pins = {"a": "x", "b": "y"}
    bare = Part("R1", "resistor", "startup resistor", pins, {"resistance": 1e6})
    film = Part("C1", "capacitor", "snubber capacitor", pins, {})

    def weigh(part: Part, mode: str) -> float:
        label, mains = Label("230 V", 5.0, 0.6), Mains(50.0, 198.0, 230.0, 253.0)
        board = Board("x", "x", "ringing_choke_zener", label, mains, (part,), {}, {})
        return fault_weights(board, ())[Fault(part.ref, mode)].value

    quarter, large = (replace(bare, ratings={"power": watts}) for watts in (0.25, 2.0))
    assert weigh(bare, "open") == weigh(quarter, "open") < weigh(large, "open")
    assert weigh(film, "short") == weigh(replace(film, value={"capacitance": 1e-6}), "short")
    assert not math.isclose(weigh(film, "short"), weigh(replace(film, value={"capacitance": 1e-9}), "short"), rel_tol=1e-3)
