"""The command line: every step without a screen, exit codes, JSON that a script can work with, a quick
start."""

import csv
import io
import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from tests.job.stand_in import PROFILE, StandIn
from triage import cli
from triage.commands.adding import KINDS, parse_entry
from triage.errors import EntryError
from triage.job.views import ReadingExpected


@pytest.fixture(autouse=True)
def own_folders(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))
    monkeypatch.delenv("TRIAGE_JOBS", raising=False)


@pytest.fixture
def stand_in(monkeypatch: pytest.MonkeyPatch) -> None:
    """The commands with the stand-in for the computing rooms."""
    monkeypatch.setattr("triage.job.wiring.Wiring", StandIn)


@pytest.fixture
def job(tmp_path: Path, stand_in: None, capsys: pytest.CaptureFixture[str]) -> str:
    path = str(tmp_path / "cube.toml")
    assert cli.main(["new", PROFILE, "-o", path]) == 0
    capsys.readouterr()
    return path


class Terminal:
    """Runs commands in this process and gives back what they printed."""

    def __init__(self, capsys: pytest.CaptureFixture[str]) -> None:
        self._capsys = capsys

    def __call__(self, *words: str, status: int = 0) -> str:
        assert cli.main(list(words)) == status, self._capsys.readouterr().err
        return self._capsys.readouterr().out

    def json(self, *words: str) -> Any:
        return json.loads(self(*words, "--json"), parse_constant=self._refuse)

    def refused(self, *words: str) -> str:
        assert cli.main(list(words)) == 2
        shown = self._capsys.readouterr()
        assert shown.out == "" and shown.err.count("\n") == 1 and shown.err.startswith("triage: ")
        return shown.err

    @staticmethod
    def _refuse(word: str) -> None:
        raise AssertionError(f"{word} is no JSON")


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Terminal:
    return Terminal(capsys)


def test_a_script_plays_the_technician(job: str, run: Terminal) -> None:
    """Ask, look the reading up, add it, ask again: from the complaint to the part."""
    truth = {"ohms mains_l rect": "OL", "volts_dc bulk pgnd": "0.2"}
    run("add", job, "complaint", "dead", "full")
    run("add", job, "ack", "all")
    run("add", job, "sign", "sound")
    for _ in range(20):
        reading = run.json("next", job)
        if reading["function"] is None:
            break
        assert {"function", "plus", "minus", "condition", "minutes", "reason", "outcomes"} <= set(reading)
        assert reading["condition"] == "cold"
        name = f"{reading['function']} {reading['plus']} {reading['minus']}"
        value = truth.get(name, "0.55" if reading["function"] == "diode" else "1.2M")
        run("add", job, "reading", *name.split(), reading["condition"], value)
    assert reading["verdict"]["status"] == "found"
    assert reading["verdict"]["repair"] == ["RF1"]
    suspects = run.json("suspects", job)
    assert {"ref", "mode", "probability", "collateral"} <= set(suspects[0])
    assert (suspects[0]["ref"], suspects[0]["mode"]) == ("RF1", "open")
    assert sum(suspect["probability"] for suspect in suspects) == pytest.approx(1.0)


def test_every_kind_of_entry_can_be_typed(job: str, run: Terminal) -> None:
    for words in (
        ["complaint", "Lamp stays dark", "--state", "dead", "--condition=noload"],
        ["sign", "charred", "R1"],
        ["ack", "all"],
        ["sign", "sound"],
        ["look", "capacitors", "sound"],
        ["reading", "volts_dc", "bulk", "pgnd", "cold", "-0.2"],
        ["reading", "ohms", "rect", "mains_l", "10R1", "--instrument", "bench meter"],
        ["skip", "esr", "bulk", "pgnd", "no ESR meter"],
        ["hunch", "d1"],
        ["undo"],
        ["note", "customer wants it back by Friday"],
        ["fitted", "R1", "high-voltage film 500 V"],
        ["repaired", "works"],
        ["retest", "visual", "yes"],
        ["power", "off"],
        ["closed", "handed on, retest at the customer's"],
        ["returned", "dead again"],
    ):
        run("add", job, *words)
    view = run.json("show", job)
    assert {entry["text"].split()[0].rstrip(":") for entry in view["entries"]} >= {"complaint", "charred", "hunch"}
    assert [entry["undone"] for entry in view["entries"]].count(True) == 1
    assert view["entries"][-1]["text"] == "came back: dead again"


def test_an_added_entry_answers_in_json_wherever_the_option_stands(job: str, run: Terminal) -> None:
    for words in (["add", "--json", job, "note", "x"], ["add", job, "note", "x", "--json"]):
        answer = json.loads(run(*words))
        assert answer["text"] == "note: x" and answer["stage"] == "cautions"


@pytest.mark.parametrize("kind", KINDS)
def test_a_wrong_call_shows_how_the_entry_is_typed(kind: str) -> None:
    with pytest.raises(EntryError, match=f"{kind}"):
        parse_entry(kind, ["x"] * 9)


def test_refusals_are_one_line_and_status_2(job: str, run: Terminal, tmp_path: Path) -> None:
    assert "kaputt" in run.refused("add", job, "complaint", "kaputt")
    assert "no kind of entry" in run.refused("add", job, "measure", "3")
    assert "voltage" in run.refused("add", job, "reading", "ohms", "bulk", "pgnd", "3 V")
    assert "No such file" in run.refused("next", str(tmp_path / "none.toml"))
    assert "there already" in run.refused("new", PROFILE, "-o", job)
    assert "no such profile" in run.refused("new", "no-such-adapter", "-o", str(tmp_path / "x.toml"))
    assert "R99" in run.refused("demand", job, "R99")
    assert "not open yet" in run.refused("add", job, "reading", "volts_dc", "out", "sgnd", "noload", "5")
    assert "[31m" in run.refused("next", "\x1b[31m.toml") and "\x1b" not in run.refused("next", "\x1b[31m.toml")
    (tmp_path / "bad.toml").write_text("[job]\nformat = 1\n[board]\nid = 3\n")
    assert "expected" in run.refused("next", str(tmp_path / "bad.toml"))
    assert "cannot be written" in run.refused("report", job, "-o", str(tmp_path / "no" / "report.txt"))


def test_a_job_in_use_elsewhere_is_refused_for_entries_and_shown(job: str, run: Terminal) -> None:
    from triage.job.bench import Bench

    with Bench.open(Path(job), StandIn()):
        assert "in use by" in run.refused("add", job, "note", "x")
        assert run("next", job)


def test_the_answers_for_a_person_are_lines(job: str, run: Terminal) -> None:
    run("add", job, "complaint", "dead")
    assert "first: acknowledge" in run("next", job)
    run("add", job, "ack", "all")
    assert "volts_dc bulk pgnd cold" in run("next", job)
    assert "RF1" in run("suspects", job)
    explained = run("suspects", job, "--explain")
    assert "of the single faults" in explained and "complaint" in explained
    assert "no verdict yet" in run("verdict", job)
    assert "replace" in run("worth", job, "--new-price", "12.50")
    assert run.json("worth", job)["options"][0]["cost"] is None, "nothing found to mend yet"
    assert "358 V of 250 V rated" in run("stress", job)
    assert "at least 447 V" in run("demand", job, "R1")
    assert "high-voltage film 500 V" in run("candidates", job, "R1")
    assert "250 V is below 447 V" in run("candidates", job, "R1", "carbon film")
    assert "1N4007" in run("parts", "1N40")
    assert "[x] unplug" in run("show", job)
    for format in ("text", "markdown", "html"):
        assert "dead" in run("report", job, "--format", format)


def test_the_verdict_and_what_it_asks_for_are_told_in_words(job: str, run: Terminal) -> None:
    """The input resistor is open and everything else reads sound."""
    for words in (
        ["complaint", "dead", "full"], ["ack", "all"], ["sign", "sound"], ["reading", "volts_dc", "bulk", "pgnd", "0.2"],
        ["reading", "ohms", "mains_l", "rect", "OL"], ["reading", "diode", "rect", "bulk", "0.55"],
    ):  # fmt: skip
        run("add", job, *words)
    assert run("next", job).startswith("verdict: ") and "RF1 open" in run("next", job)
    verdict = run("verdict", job).splitlines()
    assert verdict[0].startswith("verdict: found: RF1 open, ") and "replace: RF1" in verdict
    assert any(line.startswith("  ") and "OL" in line for line in verdict), "the readings behind it"
    assert run.json("next", job)["function"] is None and run.json("verdict", job)["repair"] == ["RF1"]
    shown = run("show", job)
    assert "leading suspect RF1 open" in shown and "replace: RF1" in shown
    explained = run.json("suspects", job, "--explain")
    assert explained[0]["ref"] == "RF1" and explained[0]["explain"]


def test_what_is_asked_answers_in_json_as_well(job: str, run: Terminal) -> None:
    """A script gets the same answers as a person."""
    run("add", job, "complaint", "dead")
    assert {one["ref"] for one in run.json("stress", job)} == {"R1", "D1", "C1"}
    assert run.json("demand", job, "R1")["requirements"][0]["minimum"] == 447.0
    assert run.json("candidates", job, "R1")[0]["accepted"]
    assert not run.json("candidates", job, "R1", "carbon film")[0]["accepted"]
    assert run.json("parts", "1N40")[0]["type"].startswith("1N40")
    assert isinstance(run.json("combine", job, "R1"), list)


def test_a_profile_is_asked_without_a_job(stand_in: None, run: Terminal) -> None:
    assert "358 V of 250 V rated" in run("stress", PROFILE)
    assert run.json("stress", PROFILE)[0]["ref"] == "R1"


def test_readings_to_expect_are_asked_with_faults_and_by_condition(
    stand_in: None, run: Terminal, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The rooms behind it are asked for exactly these faults; OL has no ends."""
    asked: list[tuple[str, ...]] = []

    def expected(self: StandIn, board: Any, faults: tuple[Any, ...]) -> tuple[ReadingExpected, ...]:
        asked.append(tuple(map(str, faults)))
        return (ReadingExpected("ohms", "mains_l", "rect", "cold", "ohm", float("inf"), float("inf"), float("inf"), "OL"),
                ReadingExpected("volts_dc", "out", "sgnd", "noload", "V", 4.9, 5.2, 5.4, "5.2 V"))

    monkeypatch.setattr(StandIn, "expected", expected, raising=False)
    lines = run("expect", PROFILE, "--fault", "rf1.open", "--fault", "C5.open").splitlines()
    assert asked == [("RF1.open", "C5.open")] and lines[0].endswith("90 % of boards")
    assert "OL to OL" in lines[1] and "4.9 V to 5.4 V" in lines[2]
    (only,) = run.json("expect", PROFILE, "--condition", "noload")
    assert only["function"] == "volts_dc" and only["low"] == 4.9


def test_solving_beforehand_tells_each_step_and_where_it_is_kept(
    stand_in: None, run: Terminal, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    kept: list[object] = []
    monkeypatch.setattr(StandIn, "__init__", lambda self, cache=None: kept.append(cache))
    monkeypatch.setattr(StandIn, "solve", lambda self, board, told: told("cold readings"), raising=False)
    assert run("solve", PROFILE, "--into", str(tmp_path)) == "solved: cold readings\n"
    assert run("solve", PROFILE) == "solved: cold readings\n"
    assert kept[0] is not None and kept[-1] is None


def test_words_that_are_no_entry_are_refused_with_how_it_is_typed(job: str, run: Terminal) -> None:
    assert "on or off" in run.refused("add", job, "power", "maybe")
    assert "no value after --state" in run.refused("add", job, "complaint", "dead", "--state")


def test_a_shop_without_a_list_is_told_where_to_write_one(run: Terminal, tmp_path: Path) -> None:
    assert str(tmp_path / "data" / "triage") in run("drawers") and run.json("drawers") == []


def test_a_report_goes_into_a_file(job: str, run: Terminal, tmp_path: Path) -> None:
    run("report", job, "--format", "html", "-o", str(tmp_path / "r.html"))
    assert (tmp_path / "r.html").read_text().startswith("<!DOCTYPE html>")


def test_expected_readings_and_the_deck_know_the_faults_of_the_board(job: str, run: Terminal) -> None:
    assert "D1.short" in run("deck", PROFILE, "--fault", "d1.short").splitlines()[0]
    assert "one of RF1" in run.refused("deck", PROFILE, "--fault", "R99.open")
    assert "one of open" in run.refused("deck", PROFILE, "--fault", "R1.bent")
    assert "REF.mode" in run.refused("deck", PROFILE, "--fault", "R1")


def test_new_jobs_go_into_the_jobs_folder_and_are_found_there(stand_in: None, run: Terminal, tmp_path: Path) -> None:
    first = run.json("new", PROFILE)
    assert Path(first["job"]).parent == tmp_path / "data" / "triage" / "jobs"
    run("--jobs", str(tmp_path / "shared"), "new", PROFILE)
    run("add", first["job"], "complaint", "buzzes", "--state", "hum or ripple")
    assert [one["id"] for one in run.json("jobs", "buzes")["jobs"]] == [PROFILE]
    assert "buzzes" in run("jobs")
    assert run.json("jobs", "--stage", "closed")["jobs"] == []
    run("add", first["job"], "undo")
    run("add", first["job"], "complaint", "=1+1", "--state", "dead")
    rows = list(csv.DictReader(io.StringIO(run("jobs", "--csv"))))
    assert [row["complaint"] for row in rows] == ["'=1+1 (dead)"]


def test_check_names_every_fault_and_says_so_by_its_status(job: str, run: Terminal, tmp_path: Path) -> None:
    assert "job in order" in run("check", job)
    bad = tmp_path / "bad.toml"
    bad.write_text("family = 'x'\nid = ''\n")
    out = run("check", job, str(bad), status=1)
    assert "job in order" in out and "bad.toml" in out
    assert json.loads(run("check", str(bad), "--json", status=1))[0]["faults"]


def test_all_shipped_files_are_in_order(run: Terminal) -> None:
    out = run("check")
    assert f"{PROFILE}.toml: profile in order" in out


def test_alone_it_opens_the_app(monkeypatch: pytest.MonkeyPatch) -> None:
    called: list[tuple[object, ...]] = []
    monkeypatch.setattr("triage.app.app.run", lambda *given: called.append(given) or 0)
    for words in ([], ["--jobs", "shared"], ["open", "a.toml"], ["demo"]):
        assert cli.main(words) == 0
    assert called == [
        (None, None, None), (None, None, Path("shared")), (Path("a.toml"), None, None), (None, PROFILE, None),
    ]  # fmt: skip


def shell(*words: str, **more: Any) -> subprocess.CompletedProcess[str]:
    return subprocess.run([sys.executable, "-m", "triage.cli", *words], capture_output=True, text=True, timeout=120, **more)


def test_in_a_process_of_its_own_a_refusal_is_one_line_and_status_2(tmp_path: Path) -> None:
    done = shell("add", str(tmp_path / "none.toml"), "note", "x")
    assert (done.returncode, done.stdout, done.stderr.count("\n")) == (2, "", 1)
    assert shell("add").returncode == 2
    assert shell("frobnicate").returncode == 2


def test_a_job_is_begun_and_added_to_in_processes_of_their_own(tmp_path: Path) -> None:
    path = tmp_path / "cube.toml"
    assert shell("new", PROFILE, "-o", str(path)).returncode == 0
    done = shell("add", str(path), "complaint", "dead")
    assert done.returncode == 0, done.stderr
    assert shell("check", str(path)).stdout.endswith("job in order\n")


def test_a_closed_pipe_is_no_fault() -> None:
    command = f"{sys.executable} -m triage.cli check | head -c 1"
    done = subprocess.run(["bash", "-o", "pipefail", "-c", command], capture_output=True, text=True, timeout=120)
    assert done.returncode == 0 and done.stderr == ""


def test_help_and_refusals_start_without_the_heavy_libraries() -> None:
    script = (
        "import sys\nfrom triage import cli\n"
        "try:\n    cli.main(['--help'])\nexcept SystemExit:\n    pass\n"
        "print(sorted({'numpy', 'textual', 'pint', 'numba', 'rapidfuzz'} & set(sys.modules)), file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, timeout=60)
    assert done.stderr.strip() == "[]"
