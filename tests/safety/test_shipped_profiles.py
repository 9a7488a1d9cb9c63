"""The whole room on every shipped profile: nothing raises, and the numbers are of the right size."""

from datetime import date

import pytest

from triage.board.profile import load_profile
from triage.data import data_folder
from triage.safety import cautions, cold_checks, decision, discharge, inspection, instruments, insulation, retest

NAMES = sorted(path.stem for path in data_folder("profiles").glob("*.toml"))


@pytest.mark.parametrize("name", NAMES)
def test_profile(name) -> None:
    board = load_profile(name)
    for caution in cautions.cautions(board):
        assert "{" not in caution.text and "nan" not in caution.text
    for store in discharge.stores(board):
        assert 100.0 < store.voltage < 450.0
        assert store.worst_time >= store.board_time > 0.0
        assert discharge.propose_bleeder(store) is not None
    checks = cold_checks.short_checks(board)
    assert checks
    for check in checks:
        assert all(board.side_of(node) for node in (check.probe.plus, check.probe.minus))
    assert insulation.barrier(board).creepage >= 3e-3
    lines = retest.lines(board, instruments.load(), date(2026, 1, 1))
    assert all(line.low is None or line.high is None or line.low < line.high for line in lines)
    for item in inspection.items(board):
        assert inspection.judge(board, item.key, item.answers[0] if item.answers else 8e-3).verdict == "sound"
    case = decision.board_case(board, [board.parts[0].ref], 0.9)
    assert decision.decide(case, decision.Shop()).choice in decision.CHOICES


def test_there_are_profiles() -> None:
    assert NAMES
