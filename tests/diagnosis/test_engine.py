"""The engine on a board of three parts: belief, suggestion, verdict, skips, hunches, repairs."""

import itertools
import math
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from tests.diagnosis import small_board as sb
from triage.board.evidence import Reading, Sign, Symptom
from triage.board.probe import Probe
from triage.diagnosis.after_repair import Fitted
from triage.diagnosis.engine import Job
from triage.diagnosis.settings import Settings

D = sb.diagnosis()
DEAD = Symptom("dead", "full")


def everything(probe: Probe) -> bool:
    return True


def cold_only(probe: Probe) -> bool:
    return not probe.live


def job(*entries: object, **rest: object) -> Job:
    return Job(tuple(entries), **rest)  # type: ignore[arg-type]


def test_without_evidence_the_belief_is_the_prior() -> None:
    assert D.belief(job()) == pytest.approx(sb.CHANCE, abs=1e-15)


def test_the_belief_is_bayes_by_hand() -> None:
    """Posterior = prior x likelihoods, normalised, with the same cells taken one by one."""
    readings = [Reading(sb.OHMS_R1, 1.03e3), Reading(sb.DIODE_D1, 0.61)]
    weight = sb.CHANCE.copy()
    for reading in readings:
        column = D.expectations.column(reading.probe)
        assert column is not None
        weight *= D.model.cell_table(column)[:, int(D.model.axes[column].index(reading.value))]
    assert D.belief(job(*readings)) == pytest.approx(weight / weight.sum(), abs=1e-12)


def test_the_order_of_entries_changes_no_bit() -> None:
    entries = [
        DEAD,
        Reading(sb.OHMS_R1, 1.02e3),
        Reading(sb.DIODE_D1, 0.004),
        Sign("sound"),
        Sign("bulging", "C1"),
    ]
    beliefs = [D.belief(job(*order)).tobytes() for order in itertools.permutations(entries)]
    assert len(set(beliefs)) == 1


def test_two_processes_believe_the_same_bits() -> None:
    code = (
        "from tests.diagnosis.test_engine import *;"
        "print(D.belief(job(DEAD, Reading(sb.OHMS_R1, 1.02e3), Sign('hot', 'D1'))).tobytes().hex())"
    )
    root = Path(__file__).resolve().parents[2]
    texts = {
        subprocess.run([sys.executable, "-c", code], cwd=root, capture_output=True, text=True, check=True).stdout
        for _ in range(2)
    }
    assert len(texts) == 1 and texts.pop().strip()


def test_a_short_is_found() -> None:
    verdict = D.verdict(job(DEAD, Reading(sb.OHMS_C1, 0.1), Reading(sb.ESR_C1, 0.02)))
    assert verdict.status == "found" and verdict.repair == ("C1",) and verdict.probability > 0.95
    assert verdict.suspect is not None and (verdict.suspect.ref, verdict.suspect.mode) == ("C1", "short")


def test_collateral_is_part_of_the_repair() -> None:
    readings = (Reading(sb.OHMS_R1, math.inf), Reading(sb.DIODE_D1, 0.002), Reading(sb.OHMS_C1, 1.0e6))
    verdict = D.verdict(job(Symptom("fuse gone"), *readings))
    assert verdict.repair == ("D1", "R1") and verdict.suspect is not None
    assert verdict.suspect.root == (sb.D1_SHORT,) and verdict.suspect.collateral == (sb.R1_OPEN,)


def test_suspects_add_up_and_group_by_root() -> None:
    found = D.suspects(job(DEAD))
    assert sum(s.probability for s in found) == pytest.approx(1.0, abs=1e-12)
    assert [s.root for s in found].count((sb.D1_SHORT,)) == 1
    assert [s.probability for s in found] == sorted((s.probability for s in found), reverse=True)


def test_a_sound_board_is_declared_only_after_looking() -> None:
    assert D.verdict(job(Symptom("normal"))).status == "open"
    readings = (
        Reading(sb.OHMS_R1, 1e3),
        Reading(sb.OHMS_C1, 1e6),
        Reading(sb.DIODE_D1, 0.6),
        Reading(sb.ESR_C1, 1.0),
        Reading(sb.VOLTS, 12.0),
    )
    verdict = D.verdict(job(Sign("broken cord"), *readings))
    assert verdict.status == "no part fault" and verdict.repair == () and verdict.suspect is not None
    assert (verdict.suspect.ref, verdict.suspect.mode) == ("", "no part fault")


def test_no_live_reading_while_a_cold_one_is_worth_it() -> None:
    suggestion = D.suggest(job(DEAD), everything)
    assert suggestion is not None and not suggestion.probe.live and suggestion.hazard == ""


def test_the_gate_is_obeyed_and_the_verdict_waits_for_it() -> None:
    cold = frozenset(p for p in sb.PROBES if not p.live)
    stuck = job(Symptom("output low"), skipped=cold)
    assert D.suggest(stuck, cold_only) is None and D.verdict(stuck).status == "open"
    suggestion = D.suggest(stuck, everything)
    assert suggestion is not None and suggestion.probe == sb.VOLTS and suggestion.hazard


def test_nothing_is_suggested_twice_or_after_a_skip() -> None:
    first = D.suggest(job(DEAD), everything)
    assert first is not None
    for other in (job(DEAD, skipped=frozenset({first.probe})), job(DEAD, Reading(first.probe, 1e3))):
        second = D.suggest(other, everything)
        assert second is None or second.probe != first.probe


def test_a_meter_that_is_not_there_is_never_asked_for() -> None:
    poor = sb.diagnosis(costs=replace(D.costs, owned=frozenset({"multimeter"})))
    state, seen = job(DEAD), []
    while (suggestion := poor.suggest(state, everything)) is not None and len(seen) < 9:
        seen.append(suggestion.probe)
        state = replace(state, skipped=state.skipped | {suggestion.probe})
    assert seen and sb.ESR_C1 not in seen


def test_outcomes_are_at_most_three_and_add_up() -> None:
    suggestion = D.suggest(job(DEAD), everything)
    assert suggestion is not None and 1 < len(suggestion.outcomes) <= 3
    assert sum(o.probability for o in suggestion.outcomes) == pytest.approx(1.0, abs=1e-5)
    assert suggestion.reason.endswith(".") and "\n" not in suggestion.reason
    edges = [(o.low, o.high) for o in suggestion.outcomes]
    assert all(a[1] == b[0] for a, b in itertools.pairwise(edges))


def test_a_hunch_shifts_the_odds_by_its_factor_and_counts_once() -> None:
    plain, hunch = D.belief(job(DEAD)), D.belief(job(DEAD, hunches=frozenset({"C1"})))
    factor = Settings.load().hunch_factor
    assert (hunch[3] / hunch[0]) / (plain[3] / plain[0]) == pytest.approx(factor, rel=1e-12)
    assert hunch[1] / hunch[0] == pytest.approx(plain[1] / plain[0], rel=1e-12)


def test_a_slip_asks_to_be_measured_again_and_is_then_forgiven() -> None:
    entries = (DEAD, Reading(sb.OHMS_C1, 0.1), Reading(sb.ESR_C1, 0.02), Reading(sb.DIODE_D1, 2.1))
    again = D.suggest(job(*entries), everything)
    assert again is not None and again.again and again.probe == sb.DIODE_D1 and "again" in again.reason
    assert D.verdict(job(*entries)).status == "open"
    after = job(*entries, Reading(sb.DIODE_D1, 0.6))
    assert D.suggest(after, everything) is None and D.verdict(after).status == "found"


def test_what_stays_impossible_does_not_fit() -> None:
    entries = (
        DEAD,
        Reading(sb.OHMS_C1, 0.1),
        Reading(sb.ESR_C1, 0.02),
        Reading(sb.DIODE_D1, 2.1),
        Reading(sb.DIODE_D1, 2.12),
    )
    verdict = D.verdict(job(*entries))
    assert verdict.status == "does not fit" and str(sb.DIODE_D1) in verdict.odd


def test_likelihood_ratios_multiply_to_the_posterior_odds() -> None:
    """Weight of evidence: prior odds x ratios = posterior odds (Good, 1950)."""
    entries = job(DEAD, Reading(sb.OHMS_C1, 0.1), Reading(sb.DIODE_D1, 0.6))
    belief, weighed = D.belief(entries), D.evidence(entries)
    members = np.array([False, False, False, True, False, False])
    before = sb.CHANCE[members].sum() / sb.CHANCE[~members].sum()
    after = belief[members].sum() / belief[~members].sum()
    assert before * math.prod(w.ratio for w in weighed) == pytest.approx(after, rel=1e-9)
    assert max(weighed, key=lambda w: w.ratio).entry == entries.entries[1]


def test_after_a_repair_that_did_not_cure_the_rest_is_suspected() -> None:
    before = (DEAD, Reading(sb.OHMS_R1, math.inf), Reading(sb.DIODE_D1, 0.3))
    belief = D.belief(job(*before, Fitted(frozenset({"R1"}))))
    names = dict(zip(map(str, sb.HYPOTHESES), belief, strict=True))
    assert names["R1.open"] < 0.05 and names["R1.high"] < 0.05
    assert names["D1.short"] + names["D1.short + R1.open"] > 0.5


def test_readings_may_be_taken_again_after_a_repair() -> None:
    state = job(DEAD, Reading(sb.OHMS_R1, math.inf), Fitted(frozenset({"R1"})), skipped=frozenset())
    seen = []
    while (suggestion := D.suggest(state, everything)) is not None and len(seen) < 5:
        seen.append(suggestion.probe)
        state = replace(state, skipped=state.skipped | {suggestion.probe})
    assert sb.OHMS_R1 in seen


def test_a_reading_the_board_does_not_know_says_nothing() -> None:
    assert (D.belief(job(Reading(Probe("ohms", "x", "y"), 5.0))) == D.belief(job())).all()


def test_the_careful_way_also_ends_right() -> None:
    state, truth = job(DEAD), dict(zip(sb.PROBES, sb.MEANS[3], strict=True))
    for _ in range(6):
        suggestion = D.suggest(state, everything, careful=True)
        if suggestion is None:
            break
        state = replace(state, entries=(*state.entries, Reading(suggestion.probe, float(truth[suggestion.probe]))))
    assert D.verdict(state, careful=True).repair == ("C1",)


def test_expected_values_name_the_leading_suspects() -> None:
    shown = {e.suspect: e.value for e in D.expected(job(DEAD, Reading(sb.OHMS_C1, 0.1)), sb.DIODE_D1)}
    assert shown["C1 short"] == pytest.approx(0.6, rel=0.05)


def test_repairs_that_no_reading_separates_are_named_as_rivals() -> None:
    every = frozenset(sb.PROBES)
    verdict = D.verdict(job(DEAD, skipped=every))
    assert verdict.exhausted and verdict.rivals
    chances = [chance for _, chance in verdict.rivals]
    assert chances == sorted(chances, reverse=True) and all(0.05 <= c <= verdict.probability for c in chances)
    assert verdict.repair not in [refs for refs, _ in verdict.rivals]


def test_the_repair_plan_goes_by_chance_per_minute() -> None:
    plan = D.repair_plan(job(DEAD))
    worth = [step.probability / step.minutes for step in plan]
    assert worth == sorted(worth, reverse=True) and all(step.minutes > 0 for step in plan)


def test_what_is_left_meets_every_odd_reading() -> None:
    left = D.what_is_left(job(Reading(sb.OHMS_R1, 9e3), Reading(sb.OHMS_C1, 40.0)))
    assert left and all({"R1", "C1"} & parts for parts in left)
    assert D.what_is_left(job(Reading(sb.OHMS_R1, 1e3))) == []


def test_the_suspect_is_confirmed_at_the_part_itself() -> None:
    """With the pins known, a verdict waits for one reading across the part."""
    pins = {"R1": frozenset("ab"), "C1": frozenset("bg"), "D1": frozenset("bc")}
    careful = sb.diagnosis(pins=pins)
    entries = (DEAD, Reading(sb.VOLTS, 0.0), Reading(sb.OHMS_R1, 1e3), Reading(sb.DIODE_D1, 0.6))
    step = careful.suggest(job(*entries), everything)
    assert step is not None and {step.probe.plus, step.probe.minus} == {"b", "g"}
    assert careful.verdict(job(*entries)).status == "open"
    assert careful.verdict(job(*entries, Reading(step.probe, 0.0))).repair == ("C1",)


def test_a_confirmation_is_asked_for_once_and_can_be_skipped() -> None:
    pins = {"R1": frozenset("ab"), "C1": frozenset("bg"), "D1": frozenset("bc")}
    hunch = frozenset({"D1"})
    sure = sb.diagnosis(pins=pins, settings=replace(Settings.load(), stop_target=0.3, hunch_factor=50.0))
    step = sure.suggest(job(DEAD, hunches=hunch), everything)
    assert step is not None and step.probe == sb.DIODE_D1 and step.reason.startswith("Confirm D1 short")
    state, asked = job(DEAD, hunches=hunch), []
    while (step := sure.suggest(state, everything)) is not None:
        asked.append(step.probe)
        state = replace(state, skipped=state.skipped | {step.probe})
    assert asked.count(sb.DIODE_D1) == 1 and len(asked) == len(set(asked)) and sure.verdict(state).status == "found"


def test_a_confirmation_says_what_confirms_and_what_contradicts() -> None:
    pins = {"R1": frozenset("ab"), "C1": frozenset("bg"), "D1": frozenset("bc")}
    sure = sb.diagnosis(pins=pins, settings=replace(Settings.load(), stop_target=0.3, hunch_factor=50.0))
    step = sure.suggest(job(DEAD, hunches=frozenset({"D1"})), everything)
    assert step is not None
    low, high = step.outcomes
    assert low.says == "confirms D1 short" and low.high < 0.6 <= high.high
    assert high.says.startswith("contradicts D1 short")
    assert low.probability + high.probability == pytest.approx(1.0, abs=1e-5) and low.probability > high.probability
