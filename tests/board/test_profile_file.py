"""Each fault of a profile file is named by its place, with what was found and what was expected; all of them in one answer."""

import copy
import tomllib
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import tomli_w

from triage.board.profile import board_to_dict, load_profile
from triage.data import data_folder
from triage.errors import TriageError

SOUND = tomllib.loads((data_folder("profiles") / "harbour-handset-charger.toml").read_text("utf-8"))


def part(content: dict[str, Any], ref: str) -> dict[str, Any]:
    """A part of the file."""
    return next(row for row in content["part"] if row["ref"] == ref)


def refusal(folder: Path, change: Callable[[dict[str, Any]], object]) -> str:
    """What is said of the sound file after a change."""
    content = copy.deepcopy(SOUND)
    change(content)
    path = folder / "cube.toml"
    path.write_text(tomli_w.dumps(content), "utf-8")
    with pytest.raises(TriageError) as told:
        load_profile(str(path))
    return str(told.value)


@pytest.mark.parametrize(("change", "said"), [
    (lambda c: part(c, "R1").update(kind="rezistor"), "part R1 kind: found 'rezistor'"),
    (lambda c: part(c, "D1").update(pins={"anode": "rect"}), "part D1 pins"),
    (lambda c: part(c, "R1").update(value={}), "resistance among them"),
    (lambda c: part(c, "R1").update(origin="guessed"), "part R1 origin: found 'guessed'"),
    (lambda c: part(c, "R1")["value"].update(colour=3), "part R1 value colour"),
    (lambda c: part(c, "R1").update(spread={"colour": 2.0}), "part R1 spread colour"),
    (lambda c: part(c, "R1").update(spread={"resistance": 0.5}), "part R1 spread resistance"),
    (lambda c: part(c, "R1").update(fault_modes=["bent"]), "part R1 fault_modes"),
    (lambda c: part(c, "R1").update(ratings={"speed": 1}), "part R1 ratings speed"),
    (lambda c: c["part"].append(dict(part(c, "R1"))), "part ref: found 'R1'"),
    (lambda c: c["ground"].update(primary="out"), "ground primary: found 'out'"),
    (lambda c: c["ground"].pop("secondary"), "a node for the side secondary"),
    (lambda c: c["sides"].update(primary=[*c["sides"]["primary"], "nowhere"]), "sides primary: found 'nowhere'"),
    (lambda c: c["sides"].update(primary="bulk"), "sides primary"),
    (lambda c: c["mains"].update(low="300 V"), "low <= nominal <= high"),
    (lambda c: c["mains"].update(nominal="230 ohm"), "mains nominal"),
])
def test_each_fault_is_named_by_its_place(tmp_path: Path, change: Callable[[dict[str, Any]], object], said: str) -> None:
    assert said in refusal(tmp_path, change)


def test_all_faults_are_told_together(tmp_path: Path) -> None:
    def several(content: dict[str, Any]) -> None:
        part(content, "R1")["kind"] = "rezistor"
        part(content, "D1")["origin"] = "guessed"
        content["ground"]["primary"] = "out"

    told = refusal(tmp_path, several)
    assert all(piece in told for piece in ("part R1 kind", "part D1 origin", "ground primary"))


def test_a_year_on_the_label_survives_the_file(tmp_path: Path) -> None:
    content = copy.deepcopy(SOUND)
    content["label"]["marked_year"] = 2009
    path = tmp_path / "cube.toml"
    path.write_text(tomli_w.dumps(content), "utf-8")
    board = load_profile(str(path))
    assert board.label.marked_year == 2009 and board_to_dict(board)["label"]["marked_year"] == 2009
