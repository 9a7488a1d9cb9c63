"""``triage check``: every kind of file that a job may read, with each fault by file, key, found and expected."""

import json
import shutil
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from triage import cli
from triage.board.profile import load_profile
from triage.data import data_folder
from triage.families.points import fingerprint
from triage.job.corners import kept_keys
from triage.job.expecting import kept_key

BOARD = load_profile("harbour-handset-charger")
POINTS = f"points-{fingerprint(BOARD)}.json"
CORNER = f"{kept_keys(BOARD)[0]}.json"
INRUSH = f"{kept_keys(BOARD)[-1]}.json"
COLD = f"{kept_key(BOARD)}.json"


@pytest.fixture
def kept(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A copy of what is kept of the charger."""
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))
    folder = tmp_path / "kept"
    folder.mkdir()
    for name in (POINTS, CORNER, INRUSH, COLD, COLD.replace(".json", ".npz")):
        shutil.copy(data_folder("profiles") / "kept" / name, folder)
    return folder


def faults_of(capsys: pytest.CaptureFixture[str], *files: Path) -> list[str]:
    status = cli.main(["check", *map(str, files), "--json"])
    found = json.loads(capsys.readouterr().out)
    faults = [fault for one in found for fault in one["faults"]]
    assert status == (1 if faults else 0)
    return faults


def test_kept_answers_as_shipped_are_in_order(kept: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert faults_of(capsys, *sorted(kept.iterdir())) == []


def _set(*keys: Any) -> Callable[[Any], Any]:
    """Puts the last of the arguments under the keys before it."""

    def change(content: Any) -> Any:
        place = content
        for key in keys[:-2]:
            place = place[key]
        place[keys[-2]] = keys[-1]
        return content

    return change


@pytest.mark.parametrize(
    ("name", "change", "wanted"),
    [
        (POINTS, _set("fingerprint", "0" * 16), ("fingerprint", "0000 ", "found", "expected")),
        (POINTS, _set("points", []), ("points: list found", "expected a table")),
        (POINTS, _set("points", "@half", {"readings": [1.0]}), ("@half", "expected readings of every probe")),
        (POINTS, _set("points", "R99.open@half", {}), ("R99.open@half", "'R99' found", "expected a part of")),
        (POINTS, _set("points", "R1.open@twice", {}), ("R1.open@twice", "'twice' found", "expected one of noload")),
        (POINTS, _set("points", "@full", "breaks", "x"), ("@full", "expected")),
        (CORNER, _set("statistics", [[1.0]]), ("statistics", "expected rows of nine")),
        (CORNER, _set("rows", [["R1", "", 10**6]]), ("statistics", "expected")),
        (INRUSH, _set("RF1", -1.0), ("RF1: -1.0 found", "expected a figure from 0 up")),
        (COLD, lambda content: content[1:], ("readings: shape", "expected")),
        (COLD, lambda content: {"a": 1}, ("names: expected a list",)),
    ],
)
def test_each_fault_of_a_kept_answer_is_named(
    kept: Path, capsys: pytest.CaptureFixture[str], name: str, change: Callable[[Any], Any], wanted: tuple[str, ...]
) -> None:
    path = kept / name
    path.write_text(json.dumps(change(json.loads(path.read_text()))))
    faults = " | ".join(faults_of(capsys, path))
    for piece in wanted:
        assert piece.strip() in faults, faults


def test_damaged_stale_and_strange_kept_files_are_named(kept: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (kept / CORNER).rename(kept / "corner-00000000000000000000.json")
    assert "no profile asks for it" in faults_of(capsys, kept / "corner-00000000000000000000.json")[0]
    (kept / INRUSH).write_bytes(b"[" * 100_000)
    assert "expected JSON" in faults_of(capsys, kept / INRUSH)[0]
    (kept / "odd.json").write_text("{}")
    assert "expected one of points-" in faults_of(capsys, kept / "odd.json")[0]
    arrays = kept / COLD.replace(".json", ".npz")
    np.savez(arrays, answer=np.array([{"code": 1}], dtype=object))
    assert "missing or damaged" in faults_of(capsys, kept / COLD)[0]


@pytest.mark.parametrize(
    ("name", "text", "wanted"),
    [
        ("drawers.toml", "[[item]]\ntype = '1N4007'\nquantity = -2", "item 1, quantity: -2; expected a whole number"),
        ("drawers.toml", "[[item]]\ntype = 'no such 7'", "'no such 7' found, expected a type of the catalog"),
        ("drawers.csv", "part,number\n1,2\n", "no column type; expected columns type"),
        ("instruments.toml", "[[instrument]]\nname='x'\n[[instrument.function]]\nkey = 'smell'", "key 'smell': expected one of"),
        ("shop.toml", "[shop]\nrate = 'much'", "rate: 'much' found, expected a figure from 0 up"),
        ("shop.toml", "[[supplier]]\nfile = 'gone.csv'", "gone.csv: cannot be read"),
        ("list.csv", "a;b\n1;2\n", "columns a, b; expected a column of type numbers"),
        ("diodes.toml", "class = 'schottky'\n", "diodes.toml"),
    ],
)
def test_each_fault_of_the_shops_own_files_is_named(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], name: str, text: str, wanted: str
) -> None:
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path))
    folder = tmp_path / "triage"
    folder.mkdir()
    (folder / name).write_text(text, encoding="utf-8")
    faults = faults_of(capsys, folder / name)
    assert len(faults) >= 1 and wanted in " | ".join(faults)
    if name.startswith(("drawers", "instruments", "shop")):
        assert any(wanted in fault for fault in faults_of(capsys)), "found without being named"
