"""Belief against a general Bayesian-network library (pyAgrum, lazy propagation): the same numbers to 1e-9.

Reference: pyAgrum; the chest clinic is the network of Lauritzen, Spiegelhalter, Local computations with probabilities on
graphical structures, J. R. Stat. Soc. B 50 (1988) 157-224, with the evidence of data/diagnosis/bayes_networks.toml.
"""

import itertools
from typing import Any

import numpy as np
import pyagrum
import pytest

from tests.diagnosis import small_board as sb
from tests.reference.conftest import OutsideChecks
from tests.reference.test_diagnosis_published import asia_states, cases
from triage.board.evidence import Reading
from triage.diagnosis.belief import posterior
from triage.diagnosis.engine import Job

LIBRARY = "pyAgrum, lazy propagation"
READINGS = {sb.OHMS_R1: 2.8e3, sb.OHMS_C1: 0.9e6, sb.DIODE_D1: 0.58, sb.ESR_C1: 0.4}
PARENTS = {"asia": (), "smoke": (), "tub": ("asia",), "lung": ("smoke",), "bronc": ("smoke",), "either": ("tub", "lung"),
           "xray": ("either",), "dysp": ("bronc", "either")}


@pytest.mark.parametrize("count", range(1, len(READINGS) + 1))
def test_belief_on_a_board(count: int, outside_check: OutsideChecks) -> None:
    """One cause node with its readings as children, discretised as the program does it."""
    diagnosis = sb.diagnosis()
    network = pyagrum.BayesNet()
    cause = network.add(pyagrum.LabelizedVariable("cause", "", len(sb.HYPOTHESES)))
    network.cpt(cause)[:] = sb.CHANCE
    taken = dict(itertools.islice(READINGS.items(), count))
    hard = {}
    for probe, value in taken.items():
        column = diagnosis.expectations.column(probe)
        assert column is not None
        table = diagnosis.model.cell_table(column)
        child = network.add(pyagrum.LabelizedVariable(f"t{column}", "", table.shape[1]))
        network.addArc(cause, child)
        network.cpt(child)[:] = table
        hard[f"t{column}"] = int(diagnosis.model.axes[column].index(value))
    inference = pyagrum.LazyPropagation(network)
    inference.setEvidence(hard)
    want = inference.posterior("cause").toarray()
    got = diagnosis.belief(Job(tuple(Reading(probe, value) for probe, value in taken.items())))
    outside_check("exact inference", LIBRARY, got, want, 1e-9, True)


def chest_clinic(cpt: dict[str, float]) -> pyagrum.BayesNet:
    """The network from its conditional chances; the first label is no, the second yes."""
    network = pyagrum.BayesNet()
    for name in PARENTS:
        network.add(pyagrum.LabelizedVariable(name, "", ["no", "yes"]))
    for name, parents in PARENTS.items():
        for parent in parents:
            network.addArc(parent, name)
    yes: dict[str, Any] = {
        "asia": lambda: cpt["asia"],
        "smoke": lambda: cpt["smoke"],
        "tub": lambda asia: cpt["tub_asia" if asia else "tub_noasia"],
        "lung": lambda smoke: cpt["lung_smoke" if smoke else "lung_nosmoke"],
        "bronc": lambda smoke: cpt["bronc_smoke" if smoke else "bronc_nosmoke"],
        "either": lambda tub, lung: float(tub or lung),
        "xray": lambda either: cpt["xray_either" if either else "xray_noteither"],
        "dysp": lambda bronc, either: cpt[
            ("dysp_bronc_either" if bronc else "dysp_either_only") if either else ("dysp_bronc_only" if bronc else "dysp_none")
        ],
    }
    for name, parents in PARENTS.items():
        for states in itertools.product((0, 1), repeat=len(parents)):
            chance = yes[name](*states)
            network.cpt(name)[dict(zip(parents, states, strict=True))] = [1.0 - chance, chance]
    return network


@pytest.mark.parametrize("case", cases("bayes_networks.toml", "cpt_yes"))
def test_belief_on_the_chest_clinic(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """Every node that is not evidence, not only those that the publication prints."""
    given = case["inputs"]
    inference = pyagrum.LazyPropagation(chest_clinic(given["cpt_yes"]))
    inference.setEvidence(given["evidence"])
    names = [name for name in PARENTS if name not in given["evidence"]]
    want = [float(inference.posterior(name).toarray()[1]) for name in names]
    states, prior = asia_states(given["cpt_yes"])
    seen = np.array([all(one[name] == (value == "yes") for name, value in given["evidence"].items()) for one in states])
    with np.errstate(divide="ignore"):
        belief = posterior(prior, np.log(seen.astype(float)))
    got = [belief[[one[name] for one in states]].sum() for name in names]
    outside_check("exact inference", LIBRARY, got, want, 1e-9, True)
