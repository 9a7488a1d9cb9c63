"""The capacitor dropper: current set by the capacitor, voltage by the zener, and no barrier to the mains."""

from datetime import date

import pytest

from tests.families.solving import settled, shown, state
from triage.board.estimate.assemble import estimate
from triage.board.estimate.template import template_of
from triage.board.part import Label
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families.cold import read_cold
from triage.physics.capacitor_dropper import dropper_current, dropper_rms_current
from triage.physics.transient import I_MEAN
from triage.safety import cautions, discharge, instruments, retest

BOARD = load_profile("harbour-gate-timer")


def test_currents_are_those_of_the_hand_equations():
    """Reasoned: charge of a swing times the periods a second; the inrush resistor and the bleeder are neglected there."""
    at = settled(BOARD)
    through = float(at.row("D1")[I_MEAN] + max(-at.row("DZ1")[I_MEAN], 0.0))
    # The zener's mean holds its forward half-wave too: all that the capacitor passes forward returns through it.
    assert shown(BOARD)["amps"] == pytest.approx(dropper_rms_current(1e-6, 230.0, 50.0), rel=0.03)
    assert through <= dropper_current(1e-6, 230.0, 50.0, 13.0)
    assert float(at.row("D1")[I_MEAN]) == pytest.approx(shown(BOARD)["out"] / BOARD.full_load, rel=0.03)


def test_output_stays_until_the_load_takes_more_than_the_capacitor_passes():
    assert shown(BOARD)["out"] == pytest.approx(12.4, rel=0.03)
    assert shown(BOARD, "noload")["out"] == pytest.approx(13.1, rel=0.03)
    worn = shown(BOARD, "full", "CX1.low_capacitance")["out"]
    assert worn == pytest.approx(dropper_current(0.3e-6, 230.0, 50.0, worn) * BOARD.full_load, rel=0.1)


@pytest.mark.parametrize(("fault", "expected"), [
    # With the capacitor open the bleeder still passes a fifth of a milliampere: enough for the idle reservoir, not for a load.
    ("CX1.open", {"output low", "works only without load"}),
    ("CX1.low_capacitance", {"output low", "works only without load"}), ("DZ1.short", {"dead"}),
    ("DZ1.open", {"dead", "output low", "works only without load"}), ("D1.open", {"dead"}), ("RF1.open", {"dead", "fuse gone"}),
    ("W1.open", {"dead", "fuse gone"}), ("J1.open", {"dead"}), ("RV1.open", {"normal"}), ("R1.open", {"normal"}),
    ("C1.open", {"hum or ripple", "output low", "pulsing"}), ("CX1.short", {"output high", "hot part"}),
])  # fmt: skip
def test_state_under_faults(fault, expected):
    assert state(BOARD, "full", fault) in expected


def test_cold_readings_tell_the_faults_apart():
    """Reasoned: bleeder, fusible resistor and zener junction as the meter meets them."""
    across, along = Probe("ohms", "fused", "dropped"), Probe("ohms", "lp", "fused")
    sound, bleeder_open = (read_cold(BOARD, faults, (across,))[0, 0] for faults in ((), (_fault("R1.open"),)))
    assert sound == pytest.approx(470e3, rel=0.1) and bleeder_open > 2e6
    assert read_cold(BOARD, (), (along,))[0, 0] == pytest.approx(100.0, rel=0.02)
    assert read_cold(BOARD, (_fault("RV1.short"),), (Probe("ohms", "fused", "gnd"),))[0, 0] < 1.0


def _fault(text):
    from triage.board.fault import Fault

    return Fault.parse(text)


def test_cautions_say_that_the_output_is_at_mains_potential():
    texts = {caution.key: caution for caution in cautions.cautions(BOARD)}
    assert "Insulation of the user: none" in texts["no insulation"].text and texts["no insulation"].gate == "cold"
    assert "mains potential" in texts["live output"].text and texts["live output"].gate == "live"
    assert "scope" not in texts, "that one allows an earthed clip on the output side"
    assert "no fuse" not in texts
    assert "CX1" in texts["plug pins"].text


def test_retest_asks_for_the_housing_in_place_of_the_barrier():
    keys = [line.key for line in retest.lines(BOARD, instruments.load(), date(2026, 1, 1))]
    assert "insulation of the housing" in keys
    assert not {"insulation", "touch current", "electric strength"} & set(keys)


def test_the_dropper_capacitor_keeps_the_plug_pins_charged():
    store = next(store for store in discharge.stores(BOARD) if store.ref == "CX1")
    assert store.board_time == pytest.approx(470e3 * 1.1e-6 * 1.786, rel=0.02)
    assert store.worst_ref == "R1" and store.worst_time > 100.0


@pytest.mark.parametrize(("volts", "amperes"), [(5.0, 0.03), (12.0, 0.02), (24.0, 0.025)])
def test_a_board_estimated_from_its_label_gives_its_output(volts, amperes):
    board = estimate(template_of("capacitor_dropper"), Label("220-240 V~ 50 Hz", volts, amperes))
    assert shown(board)["out"] == pytest.approx(volts, rel=0.12)
