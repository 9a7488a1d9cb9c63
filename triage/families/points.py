"""Operating points of a board under many faults and loads, solved side by side and kept.

A point depends only on the parts of the board, so it is kept under a fingerprint of them: in a file that ships with a
profile, or in a cache folder. Values are rounded to six digits before they are used, so that a kept point and a new one
give the same belief to the last digit.
"""

import hashlib
import json
import math
import os
from collections.abc import Callable, Iterable, Mapping
from concurrent.futures import ThreadPoolExecutor, as_completed
from dataclasses import dataclass
from typing import Any

from triage.board.circuit import NOMINAL, Draw
from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.probe import CONDITIONS, Probe
from triage.board.profile import board_to_dict
from triage.families import family_of
from triage.families.destruction import destroyed
from triage.families.live import live_probes, live_readings
from triage.families.steady import Settled, rated_start, settle
from triage.physics.transient import POWER, QUICK, NoConvergence, Quality

SOLUTION = 3
"""Raised whenever the physics changes, so that kept points of an older solution are not used; see also ``Family.solution``."""
LOADS = CONDITIONS[1:]
NO_LOAD = 1e6
"""Resistance that stands for nothing connected [ohm]."""
DIGITS = 6
MOST_COLLATERAL = 6


def load_resistance(board: Board, condition: str) -> float:
    """Load of a condition [ohm]."""
    return {"noload": NO_LOAD, "half": 2.0 * board.full_load, "full": board.full_load}[condition]


def solution_of(family: str) -> int | list[int]:
    """What a kept solution of this family is marked with."""
    own = family_of(family).solution
    return [SOLUTION, own] if own else SOLUTION


def fingerprint(board: Board) -> str:
    """Short text that changes with anything the solution depends on."""
    content = board_to_dict(board)
    for key in ("id", "title", "note", "drawing", "label", "sides"):
        content.pop(key)
    content["load"] = board.full_load
    content["solution"] = solution_of(board.family)
    for part in content["part"]:
        for key in ("origin", "tolerance", "spread", "fault_modes"):
            part.pop(key, None)
    return hashlib.sha256(json.dumps(content, sort_keys=True).encode()).hexdigest()[:16]


@dataclass(frozen=True, slots=True)
class Point:
    """A steady state under given faults and load at nominal mains."""

    readings: Mapping[Probe, float]
    """Live readings [SI]; nan where the solution broke off."""
    powers: Mapping[str, float]
    """Ref -> mean power [W] of the parts with a power rating."""
    breaks: tuple[Fault, ...]
    """What this operating point destroys next: none, one part, or a fuse and what it takes along."""
    capacitors: Mapping[str, float]
    """Capacitor voltages at the end [V]."""


def point_key(faults: Iterable[Fault], load: str) -> str:
    """Name of a point in a kept file: order of the faults does not matter."""
    return "+".join(sorted(map(str, faults))) + "@" + load


def solve_point(board: Board, faults: tuple[Fault, ...], load: str, start: Mapping[str, float],
                quality: Quality = QUICK, draw: Draw = NOMINAL) -> Point:
    """One operating point at nominal mains; readings are nan when the solution broke off."""
    family = family_of(board.family)
    probes = live_probes(board, family, load)
    try:
        settled = settle(board, family, faults, mains=board.mains.nominal, load=load_resistance(board, load),
                         quality=quality, start=start, draw=draw)
    except NoConvergence:
        return Point(dict.fromkeys(probes, math.nan), {}, (), {})
    readings = {probe: _rounded(value) for probe, value in live_readings(board, settled, probes).items()}
    return Point(readings, _powers(board, settled), destroyed(board, settled, {fault.ref for fault in faults}),
                 {name: _rounded(volts) for name, volts in settled.capacitors.items()})


def _rounded(value: float) -> float:
    return float(f"{value:.{DIGITS}g}")


def _powers(board: Board, settled: Settled) -> dict[str, float]:
    """Mean power of the parts that have a power rating [W]."""
    return {part.ref: _rounded(float(settled.row(part.ref)[POWER])) for part in board.parts
            if "power" in part.ratings and (part.ref, "") in settled.rows}


class OperatingPoints:
    """Solves operating points of one board once and remembers them.

    ``progress`` is called with (done, wanted) while a batch is solved.
    """

    def __init__(self, board: Board, kept: Mapping[str, Any] | None = None,
                 progress: Callable[[int, int], None] | None = None) -> None:
        self.board = board
        self._points: dict[str, Point] = {}
        self._progress = progress
        if kept and kept.get("fingerprint") == fingerprint(board):
            for key, row in kept.get("points", {}).items():
                self._points[key] = self._read(key, row)

    def __contains__(self, key: str) -> bool:
        return key in self._points

    def at(self, faults: Iterable[Fault], load: str) -> Point:
        """The point under these faults and this load, solved now when it is not known yet."""
        faults = tuple(faults)
        key = point_key(faults, load)
        if key not in self._points:
            self._points[key] = solve_point(self.board, faults, load, self._start(faults, load))
        return self._points[key]

    def solve(self, wanted: Iterable[tuple[tuple[Fault, ...], str]]) -> None:
        """Solve many points at a time on all processors."""
        for load in LOADS:
            self.at((), load)
        todo = [(faults, load) for faults, load in dict.fromkeys(wanted) if point_key(faults, load) not in self._points]
        with ThreadPoolExecutor(max_workers=os.cpu_count() or 1) as pool:
            jobs = {pool.submit(solve_point, self.board, faults, load, self._start(faults, load)): (faults, load)
                    for faults, load in todo}
            for done, job in enumerate(as_completed(jobs), 1):
                faults, load = jobs[job]
                self._points[point_key(faults, load)] = job.result()
                if self._progress:
                    self._progress(done, len(todo))

    def _start(self, faults: tuple[Fault, ...], load: str) -> Mapping[str, float]:
        """Capacitor voltages of the sound board under this load [V]; rated ones for the sound board itself."""
        if faults:
            return self.at((), load).capacitors
        return rated_start(self.board, family_of(self.board.family))

    def chains(self, roots: Iterable[Fault]) -> dict[Fault, dict[str, tuple[Fault, ...]]]:
        """For each root fault and load the parts that it takes along, in order of destruction."""
        result: dict[Fault, dict[str, tuple[Fault, ...]]] = {root: dict.fromkeys(LOADS, ()) for root in roots}
        open_ends = [(root, load) for root in result for load in LOADS]
        for _ in range(MOST_COLLATERAL + 1):
            self.solve(((root, *result[root][load]), load) for root, load in open_ends)
            going = []
            for root, load in open_ends:
                broken = self.at((root, *result[root][load]), load).breaks
                if broken and len(result[root][load]) < MOST_COLLATERAL:
                    result[root][load] = (*result[root][load], *broken)
                    going.append((root, load))
            open_ends = going
            if not open_ends:
                break
        return result

    def kept(self) -> dict[str, Any]:
        """Content of a file from which the points can be had again."""
        return {"fingerprint": fingerprint(self.board),
                "points": {key: self._write(point) for key, point in sorted(self._points.items())}}

    def _write(self, point: Point) -> dict[str, Any]:
        return {"readings": [None if math.isnan(v) else v for v in point.readings.values()], "powers": dict(point.powers),
                "breaks": "+".join(map(str, point.breaks)), "capacitors": dict(point.capacitors)}

    def _read(self, key: str, row: Mapping[str, Any]) -> Point:
        probes = live_probes(self.board, family_of(self.board.family), key.rpartition("@")[2])
        readings = [math.nan if v is None else float(v) for v in row["readings"]]
        return Point(dict(zip(probes, readings, strict=True)), row["powers"],
                     tuple(map(Fault.parse, filter(None, row["breaks"].split("+")))), row["capacitors"])

