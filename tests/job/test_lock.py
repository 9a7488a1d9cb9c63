"""Two sessions on one job: the second is told, and a lock left behind does not shut anybody out."""

import json
import os
import socket
import subprocess
import sys
import time
from pathlib import Path

import pytest

from triage.job import lock as room
from triage.job.lock import STALE_AFTER, Lock, read_holder

HOLD = """
import pathlib, sys
from triage.job.lock import Lock
print(Lock(pathlib.Path(sys.argv[1])).take(), flush=True)
input()
"""


def test_the_second_session_is_told_who_and_since_when(tmp_path: Path) -> None:
    path = tmp_path / "job.toml"
    other = subprocess.Popen([sys.executable, "-c", HOLD, str(path)], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True)
    assert other.stdout is not None and other.stdout.readline() == "True\n"
    lock = Lock(path)
    assert not lock.take()
    assert lock.holder is not None and lock.holder.pid == other.pid
    assert socket.gethostname() in str(lock.holder) and lock.holder.since in str(lock.holder)
    other.kill()
    other.communicate()
    assert lock.take(), "the lock of a killed process is stale"
    lock.release()
    assert list(tmp_path.iterdir()) == []


def test_the_same_session_cannot_take_it_twice(tmp_path: Path) -> None:
    first, second = Lock(tmp_path / "job.toml"), Lock(tmp_path / "job.toml")
    assert first.take() and not second.take()
    second.release()
    assert first.path.exists(), "who does not have a lock cannot give it away"
    first.release()
    assert second.take()


@pytest.mark.parametrize(("age", "taken"), [(60.0, False), (STALE_AFTER + 60, True)])
def test_a_lock_of_another_host_is_left_behind_after_a_working_day(tmp_path: Path, age: float, taken: bool) -> None:
    lock = Lock(tmp_path / "job.toml")
    holder = {"user": "ann", "host": "van-2", "pid": 1, "started": "5", "since": "2026-01-31T08:15:00Z"}
    lock.path.write_text(json.dumps(holder))
    then = time.time() - age
    os.utime(lock.path, (then, then))
    assert lock.take() is taken


def test_a_number_used_again_by_another_process_does_not_keep_a_lock(tmp_path: Path) -> None:
    lock = Lock(tmp_path / "job.toml")
    holder = {"user": "ann", "host": socket.gethostname(), "pid": os.getpid(), "started": "1", "since": "x"}
    lock.path.write_text(json.dumps(holder))
    assert lock.take()


@pytest.mark.parametrize("content", ["", "{", "[1]", '{"user": 1}', "[" * 4000, '{"pid": 1e999}'])
def test_a_damaged_lock_counts_for_a_moment_only(tmp_path: Path, content: str) -> None:
    lock = Lock(tmp_path / "job.toml")
    lock.path.write_text(content)
    assert read_holder(lock.path) is None
    assert not lock.take()
    then = time.time() - 60
    os.utime(lock.path, (then, then))
    assert lock.take()


def test_without_hard_links_the_lock_is_created_exclusively(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> None:
        raise PermissionError(1, "Operation not permitted")

    monkeypatch.setattr(os, "link", refuse)
    first, second = Lock(tmp_path / "job.toml"), Lock(tmp_path / "job.toml")
    assert first.take() and not second.take()
    assert [path.name for path in tmp_path.iterdir()] == ["job.toml.lock"]


def test_a_folder_that_cannot_be_written_is_named_as_the_reason(tmp_path: Path) -> None:
    lock = Lock(tmp_path / "gone" / "job.toml")
    assert not lock.take()
    assert lock.problem == "No such file or directory"


def test_where_the_system_lists_no_processes_a_signal_asks_for_them(monkeypatch: pytest.MonkeyPatch) -> None:
    """A start time is not known there; a process that is gone still is."""

    def unreadable(self: Path, *given: object, **more: object) -> str:
        raise OSError

    gone = subprocess.Popen([sys.executable, "-c", ""])
    gone.wait()
    monkeypatch.setattr(Path, "read_text", unreadable)
    monkeypatch.setattr(Path, "exists", lambda self: False)
    assert room._start_of(os.getpid()) == "running" and room._start_of(gone.pid) == "" and room._start_of(0) == ""

    def forbidden(pid: int, number: int) -> None:
        raise PermissionError

    monkeypatch.setattr(os, "kill", forbidden)
    assert room._start_of(1) == "running", "a process of somebody else is there"


def test_a_user_without_a_name_is_told_by_number(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def nameless() -> str:
        raise KeyError("no entry")

    monkeypatch.setattr(room.getpass, "getuser", nameless)
    lock = Lock(tmp_path / "job.toml")
    assert lock.take()
    holder = read_holder(lock.path)
    lock.release()
    assert holder is not None and holder.user == f"user {os.getuid()}"
