"""Finding jobs: derived, deletable, incremental, forgiving."""

import contextlib
import os
import time
from concurrent.futures import BrokenExecutor
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.job.samples import TIME
from triage.errors import JobError
from triage.job import store
from triage.job.entries import make_entry
from triage.job.index import Index
from triage.job.summary import read_summary

BOARD = {"id": "cube-5v", "title": "5 V wall cube", "family": "ringing_choke_zener", "drawing": "x\n[[entry]]\ny"}
PART = {"ref": "R1", "kind": "resistor", "pins": {"a": "x"}}


def new_job(folder: Path, name: str, title: str = "5 V wall cube", words: str = "Lamp stays dark") -> store.Job:
    job = store.create(folder / f"{name}.toml", {**BOARD, "title": title, "part": [PART] * 5}, TIME, "cube")
    job.append(make_entry("complaint", TIME, state="dead", condition="full", typed=words))
    return job


@pytest.fixture
def jobs(tmp_path: Path) -> Path:
    folder = tmp_path / "jobs"
    folder.mkdir()
    new_job(folder, "anna")
    new_job(folder, "berta", "19 V laptop brick", "buzzes and gets hot")
    closed = new_job(folder, "carla", "12 V router adapter", "drops out")
    closed.append(make_entry("closed", "2026-02-01T10:00:00Z", verdict="repaired", fault="C5.high_esr"))
    return folder


@pytest.fixture
def index(jobs: Path, tmp_path: Path) -> Index:
    one = Index(jobs, tmp_path / "index.sqlite")
    one.refresh()
    return one


@pytest.mark.parametrize(
    ("words", "first"),
    [("laptop", "berta"), ("lapt", "berta"), ("laptpo brick", "berta"), ("rooter", "carla"), ("lamp dark", "anna"),
     ("an", "anna"), ("buzes", "berta"), ("high_esr", "carla"), ("", "carla")],
)  # fmt: skip
def test_half_a_word_or_a_slip_still_finds_the_job(index: Index, words: str, first: str) -> None:
    assert index.find(words)[0].id == first


def test_what_is_shown_of_a_job_comes_from_its_entries(index: Index) -> None:
    one = index.find("router")[0]
    assert (one.adapter, one.stage, one.verdict, one.fault) == ("12 V router adapter", "closed", "repaired", "C5.high_esr")
    assert one.complaint == "drops out (dead)" and one.changed == "2026-02-01T10:00:00Z" and one.entries == 2
    assert [found.id for found in index.find(stage="closed")] == ["carla"]


def test_only_changed_files_are_read_again(index: Index, jobs: Path) -> None:
    assert index.refresh(force=True) == 0
    store.load(jobs / "anna.toml").append(make_entry("note", TIME, note="x"))
    (jobs / "berta.toml").unlink()
    assert index.refresh(force=True) == 1
    assert [one.id for one in index.find("laptop brick")] != ["berta"]
    assert index.count() == 2
    assert index.find("lamp")[0].entries == 2


def test_an_unchanged_folder_is_not_even_looked_through(index: Index, jobs: Path) -> None:
    then = time.time() - 10
    os.utime(jobs, (then, then))
    index.refresh(force=True)
    (jobs / "anna.toml").write_text("written in place, the folder's time stays")
    os.utime(jobs, (then, then))
    assert index.refresh() == 0
    assert index.refresh(force=True) == 1


def test_a_deleted_or_damaged_index_is_made_again(jobs: Path, tmp_path: Path) -> None:
    place = tmp_path / "index.sqlite"
    place.write_bytes(b"not a database at all" * 100)
    one = Index(jobs, place)
    assert one.refresh() == 3 and one.count() == 3


def test_files_that_are_no_jobs_are_named_and_the_others_found(index: Index, jobs: Path) -> None:
    (jobs / "broken.toml").write_text("[job\n\x1b[2J")
    (jobs / "deep.toml").write_text("a = " + "[" * 5000)
    os.mkfifo(jobs / "pipe.toml")
    index.refresh(force=True)
    assert index.count() == 3
    assert len(index.problems()) == 3 and not any("\x1b" in line for line in index.problems())
    os.remove(jobs / "broken.toml")
    index.refresh(force=True)
    assert len(index.problems()) == 2


def test_a_missing_folder_has_no_jobs(tmp_path: Path) -> None:
    one = Index(tmp_path / "none", tmp_path / "index.sqlite")
    assert one.refresh() == 0 and one.find() == ()


def test_the_index_lies_outside_the_jobs_folder(jobs: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))
    with Index.of_folder(jobs) as one:
        one.refresh()
    assert {path.suffix for path in jobs.iterdir()} == {".toml"}
    assert list((tmp_path / "cache" / "triage").glob("jobs-*.sqlite"))


def test_the_short_way_through_a_file_gives_the_same_as_the_long_one(jobs: Path) -> None:
    """The board of these jobs has a drawing with a line that looks like the start of the log."""
    from triage.job.summary import summary_of
    from triage.toml_guard import read_toml

    for path in jobs.glob("*.toml"):
        assert read_summary(path) == summary_of(path.stem, read_toml(path)[0])


def test_entries_of_wrong_types_are_left_out_of_the_summary(tmp_path: Path) -> None:
    """The first was found by the fuzzing of job files."""
    for number, wrong in enumerate(
        ('kind = "undo"\nentry = []', 'kind = ["undo"]', "kind = 3\nstate = {}\ntime = 1", "verdict = [1]")
    ):
        path = tmp_path / f"{number}.toml"
        path.write_text(f"[job]\nformat = 1\n[[entry]]\n{wrong}\n")
        assert read_summary(path).entries == 1


def test_a_profile_is_no_job(tmp_path: Path) -> None:
    (tmp_path / "x.toml").write_text("id = 'x'\n")
    with pytest.raises(JobError, match=r"no table \[job\]"):
        read_summary(tmp_path / "x.toml")


@given(st.text(max_size=60))
def test_no_search_words_break_the_query(words: str) -> None:
    one = Index(Path("/nonexistent"), Path(":memory:"))
    one.refresh()
    assert one.find(words) == ()


class KilledReaders:
    """Stands for processes that were killed while they read."""

    def map(self, *arguments: object, **options: object) -> list[object]:
        raise BrokenExecutor("terminated abruptly")


def test_killed_readers_leave_the_index_whole(jobs: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("triage.job.index._pool_for", lambda files: contextlib.nullcontext(KilledReaders()))
    one = Index(jobs, tmp_path / "alone.sqlite")
    assert one.refresh() == one.count() == 3
