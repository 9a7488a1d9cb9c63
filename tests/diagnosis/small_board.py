"""A made-up board of three parts whose readings can be reckoned by hand."""

import numpy as np

from triage.board.evidence import STATES
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.priors import Prior

R1_OPEN, R1_HIGH, C1_SHORT, D1_SHORT = (
    Fault("R1", "open"),
    Fault("R1", "high"),
    Fault("C1", "short"),
    Fault("D1", "short"),
)
HYPOTHESES = (
    Hypothesis(()),
    Hypothesis((R1_OPEN,)),
    Hypothesis((R1_HIGH,)),
    Hypothesis((C1_SHORT,)),
    Hypothesis((D1_SHORT,)),
    Hypothesis((D1_SHORT,), (R1_OPEN,)),
)
OHMS_R1 = Probe("ohms", "a", "b")
OHMS_C1 = Probe("ohms", "b", "g")
DIODE_D1 = Probe("diode", "b", "c")
ESR_C1 = Probe("esr", "b", "g")
VOLTS = Probe("volts_dc", "b", "g", "full")
PROBES = (OHMS_R1, OHMS_C1, DIODE_D1, ESR_C1, VOLTS)
OL = float("inf")
MEANS = np.array(
    [
        [1e3, 1e6, 0.6, 1.0, 12.0],
        [OL, 1e6, 0.6, 1.0, 0.0],
        [3e3, 1e6, 0.6, 1.0, 9.0],
        [1e3, 0.0, 0.6, 0.0, 0.0],
        [1e3, 1e6, 0.0, 1.0, 0.0],
        [OL, 1e6, 0.0, 1.0, 0.0],
    ]
)
STATE = ("normal", "dead", "output low", "fuse gone", "dead", "fuse gone")
KINDS = {"R1": "resistor", "C1": "electrolytic", "D1": "diode"}
SIDES = {"a": "primary", "b": "primary", "c": "primary", "g": "primary"}
CHANCE = np.array([0.4, 0.15, 0.15, 0.1, 0.1, 0.1])


def expectations(draws: int = 40, seed: int = 3) -> Expectations:
    """Readings spread by 3 %, with the same draws under all hypotheses."""
    noise = np.exp(0.03 * np.random.default_rng(seed).normal(size=(1, len(PROBES), draws)))
    states = np.array([[[STATES.index(state)] for _ in range(3)] for state in STATE])
    return Expectations(HYPOTHESES, PROBES, MEANS[:, :, None] * noise, states)


def diagnosis(**changes: object) -> Diagnosis:
    """The diagnosis of the board; ``changes`` go to its constructor."""
    prior = Prior(HYPOTHESES, CHANCE, {})
    return Diagnosis(expectations(), prior, KINDS, SIDES, **changes)  # type: ignore[arg-type]
