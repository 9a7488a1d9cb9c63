"""What a verdict must rule out by a reading before it is given: what else would explain the same readings."""

import math
from dataclasses import replace

import numpy as np

from triage.board.evidence import STATES, Reading, Sign, Symptom
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.priors import Prior

FUSE, SHORT, LEAK, OTHER = Fault("F1", "open"), Fault("C1", "short"), Fault("D1", "leaky"), Fault("D2", "leaky")
HYPOTHESES = (Hypothesis(()), Hypothesis((FUSE,)), Hypothesis((SHORT,), (FUSE,)), Hypothesis((LEAK,)), Hypothesis((OTHER,)))
FUSED, BULK, ACROSS = Probe("ohms", "l", "a"), Probe("ohms", "b", "g"), Probe("ohms", "k", "g")
LIFTED, OTHER_LIFTED = Probe("ohms", "D1.anode", "D1.cathode"), Probe("ohms", "D2.anode", "D2.cathode")
PROBES = (FUSED, BULK, ACROSS, LIFTED, OTHER_LIFTED)
OL = math.inf
MEANS = np.array([
    [0.1, 1e6, 1e5, 1e6, 1e6], [OL, 1e6, 1e5, 1e6, 1e6], [OL, 0.05, 1e5, 1e6, 1e6], [0.1, 1e6, 2e3, 2e3, 1e6],
    [0.1, 1e6, 2e3, 1e6, 2e3],
])  # fmt: skip
STATE = ("normal", "fuse gone", "fuse gone", "output low", "output low")
KINDS = {"F1": "fuse", "C1": "electrolytic", "D1": "diode", "D2": "diode"}
PINS = {"F1": frozenset("la"), "C1": frozenset("bg"), "D1": frozenset("kg"), "D2": frozenset("kg")}
SIDES = dict.fromkeys("labgk", "primary")


def board(*chance: float) -> Diagnosis:
    """Two diodes side by side, and a fuse before a capacitor; ``chance`` of each hypothesis before anything was seen."""
    noise = np.exp(0.03 * np.random.default_rng(3).normal(size=(1, len(PROBES), 40)))
    states = np.array([[[STATES.index(state)] for _ in range(3)] for state in STATE])
    expected = Expectations(HYPOTHESES, PROBES, MEANS[:, :, None] * noise, states)
    return Diagnosis(expected, Prior(HYPOTHESES, np.array(chance), {}), KINDS, SIDES, pins=PINS)


def any_reading(probe: Probe) -> bool:
    return True


def answered(diagnosis: Diagnosis, job: Job, truth: int) -> tuple[Job, list[Probe]]:
    """The job at its verdict and the readings asked for, answered as hypothesis ``truth`` reads."""
    asked = []
    while (step := diagnosis.suggest(job, any_reading)) is not None:
        asked.append(step.probe)
        value = float(MEANS[truth, PROBES.index(step.probe)])
        job = replace(job, entries=(*job.entries, Reading(step.probe, value)))
    return job, asked


def ask_all(diagnosis: Diagnosis, job: Job, truth: int) -> list[Probe]:
    """The readings asked for until the verdict, which must be the true one."""
    job, asked = answered(diagnosis, job, truth)
    verdict = diagnosis.verdict(job)
    assert verdict.status == "found" and set(verdict.repair) == HYPOTHESES[truth].repair
    return asked


DEAD = Job((Symptom("dead", "full"), Sign("sound"), Reading(FUSED, OL)))


def test_a_fuse_alone_is_named_only_after_a_look_behind_it() -> None:
    """However little is believed of a short there."""
    sure = board(0.3, 0.6, 0.004, 0.048, 0.048)
    assert sure.belief(DEAD)[1] > 0.95 and sure.verdict(DEAD).status == "open"
    step = sure.suggest(DEAD, any_reading)
    assert step is not None and step.probe == BULK and "C1 short" in step.reason and "F1 open" in step.reason
    assert BULK in ask_all(sure, DEAD, 1)


def test_the_short_behind_the_fuse_is_found() -> None:
    assert BULK in ask_all(board(0.3, 0.6, 0.004, 0.048, 0.048), DEAD, 2)


def test_when_the_short_cannot_be_looked_for_the_verdict_is_not_held_back_for_ever() -> None:
    sure = board(0.3, 0.6, 0.004, 0.048, 0.048)
    skipped = replace(DEAD, skipped=frozenset(PROBES))
    assert sure.suggest(skipped, any_reading) is None and sure.verdict(skipped).status == "found"


LEAKS = Job((Symptom("output low", "full"), Sign("sound"), Reading(ACROSS, 2e3)))


def test_two_parts_side_by_side_are_told_apart_with_one_leg_lifted() -> None:
    """The board as it is reads the same for both; the prior alone would name D1."""
    uneven = board(0.3, 0.05, 0.05, 0.58, 0.02)
    assert uneven.belief(LEAKS)[3] > 0.95
    for truth in (3, 4):
        asked = ask_all(uneven, LEAKS, truth)
        assert {LIFTED, OTHER_LIFTED} & set(asked)


def test_the_board_as_it_is_comes_before_a_lifted_leg() -> None:
    asked = ask_all(board(0.2, 0.2, 0.2, 0.2, 0.2), Job((Symptom("output low", "full"), Sign("sound"))), 3)
    lifted = [bool(probe.lifted) for probe in asked]
    assert lifted == sorted(lifted) and lifted[-1]


def test_lifting_a_leg_costs_its_minutes_once() -> None:
    costs = board(0.2, 0.2, 0.2, 0.2, 0.2).costs
    diode = LIFTED._replace(function="diode")
    again = costs.minutes(diode, [FUSED, LIFTED])
    assert costs.minutes(LIFTED, [FUSED]) - costs.minutes(FUSED, [BULK]) == costs.setup["lift_leg"]
    assert again == costs.reading["diode"] and costs.minutes(OTHER_LIFTED, [FUSED, LIFTED]) > again


def test_a_lifted_reading_is_worded_by_its_part() -> None:
    step = board(0.3, 0.05, 0.05, 0.5, 0.1).suggest(LEAKS, any_reading)
    assert step is not None and "with one leg lifted" in step.reason and step.probe.lifted in step.reason


def test_two_independent_faults_are_believed_only_after_the_reading_that_says_so_was_measured_again() -> None:
    """One of two readings may be a slip of the probe."""
    pair = Hypothesis((SHORT, LEAK))
    noise = np.exp(0.03 * np.random.default_rng(3).normal(size=(1, len(PROBES), 40)))
    means = np.vstack([MEANS, [0.1, 0.05, 2e3, 2e3, 1e6]])[[0, 3, 5]]
    states = np.array([[[STATES.index(state)] for _ in range(3)] for state in ("normal", "output low", "output low")])
    hypotheses = (Hypothesis(()), Hypothesis((LEAK,)), pair)
    expected = Expectations(hypotheses, PROBES, means[:, :, None] * noise, states)
    sure = Diagnosis(expected, Prior(hypotheses, np.array([0.3, 0.65, 0.05]), {}), KINDS, SIDES, pins=PINS)
    seen = Job((Symptom("output low"), Sign("sound"), Reading(ACROSS, 2e3), Reading(LIFTED, 2e3), Reading(BULK, 0.05)))
    assert sure.belief(seen)[2] > 0.95 and sure.verdict(seen).status == "open"
    again = sure.suggest(seen, any_reading)
    assert again is not None and again.again and again.probe == BULK
    sound, shorted = (replace(seen, entries=(*seen.entries, Reading(BULK, value))) for value in (1e6, 0.05))
    assert sure.verdict(sound).repair == ("D1",) and sure.verdict(shorted).repair == ("C1", "D1")


def test_a_part_is_read_alone_before_it_is_replaced() -> None:
    """A list without the real fault names a neighbour that reads the same on the board; alone it is sound, and nothing fits."""
    blind = board(0.4, 0.1, 0.1, 0.4, 0.0)
    step = blind.suggest(LEAKS, any_reading)
    assert step is not None and step.probe == LIFTED and blind.verdict(LEAKS).status == "open"
    assert blind.verdict(answered(blind, LEAKS, 4)[0]).status == "does not fit"
    assert blind.verdict(answered(blind, LEAKS, 3)[0]).repair == ("D1",)


def test_the_stop_by_belief_comes_before_the_second_look() -> None:
    sure = board(0.3, 0.6, 0.004, 0.048, 0.048)
    assert sure.settled(DEAD) and sure.verdict(DEAD).status == "open"
    assert not sure.settled(Job())
