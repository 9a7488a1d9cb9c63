"""Runs published worked examples through public functions.

A test file names its subject and gives one small function for each example: inputs in, results out under the
    keys of the data file. Keys that end in ``exact`` tables are the same quantities of an independently
    solved waveform; a solution gives them with the prefix ``exact_``. Whatever is left out must stand in
    ``LEFT_OUT`` with the reason.
"""

import tomllib
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import pytest

from tests.reference.conftest import OutsideChecks

DATA = Path(__file__).parent / "data"

EXACT_TOLERANCE = 0.0005
"""Nine-digit values of an independent solution, ours solved to 1e-9: leaves room for its time stepping."""

Solution = Callable[[Mapping[str, float]], dict[str, Any]]


def load(subject: str) -> list[dict[str, Any]]:
    """All examples of a subject."""
    return tomllib.loads((DATA / f"worked_{subject}.toml").read_text("utf-8"))["example"]


def examples(*subjects: str) -> list[Any]:
    """(subject, example) pairs for parametrize, with readable ids."""
    return [pytest.param(subject, example, id=example["id"]) for subject in subjects for example in load(subject)]


def run(outside_check: OutsideChecks, subject: str, example: Mapping[str, Any],
        solutions: Mapping[str, Solution], left_out: Mapping[str, str]) -> None:
    """Solve one example and check every key that has a published result."""
    name = example["id"]
    if name in left_out:
        assert name not in solutions, f"{name} is left out and solved"
        return
    got = solutions[name](example["inputs"])
    tolerances = example.get("tolerance_of", {})
    for key, expected in example["results"].items():
        if f"{name}.{key}" in left_out:
            assert key not in got, f"{name}.{key} is left out and solved"
            continue
        outside_check(subject.replace("_", " "), example["source"], got[key], expected,
                      tolerances.get(key, example["tolerance"]), what=f"{name}, {key}")
    for key, expected in example.get("exact", {}).items():
        if f"exact_{key}" in got:
            outside_check(f"{subject.replace('_', ' ')}, exact", "computed by an independent method",
                          got[f"exact_{key}"], expected, EXACT_TOLERANCE, what=f"{name}, exact {key}")
    unknown = {key for key in got if not key.startswith("exact_")} - set(example["results"])
    assert not unknown, f"{name}: no published result for {sorted(unknown)}"
