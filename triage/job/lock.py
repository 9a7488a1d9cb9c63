"""Says that a job is open for writing, to every other session that looks at it, on any bench of a shared
folder.

The lock is a small file ``NAME.lock`` beside the job that holds who opened it, where and since when. It is
put in place complete and in one step (hard link, or exclusive creation where the file system has no links). A
lock whose process is gone on this host is stale; a lock of another host is taken for stale after STALE_AFTER
without an entry. Locks protect people from each other; the store itself checks the file before it writes, so
that a failing lock loses nothing.
"""

import contextlib
import getpass
import json
import os
import socket
import time
from dataclasses import asdict, dataclass
from datetime import UTC, datetime
from pathlib import Path

from triage.job.display import plain

STALE_AFTER = 12 * 3600.0
"""Time without any entry after which a lock of another host is taken for left behind [s]: a working day."""


@dataclass(frozen=True, slots=True)
class Holder:
    """Who has a job open."""

    user: str
    host: str
    pid: int
    started: str
    """Start of the process in ticks of its host, which tells it from a later one with the same number."""
    since: str
    """UTC, ISO 8601"""

    def __str__(self) -> str:
        user, host, since = plain(self.user, 40), plain(self.host, 60), plain(self.since, 40)
        return f"{user} on {host} (process {self.pid}) since {since}"


class Lock:
    """The lock of one job file; ``holder`` says who has it when ``take`` did not get it."""

    def __init__(self, job_path: Path) -> None:
        self.path = job_path.with_name(job_path.name + ".lock")
        self.held = False
        self.holder: Holder | None = None
        self.left_behind: Holder | None = None
        """Whose lock was cleared out of the way: a session that ended without giving the job free."""
        self.problem = ""
        """Why no lock could be written at all (read-only folder), or empty."""

    def take(self) -> bool:
        """Try to get the lock; clears a stale one out of the way first. Returns True when this session has
        it."""
        mine = _this_process()
        for _ in range(3):
            try:
                placed = self._place(mine)
            except OSError as error:
                self.problem = error.strerror or type(error).__name__
                return False
            if placed:
                self.held, self.holder = True, mine
                return True
            self.holder = read_holder(self.path)
            if not self._is_stale():
                return False
            self.left_behind = self.holder
            self._clear_stale()
        return False

    def touch(self) -> None:
        """Show a sign of life, so that other hosts do not take the lock for left behind."""
        if self.held:
            with contextlib.suppress(OSError):
                os.utime(self.path)

    def release(self) -> None:
        """Give the job free, if this session has it."""
        if self.held and read_holder(self.path) == self.holder:
            with contextlib.suppress(OSError):
                self.path.unlink()
        self.held = False

    def _place(self, mine: Holder) -> bool:
        content = json.dumps(asdict(mine)).encode()
        draft = self.path.with_name(f".{self.path.name}.{mine.pid}.{time.monotonic_ns()}")
        descriptor = os.open(draft, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
        try:
            with os.fdopen(descriptor, "wb") as file:
                file.write(content)
            try:
                os.link(draft, self.path)
            except FileExistsError:
                return False
            except OSError:
                return self._place_without_links(content)
            return True
        finally:
            draft.unlink(missing_ok=True)

    def _place_without_links(self, content: bytes) -> bool:
        try:
            descriptor = os.open(self.path, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
        except FileExistsError:
            return False
        with os.fdopen(descriptor, "wb") as file:
            file.write(content)
        return True

    def _is_stale(self) -> bool:
        try:
            age = time.time() - self.path.stat().st_mtime
        except OSError:
            return True
        if self.holder is None:
            return age > 10.0
        if self.holder.host == socket.gethostname():
            return _start_of(self.holder.pid) != self.holder.started
        return age > STALE_AFTER

    def _clear_stale(self) -> None:
        """Move the stale lock aside in one step, so that of two sessions only one clears it."""
        aside = self.path.with_name(f".{self.path.name}.stale.{os.getpid()}.{time.monotonic_ns()}")
        with contextlib.suppress(OSError):
            os.rename(self.path, aside)
            if read_holder(aside) == self.holder:
                aside.unlink()
            else:
                os.rename(aside, self.path)


def read_holder(path: Path) -> Holder | None:
    """Who holds the lock file, or None when it is missing or unreadable."""
    try:
        with path.open("rb") as file:
            found = json.loads(file.read(4096))
        return Holder(
            str(found["user"]),
            str(found["host"]),
            int(found["pid"]),
            str(found["started"]),
            str(found["since"]),
        )
    except (OSError, ValueError, KeyError, TypeError, RecursionError, OverflowError):
        return None


def _this_process() -> Holder:
    try:
        user = getpass.getuser()
    except (KeyError, OSError):
        user = f"user {os.getuid()}"
    since = datetime.now(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
    return Holder(user, socket.gethostname(), os.getpid(), _start_of(os.getpid()), since)


def _start_of(pid: int) -> str:
    """Start time of a process of this host, ``running`` where the system does not tell, empty when it is
    gone."""
    try:
        # Field 22 of proc(5) stat; the command in field 2 may hold spaces, so count from its closing bracket.
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[19]
    except (OSError, IndexError):
        pass
    if Path("/proc/self/stat").exists() or pid <= 0:
        return ""
    try:
        os.kill(pid, 0)
    except ProcessLookupError:
        return ""
    except OSError:
        return "running"
    return "running"
