"""Answers of slow calculations, kept in the user's cache folder so that the second question comes at once.

Nothing here is ever needed: a cache that is missing, foreign, damaged or full is the same as none. What is
kept lies under a key that changes with everything it depends on.
"""

import contextlib
import json
import os
import tempfile
from pathlib import Path
from typing import Any

LARGEST = 64_000_000
"""A kept answer beyond this is not read [bytes]."""
MOST = 200
"""Answers kept; the oldest go first."""


def cache_folder() -> Path:
    """The cache folder (XDG base directory specification: ``$XDG_CACHE_HOME``, default ``~/.cache``)."""
    named = os.environ.get("XDG_CACHE_HOME", "")
    base = Path(named) if os.path.isabs(named) else Path.home() / ".cache"
    return base / "triage"


class Cache:
    """Keeps JSON answers by key."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = folder if folder is not None else cache_folder() / "answers"

    def get(self, key: str) -> Any:
        """What was kept under the key, or None."""
        path = self.folder / f"{key}.json"
        with contextlib.suppress(OSError, ValueError, RecursionError):
            if path.stat().st_size <= LARGEST:
                return json.loads(path.read_text(encoding="utf-8"))
        return None

    def put(self, key: str, answer: Any) -> None:
        """Keep an answer; a full or read-only disk only means that it is not kept."""
        with contextlib.suppress(OSError, ValueError):
            self.folder.mkdir(mode=0o700, parents=True, exist_ok=True)
            descriptor, draft = tempfile.mkstemp(prefix=".", suffix=".new", dir=self.folder)
            try:
                with os.fdopen(descriptor, "w", encoding="utf-8") as file:
                    json.dump(answer, file)
                os.replace(draft, self.folder / f"{key}.json")
            except BaseException:
                with contextlib.suppress(OSError):
                    os.unlink(draft)
                raise
            self._drop_oldest()

    def _drop_oldest(self) -> None:
        kept = sorted(self.folder.glob("*.json"), key=lambda path: path.stat().st_mtime)
        for path in kept[:-MOST]:
            path.unlink()
