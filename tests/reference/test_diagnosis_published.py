"""Published and recomputed examples of diagnosis by model, test sequencing, repair order, information,
likelihood and learning.

The numbers lie in data/diagnosis, one file a subject, each case with its source, how sure it is
(``confidence``) and its tolerance.
"""

import itertools
import math
import tomllib
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from triage.board.evidence import STATES
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import learning, repair_order
from triage.diagnosis.ambiguity import ambiguity_sets
from triage.diagnosis.belief import posterior
from triage.diagnosis.conflicts import hitting_sets, minimal_sets
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.information import entropy, expected_entropy, gini_gain, impurity, information, joint_table
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.settings import Settings, instruments

DATA = Path(__file__).with_name("data") / "diagnosis"


def cases(file: str, *wanted: str) -> list[Any]:
    """The cases of a file whose inputs or results have all of these keys, ready for parametrize."""
    found = tomllib.loads((DATA / file).read_text())["case"]
    return [pytest.param(case, id=case["name"]) for case in found if set(wanted) <= set(case["inputs"]) | set(case["results"])]


# ------------------------------------------------------------------ three multipliers and two adders
PARTS = ("M1", "M2", "M3", "A1", "A2")


def propagate(good: frozenset[str], values: dict[str, int], seen: dict[str, int]) -> dict[str, int] | None:
    """Values that follow when these parts are good; None when they contradict each other."""
    known = dict(seen)
    sums = (("A1", "F", "X", "Y"), ("A2", "G", "Y", "Z"))
    products = {"M1": ("X", "A", "C"), "M2": ("Y", "B", "D"), "M3": ("Z", "C", "E")}
    for _ in range(6):
        found = [(out, values[a] * values[b]) for part, (out, a, b) in products.items() if part in good]
        for part, total, one, other in sums:
            if part not in good:
                continue
            for target, parts, sign in ((total, (one, other), 1), (one, (total, other), -1), (other, (total, one), -1)):
                if parts[0] in known and parts[1] in known:
                    found.append((target, known[parts[0]] + sign * known[parts[1]]))
        for name, value in found:
            if known.setdefault(name, value) != value:
                return None
    return known


def subsets() -> list[frozenset[str]]:
    return [frozenset(s) for n in range(6) for s in itertools.combinations(PARTS, n)]


@pytest.mark.parametrize("case", cases("polybox.toml", "minimal_conflicts"))
def test_conflicts_and_diagnoses(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """The smallest sets of parts that meet every conflict are the published diagnoses."""
    values, seen = case["inputs"]["values"], case["inputs"]["observed"]
    conflicts = minimal_sets(s for s in subsets() if propagate(s, values, seen) is None)
    want = case["results"]
    outside_check.same(
        "diagnosis from conflicts", case["source"], sorted(map(sorted, conflicts)), sorted(want["minimal_conflicts"])
    )
    got = hitting_sets(conflicts, largest=5)
    outside_check.same("diagnosis from conflicts", case["source"], sorted(map(sorted, got)), sorted(want["minimal_diagnoses"]))


def polybox_chance(faulty: frozenset[str], values: dict[str, int], observed: list[str], m: int) -> float:
    """p(observations in order | faulty parts): 1 or 0 where predicted, 1/m where not."""
    chance, seen = 1.0, {}
    for text in observed:
        name, value = text.split("=")
        known = propagate(frozenset(PARTS) - faulty, values, seen)
        assert known is not None or chance == 0.0
        if known is None:
            return 0.0
        chance *= 1.0 / m if name not in known else float(known[name] == int(value))
        seen[name] = int(value)
    return chance


@pytest.mark.parametrize("case", cases("polybox.toml", "posterior", "m"))
def test_polybox_posterior_and_entropy(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given, want = case["inputs"], case["results"]
    p, m, values = given["p_fault"], given["m"], given["values"]
    candidates = subsets()
    prior = np.array([p ** len(c) * (1 - p) ** (5 - len(c)) for c in candidates])
    chance = np.array([polybox_chance(c, values, given["observed_in_order"], m) for c in candidates])
    belief = posterior(prior, np.log(np.maximum(chance, 1e-300)))
    by_name = {"+".join(sorted(c)): b for c, b in zip(candidates, belief, strict=True)}
    named = {"+".join(sorted(name.split("+"))): value for name, value in want["posterior"].items()}
    outside_check("belief and entropy", case["source"], [by_name[n] for n in named], list(named.values()), 1e-8, True)
    outside_check("belief and entropy", case["source"], entropy(belief), want["entropy_bits"], 1e-8, True)
    seen = {t.split("=")[0]: int(t.split("=")[1]) for t in given["observed_in_order"]}
    left = {}
    for name in want.get("expected_entropy_bits", {}):
        left[name] = expected_entropy(polybox_outcomes(name, candidates, belief, values, seen, m))
        outside_check("belief and entropy", case["source"], left[name], want["expected_entropy_bits"][name], 1e-8, True)
    if left:
        outside_check.same("best next measurement", case["source"], min(left, key=lambda n: left[n]), want["best_measurement"])


def polybox_outcomes(
    name: str, candidates: list[frozenset[str]], belief: np.ndarray, values: dict[str, int], seen: dict[str, int], m: int
) -> np.ndarray:
    """P(value of a node and candidate) over m values; a candidate that predicts none spreads over all of
    them.
    """
    predicted = []
    for faulty, weight in zip(candidates, belief, strict=True):
        known = propagate(frozenset(PARTS) - faulty, values, seen) if weight > 0 else None
        predicted.append(None if known is None else known.get(name))
    places = {value: i for i, value in enumerate(sorted({v for v in predicted if v is not None}))}
    joint = np.zeros((m, len(candidates)))
    for column, (value, weight) in enumerate(zip(predicted, belief, strict=True)):
        if value is None:
            joint[:, column] = weight / m
        else:
            joint[places[value], column] = weight
    return joint


@pytest.mark.parametrize("case", cases("polybox.toml", "e"))
def test_inverters_in_a_row(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    names = "ABCD"
    p, want = case["inputs"]["p_fault"], case["results"]
    sizes = (1,) if "single" in case["name"] else range(5)
    candidates = [frozenset(c) for n in sizes for c in itertools.combinations(names, n)]
    prior = np.array([p ** len(c) * (1 - p) ** (4 - len(c)) for c in candidates])
    joint = {node: np.zeros((2, len(candidates))) for node in "bcd"}
    for column, faulty in enumerate(candidates):
        for bits in itertools.product((0, 1), repeat=4):
            chance, before = 1.0, 1
            for name, bit in zip(names, bits, strict=True):
                chance *= 0.5 if name in faulty else float(bit == 1 - before)
                before = bit
            if bits[3] == case["inputs"]["e"]:
                for node, bit in zip("bcd", bits, strict=False):
                    joint[node][bit, column] += chance
    chance = joint["b"].sum(axis=0)
    belief = posterior(prior, np.log(np.maximum(chance, 1e-300)))
    got = {"".join(sorted(c)): b for c, b in zip(candidates, belief, strict=True)}
    names_wanted = list(want["posterior"])
    outside_check(
        "belief and entropy",
        case["source"],
        [got[n] for n in names_wanted],
        [want["posterior"][n] for n in names_wanted],
        1e-8,
        True,
    )
    outside_check("belief and entropy", case["source"], entropy(belief), want["entropy_bits"], 1e-8, True)
    left = {}
    for node, value in want["expected_entropy_bits"].items():
        table = joint[node] * prior
        left[node] = expected_entropy(table / table.sum())
        outside_check("belief and entropy", case["source"], left[node], value, 1e-8, True)
    outside_check.same("best next measurement", case["source"], min(left, key=lambda n: left[n]), want["best_measurement"])


# ------------------------------------------------------------------ test sequencing and repair order
def sequencing_model(case: dict[str, Any]) -> tuple[Any, np.ndarray, np.ndarray]:
    """(outcome tables as the look ahead takes them, prior, costs) of a matrix of exact binary tests."""
    matrix = np.array([[int(bit) for bit in row] for row in case["inputs"]["d_matrix"]])
    bins = np.stack([row for test in matrix.T for row in (1.0 - test, 1.0 * test)])
    owner = np.repeat(np.arange(matrix.shape[1]), 2)
    return SimpleNamespace(bins=bins, owner=owner), np.array(case["inputs"]["prior"]), np.array(case["inputs"]["cost"])


@pytest.mark.parametrize("case", cases("test_sequencing.toml", "states"))
def test_look_ahead_in_cost_reaches_the_optimal_tree(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """Two-step value of information, with repairs so dear that only certainty is worth having, against the
    optimum.
    """
    from triage.diagnosis.actions import Actions
    from triage.diagnosis.costs import Costs
    from triage.diagnosis.look_ahead import best
    from triage.diagnosis.next_reading import Candidate

    model, prior, cost = sequencing_model(case)
    names = [f"s{i}" for i in range(len(prior))]
    actions = Actions.of_hypotheses([Hypothesis((Fault(name, "state"),)) for name in names])
    costs = Costs.load()

    def expected(belief: np.ndarray, left: frozenset[int]) -> float:
        if (belief > 1e-12).sum() == 1:
            return 0.0
        ranked = [Candidate(t, Probe("ohms", str(t), ""), float(cost[t]), 0.0, 0.0) for t in sorted(left)]
        choice = best(model, belief, actions, costs, {}, 40.0, ranked)
        assert choice is not None
        total = float(cost[choice.column])
        for row in model.bins[model.owner == choice.column]:
            branch = row * belief
            if branch.sum() > 0:
                total += branch.sum() * expected(branch / branch.sum(), left - {choice.column})
        return total

    got = expected(prior, frozenset(range(len(cost))))
    outside_check("test sequencing", case["source"], got, case["results"]["optimal_expected_cost"], 1e-9, True)


@pytest.mark.parametrize("case", cases("test_sequencing.toml", "optimal_expected_cost"))
def test_greedy_information_costs_what_is_published(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    model, prior, cost = sequencing_model(case)

    def expected(belief: np.ndarray, left: frozenset[int]) -> float:
        if (belief > 1e-12).sum() == 1:
            return 0.0
        joint = {t: model.bins[model.owner == t] * belief for t in left}
        test = max(sorted(left), key=lambda t: round(information(joint[t]) / cost[t], 12))
        return float(cost[test]) + sum(
            float(row.sum()) * expected(row / row.sum(), left - {test}) for row in joint[test] if row.sum() > 0
        )

    got, want = expected(prior, frozenset(range(len(cost)))), case["results"]
    greedy = want.get("greedy_information_gain_cost", want.get("greedy_information_gain_per_cost"))
    outside_check("test sequencing", case["source"], got, greedy, 1e-9, True)
    if "entropy_lower_bound_bits" in want:
        outside_check("test sequencing", case["source"], entropy(prior), want["entropy_lower_bound_bits"], 1e-9, True)


@pytest.mark.parametrize("case", cases("repair_order.toml", "order"))
def test_repairs_go_by_chance_per_cost(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    p, c, want = case["inputs"]["p"], case["inputs"]["c"], case["results"]
    order = repair_order.order(p, c)
    outside_check.same("repair order", case["source"], order, want["order"])
    by_chance = sorted(range(len(p)), key=lambda i: -p[i])
    by_cost = sorted(range(len(p)), key=lambda i: c[i])
    for sequence, key in (
        (order, "expected_cost"),
        (by_chance, "expected_cost_by_probability_only"),
        (by_cost, "expected_cost_by_cost_only"),
    ):
        outside_check("repair order", case["source"], repair_order.expected_minutes(p, c, sequence), want[key], 1e-9, True)
    least = min(repair_order.expected_minutes(p, c, s) for s in itertools.permutations(range(len(p))))
    outside_check("repair order", case["source"], want["expected_cost"], least, 1e-9, True)


@pytest.mark.parametrize("case", cases("repair_order.toml", "observation_cost"))
def test_an_observation_pays_by_its_value(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    p, c, want = case["inputs"]["p"], case["inputs"]["c"], case["results"]
    now = repair_order.expected_minutes(p, c, repair_order.order(p, c))
    after = repair_order.after_observation(p, c, case["inputs"]["p_outcome_given_fault"])
    outside_check(
        "repair order",
        case["source"],
        [now, after, now - after],
        [want["expected_cost_now"], want["expected_cost_after_free_observation"], want["value_of_information"]],
        1e-9,
        True,
    )
    outside_check.same("repair order", case["source"], now - after > case["inputs"]["observation_cost"], want["worth_taking"])


# ------------------------------------------------------------------ information
@pytest.mark.parametrize("case", cases("information.toml", "noise_sd"))
def test_information_of_a_gaussian_reading(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """On a fine grid; the tolerance is the grid's (100 cells a standard deviation)."""
    s0, s = case["inputs"]["prior_sd"], case["inputs"]["noise_sd"]
    x = np.arange(-12, 12, 0.05)
    prior = np.exp(-0.5 * (x / s0) ** 2)
    rows = np.exp(-0.5 * ((x[:, None] - x[None, :]) / s) ** 2)
    joint = rows / rows.sum(axis=0) * (prior / prior.sum())
    outside_check("information", case["source"], information(joint), case["results"]["information_bits"], 1e-4, True)


@pytest.mark.parametrize("case", cases("information.toml", "p_wrong"))
def test_information_of_a_noisy_question(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    wrong = case["inputs"]["p_wrong"]
    joint = np.array([[1 - wrong, wrong], [wrong, 1 - wrong]]) * case["inputs"]["prior"]
    outside_check("information", case["source"], information(joint), case["results"]["information_bits"], 1e-9, True)


@pytest.mark.parametrize("case", cases("information.toml", "action"))
def test_information_about_the_repair(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """Hypothesis information picks one test, repair information, edge cutting and impurity the other."""
    prior = np.array(case["inputs"]["prior"])
    action = np.unique(case["inputs"]["action"], return_inverse=True)[1]
    before = np.bincount(action, prior)
    want = case["results"]
    outside_check("information", case["source"], impurity(before) / 2, want["initial_edge_weight"], 1e-9, True)
    for test, outcomes in case["inputs"]["outcome"].items():
        bins = np.array([[float(o == k) for o in outcomes] for k in (0, 1)])
        by_action = joint_table(bins, prior, action)
        chance = by_action.sum(axis=1)
        # Edge cutting weighs the edges left after each outcome with the chance of the outcome.
        left = sum(p * (p**2 - (row**2).sum()) / 2 for p, row in zip(chance, by_action, strict=True))
        got = [
            information(bins * prior),
            information(by_action),
            impurity(before) / 2 - left,
            gini_gain(by_action, np.zeros(2, int))[0],
        ]
        keys = ("hypothesis_information_bits", "action_information_bits", "ec2_expected_weight_cut", "action_gini_gain")
        outside_check("information", case["source"], got, [want[test][key] for key in keys], 1e-9, True)


# ------------------------------------------------------------------ likelihood
def one_probe(samples: np.ndarray, function: str, **settings: float) -> ReadingModel:
    """The reading model of one probe with one row of draws for each hypothesis."""
    from dataclasses import replace

    hypotheses = tuple(Hypothesis((Fault(f"R{i}", "open"),)) for i in range(len(samples)))
    states = np.full((len(samples), 3, 1), STATES.index("dead"))
    expected = Expectations(
        hypotheses, (Probe(function, "a", "b", "full" if function == "volts_dc" else "cold"),), samples[:, None, :], states
    )
    return ReadingModel(expected, replace(Settings.load(), **settings))


@pytest.fixture
def linear_meter(monkeypatch: pytest.MonkeyPatch) -> None:
    """A voltmeter whose error is 0.1 V everywhere, as in the published example."""
    from triage.diagnosis import likelihood
    from triage.diagnosis.settings import Instrument

    table = {"volts_dc": Instrument("multimeter", 1e-6, 0.1, math.inf, 0.001)}
    monkeypatch.setattr(likelihood, "instruments", lambda: table)


@pytest.mark.parametrize("case", cases("likelihood.toml", "largest_likelihood_ratio"))
def test_gaussian_with_a_floor(case: dict[str, Any], outside_check: OutsideChecks, linear_meter: None) -> None:
    """Chance of a cell over its width. Averaging over a cell of w errors is off by w^2 (z^2 - 1) / 24: 3 % at
    z = 2.
    """
    given = case["inputs"]
    model = one_probe(
        np.array([[given["mu"]], [0.82], [9.18]]), "volts_dc", gross_error=given["eps"], gross_open_line=0.0, gross_zero=0.0
    )
    axis = model.axes[0]
    width = 0.05
    assert axis.cells * width == pytest.approx(given["range"], abs=0.01)
    got = [model.likelihood(0, [y])[0] / width for y in given["y"]]
    outside_check("likelihood of a reading", case["source"], got, case["results"]["density"], 0.04)
    outside_check(
        "likelihood of a reading",
        case["source"],
        got[0] / got[2],
        case["results"]["largest_likelihood_ratio"],
        0.02,
    )


@pytest.mark.parametrize("case", cases("likelihood.toml", "posterior_with_floor"))
def test_one_slip_does_not_kill(case: dict[str, Any], outside_check: OutsideChecks, linear_meter: None) -> None:
    """Readings of three different probes with the same expectation, so that each slips by itself."""
    given = case["inputs"]
    model = one_probe(
        np.array([[m] for m in given["mu"]] + [[0.82], [9.18]]),
        "volts_dc",
        gross_error=given["eps"],
        gross_open_line=0.0,
        gross_zero=0.0,
    )
    logs = sum(np.log(model.likelihood(0, [y])[:2]) for y in given["y"])
    got = posterior(np.array(given["prior"]), logs)
    outside_check("likelihood of a reading", case["source"], got, case["results"]["posterior_with_floor"], 1e-4, True)


@pytest.mark.parametrize("case", cases("likelihood.toml", "p_ol"))
def test_open_line_is_censored(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """Draws at the middles of 40000 equal shares of the published distribution; the meter's own 2 % widens it
    a little.
    """
    given = case["inputs"]
    assert instruments()["ohms"].over == given["limit_ohm"]
    from statistics import NormalDist

    shares = (np.arange(40000) + 0.5) / 40000
    draws = 10 ** np.array([NormalDist(given["mu_log10"], given["sd_log10"]).inv_cdf(s) for s in shares])
    model = one_probe(draws[None, :], "ohms", gross_error=0.0)
    got = model.likelihood(0, [math.inf])[0]
    outside_check("likelihood of a reading", case["source"], got, case["results"]["p_ol"], 2e-3, True)


@pytest.mark.parametrize("case", cases("likelihood.toml", "sd_model"))
def test_errors_add_by_squares(case: dict[str, Any], outside_check: OutsideChecks, tmp_path: Path) -> None:
    given = case["inputs"]
    file = tmp_path / "instruments.toml"
    meter = math.hypot(given["sd_tolerance"], given["sd_instrument"])
    file.write_text(
        f"[cold.ohms]\nrelative = {meter}\nabsolute = 0.03\n"
        f"model_relative = {given['sd_model']}\nmodel_absolute = 0.04\nstep = 0.1\n"
    )
    got = instruments(file)["ohms"]
    outside_check("likelihood of a reading", case["source"], got.relative, case["results"]["sd_total"], 1e-9, True)
    assert got.absolute == pytest.approx(0.05)


@pytest.mark.parametrize("case", cases("fault_dictionary.toml", "ambiguity_sets"))
def test_ambiguity_sets(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    got = ambiguity_sets(case["inputs"]["voltage"], case["inputs"]["window"])
    outside_check.same(
        "fault dictionary", case["source"], sorted(map(sorted, got)), sorted(map(sorted, case["results"]["ambiguity_sets"]))
    )


# ------------------------------------------------------------------ learning from closed jobs
@pytest.mark.parametrize("case", cases("counts.toml", "post_shape"))
def test_rates_learn_by_gamma_and_poisson(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given, want = case["inputs"], case["results"]
    start = learning.Gamma(given["prior_shape"], given["prior_rate"])
    events, exposure = np.atleast_1d(given["events"]), np.atleast_1d(given["exposure"])
    got = [start.after(float(n), float(t)) for n, t in zip(events, exposure, strict=True)]
    outside_check("learning from jobs", case["source"], [g.shape for g in got], np.atleast_1d(want["post_shape"]), 1e-12)
    outside_check("learning from jobs", case["source"], [g.rate for g in got], np.atleast_1d(want["post_rate"]), 1e-12)
    outside_check("learning from jobs", case["source"], [g.mean for g in got], np.atleast_1d(want["post_mean"]), 5e-4, True)


@pytest.mark.parametrize("case", cases("counts.toml", "counts"))
def test_shares_learn_by_dirichlet(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given, want = case["inputs"], case["results"]
    prior, counts = given["prior"], given["counts"]
    if isinstance(prior, list):
        prior, counts = dict(enumerate(prior)), dict(enumerate(counts))
    alpha = {key: value * given.get("strength", 1.0) for key, value in prior.items()}
    after = learning.dirichlet(alpha, counts)
    means = want.get("mean", want.get("posterior_mean"))
    expected = means if isinstance(means, dict) else dict(enumerate(means))
    outside_check(
        "learning from jobs", case["source"], [learning.shares(after)[k] for k in expected], list(expected.values()), 1e-9, True
    )


@pytest.mark.parametrize("case", cases("counts.toml", "successes"))
def test_a_proportion_is_a_dirichlet_of_two(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given, want = case["inputs"], case["results"]
    after = learning.dirichlet(
        {"yes": given["prior_a"], "no": given["prior_b"]}, {"yes": given["successes"], "no": given["trials"] - given["successes"]}
    )
    outside_check(
        "learning from jobs",
        case["source"],
        [after["yes"], after["no"], learning.shares(after)["yes"]],
        [want["post_a"], want["post_b"], want["post_mean"]],
        5e-4,
        True,
    )


# ------------------------------------------------------------------ exact inference on published networks
def asia_states(cpt: dict[str, float]) -> tuple[list[dict[str, bool]], np.ndarray]:
    """All states of the eight nodes with their chances."""
    names = ("asia", "smoke", "tub", "lung", "bronc", "either", "xray", "dysp")
    states, chances = [], []
    for bits in itertools.product((True, False), repeat=8):
        s = dict(zip(names, bits, strict=True))
        yes = {
            "asia": cpt["asia"],
            "smoke": cpt["smoke"],
            "tub": cpt["tub_asia" if s["asia"] else "tub_noasia"],
            "lung": cpt["lung_smoke" if s["smoke"] else "lung_nosmoke"],
            "bronc": cpt["bronc_smoke" if s["smoke"] else "bronc_nosmoke"],
            "either": float(s["tub"] or s["lung"]),
            "xray": cpt["xray_either" if s["either"] else "xray_noteither"],
            "dysp": cpt[
                "dysp_bronc_either"
                if s["bronc"] and s["either"]
                else "dysp_either_only"
                if s["either"]
                else "dysp_bronc_only"
                if s["bronc"]
                else "dysp_none"
            ],
        }
        states.append(s)
        chances.append(math.prod(yes[n] if s[n] else 1 - yes[n] for n in names))
    return states, np.array(chances)


@pytest.mark.parametrize("case", cases("bayes_networks.toml", "cpt_yes"))
def test_the_chest_clinic(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    states, prior = asia_states(case["inputs"]["cpt_yes"])
    seen = np.array([float(all(s[n] == (v == "yes") for n, v in case["inputs"]["evidence"].items())) for s in states])
    belief = posterior(prior, np.log(np.maximum(seen, 1e-300)))
    want = case["results"]["p_yes"]
    got = [belief[[s[name] for s in states]].sum() for name in want]
    outside_check("exact inference", case["source"], got, list(want.values()), case["tolerance"], True)


@pytest.mark.parametrize("case", cases("bayes_networks.toml", "p_b"))
def test_the_burglar_alarm(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given = case["inputs"]
    rows = []
    for b, e, a in itertools.product((1, 0), repeat=3):
        on = given["p_a"]["be" if b and e else "b" if b else "e" if e else "none"]
        weight = (given["p_b"] if b else 1 - given["p_b"]) * (given["p_e"] if e else 1 - given["p_e"])
        calls = given["p_j"]["a" if a else "none"] * given["p_m"]["a" if a else "none"]
        rows.append((b, weight * (on if a else 1 - on), calls))
    burglary, prior, calls = (np.array(column) for column in zip(*rows, strict=True))
    got = posterior(prior, np.log(calls))[burglary == 1].sum()
    outside_check("exact inference", case["source"], got, case["results"]["p_burglary"], 1e-9, True)
