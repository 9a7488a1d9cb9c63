"""Stresses from kept corners: solved once for a circuit, rated anew for every rating."""

from collections.abc import Iterable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from triage.board.circuit import circuit
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.families.steady import Settled
from triage.families.stresses import Condition
from triage.job import corners
from triage.job.cache import Cache
from triage.physics.transient import NoConvergence, Stretch

BOARD = load_profile("harbour-handset-charger")


@pytest.fixture
def solved(monkeypatch: pytest.MonkeyPatch) -> list[str]:
    """Stands in for the time-domain solution: invented statistics, and a list of the corners asked for."""
    asked: list[str] = []

    def settle(board: Board, wanted: Iterable[Condition]) -> dict[Condition, Settled]:
        found = {}
        for corner in wanted:
            asked.append(corner.name)
            ports = circuit(board, mains=corner.mains, load=corner.load).ports
            rows = {(port.ref, port.suffix): row for row, port in enumerate(ports)}
            statistics = np.full((len(rows), 9), corner.mains / 3.0)
            found[corner] = Settled(Stretch(statistics, 5e4 / 3, 10, np.zeros((0, 1))), rows, {"C1": 1 / 3}, 2, True)
        return found

    monkeypatch.setattr(corners, "settle_corners", settle)
    monkeypatch.setattr(corners, "inrush_i2t", lambda board: {"RF1": 1 / 3})
    return asked


def with_part(ref: str, **change: object) -> Board:
    parts = tuple(replace(part, **change) if part.ref == ref else part for part in BOARD.parts)  # type: ignore[arg-type]
    return replace(BOARD, parts=parts)


def test_a_circuit_is_solved_once_and_the_kept_answer_is_the_same(tmp_path: Path, solved: list[str]) -> None:
    kept = Cache(tmp_path)
    first = corners.board_stresses(BOARD, kept)
    assert len(solved) == 3 and first
    assert corners.board_stresses(BOARD, kept) == first
    assert len(solved) == 3


def test_another_rating_is_rated_anew_without_a_solution(tmp_path: Path, solved: list[str]) -> None:
    kept = Cache(tmp_path)
    before = {(s.ref, s.quantity): s for s in corners.board_stresses(BOARD, kept)}
    stronger = with_part("R1", ratings={"power": 2.0, "voltage": 900.0}, type="big one")
    after = {(s.ref, s.quantity): s for s in corners.board_stresses(stronger, kept)}
    assert len(solved) == 3
    was, now = before["R1", "peak_voltage"], after["R1", "peak_voltage"]
    assert (now.value, now.rating) == (was.value, 900.0) and was.rating != 900.0


def test_another_value_is_another_circuit(tmp_path: Path, solved: list[str]) -> None:
    kept = Cache(tmp_path)
    corners.board_stresses(BOARD, kept)
    corners.board_stresses(with_part("R1", value={"resistance": 2.2e6}), kept)
    assert len(solved) == 6


def test_nine_corners_are_used_once_they_are_kept(tmp_path: Path, solved: list[str]) -> None:
    kept = Cache(tmp_path)
    corners.solve_all_corners(BOARD, kept)
    assert len(solved) == 9
    corners.board_stresses(BOARD, kept)
    assert len(solved) == 9


def test_a_corner_that_cannot_be_solved_is_left_out(tmp_path: Path, solved: list[str], monkeypatch: pytest.MonkeyPatch) -> None:
    good = corners.settle_corners

    def sometimes(board: Board, wanted: list[Condition]) -> dict[Condition, Settled]:
        if any("no load" in corner.name for corner in wanted):
            raise NoConvergence(0.001)
        return good(board, wanted)

    monkeypatch.setattr(corners, "settle_corners", sometimes)
    found = corners.board_stresses(BOARD, Cache(tmp_path))
    assert found and not any("no load" in one.condition for one in found)
    monkeypatch.setattr(corners, "settle_corners", lambda board, wanted: (_ for _ in ()).throw(NoConvergence(0.0)))
    assert corners.board_stresses(BOARD, Cache(tmp_path / "empty")) == ()


@pytest.mark.parametrize("content", ["{}", "[]", '{"statistics": [[1]], "rows": []}', "7"])
def test_a_damaged_kept_corner_is_solved_again(tmp_path: Path, solved: list[str], content: str) -> None:
    kept = Cache(tmp_path)
    first = corners.board_stresses(BOARD, kept)
    for path in tmp_path.glob("corner-*.json"):
        path.write_text(content)
    assert corners.board_stresses(BOARD, kept) == first
    assert len(solved) == 6
