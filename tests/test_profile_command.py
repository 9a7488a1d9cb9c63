"""``triage profile`` from the label to a profile that a job can be begun on, without a screen."""

import json
from pathlib import Path

import pytest

from triage import cli
from triage.board.profile import load_profile
from triage.job.bench import Bench


@pytest.fixture
def cube(tmp_path: Path) -> str:
    path = str(tmp_path / "cube.toml")
    label = ["--input", "198-253 V~ 50 Hz", "--output", "5V", "--current", "0.6A"]
    assert cli.main(["profile", "estimate", "ringing_choke_zener", *label, "--seen", "no LED", "-o", path]) == 0
    return path


def test_propose_answers_in_json(capsys):
    label = ["--output", "5V", "--current", "600mA"]
    assert cli.main(["profile", "propose", *label, "--seen", "1 transistor", "--seen", "no optocoupler", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found[0]["family"] == "ringing_choke_zener" and found[0]["chance"] > 0.8


def test_an_estimated_profile_is_in_order_and_reads_back(cube, capsys):
    assert cli.main(["check", cube]) == 0
    assert "profile in order" in capsys.readouterr().out
    board = load_profile(cube)
    assert board.id == "cube" and board.by_role("power LED") is None
    assert all(part.origin == "estimated" for part in board.parts)


def test_values_markings_turns_and_parts_are_entered(cube):
    for words in (
        ["set", cube, "C1", "capacitance", "4u7", "--measured"],
        ["set", cube, "R1", "resistance", "1M 5%"],
        ["set", cube, "Q1", "marking", "MJE13003"],
        ["turns", cube, "T1", "primary=220", "secondary=19", "--core-area", "19"],
        ["add", cube, "mains fuse", "a=mains_l", "b=fused"],
        ["move", cube, "RF1", "a", "fused"],
        ["strike", cube, "R2"],
    ):
        assert cli.main(["profile", *words]) == 0, words
    assert cli.main(["profile", "strike", cube, "CY1"]) == 2, "there is no such part"
    board = load_profile(cube)
    assert board.part("C1").value["capacitance"] == pytest.approx(4.7e-6) and board.part("C1").origin == "measured"
    assert board.part("R1").tolerance == {"resistance": 0.05}
    assert board.part("Q1").type == "MJE13003" and board.part("Q1").ratings["voltage"] == 700.0
    assert board.part("T1").value["primary_turns"] == 220.0
    assert board.part("RF1").pins["a"] == "fused" and board.by_role("mains fuse")
    assert "R2" not in [part.ref for part in board.parts]


def test_a_board_survives_the_file(cube, tmp_path):
    from triage.job.profile_file import profile_text

    for name in ("harbour-handset-charger", "weather-display-adapter", "tide-gauge-brick", "choir-keyboard-supply", cube):
        board = load_profile(name)
        copy = tmp_path / f"{board.id}-copy.toml"
        copy.write_text(profile_text(board, board.id), encoding="utf-8")
        again = load_profile(str(copy))
        assert again.parts == board.parts and again.sides == board.sides and again.label == board.label
        assert again.drawing == board.drawing and again.mains == board.mains


def test_the_board_of_a_job_becomes_a_profile(cube, tmp_path):
    job, saved = tmp_path / "job.toml", tmp_path / "saved.toml"
    Bench.create(cube, job, learn=False).release()
    assert cli.main(["profile", "save", str(job), str(saved)]) == 0
    assert load_profile(str(saved)).parts == load_profile(cube).parts
    assert cli.main(["profile", "save", str(job), str(saved)]) == 2, "nothing is overwritten"


@pytest.mark.parametrize(("words", "says"), [
    (["set", "harbour-handset-charger", "R1", "resistance", "1k"], "shipped profiles are not changed"),
    (["estimate", "perpetuum", "--input", "230 V", "--output", "5", "--current", "1"], "linear_regulated"),
    (["estimate", "linear_regulated", "--input", "mains", "--output", "5", "--current", "1"], "input line"),
    (["propose", "--seen", "smoke"], "one of controller"),
    (["set", "nothing.toml", "R1", "resistance", "1k"], "no such profile"),
    (["turns", "nothing.toml", "T1", "primary"], "of the form name=value"),
])  # fmt: skip
def test_what_cannot_be_done_is_said_in_one_line(words, says, capsys):
    assert cli.main(["profile", *words]) == 2
    error = capsys.readouterr().err
    assert says in error and error.count("\n") == 1


def test_check_covers_the_templates(capsys):
    assert cli.main(["check", "--json"]) == 0
    found = {row["file"]: row["kind"] for row in json.loads(capsys.readouterr().out)}
    assert found["ringing_choke_zener.toml"] == "template" and found["harbour-handset-charger.toml"] == "profile"


def test_a_template_with_a_fault_is_named(tmp_path, capsys):
    path = tmp_path / "mine.toml"
    path.write_text('template = true\nfamily = "x"\n', encoding="utf-8")
    assert cli.main(["check", str(path)]) == 1
    assert "title" in capsys.readouterr().out


def test_roles_can_be_listed(capsys):
    assert cli.main(["profile", "roles"]) == 0
    assert "bulk capacitor" in capsys.readouterr().out


def test_a_proposal_is_told_in_words_with_its_reasons(capsys):
    assert cli.main(["profile", "propose", "--output", "5V", "--current", "0.6A", "--seen", "1 transistor"]) == 0
    head, first, *_ = capsys.readouterr().out.splitlines()
    assert head.split() == ["chance", "family", "what", "it", "is", "because"] and "%" in first and "ringing_choke" in first


def test_estimates_and_roles_and_changes_answer_in_json(cube, tmp_path, capsys):
    def answer(*words):
        assert cli.main(["profile", *words, "--json"]) == 0
        return json.loads(capsys.readouterr().out)

    label = ["--input", "198-253 V~ 50 Hz", "--output", "5V", "--current", "0.6A"]
    capsys.readouterr()
    found = answer("estimate", "ringing_choke_zener", *label)
    assert found["file"] is None and {"ref", "role", "key", "value", "spread", "reason"} <= set(found["estimates"][0])
    assert {"role", "kind", "pins"} == set(answer("roles")[0])
    assert "R1" in answer("set", cube, "R1", "resistance", "1M")["message"]
    checks = answer("turns", cube, "T1", "primary=220", "secondary=19", "--core-area", "19")
    assert checks and all(isinstance(one["fits"], bool) for one in checks)
    assert load_profile(cube).part("T1").value["primary_turns"] == 220.0, "written though only asked in JSON"


def test_a_core_area_beyond_all_cores_is_refused(cube, capsys):
    assert cli.main(["profile", "turns", cube, "T1", "primary=220", "--core-area", "0.01"]) == 2
    assert "1 to 10000 mm2" in capsys.readouterr().err
