"""What the powered board does is solved while the cold one is read, and never changes a suggestion under the hand."""

from collections.abc import Callable, Iterator, Sequence
from pathlib import Path

import pytest

from tests.job.stand_in import PROFILE, Clock, StandIn
from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.board.stress import Stress
from triage.families.points import LOADS, point_key
from triage.job.bench import Bench
from triage.job.cache import Cache
from triage.job.wiring import Wiring, faults_of


class Unsolved(StandIn):
    """Nothing is known of the powered board until it was worked out."""

    def __init__(self) -> None:
        self.solved: list[Fault] = []
        self.order: list[Fault] = []

    def known_stresses(self, board: Board) -> tuple[Stress, ...]:
        return self.stresses(board) if self.solved else ()

    def work_out(self, board: Board, leading: Callable[[], Sequence[Fault]]) -> Iterator[tuple[str, int, int]]:
        wanted = 3
        while len(self.solved) < wanted:
            self.order = list(leading())
            self.solved.append(next(fault for fault in self.order if fault not in self.solved))
            yield str(self.solved[-1]), len(self.solved), wanted


def begun(folder: Path) -> tuple[Bench, Unsolved]:
    workings = Unsolved()
    bench = Bench.create(PROFILE, folder / "cube.toml", workings, Clock())
    bench.prepare()
    bench.acknowledge("all")
    return bench, workings


def test_the_likeliest_fault_is_solved_first(tmp_path: Path) -> None:
    bench, workings = begun(tmp_path)
    bench.complain("dead", "dead", "full")
    first = next(one for one in bench.view().suspects if one.ref)
    assert bench.work_out()
    assert str(workings.solved[0]) == f"{first.ref}.{first.mode}"
    assert not bench.work_out(), "nothing is left"


def test_what_was_worked_out_counts_from_the_next_entry_on(tmp_path: Path) -> None:
    bench, _ = begun(tmp_path)
    bench.work_out()
    assert bench.answers is not None and bench.answers.stresses == ()
    bench.complain("dead", "dead", "full")
    assert bench.answers.stresses


def test_a_screen_that_waits_for_nothing_can_take_it_up_at_once(tmp_path: Path) -> None:
    bench, _ = begun(tmp_path)
    bench.work_out()
    bench.take_up()
    assert bench.answers is not None and bench.answers.stresses


def test_stopping_keeps_what_was_solved(tmp_path: Path) -> None:
    bench, workings = begun(tmp_path)

    def stop(what: str, done: int, wanted: int) -> None:
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        bench.work_out(stop)
    assert len(workings.solved) == 1
    assert bench.work_out()
    assert len(workings.solved) == 3


def test_a_board_nobody_solved_suggests_without_solving_it(tmp_path: Path) -> None:
    """The unpowered board takes seconds; the powered one is not touched before ``work_out``."""
    board = load_profile("pilot-boat-handset-charger")
    kept = Cache(tmp_path)
    wiring = Wiring(kept)
    assert wiring.known_stresses(board) == ()
    steps = wiring.work_out(board, lambda: faults_of(board)[-1:])
    assert not any(tmp_path.glob("points-*"))
    steps.close()


def test_a_shipped_board_has_nothing_left_to_work_out() -> None:
    board = load_profile(PROFILE)
    wiring = Wiring()
    points = wiring.points(board)
    assert all(point_key((fault,), load) in points for fault in faults_of(board) for load in LOADS)
    assert not list(wiring.work_out(board))
