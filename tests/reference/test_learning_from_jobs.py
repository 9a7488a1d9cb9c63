"""Closed jobs of a folder against published examples of conjugate updates, through the job room.

Sources: see data/diagnosis/counts.toml. What the handbook is worth is set as in the example.
"""

import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from triage.board.fault import Fault
from triage.diagnosis.learning import Gamma, Trust
from triage.job.learning import Experience

PUBLISHED = tomllib.loads((Path(__file__).parent / "data/diagnosis/counts.toml").read_text("utf-8"))["case"]
ONE, OTHER = Fault("RF1", "open"), Fault("C1", "short")
SUBJECT = "learning from jobs, by the job room"


@pytest.mark.parametrize("case", [case for case in PUBLISHED if "prior_shape" in case["inputs"]], ids=lambda case: case["name"])
def test_jobs_of_a_family_move_the_rate_as_published(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """A fault that is half of all failures by the handbook is expected once in two jobs: so many are two units of exposure."""
    given = case["inputs"]
    trust = Trust(Gamma(given["prior_shape"], given["prior_rate"]))
    events, exposure, means = (np.atleast_1d(one) for one in (given["events"], given["exposure"], case["results"]["post_mean"]))
    for found, time, mean in zip(events, exposure, means, strict=True):
        jobs = Experience(family_jobs=int(2 * time), found=(ONE,) * int(found))
        got = jobs.factors({ONE: 0.5, OTHER: 0.5}, trust)[ONE]
        outside_check(SUBJECT, case["source"], got, mean, case["tolerance"], True)


@pytest.mark.parametrize("case", [case for case in PUBLISHED if "counts" in case["inputs"]], ids=lambda case: case["name"])
def test_jobs_of_a_profile_move_the_shares_as_published(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    """A family that says what the handbook says leaves the shares of the profile to its own jobs."""
    prior, counts = case["inputs"]["prior"], case["inputs"]["counts"]
    means = case["results"].get("mean", case["results"].get("posterior_mean"))
    if isinstance(prior, list):
        prior, counts, means = (dict(zip(("A1", "A2", "A3"), some, strict=True)) for some in (prior, counts, means))
    total = sum(prior.values())
    handbook = {Fault(ref, "open"): share / total for ref, share in prior.items()}
    trust = Trust(Gamma(1e15, 1e15), case["inputs"].get("strength", total))
    found = tuple(Fault(ref, "open") for ref, count in counts.items() for _ in range(count))
    factors = Experience(1, len(found), (), found).factors(handbook, trust)
    got = [factors[fault] * share for fault, share in handbook.items()]
    outside_check(SUBJECT, case["source"], got, [means[fault.ref] for fault in handbook], 1e-9, True)
