"""A real pseudo terminal with the app in it, seen through pyte: for signals, bytes, TERM and locale."""

import fcntl
import os
import pty
import re
import select
import signal
import struct
import sys
import termios
import time
from collections.abc import Mapping, Sequence
from pathlib import Path

import pyte

ROOT = Path(__file__).resolve().parents[2]
_QUERIES = re.compile(rb"\x1b\[[<>=?]?[\d;]*(?:\$p|u)")
"""Keyboard and mode queries that pyte takes for text."""


class Terminal:
    """One process in a pty of its own."""

    def __init__(
        self, command: Sequence[str], columns: int = 80, rows: int = 24, environ: Mapping[str, str] | None = None
    ) -> None:
        self.screen = pyte.Screen(columns, rows)
        self._stream = pyte.ByteStream(self.screen)
        self.received = b""
        base = {"PATH": os.environ["PATH"], "HOME": "/nonexistent", "TERM": "xterm-256color", "LANG": "C.UTF-8"}
        self.pid, self.fd = pty.fork()
        if self.pid == 0:
            fcntl.ioctl(0, termios.TIOCSWINSZ, struct.pack("4H", rows, columns, 0, 0))
            os.chdir(ROOT)
            os.execvpe(command[0], list(command), {**base, **(environ or {})})

    def read(self, quiet: float = 0.25, limit: float = 10.0) -> int:
        """Take in what is sent until nothing comes for ``quiet`` seconds; number of bytes."""
        count, end, last = 0, time.monotonic() + limit, time.monotonic()
        while time.monotonic() < end and time.monotonic() - last < quiet:
            data = self._some()
            if data is None:
                break
            if data:
                count += len(data)
                last = time.monotonic()
        return count

    def _some(self) -> bytes | None:
        if not select.select([self.fd], [], [], 0.01)[0]:
            return b""
        try:
            data = os.read(self.fd, 65536)
        except OSError:
            return None
        if not data:
            return None
        self.received += data
        self._stream.feed(_QUERIES.sub(b"", data))
        return data

    def wait_for(self, text: str, limit: float = 30.0) -> str:
        """Take in what is sent until the screen shows the text; the screen. Fails with the screen
        otherwise."""
        end = time.monotonic() + limit
        while time.monotonic() < end:
            self.read(quiet=0.05, limit=1.0)
            if text in self.text:
                return self.text
        raise AssertionError(f"{text!r} did not come; the screen is\n{self.text}")

    @property
    def text(self) -> str:
        """The screen."""
        return "\n".join(row.rstrip() for row in self.screen.display)

    def send(self, keys: str) -> None:
        """Send keys as a terminal does."""
        os.write(self.fd, keys.encode())

    def resize(self, columns: int, rows: int) -> None:
        """Give the terminal another size."""
        self.screen.resize(rows, columns)
        fcntl.ioctl(self.fd, termios.TIOCSWINSZ, struct.pack("4H", rows, columns, 0, 0))

    def kill(self, number: int = signal.SIGKILL) -> None:
        """Send the process a signal."""
        os.kill(self.pid, number)

    def status(self, limit: float = 10.0) -> int:
        """Exit status once the process has ended: the code, or minus the signal that killed it."""
        end = time.monotonic() + limit
        while time.monotonic() < end:
            self._some()
            pid, status = os.waitpid(self.pid, os.WNOHANG)
            if pid:
                self.read(quiet=0.05, limit=0.5)
                return os.waitstatus_to_exitcode(status)
        self.kill()
        os.waitpid(self.pid, 0)
        raise AssertionError(f"the process did not end; the screen is\n{self.text}")

    def resident_kb(self) -> int:
        """Resident memory of the process [kB]."""
        for row in Path(f"/proc/{self.pid}/status").read_text().splitlines():
            if row.startswith("VmRSS"):
                return int(row.split()[1])
        return 0


def app_on_stand_in(folder: Path, seconds: float = 0.0, **more: object) -> Terminal:
    """The app on the stand-in bench."""
    command = [sys.executable, "-m", "tests.app.run_fake", str(folder), str(seconds)]
    return Terminal(command, **more)  # type: ignore[arg-type]
