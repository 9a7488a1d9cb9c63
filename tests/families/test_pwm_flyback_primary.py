"""The flyback with primary-side regulation: sampled plateau, current limit, lockout; and a mains side without a fuse."""

import pytest

from tests.families.solving import settled, shown, state
from triage.board.estimate.assemble import estimate
from triage.board.estimate.template import template_of
from triage.board.part import Label
from triage.board.profile import load_profile
from triage.physics.transient import I_MAX, V_MAX
from triage.safety import cautions

BOARD = load_profile("pilot-boat-handset-charger")


def test_output_falls_little_with_the_load_and_the_frequency_much():
    """Common practice, no source: primary-side regulation keeps 5 % about the label at the board; the cable takes its drop."""
    full, idle = shown(BOARD), shown(BOARD, "noload")
    assert full["out"] == pytest.approx(5.0, rel=0.05) and idle["out"] == pytest.approx(5.25, rel=0.05)
    assert full["hertz"] > 10.0 * idle["hertz"] > 5e3
    assert 0.7 < full["out"] ** 2 / BOARD.full_load / full["watts"] < 0.85 and idle["watts"] < 0.3


def test_switch_sees_the_reflected_voltage_and_its_own_current_limit():
    """Reasoned: bulk, reflected output and the leakage spike; the peak current may overshoot by its delay."""
    row = settled(BOARD).row("U1")
    reflected = 15.0 * 5.4
    assert 325.0 + reflected < row[V_MAX] < 325.0 + reflected + 150.0
    assert 0.4 < row[I_MAX] < 2.5 * 0.52 * 1.65, "the spike at turn-on ends where the transistor saturates"


def test_rectifiers_side_by_side_share_the_load_and_one_alone_carries_on():
    both = settled(BOARD)
    assert both.row("D4")[6] == pytest.approx(0.5 * shown(BOARD)["out"] / BOARD.full_load, rel=0.05)
    alone = shown(BOARD, "full", "D5.open")
    assert alone["out"] == pytest.approx(shown(BOARD)["out"], rel=0.02)


@pytest.mark.long
@pytest.mark.parametrize(("fault", "expected"), [
    ("U1.open", {"dead"}), ("R1.open", {"fuse gone", "dead"}), ("L1.return_open", {"fuse gone", "dead"}), ("W1.open", {"dead"}),
])  # fmt: skip
def test_state_under_faults(fault, expected):
    assert state(BOARD, "full", fault) in expected


@pytest.mark.long
def test_without_its_auxiliary_supply_the_chip_stops_and_tries_again():
    """Reasoned: it lives on its supply capacitor, some milliseconds of pulses, then waits for the start resistor."""
    hiccup = shown(BOARD, "full", "D2.open")
    assert 100.0 < hiccup["hertz"] < 0.6 * shown(BOARD)["hertz"] and 0.1 < hiccup["watts"] < 0.6 * shown(BOARD)["watts"]
    assert hiccup["ripple"] > 0.5 * hiccup["out"]


@pytest.mark.long
@pytest.mark.parametrize(("line", "volts", "amperes"), [
    ("100-240 V~ 50/60 Hz", 5.0, 1.0), ("220-240 V~ 50 Hz", 5.0, 0.6), ("100-240 V~ 50/60 Hz", 5.0, 2.0),
    ("100-240 V~ 50/60 Hz", 12.0, 0.5),
])  # fmt: skip
def test_an_estimated_board_gives_what_its_label_says(line, volts, amperes):
    """Whole turns and the current limit of the chip included; 8 % for cable, rectifier and the fall from no load to full load."""
    board = estimate(template_of("pwm_flyback_primary"), Label(line, volts, amperes), name=f"label-{volts:g}-{amperes:g}")
    assert shown(board)["out"] == pytest.approx(volts, rel=0.08)
    assert shown(board, "noload")["out"] == pytest.approx(volts, rel=0.08)


def test_the_missing_fuse_is_pointed_out():
    texts = {caution.key: caution.text for caution in cautions.cautions(BOARD)}
    assert "No fuse" in texts["no fuse"] and "live output" not in texts
