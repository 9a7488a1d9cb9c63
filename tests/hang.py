"""A watch against inputs that hang the program.

It is no measure of speed: its limit is far above any honest work, so that a loaded machine changes no verdict. The long fuzz
runs set the environment variable TRIAGE_HANG to 1, the second that nothing typed or read may take on a machine of its own.
"""

import gc
import os
import signal
from types import FrameType

LIMIT = float(os.environ.get("TRIAGE_HANG", "30"))
"""[s] of this process's own processor time."""


class HangError(Exception):
    """The block went on beyond the limit."""


class answers_in_time:
    """Raises HangError when its block goes on for longer than LIMIT, even where the block swallows it or ends by another error.

    In the main thread, one at a time. Garbage is left until afterwards: after a hundred thousand inputs a collection takes a
    second itself.
    """

    def __enter__(self) -> None:
        self.rung = False
        self.before = signal.signal(signal.SIGPROF, self.ring)
        gc.disable()
        signal.setitimer(signal.ITIMER_PROF, LIMIT)

    def __exit__(self, *error: object) -> None:
        signal.setitimer(signal.ITIMER_PROF, 0)
        signal.signal(signal.SIGPROF, self.before)
        gc.enable()
        if self.rung and not isinstance(error[1], HangError):
            raise HangError(f"no answer within {LIMIT:g} s of processor time")

    def ring(self, number: int, frame: FrameType | None) -> None:
        """The limit is reached."""
        self.rung = True
        raise HangError(f"no answer within {LIMIT:g} s of processor time")
