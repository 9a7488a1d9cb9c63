"""Closed jobs teach the next one, within bounds, and never change a job that is under way."""

import tomllib
from pathlib import Path

import pytest

from tests.job.stand_in import PROFILE, Clock, StandIn
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.errors import JobError
from triage.job.bench import Bench
from triage.job.learning import MOST_JOBS, NONE, Experience, experience_from_dict, gather
from triage.job.summary import Summary

BOARD = load_profile(PROFILE)
RF1, C1 = Fault("RF1", "open"), Fault("C1", "short")


def closed(fault: str = "RF1.open", role: str = "", cured: bool = True, profile: str = BOARD.id) -> Summary:
    return Summary("x", profile=profile, family=BOARD.family, stage="closed", fault=fault, role=role, cured=cured)


def test_jobs_of_the_profile_move_its_shares_by_the_published_method() -> None:
    """Gelman et al., Bayesian Data Analysis, 3rd ed., section 3.4: mean share (alpha + count) / (sum of alpha + counts).

    Reasoned from it: ten jobs here, six of them RF1, expected half. The family says RF1 to C1 as 8 to 6 (section 2.6, strength
    2), so ten jobs' worth of that are 40/7 and 30/7.
    """
    experience = gather([closed()] * 6 + [closed("C1.short")] * 4, BOARD)
    factor = experience.factors({RF1: 0.5, C1: 0.5})[RF1]
    assert factor == pytest.approx((40 / 7 + 6) / 20 / 0.5)


def test_a_repair_that_came_back_speaks_against_its_verdict() -> None:
    shares = {RF1: 0.5, C1: 0.5}
    held = gather([closed()], BOARD).factors(shares)
    back = gather([closed(cured=False)], BOARD).factors(shares)
    assert back[RF1] < 1.0 < held[RF1]
    assert held[C1] < 1.0 < back[C1], "somebody else did it"


def test_jobs_of_other_profiles_count_by_role() -> None:
    other = closed("R7.open", "fusible input resistor", profile="other-adapter")
    experience = gather([other, closed("R9.open", "no such role", profile="other-adapter")], BOARD)
    assert experience == Experience(2, 0, (RF1,), ())


def test_other_families_do_not_count() -> None:
    assert gather([Summary("x", profile=BOARD.id, family="linear", fault="RF1.open", cured=True)], BOARD) == NONE


def test_closed_jobs_are_worth_a_stated_number_at_most() -> None:
    experience = gather([closed()] * (MOST_JOBS + 50), BOARD)
    assert experience.family_jobs == experience.profile_jobs == len(experience.found) == MOST_JOBS


def test_the_counts_survive_the_job_file() -> None:
    experience = gather([closed(), closed("C1.short", cured=False)], BOARD)
    assert experience_from_dict(experience.to_dict(), "job") == experience


@pytest.mark.parametrize(
    "found",
    [3, {"family_jobs": -1}, {"family_jobs": True}, {"profile_jobs": 10**9}, {"found": "R1.open"}, {"found": ["R1"]},
     {"found_here": [1]}],
)  # fmt: skip
def test_counts_that_make_no_sense_are_refused_by_key(found: object) -> None:
    with pytest.raises(JobError, match="closed_jobs"):
        experience_from_dict(found, "job")


def run_and_close(path: Path) -> None:
    """A whole job in which RF1 is found open, replaced and works; closed with the retest not done."""
    with Bench.create(PROFILE, path, StandIn(), Clock()) as bench:
        bench.prepare()
        bench.complain("dead", "dead", "full")
        bench.acknowledge("all")
        bench.see("sound")
        bench.read("volts_dc", "bulk", "pgnd", "cold", "0")
        bench.read("ohms", "mains_l", "rect", "cold", "OL")
        bench.fit("RF1", "10 ohm 500 V")
        bench.repaired("works")
        bench.close("handed on, insulation tested elsewhere")


def test_the_next_job_of_the_folder_has_learnt_and_a_running_one_has_not(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))
    jobs = tmp_path / "jobs"
    jobs.mkdir()
    running = Bench.create(PROFILE, jobs / "running.toml", StandIn(), Clock())
    running.prepare()
    before = running.view().suspects
    run_and_close(jobs / "first.toml")
    entry = tomllib.loads((jobs / "first.toml").read_text())["entry"][-1]
    assert (entry["fault"], entry["role"], entry["cured"]) == ("RF1.open", "fusible input resistor", True)
    running.prepare()
    assert running.view().suspects == before
    chance = {}
    for name, learn in (("taught", True), ("untaught", False)):
        bench = Bench.create(PROFILE, jobs / f"{name}.toml", StandIn(), Clock(), learn=learn)
        bench.prepare()
        chance[name] = next(one.probability for one in bench.view().suspects if one.ref == "RF1")
        assert ("own closed jobs" in bench.why()["RF1", "open"]) is learn
    assert chance["taught"] > chance["untaught"]
    assert chance["untaught"] == next(one.probability for one in before if one.ref == "RF1")
