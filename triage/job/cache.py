"""Answers of slow calculations, kept in the user's cache folder so that the second question comes at once.

Nothing here is ever needed: a cache that is missing, foreign, damaged or full is the same as none. What is
kept lies under a key that changes with everything it depends on.
"""

import contextlib
import io
import json
import os
import tempfile
import zipfile
import zlib
from pathlib import Path
from typing import TYPE_CHECKING, Any, Protocol

if TYPE_CHECKING:
    from numpy.typing import NDArray

LARGEST = 64_000_000
"""A kept answer beyond this is not read [bytes]."""
MOST = 400
"""Answers kept; the oldest go first."""


def cache_folder() -> Path:
    """The cache folder (XDG base directory specification: ``$XDG_CACHE_HOME``, default ``~/.cache``)."""
    named = os.environ.get("XDG_CACHE_HOME", "")
    base = Path(named) if os.path.isabs(named) else Path.home() / ".cache"
    return base / "triage"


class Kept(Protocol):
    """Where answers by key may be had from."""

    def has(self, key: str) -> bool:
        """True when there is a table under the key."""

    def get(self, key: str) -> Any:
        """The table under the key, or None."""

    def put(self, key: str, answer: Any) -> None:
        """Keep a table."""

    def get_array(self, key: str) -> "NDArray[Any] | None":
        """The array under the key, or None."""

    def put_array(self, key: str, answer: "NDArray[Any]") -> None:
        """Keep an array."""


class Shipped:
    """Answers that come with the program for the shipped profiles, and behind them a cache for all others."""

    def __init__(self, folder: Path, behind: Kept) -> None:
        """folder: where the shipped answers lie; it is only read."""
        self._shipped = Cache(folder)
        self._behind = behind

    def has(self, key: str) -> bool:
        """True when there is a table under the key."""
        return self._shipped.has(key) or self._behind.has(key)

    def get(self, key: str) -> Any:
        """The table under the key, or None."""
        found = self._shipped.get(key)
        return found if found is not None else self._behind.get(key)

    def put(self, key: str, answer: Any) -> None:
        """Keep a table in the cache."""
        self._behind.put(key, answer)

    def get_array(self, key: str) -> "NDArray[Any] | None":
        """The array under the key, or None."""
        found = self._shipped.get_array(key)
        return found if found is not None else self._behind.get_array(key)

    def put_array(self, key: str, answer: "NDArray[Any]") -> None:
        """Keep an array in the cache."""
        self._behind.put_array(key, answer)


class Cache:
    """Keeps answers by key: tables as JSON, arrays as numpy writes them."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = folder if folder is not None else cache_folder() / "answers"

    def has(self, key: str) -> bool:
        """True when there is a table under the key."""
        return (self.folder / f"{key}.json").is_file()

    def get(self, key: str) -> Any:
        """What was kept under the key, or None."""
        path = self.folder / f"{key}.json"
        with contextlib.suppress(OSError, ValueError, RecursionError):
            if path.stat().st_size <= LARGEST:
                return json.loads(path.read_text(encoding="utf-8"))
        return None

    def put(self, key: str, answer: Any) -> None:
        """Keep an answer; a full or read-only disk only means that it is not kept."""
        with contextlib.suppress(ValueError):
            self._write(f"{key}.json", json.dumps(answer).encode())

    def get_array(self, key: str) -> "NDArray[Any] | None":
        """The array that was kept under the key, or None."""
        import numpy as np

        path = self.folder / f"{key}.npz"
        with contextlib.suppress(OSError, ValueError, EOFError, KeyError, zipfile.BadZipFile, zlib.error):
            if path.stat().st_size <= LARGEST:
                with np.load(path, allow_pickle=False) as file:
                    found: NDArray[Any] = file["answer"]
                    return found
        return None

    def put_array(self, key: str, answer: "NDArray[Any]") -> None:
        """Keep an array, on the terms of ``put``."""
        import numpy as np

        content = io.BytesIO()
        np.savez_compressed(content, answer=answer)
        self._write(f"{key}.npz", content.getvalue())

    def _write(self, name: str, content: bytes) -> None:
        with contextlib.suppress(OSError):
            self.folder.mkdir(mode=0o700, parents=True, exist_ok=True)
            descriptor, draft = tempfile.mkstemp(prefix=".", suffix=".new", dir=self.folder)
            try:
                with os.fdopen(descriptor, "wb") as file:
                    file.write(content)
                os.replace(draft, self.folder / name)
            except BaseException:
                with contextlib.suppress(OSError):
                    os.unlink(draft)
                raise
            self._drop_oldest()

    def _drop_oldest(self) -> None:
        kept = sorted(self.folder.glob("[!.]*"), key=lambda path: path.stat().st_mtime)
        for path in kept[:-MOST]:
            path.unlink()
