"""The job file: nothing acknowledged is lost, nothing old is damaged, nothing foreign is overwritten."""

import errno
import io
import math
import os
import stat
import tomllib
from pathlib import Path
from typing import Any

import pytest

from tests.job.samples import BOARD, TIME, log, reading
from triage.errors import JobError
from triage.job import store
from triage.job.entries import entry_to_dict, make_entry, replay


def new_job(folder: Path, name: str = "job.toml") -> store.Job:
    return store.create(folder / name, BOARD, TIME, "cube")


def test_a_job_comes_back_to_the_last_digit(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    for entry in log():
        job.append(entry)
    again = store.load(job.path)
    assert again.entries == job.entries == tuple(log())
    assert replay(again.entries) == replay(job.entries)
    assert again.board == BOARD
    assert math.isinf(again.entries[4].said["value"])


def test_the_file_is_private_and_readable_toml(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    job.append(reading(4700.0, typed="4k7"))
    assert stat.S_IMODE(job.path.stat().st_mode) == 0o600
    document = tomllib.loads(job.path.read_text())
    assert document["job"]["format"] == store.FORMAT
    assert document["entry"][0] == {
        "time": TIME, "kind": "reading", "function": "ohms", "plus": "x", "minus": "y", "condition": "cold",
        "value": 4700.0, "unit": "ohm", "typed": "4k7",
    }  # fmt: skip


def test_unknown_keys_of_every_level_survive_a_new_entry(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    job.append(reading(1.0))
    text = job.path.read_text().replace('unit = "ohm"', 'unit = "ohm"\nprobe_tips = "needle"')
    job.path.write_text("shelf = 4\n" + text + '\n[customer]\nname = "n/a"\n')
    again = store.load(job.path)
    again.append(reading(2.0))
    document = tomllib.loads(job.path.read_text())
    assert document["shelf"] == 4
    assert document["customer"] == {"name": "n/a"}
    assert document["entry"][0]["probe_tips"] == "needle"
    assert len(document["entry"]) == 2


HAND_WRITTEN = {
    "log last": "# mine\n[job]\nformat = 1\n[board]\n[[entry]]  # first\ntime = 'x'\nkind = 'note'\nnote = 'a'\n",
    "log in the middle": "[job]\nformat = 1\n[[entry]]\ntime = 'x'\nkind = 'note'\nnote = 'a'\n[board]\n",
    "log in one line": "entry = [{time = 'x', kind = 'note', note = 'a'}]\n[job]\nformat = 1\n[board]\n",
    "a table in the entry": "[job]\nformat = 1\n[board]\n[[entry]]\ntime = 'x'\nkind = 'note'\nnote = 'a'\n[entry.more]\nb = 1\n",
    "a header in a text": "[job]\nformat = 1\n[board]\nnote = '''\n[[entry]]\n'''\n",
    "no line end": "[job]\nformat = 1\n[board]",
    "windows": "[job]\r\nformat = 1\r\n[board]\r\n",
}


@pytest.mark.parametrize("name", HAND_WRITTEN)
def test_a_file_written_by_hand_takes_entries_wherever_its_log_stands(tmp_path: Path, name: str) -> None:
    path = tmp_path / "job.toml"
    path.write_text(HAND_WRITTEN[name], newline="")
    job = store.load(path)
    before = len(job.entries)
    for value in (1.0, 2.0, 3.0):
        job.append(reading(value, typed="x"))
    again = store.load(path)
    assert again.entries == job.entries and len(again.entries) == before + 3
    assert again.document == job.document
    if name == "log last":
        assert path.read_text().startswith("# mine\n") and "# first" in path.read_text()


NASTY = [
    '"""',
    "'''",
    "\\",
    "[[entry]]\nkind = 1",
    "# no",
    "\x1b\x00\x7f",
    "\r\n",
    "\t",
    "\u2028",
    "a" * 2000,
    "\ud7ff",
    '" \\"""',
]


def test_any_words_of_a_technician_come_back_as_they_were(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    for words in NASTY:
        job.append(make_entry("note", TIME, note=words))
    assert [entry.said["note"] for entry in store.load(job.path).entries] == [words.replace("\r\n", "\n") for words in NASTY]


def test_what_stands_in_a_file_keeps_its_carriage_returns_through_a_rewrite(tmp_path: Path) -> None:
    path = tmp_path / "job.toml"
    path.write_text('entry = []\n[job]\nformat = 1\n[board]\nnote = "a\\r\\nb\\nc"\n')
    store.load(path).append(reading(1.0))
    assert store.load(path).board["note"] == "a\r\nb\nc"


def test_a_job_ends_somewhere(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    job = new_job(tmp_path)
    monkeypatch.setattr(store, "MOST_ENTRIES", 2)
    job.append(reading(1.0))
    job.append(reading(2.0))
    with pytest.raises(JobError, match=r"2 entries.*open a new one"):
        job.append(reading(3.0))


def test_the_longest_job_can_be_opened_again(tmp_path: Path) -> None:
    entry = entry_to_dict(reading(4700.123456, typed="4k7", instrument="hand multimeter, 3.5 digits"))
    document = {"job": {"format": 1}, "board": BOARD, "entry": [entry] * store.MOST_ENTRIES}
    path = tmp_path / "job.toml"
    store.write_content(path, store._as_toml(document), b"")
    assert len(store.load(path).entries) == store.MOST_ENTRIES


def test_a_file_of_a_later_version_is_refused_not_misread(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    job.path.write_text(job.path.read_text().replace("format = 1", "format = 2"))
    with pytest.raises(JobError, match=r"version 2.*install a newer triage"):
        store.load(job.path)


def test_create_does_not_overwrite(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    before = job.path.read_bytes()
    with pytest.raises(JobError, match="there already"):
        new_job(tmp_path)
    assert job.path.read_bytes() == before


class FullDisk:
    """Stands in for a file on a full disk: takes a few bytes, then fails as the kernel does."""

    def __init__(self, descriptor: int, mode: str) -> None:
        self.file = io.FileIO(descriptor, mode)

    def __enter__(self) -> "FullDisk":
        return self

    def __exit__(self, *found: object) -> None:
        self.file.close()

    def fileno(self) -> int:
        return self.file.fileno()

    def write(self, content: bytes) -> int:
        self.file.write(content[:40])
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))


def test_a_full_disk_leaves_the_old_file_and_the_session_intact(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    job = new_job(tmp_path)
    job.append(reading(1.0))
    before = job.path.read_bytes()
    with monkeypatch.context() as patch:
        patch.setattr(store.os, "fdopen", lambda fd, mode: FullDisk(fd, mode) if "w" in mode else io.FileIO(fd))
        with pytest.raises(JobError, match=r"No space left on device.*nothing already entered is lost"):
            job.append(reading(2.0))
    assert job.path.read_bytes() == before
    assert len(job.entries) == 1
    assert [path.name for path in tmp_path.iterdir()] == ["job.toml"]
    job.append(reading(3.0))
    assert [entry.said["value"] for entry in store.load(job.path).entries] == [1.0, 3.0]


@pytest.mark.parametrize("device", ["/dev/full", "/dev/zero"])
def test_a_device_in_place_of_a_job_is_refused_at_once(device: str) -> None:
    with pytest.raises(JobError, match="not a regular file"):
        store.write_content(Path(device), b"x = 1", b"")
    with pytest.raises(JobError, match="not a regular file"):
        store.load(Path(device))


def test_a_pipe_in_place_of_a_job_does_not_hang(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "job.toml")
    with pytest.raises(JobError, match="not a regular file"):
        store.load(tmp_path / "job.toml")


@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_a_failing_disk_at_any_step_leaves_the_old_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str) -> None:
    job = new_job(tmp_path)
    before = job.path.read_bytes()

    def fail(*_: Any) -> None:
        raise OSError(errno.EIO, os.strerror(errno.EIO))

    monkeypatch.setattr(store.os, step, fail)
    with pytest.raises(JobError, match="Input/output error"):
        job.append(reading(1.0))
    assert job.path.read_bytes() == before
    assert job.entries == ()


def test_a_read_only_folder_gives_one_clear_line(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """A superuser writes anywhere, so the refusal of the kernel is played where the test runs as one."""
    job = new_job(tmp_path)
    if os.geteuid() == 0:

        def refuse(*_: Any, **__: Any) -> None:
            raise OSError(errno.EROFS, os.strerror(errno.EROFS))

        monkeypatch.setattr(store.tempfile, "mkstemp", refuse)
    else:
        tmp_path.chmod(0o500)
    try:
        with pytest.raises(JobError, match="cannot be written"):
            job.append(reading(1.0))
    finally:
        tmp_path.chmod(0o700)
    assert store.load(job.path).entries == ()


def test_a_file_changed_by_another_bench_is_not_overwritten(tmp_path: Path) -> None:
    here = new_job(tmp_path)
    there = store.load(here.path)
    there.append(reading(1.0))
    with pytest.raises(JobError, match=r"changed by another program.*open the job again"):
        here.append(reading(2.0))
    assert [entry.said["value"] for entry in store.load(here.path).entries] == [1.0]


def test_a_file_that_went_away_is_said_to_be_gone(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    job.path.unlink()
    with pytest.raises(JobError, match="the file is gone"):
        job.append(reading(1.0))


def test_copies_of_a_sync_conflict_are_shown(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    copy = tmp_path / "job.sync-conflict-20260131-081500-ABC.toml"
    copy.write_bytes(job.path.read_bytes())
    new_job(tmp_path, "jobber.toml")
    assert store.load(job.path).conflicts == (copy,)


def test_drafts_of_killed_sessions_are_cleared(tmp_path: Path) -> None:
    job = new_job(tmp_path)
    (tmp_path / ".job.toml.x1y2.new").write_text("half")
    (tmp_path / ".other.toml.x1y2.new").write_text("of another job")
    assert store.clear_drafts(job.path) == 1
    assert (tmp_path / ".other.toml.x1y2.new").exists()


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", r"no table \[job\]"),
        ("job = 3", r"no table \[job\]"),
        ("[job]\nformat = 'x'\n", "job.format"),
        ("[job]\nformat = true\n", "job.format"),
        ("[job]\nformat = 1\n", "board"),
        ("[job]\nformat = 1\nprofile = 3\n[board]\n", "job.profile"),
        ("[job]\nformat = 1\n[board]\n[entry]\n", "entry"),
        ("[job]\nformat = 1\n[board]\n[[entry]]\nkind = 'x'\n", "entry 1, kind"),
        ("[job\n", "not readable as TOML"),
    ],
)
def test_a_file_that_is_no_job_gives_one_line_with_the_place(tmp_path: Path, text: str, message: str) -> None:
    path = tmp_path / "job.toml"
    path.write_text(text)
    with pytest.raises(JobError, match=message) as caught:
        store.load(path)
    assert "\n" not in str(caught.value)


def test_a_missing_file_is_named(tmp_path: Path) -> None:
    with pytest.raises(JobError, match="No such file"):
        store.load(tmp_path / "none.toml")
    with pytest.raises(JobError):
        store.load(Path("a\0b"))
