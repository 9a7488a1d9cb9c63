"""The sound board in its corners of use, kept by what the solution really depends on: the circuit itself.

A part of other ratings but the same electrical values leaves the circuit as it is, so that its stresses come
at once; only the ratings are held against them anew. What is kept is rounded before its first use, so that a
kept and a new solution give the same stresses to the last digit.
"""

import contextlib
import hashlib
import json
from collections.abc import Iterable
from concurrent.futures import ThreadPoolExecutor, as_completed
from dataclasses import asdict
from typing import Any

import numpy as np

from triage.board.circuit import circuit
from triage.board.part import Board
from triage.board.stress import Stress
from triage.families.points import solution_of
from triage.families.steady import Settled
from triage.families.stresses import (
    Condition,
    conditions,
    inrush_i2t,
    settle_corners,
    worst_corners,
    worst_stresses,
)
from triage.job.cache import Kept
from triage.job.progress import report
from triage.physics.netlist import Netlist
from triage.physics.transient import NoConvergence, Stretch

_WHAT = "the sound board at low and high mains"
_BROKE_OFF = {"broke off": True}
"""Kept for a corner that has no solution, so that nobody waits for it twice."""
DIGITS = 7
"""Digits kept: more than a solution is good for, fewer than two machines may differ in."""


def board_stresses(board: Board, kept: Kept) -> tuple[Stress, ...]:
    """Worst stress of every part over the nine corners where they are kept, else over the three that matter
    most.

    Slow for a circuit that was never solved: some seconds a corner. Empty when no corner of it can be solved.
    """
    wanted = conditions(board)
    if not all(kept.has(_key(board, corner)) for corner in wanted):
        wanted = worst_corners(board)
    settled = settled_corners(board, wanted, kept)
    return worst_stresses(board, settled, _inrush(board, kept)) if settled else ()


def solved_before(board: Board, kept: Kept) -> bool:
    """True when the stresses of a board come at once, be it that there is no solution."""
    return all(kept.has(_key(board, corner)) for corner in worst_corners(board))


def known_stresses(board: Board, kept: Kept) -> tuple[Stress, ...]:
    """The same from what is kept alone, at once; empty for a circuit that was never solved."""
    for wanted in (conditions(board), worst_corners(board)):
        if all(kept.has(_key(board, corner)) for corner in wanted):
            settled = {corner: found for corner in wanted if (found := _kept_corner(board, corner, kept)) is not None}
            inrush = kept.get(_inrush_key(board))
            return worst_stresses(board, settled, _melting(inrush)) if settled else ()
    return ()


def solve_all_corners(board: Board, kept: Kept) -> None:
    """Solve all nine corners of a board and keep them."""
    settled_corners(board, conditions(board), kept)
    _inrush(board, kept)


def settled_corners(board: Board, corners: Iterable[Condition], kept: Kept) -> dict[Condition, Settled]:
    """The steady state in each corner, from what is kept or solved now."""
    found: dict[Condition, Settled] = {}
    missing = []
    for corner in corners:
        settled = _kept_corner(board, corner, kept)
        if settled is not None:
            found[corner] = settled
        elif kept.get(_key(board, corner)) != _BROKE_OFF:
            missing.append(corner)
    solved = _solved(board, missing)
    for corner in missing:
        content = _write(solved[corner]) if corner in solved else _BROKE_OFF
        kept.put(_key(board, corner), content)
        if corner in solved:
            found[corner] = _read(content)
    return found


def _kept_corner(board: Board, corner: Condition, kept: Kept) -> Settled | None:
    with contextlib.suppress(TypeError, KeyError, ValueError):
        return _read(kept.get(_key(board, corner)))
    return None


def _solved(board: Board, corners: list[Condition]) -> dict[Condition, Settled]:
    """The corners solved side by side; one whose solution breaks off is left out, so that the others still
    tell."""
    found: dict[Condition, Settled] = {}
    if not corners:
        return found
    with ThreadPoolExecutor() as pool:
        jobs = [pool.submit(settle_corners, board, [corner]) for corner in corners]
        try:
            report(_WHAT, 0, len(jobs))
            for done, job in enumerate(as_completed(jobs), 1):
                with contextlib.suppress(NoConvergence):
                    found |= job.result()
                report(_WHAT, done, len(jobs))
        except BaseException:
            pool.shutdown(wait=False, cancel_futures=True)
            raise
    return {corner: found[corner] for corner in corners if corner in found}


def _inrush(board: Board, kept: Kept) -> dict[str, float]:
    """Melting integral of the cold start by fuse [A2s]."""
    key = _inrush_key(board)
    found = kept.get(key)
    if not isinstance(found, dict):
        try:
            found = {ref: _rounded(value) for ref, value in inrush_i2t(board).items()}
        except NoConvergence:
            return {}
        kept.put(key, found)
    return _melting(found)


def _inrush_key(board: Board) -> str:
    return "inrush-" + _digest(circuit(board, mains=board.mains.high, load=board.full_load), board.family)


def _melting(found: Any) -> dict[str, float]:
    return {str(ref): float(value) for ref, value in found.items()} if isinstance(found, dict) else {}


def _key(board: Board, corner: Condition) -> str:
    return "corner-" + _digest(circuit(board, mains=corner.mains, load=corner.load), board.family)


def _digest(net: Netlist, family: str) -> str:
    """Short text that changes with any element of a circuit, and with the solution of its family."""
    content = {
        "reference": net.reference, "resistors": net.resistors, "capacitors": net.capacitors, "windings": net.windings,
        "groups": [[(*pair, k) for pair, k in sorted(group.items())] for group in net.groups], "diodes": net.diodes,
        "rest": [
            getattr(net, name)
            for name in sorted(type(net).__dataclass_fields__)
            if name not in ("reference", "resistors", "capacitors", "windings", "groups", "diodes", "ports")
        ],
        "solution": solution_of(family),
    }  # fmt: skip
    return hashlib.sha256(json.dumps(content, sort_keys=True, default=_plain).encode()).hexdigest()[:20]


def _plain(value: Any) -> Any:
    """What JSON cannot write by itself: read-only mappings and records of the netlist."""
    if hasattr(value, "__dataclass_fields__"):
        return asdict(value)
    return dict(value)


def _rounded(value: float) -> float:
    return float(f"{value:.{DIGITS}g}")


def _write(settled: Settled) -> dict[str, Any]:
    return {
        "statistics": [[_rounded(float(value)) for value in row] for row in settled.stretch.statistics],
        "frequency": _rounded(settled.stretch.frequency),
        "steps": settled.stretch.steps,
        "rows": [[ref, suffix, row] for (ref, suffix), row in settled.rows.items()],
        "capacitors": {name: _rounded(volts) for name, volts in settled.capacitors.items()},
        "periods": settled.periods,
        "started": settled.started,
    }


def _read(content: Any) -> Settled:
    """Raises TypeError, KeyError or ValueError for content that is not one of ours."""
    statistics = np.array(content["statistics"], dtype=float)
    rows = {(str(ref), str(suffix)): int(row) for ref, suffix, row in content["rows"]}
    if statistics.ndim != 2 or statistics.shape[1] != 9 or any(not 0 <= r < len(statistics) for r in rows.values()):
        raise ValueError("statistics")
    stretch = Stretch(statistics, float(content["frequency"]), int(content["steps"]), np.zeros((0, 1)))
    capacitors = {str(name): float(volts) for name, volts in content["capacitors"].items()}
    return Settled(stretch, rows, capacitors, int(content["periods"]), bool(content["started"]))


def kept_keys(board: Board) -> tuple[str, ...]:
    """Keys under which everything that this module keeps of a board lies."""
    corners = tuple(_key(board, corner) for corner in conditions(board))
    return (*corners, "inrush-" + _digest(circuit(board, mains=board.mains.high, load=board.full_load), board.family))


def is_corner(content: Any) -> bool:
    """True for a kept corner that can be read again."""
    try:
        _read(content)
    except (TypeError, KeyError, ValueError):
        return False
    return True
