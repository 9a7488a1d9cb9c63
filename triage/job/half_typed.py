"""What stood in the reading field when a session was cut off: kept once, given back once.

It is no entry and never in the job file: it lies in this bench's own cache, and can be deleted at any time.
"""

import contextlib
import hashlib
import os
from pathlib import Path

from triage.job.cache import cache_folder
from triage.job.display import plain

LONGEST = 200
"""Characters of a field that are kept [-]."""


def keep_half_typed(job: Path, text: str) -> None:
    """Keep a half-typed field of a job; nothing where the cache cannot be written."""
    place = _place(job)
    with contextlib.suppress(OSError):
        place.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
        with open(os.open(place, os.O_WRONLY | os.O_CREAT | os.O_TRUNC, 0o600), "w", encoding="utf-8") as file:
            file.write(text[:LONGEST])


def take_half_typed(job: Path) -> str:
    """What was half typed at a job when its last session ended, and no longer kept; empty for nothing."""
    place = _place(job)
    text = ""
    with contextlib.suppress(OSError, UnicodeDecodeError):
        with place.open(encoding="utf-8") as file:
            text = file.read(LONGEST)
        place.unlink()
    return plain(text, LONGEST)


def _place(job: Path) -> Path:
    name = hashlib.sha256(os.fsencode(job.absolute())).hexdigest()[:16]
    return cache_folder() / "half-typed" / f"{name}.txt"
