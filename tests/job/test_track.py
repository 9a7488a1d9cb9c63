"""How the suspects moved, reckoned anew from the log; how far a calculation is, told past the rooms; what a repaired
adapter still needs before hands come to it again."""

from pathlib import Path

import pytest

from tests.job.stand_in import Clock, StandIn
from tests.job.test_bench import answer, new_bench, through_cautions
from triage.board.part import Board
from triage.board.stress import Stress
from triage.job.bench import Bench
from triage.job.picture import lesson
from triage.job.progress import heard_by, report
from triage.job.track import AT_START


def test_a_resumed_job_shows_the_same_way_as_the_one_that_went_it(tmp_path: Path) -> None:
    bench = new_bench(tmp_path / "cube.toml")
    bench.complain("dead", "dead", "full")
    view = answer(bench, through_cautions(bench), {})
    went = bench.moves()
    assert went[0].text == AT_START and went[1].text.startswith("complaint: dead")
    assert went[-1].suspects == view.suspects
    bench.release()
    again = Bench.open(tmp_path / "cube.toml", StandIn(), Clock())
    assert again.moves() == ()
    again.prepare()
    assert again.moves() == went


def test_what_was_taken_back_is_no_move(tmp_path: Path) -> None:
    bench = new_bench(tmp_path / "cube.toml")
    bench.complain("dead", "dead", "full")
    before = bench.moves()
    bench.see("hum")
    assert len(bench.moves()) == len(before) + 1
    bench.undo()
    assert bench.moves() == before


def test_volts_left_on_a_capacitor_are_no_move(tmp_path: Path) -> None:
    bench = new_bench(tmp_path / "cube.toml")
    bench.acknowledge("all")
    before = bench.moves()
    bench.read("volts_dc", "bulk", "pgnd", "cold", "3")
    assert bench.moves() == before


class Slow(StandIn):
    """Tells how far it is from deep within."""

    def known_stresses(self, board: Board) -> tuple[Stress, ...]:
        report("stresses", 1, 2)
        return super().known_stresses(board)


def test_a_listener_hears_how_far_it_is_and_can_end_it(tmp_path: Path) -> None:
    bench = Bench.create("harbour-handset-charger", tmp_path / "cube.toml", Slow(), Clock())
    heard: list[tuple[str, int, int]] = []

    def refuse(what: str, done: int, wanted: int) -> None:
        heard.append((what, done, wanted))
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        bench.prepare(refuse)
    assert heard == [("stresses", 1, 2)] and bench.view().computing
    bench.prepare(lambda *told: heard.append(told))
    assert heard[1:] == [("stresses", 1, 2)] and not bench.view().computing


def test_nobody_listens_unless_asked() -> None:
    report("anything")
    with heard_by(None):
        report("anything")


def test_an_outcome_that_hands_the_adapter_back_counts_as_a_cure(tmp_path: Path) -> None:
    """The checks have passed before it is taken: nobody has to say `it works` besides."""
    bench = new_bench(tmp_path / "cube.toml")
    bench.complain("dead", "dead", "full")
    view = answer(bench, through_cautions(bench), {})
    assert view.verdict.ref == "RF1"
    assert lesson(bench, "repaired")["cured"] is False, "no part was fitted"
    bench.fit("RF1", "high-voltage film 500 V")
    assert lesson(bench, "repaired")["cured"] is True
    assert lesson(bench, "scrapped")["cured"] is False
