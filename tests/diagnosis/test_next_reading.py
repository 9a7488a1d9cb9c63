"""Scores of readings: the sparse sums against the plain ones, and what a score must do at its limits."""

import numpy as np
import pytest

from tests.bench.bench_diagnosis import made_up
from tests.diagnosis import small_board as sb
from triage.board.probe import CONDITIONS, Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.information import gini_gain, joint_table
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.next_reading import Offers, Scorer, alive
from triage.diagnosis.settings import Settings


@pytest.mark.parametrize("seed", [1, 2])
def test_the_sparse_sums_equal_the_plain_ones(seed: int) -> None:
    expected, _ = made_up(400, 20, 4)
    model, actions = ReadingModel(expected, Settings.load()), Actions.of_hypotheses(expected.hypotheses)
    belief = np.random.default_rng(seed).dirichlet(np.ones(400) * 0.3)
    order = np.argsort(actions.of, kind="stable")
    joint = joint_table(model.bins[:, order].astype(float), belief[order], actions.of[order])
    got = Scorer.of_model(model, actions).gains(belief)
    assert got == pytest.approx(gini_gain(joint, model.owner), abs=1e-6)


def test_nothing_is_gained_when_all_is_known() -> None:
    d = sb.diagnosis()
    sure = np.eye(6)[3]
    assert Scorer.of_model(d.model, d.actions).gains(sure) == pytest.approx(np.zeros(5), abs=1e-6)


def test_the_best_reading_separates_the_two_that_are_left() -> None:
    d = sb.diagnosis()
    between = np.array([0.0, 0.0, 0.0, 0.5, 0.5, 0.0])
    gains = Scorer.of_model(d.model, d.actions).gains(between)
    assert set(np.argsort(-gains)[:3]) == {1, 2, 3} and gains[0] == pytest.approx(0.0, abs=1e-6)


def test_alive_keeps_the_mass_and_drops_the_rest() -> None:
    belief = np.array([0.5, 0.0, 0.3, 0.15, 0.05])
    assert alive(belief, 0.9).tolist() == [0, 2, 3] and alive(belief, 0.5).tolist() == [0]


def test_the_tabulated_minutes_are_those_of_the_costs() -> None:
    d = sb.diagnosis()
    volts = [Probe("volts_dc", "b", "g", condition) for condition in CONDITIONS[1:]]
    watts, lifted = Probe("watts", "a", "g", "full"), Probe("esr", "C1.plus", "C1.minus")
    probes = (*sb.PROBES, *volts[:-1], watts, lifted, Probe("ohms", "R1.a", "R1.b"))
    places = [(probe.condition, probe.lifted, probe.function == "watts") for probe in probes]
    known = list(dict.fromkeys(places))
    offers = Offers(
        probes, np.ones(len(probes), dtype=bool), np.zeros(len(probes), dtype=int),
        np.array([d.costs.reading[probe.function] for probe in probes]), np.zeros(len(probes)),
        np.array([known.index(place) for place in places]), tuple(probes[places.index(place)] for place in known), d.costs,
    )  # fmt: skip
    for taken in ([], [sb.OHMS_R1], [lifted], [sb.OHMS_R1, volts[0]], [watts], [watts, volts[1], lifted]):
        assert offers.minutes(taken) == pytest.approx([d.costs.minutes(probe, taken) for probe in probes])
