"""Closed jobs of a folder against published examples of the gamma and Poisson update, through the job room.

Sources: see data/diagnosis/counts.toml. A rate has the unit one likes: the published prior Gamma(a, b) becomes the one that the
job room holds for a profile, Gamma(s m, s), when its exposure is counted in units of b / s; m is what the jobs of the family say,
brought to a / s by jobs in which the fault was looked for and not found.
"""

import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.reference.conftest import OutsideChecks
from triage.board.fault import Fault
from triage.diagnosis.learning import POOLED_STRENGTH, PROFILE_STRENGTH
from triage.job.learning import Experience

PUBLISHED = tomllib.loads((Path(__file__).parent / "data/diagnosis/counts.toml").read_text("utf-8"))["case"]
ONE, OTHER, SHARE = Fault("RF1", "open"), Fault("C1", "short"), 1.0 / 3.0
"""The fault that stands for the counted event; a third of all failures by the handbook, so that exposures are whole jobs."""


@pytest.mark.parametrize("case", [case for case in PUBLISHED if "prior_shape" in case["inputs"]], ids=lambda case: case["name"])
def test_jobs_of_a_profile_move_the_rate_as_published(case: dict[str, Any], outside_check: OutsideChecks) -> None:
    given = case["inputs"]
    scale = PROFILE_STRENGTH / given["prior_rate"]
    without = POOLED_STRENGTH * (PROFILE_STRENGTH / given["prior_shape"] - 1.0) / SHARE
    events, exposure, means = (np.atleast_1d(one) for one in (given["events"], given["exposure"], case["results"]["post_mean"]))
    for found, time, mean in zip(events, exposure, means, strict=True):
        jobs = Experience(round(without), round(scale * time / SHARE), (), (ONE,) * int(found))
        assert jobs.family_jobs == pytest.approx(without) and jobs.profile_jobs == pytest.approx(scale * time / SHARE)
        got = scale * jobs.factors({ONE: SHARE, OTHER: 1.0 - SHARE})[ONE]
        outside_check("learning from jobs, by the job room", case["source"], got, mean, case["tolerance"], True)
