"""Power cuts played by SIGKILL: whatever was acknowledged is in the file, and every file loads."""

import os
import random
import signal
import time
from pathlib import Path

import pytest

from tests.job.samples import BOARD, TIME, reading
from triage.job import store


def _enter_until_killed(path: Path, acknowledged: int) -> None:
    """The session: enters readings and says after each that it is kept. Runs in a forked child, never
    returns."""
    job = store.load(path)
    while True:
        job.append(reading(float(len(job.entries))))
        os.write(acknowledged, b".")


def _kill_one(path: Path, entries: int, seconds: float) -> int:
    """Run a session, kill it so long after its so-many-th entry, and return how many it had acknowledged."""
    read_end, write_end = os.pipe()
    child = os.fork()
    if child == 0:
        try:
            os.close(read_end)
            _enter_until_killed(path, write_end)
        finally:
            os._exit(1)
    os.close(write_end)
    with os.fdopen(read_end, "rb", buffering=0) as file:
        acknowledged = 0
        while acknowledged < entries:
            acknowledged += len(file.read(1))
        time.sleep(seconds)
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
        return acknowledged + len(file.readall())


def _play(folder: Path, kills: int) -> None:
    chance = random.Random(7)
    path = folder / "job.toml"
    store.create(path, BOARD, TIME, "cube")
    acknowledged_in_all = 0
    for number in range(kills):
        before = len(store.load(path).entries)
        acknowledged = _kill_one(path, chance.randrange(4), chance.uniform(0.0, 0.012))
        entries = store.load(path).entries
        # The last write may be on the disk without its acknowledgement: one more is right, one less a loss.
        assert acknowledged <= len(entries) - before <= acknowledged + 1, f"kill {number}"
        assert [entry.said["value"] for entry in entries] == [float(n) for n in range(len(entries))]
        acknowledged_in_all += acknowledged
        store.clear_drafts(path)
        if len(entries) > 25:
            path.unlink()
            store.create(path, BOARD, TIME, "cube")
    assert acknowledged_in_all > kills, "the sessions were killed before they did anything"
    assert list(folder.iterdir()) == [path]


def test_thirty_kills_lose_nothing(tmp_path: Path) -> None:
    _play(tmp_path, 30)


@pytest.mark.long
def test_a_thousand_kills_lose_nothing(tmp_path: Path) -> None:
    _play(tmp_path, 1000)
