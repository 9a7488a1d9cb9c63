"""The step-down converter on rectified mains: off-time regulation with its ground on the swinging node."""

import pytest

from tests.families.solving import settled, shown, state
from triage.board.estimate.assemble import estimate
from triage.board.estimate.template import template_of
from triage.board.part import Label
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.live import live_probes
from triage.physics.transient import I_MAX, V_MIN
from triage.safety import cautions

BOARD = load_profile("fish-dock-ice-controller")


def test_output_is_the_divider_times_the_reference():
    """Reasoned: 1.65 V x (1 + 13 / 2), with and without load, as two diodes of one kind cancel."""
    assert shown(BOARD)["out"] == pytest.approx(1.65 * 7.5, rel=0.04)
    assert shown(BOARD, "noload")["out"] == pytest.approx(1.65 * 7.5, rel=0.03)


def test_frequency_is_that_of_the_power_a_pulse_carries():
    """Reasoned: pulses from zero current carry L I^2 / 2 each; part flows straight through, part is lost."""
    full, at = shown(BOARD), settled(BOARD)
    peak = float(at.row("L1")[I_MAX])
    pulses = full["out"] ** 2 / BOARD.full_load / (0.5 * 1e-3 * peak**2)
    assert 0.35 < peak < 0.55
    assert 0.6 * pulses < full["hertz"] < 1.4 * pulses


def test_free_wheeling_diode_blocks_the_bulk_voltage():
    assert -settled(BOARD).row("D2")[V_MIN] == pytest.approx(322.0, rel=0.04)


def test_frequency_is_read_at_the_swinging_node():
    probe = next(probe for probe in live_probes(BOARD, family_of(BOARD.family), "full") if probe.function == "hertz")
    assert (probe.plus, probe.minus) == ("sw", "gnd")


@pytest.mark.long
@pytest.mark.parametrize(("fault", "expected"), [
    ("U1.open", {"dead"}), ("L1.open", {"dead"}), ("RF1.open", {"fuse gone", "dead"}), ("J1.open", {"dead"}),
    ("D2.short", {"dead"}),
    # Without feedback it rests four fifths of the time: the pulses between carry an idle output, not a load.
    ("D3.open", {"pulsing", "works only without load"}), ("R1.open", {"pulsing", "works only without load"}),
    ("U1.short", {"output high"}), ("C2.open", {"dead", "output low", "pulsing", "normal"}),
])  # fmt: skip
def test_state_under_faults(fault, expected):
    assert state(BOARD, "full", fault) in expected


def test_cautions_say_that_the_output_is_at_mains_potential():
    keys = {caution.key for caution in cautions.cautions(BOARD)}
    assert {"no insulation", "live output", "stored energy"} <= keys and "scope" not in keys


def test_a_board_estimated_from_its_label_regulates_to_it():
    board = estimate(template_of("buck_nonisolated"), Label("220-240 V~ 50 Hz", 12.0, 0.12))
    assert shown(board)["out"] == pytest.approx(12.0, rel=0.08)
