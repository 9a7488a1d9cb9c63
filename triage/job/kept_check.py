"""Whether the kept answers that ship with the profiles are whole, and belong to a profile as it is now.

A kept answer that no board asks for any more is a fault: the board was changed after it was solved, and a job on it
would be solved anew while the technician waits.
"""

import json
import math
from collections.abc import Iterable
from pathlib import Path
from typing import Any

from triage.board.fault import Fault
from triage.board.part import Board
from triage.families.points import LOADS, OperatingPoints, fingerprint
from triage.job.cache import Cache
from triage.job.corners import is_corner, kept_keys
from triage.job.expecting import DRAWS, kept_key

STALE = "expected a key of a shipped profile; the board was changed since: triage solve PROFILE --into profiles/kept"


class KeptCheck:
    """Looks at kept files; what the boards ask for is worked out once."""

    def __init__(self, boards: Iterable[Board]) -> None:
        self._points: dict[str, Board] = {}
        self._known: set[str] = set()
        for board in boards:
            self._points[fingerprint(board)] = board
            self._known |= {f"points-{fingerprint(board)}", kept_key(board), *kept_keys(board)}

    def faults(self, path: Path) -> list[str]:
        """What is wrong with one kept file (``.json``, or ``.npz`` beside it), each with key, found and expected."""
        key, kind = path.stem, path.stem.partition("-")[0]
        if kind not in _CHECKS:
            return [f"name: {key!r} found, expected one of {', '.join(f'{known}-...' for known in _CHECKS)}"]
        if path.suffix == ".npz":
            return [] if path.with_suffix(".json").is_file() else ["names: no file found, expected the .json beside it"]
        try:
            content = json.loads(path.read_text(encoding="utf-8"))
        except (OSError, ValueError, RecursionError) as error:
            return [f"cannot be read: {error}; expected JSON"]
        faults = _CHECKS[kind](self, path, content)
        return faults if faults or key in self._known else [f"{key}: no profile asks for it; {STALE}"]

    def _of_points(self, path: Path, content: Any) -> list[str]:
        mark = path.stem.partition("-")[2]
        if not isinstance(content, dict) or content.get("fingerprint") != mark:
            found = content.get("fingerprint") if isinstance(content, dict) else type(content).__name__
            return [f"fingerprint: {found!r} found, expected {mark!r} as in the name"]
        points = content.get("points")
        if not isinstance(points, dict):
            return [f"points: {type(points).__name__} found, expected a table"]
        board = self._points.get(mark)
        return [fault for key, row in points.items() for fault in _point_faults(board, mark, key, row)]

    def _of_corner(self, path: Path, content: Any) -> list[str]:
        return [] if is_corner(content) else ["statistics: expected rows of nine figures, and rows, capacitors, periods"]

    def _of_inrush(self, path: Path, content: Any) -> list[str]:
        if not isinstance(content, dict):
            return [f"inrush: {type(content).__name__} found, expected a table of fuses"]
        return [f"{ref}: {value!r} found, expected a figure from 0 up" for ref, value in content.items() if not _is_from_0(value)]

    def _of_cold(self, path: Path, content: Any) -> list[str]:
        if not isinstance(content, list) or not all(isinstance(name, str) for name in content):
            return ["names: expected a list of hypotheses"]
        rows = Cache(path.parent).get_array(path.stem)
        if rows is None:
            return [f"readings: {path.stem}.npz is missing or damaged; expected one array"]
        if rows.ndim != 3 or (rows.shape[0], rows.shape[2]) != (len(content), DRAWS):
            return [f"readings: shape {rows.shape} found, expected ({len(content)}, probes, {DRAWS})"]
        return []


_CHECKS = {
    "points": KeptCheck._of_points, "corner": KeptCheck._of_corner, "inrush": KeptCheck._of_inrush, "cold": KeptCheck._of_cold,
}  # fmt: skip
"""First word of a kept file's name -> how it is checked."""


def _is_from_0(value: object) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and math.isfinite(value) and value >= 0


def _point_faults(board: Board | None, mark: str, key: str, row: Any) -> list[str]:
    """What is wrong with one operating point."""
    names, _, load = key.rpartition("@")
    if load not in LOADS:
        return [f"{key}: load {load!r} found, expected one of {', '.join(LOADS)}"]
    refs = {part.ref for part in board.parts} if board else None
    for name in filter(None, names.split("+")):
        try:
            fault = Fault.parse(name)
        except ValueError:
            return [f"{key}: {name!r} found, expected REF.mode"]
        if refs is not None and fault.ref not in refs:
            return [f"{key}: {fault.ref!r} found, expected a part of {board.id if board else ''}"]
    if board is None:
        return []
    try:
        OperatingPoints(board, {"fingerprint": mark, "points": {key: row}})
    except (TypeError, KeyError, ValueError, AttributeError) as error:
        return [f"{key}: {error} found, expected readings of every probe, powers, breaks and capacitors"]
    return []
