"""The figures copied into tests/reference/data are those of the full reference set, where that lies beside the checkout."""

import tomllib
from pathlib import Path
from typing import Any

import pytest

from tests.reference.worked import DATA

WORKED = sorted(path.name.removeprefix("worked_") for path in DATA.glob("worked_*.toml"))


def _read(path: Path) -> dict[str, Any]:
    return tomllib.loads(path.read_text("utf-8"))


@pytest.mark.parametrize("name", WORKED)
def test_worked_examples_are_complete_and_unchanged(shared: Path, name: str) -> None:
    full = {e["id"]: e for e in _read(shared / "reference/worked_examples" / name)["example"]}
    ours = {e["id"]: e for e in _read(DATA / f"worked_{name}")["example"]}
    assert ours.keys() == full.keys()
    for key, example in ours.items():
        assert example["inputs"] == full[key]["inputs"] and example["results"] == full[key]["results"], key
        assert example["tolerance"] == full[key]["tol_rel"], key
        assert example.get("tolerance_of", {}) == full[key].get("tol_rel_by_key", {}), key


@pytest.mark.parametrize("ours, full, lists", [
    ("handbook_failure_rate", "01_failure_rates_mil_hdbk_217f", {"check_table": "printed", "generic_rate": "printed"}),
    ("handbook_derating", "03_derating", {"smps_practice": "limits", "mil_std_975m": "limits", "ecss": "limits"}),
    ("handbook_life", "04_electrolytic_life", {"worked_number": "factors"}),
])
def test_handbook_figures_are_unchanged(shared: Path, ours: str, full: str, lists: dict[str, str]) -> None:
    mine, theirs = _read(DATA / f"{ours}.toml"), _read(shared / f"reference/handbook/{full}.toml")
    for name, key in lists.items():
        assert [row[key] for row in mine[name]] == [row[key] for row in theirs[name]], name


def test_every_example_has_a_source_and_says_how_sure_it_is() -> None:
    for name in WORKED:
        for example in _read(DATA / f"worked_{name}")["example"]:
            assert example["source"] and example["confidence"] in {"verified", "derived", "from memory"}, example["id"]
            assert 0.0 < example["tolerance"] <= 0.05, example["id"]
