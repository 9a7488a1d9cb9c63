"""The unregulated iron-core family: how its output falls with the load, and what each fault shows."""

import pytest

from tests.families.solving import settled, shown, state
from triage.board.estimate.assemble import estimate
from triage.board.estimate.seen import parse_seen
from triage.board.estimate.template import template_of
from triage.board.part import Label
from triage.board.profile import load_profile
from triage.physics.rectifier_estimates import ripple
from triage.physics.transient import V_MIN

BOARD = load_profile("mast-lamp-adapter")


def test_output_is_that_of_the_label_at_the_rated_load_and_rises_without_it():
    """Common practice, no source: an unregulated adapter gives its label within a tenth and a fifth to a half more idle."""
    full, idle = shown(BOARD)["out"], shown(BOARD, "noload")["out"]
    assert full == pytest.approx(12.0, rel=0.1)
    assert 1.2 < idle / full < 1.5


def test_output_follows_the_mains():
    low, high = (shown(BOARD, mains=volts)["out"] for volts in (BOARD.mains.low, BOARD.mains.high))
    assert high / low == pytest.approx(BOARD.mains.high / BOARD.mains.low, rel=0.1)


def test_ripple_is_that_of_the_hand_equation():
    """The hand equation (discharge over a whole half period) is on the high side by up to a half."""
    found, hand = shown(BOARD)["ripple"], ripple(0.4, 2.2e-3, 50.0, 2)
    assert hand / 1.6 < found < hand


def test_a_rectifier_of_a_tapped_winding_blocks_twice_the_crest():
    """Reasoned: the other half winding stands in series with the reservoir (peak inverse voltage of the textbooks)."""
    row = settled(BOARD, "noload").row("D1")
    crest = shown(BOARD, "noload")["out"]
    assert -row[V_MIN] == pytest.approx(2.0 * crest, rel=0.08)


@pytest.mark.parametrize(("fault", "load", "expected"), [
    ("T1.half_open", "full", {"output low", "hum or ripple"}), ("D1.open", "full", {"output low", "hum or ripple"}),
    ("C1.open", "full", {"hum or ripple", "output low", "pulsing"}), ("F1.open", "full", {"fuse gone", "dead"}),
    ("T1.pri_open", "full", {"fuse gone", "dead"}), ("W1.open", "full", {"fuse gone", "dead"}),
    ("W1.return_open", "full", {"fuse gone", "dead"}), ("W2.open", "full", {"dead"}), ("W2.return_open", "full", {"dead"}),
    ("W2.high", "full", {"works only without load"}), ("W2.short", "full", {"dead", "output low"}),
    ("D3.open", "full", {"normal"}),
])  # fmt: skip
def test_state_under_faults(fault, load, expected):
    assert state(BOARD, load, fault) in expected


@pytest.mark.parametrize(("words", "rectifiers"), [(["centre tap"], 2), (["bridge"], 4), (["half wave"], 1)])
def test_each_rectifier_estimated_from_the_label_gives_about_its_output(words, rectifiers):
    label = Label("230 V~ 50 Hz", 9.0, 0.3)
    board = estimate(template_of("linear_unregulated"), label, parse_seen(words))
    assert sum("rectifier" in part.role or part.role == "bridge diode" for part in board.parts) == rectifiers
    assert shown(board)["out"] == pytest.approx(9.0, rel=0.25)


def test_without_cord_and_cable_the_board_has_its_terminals_itself():
    label = Label("230 V~ 50 Hz", 9.0, 0.3)
    board = estimate(template_of("linear_unregulated"), label, parse_seen(["no mains cord", "no output cable"]))
    assert not any(part.kind == "cable" for part in board.parts)
    assert board.side_of("out") == "secondary" and board.side_of("out_minus") is None
    assert shown(board)["out"] > 7.0
