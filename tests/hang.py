"""A watch against inputs that hang the program.

It is no measure of speed: its limit is far above any honest work, so that a loaded machine changes no verdict. The long fuzz
runs set the environment variable TRIAGE_HANG to 1, the second that nothing typed or read may take on a machine of its own.
"""

import os
import signal
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType

LIMIT = float(os.environ.get("TRIAGE_HANG", "30"))
"""[s] of this process's own processor time."""


class HangError(Exception):
    """The block went on beyond the limit."""


@contextmanager
def answers_in_time() -> Iterator[None]:
    """Raises HangError when its block goes on for longer than LIMIT, even where the block swallows it. In the main thread, one
    at a time."""
    late = HangError(f"no answer within {LIMIT:g} s of processor time")
    rung = []

    def ring(number: int, frame: FrameType | None) -> None:
        rung.append(number)
        raise late

    before = signal.signal(signal.SIGPROF, ring)
    signal.setitimer(signal.ITIMER_PROF, LIMIT)
    try:
        yield
    finally:
        signal.setitimer(signal.ITIMER_PROF, 0)
        signal.signal(signal.SIGPROF, before)
    if rung:
        raise late
