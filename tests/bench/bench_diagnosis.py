"""What a step of the diagnosis costs beside a general Bayesian-network library.

    python -m tests.bench.bench_diagnosis

The library is pyagrum; where it is not installed only the growth with the number of hypotheses is printed. Times are of the
processor, which other work on the machine hardly changes. What the choices are worth is in ``bench_plays``.
"""

import importlib.util
import itertools
import os
import statistics
import time
from collections.abc import Callable, Sequence

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np

from triage.board.evidence import Reading, Symptom
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.belief import Likelihoods, posterior
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.next_reading import Scorer
from triage.diagnosis.priors import Prior

SIZES = ((300, 150, 30), (3_000, 150, 30), (30_000, 67, 6))
"""Hypotheses, probes, draws."""


def made_up(count: int, probes: int, draws: int) -> tuple[Expectations, Prior]:
    """Random expectations of a board of 100 parts with three modes each, singles before pairs."""
    rng = np.random.default_rng(0)
    modes = [Fault(f"P{i // 3}", f"m{i % 3}") for i in range(300)]
    singles = [Hypothesis(()), *(Hypothesis((fault,)) for fault in modes)]
    doubles = (Hypothesis(pair) for pair in itertools.combinations(modes, 2) if pair[0].ref != pair[1].ref)
    hypotheses = tuple(itertools.islice(itertools.chain(singles, doubles), count))
    value = np.repeat(10 ** rng.uniform(1, 6, size=(1, probes)), count, axis=0)
    moved = rng.random((count, probes)) < 0.12
    value[moved] = 10 ** rng.uniform(0, 7.5, size=int(moved.sum()))
    value[rng.random((count, probes)) < 0.03] = np.inf
    samples = value[:, :, None] * np.exp(0.05 * rng.normal(size=(1, probes, draws)))
    states = rng.integers(0, 9, size=(count, 3, 1))
    names = tuple(Probe("ohms", f"a{k}", f"b{k}") for k in range(probes))
    return Expectations(hypotheses, names, samples, states), Prior(hypotheses, rng.dirichlet(np.ones(count)), {})


def milliseconds(action: Callable[[int], object], times: int = 7) -> float:
    """Median time of an action that is told its number."""
    found = []
    for number in range(times):
        begin = time.process_time()
        action(number)
        found.append(1e3 * (time.process_time() - begin))
    return statistics.median(found)


def library_step(diagnosis: Diagnosis, columns: Sequence[int]) -> float:
    """Milliseconds of the posterior and the information of all readings in pyAgrum, scaled up from these
    readings.
    """
    import pyagrum

    model = diagnosis.model
    network = pyagrum.BayesNet()
    cause = network.add(pyagrum.LabelizedVariable("cause", "", len(diagnosis.prior)))
    network.cpt(cause)[:] = diagnosis.prior
    for column in columns:
        rows = model.bins[model.owner == column].T.astype(float)
        child = network.add(pyagrum.LabelizedVariable(f"t{column}", "", rows.shape[1]))
        network.addArc(cause, child)
        network.cpt(child)[:] = np.ascontiguousarray(rows / rows.sum(axis=1, keepdims=True))
    inference = pyagrum.LazyPropagation(network)
    begin = time.process_time()
    inference.setEvidence({f"t{columns[0]}": 0})
    inference.posterior("cause")
    one = time.process_time() - begin
    begin = time.process_time()
    for column in columns[1:]:
        pyagrum.InformationTheory(inference, ["cause"], [f"t{column}"]).mutualInformationXY()
    rest = (time.process_time() - begin) / (len(columns) - 1)
    return 1e3 * (one + rest * len(model.axes))


def steps() -> None:
    """Belief and next reading with all hypotheses alive, by number of hypotheses."""
    print("one entry to new belief and suggestion, all hypotheses alive, one BLAS thread")
    before: tuple[int, float] | None = None
    for count, probes, draws in SIZES:
        expected, prior = made_up(count, probes, draws)
        diagnosis = Diagnosis(expected, prior, {}, {})

        def step(number: int, diagnosis: Diagnosis = diagnosis) -> None:
            job = Job((Symptom("dead", "full"), Reading(diagnosis.expectations.probes[number], 1e3)))
            diagnosis.suggest(job, lambda probe: True)

        scorer = Scorer.of_model(diagnosis.model, diagnosis.actions)
        likelihoods = Likelihoods(expected, diagnosis.model, {}, diagnosis.settings)

        def scores(
            number: int, scorer: Scorer = scorer, likelihoods: Likelihoods = likelihoods, chances: np.ndarray = prior.chance
        ) -> None:
            reading = Reading(likelihoods.expectations.probes[number], 1e3)
            scorer.gains(posterior(chances, likelihoods.log([reading])))

        alone = milliseconds(scores)
        ours = milliseconds(step)
        line = f"{count:6d} hypotheses, {probes} readings: {ours:7.1f} ms"
        if before:
            line += f"; {ours / before[1]:.1f} times the time for {count / before[0]:.0f} times the hypotheses"
        before = (count, ours)
        if importlib.util.find_spec("pyagrum") and count <= 3_000:
            theirs = library_step(diagnosis, range(6))
            line += f"; belief and scores alone {alone:.1f} ms, in a general library {theirs / alone:.0f} times as long"
        print(line)


if __name__ == "__main__":
    steps()
