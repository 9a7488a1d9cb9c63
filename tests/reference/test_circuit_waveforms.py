"""Waveforms of a sound board against the reference circuits: their peaks, the valley of the bulk, the ripple of the output."""

import numpy as np
import pytest

from tests.reference.reference_circuits import PROFILES, SOURCE, healthy_table
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.families.waveforms import MOST_POINTS, ripple, waveforms

BOARD = load_profile(PROFILES["rcc-zener"])


@pytest.fixture(scope="module")
def sound():
    return waveforms(BOARD, (), mains=BOARD.mains.nominal, load=BOARD.full_load)


def test_peaks_are_those_of_the_simulated_circuit(sound, outside_check):
    """The owner's bounds: voltages 5 %, frequencies 15 %; the ripple is the difference of two voltages."""
    known = {key[1:]: value for key, value in healthy_table("rcc-zener").items() if key[0] == "nominal_full"}
    for got, key, bound in (
        (sound.switch.voltage.max(), ("Q1", "v_peak"), 0.05),
        (sound.bulk.voltage.max(), ("ADAPTER", "v_bulk_max"), 0.05),
        (sound.bulk.voltage.min(), ("ADAPTER", "v_bulk_min"), 0.05),
        (sound.frequency, ("ADAPTER", "f_sw"), 0.15),
    ):
        outside_check("waveforms", SOURCE, float(got), known[key], bound, what="/".join(key))
    ripple = float(np.ptp(sound.output.voltage))
    outside_check("waveforms", SOURCE, ripple, known["ADAPTER", "v_out_ripple_pp"],
                  0.05 * BOARD.label.output_voltage, absolute=True, what="ripple of the output")


def test_switch_is_seen_on_and_off_within_what_is_shown(sound):
    """Reasoned: one and a half periods hold a whole one, near zero while on, at bulk and reflected voltage while off."""
    shown = sound.switch
    assert shown.time[0] == pytest.approx(0.0, abs=1e-6)
    assert shown.time[-1] == pytest.approx(1.5 / sound.frequency, rel=0.05), "to the nearest step of the solution"
    assert shown.voltage.min() < 3.0 and np.median(shown.voltage[shown.voltage > 100.0]) > sound.bulk.voltage.max()
    turned_on = np.count_nonzero(np.diff((shown.voltage < 100.0).astype(int)) == 1)
    assert 1 <= turned_on <= 2
    assert all(len(one.time) <= MOST_POINTS for one in (sound.switch, sound.bulk, sound.output))


def test_bulk_covers_one_mains_period_with_one_charge_of_a_half_wave(sound):
    """Textbook: behind a single diode the bulk falls from one crest until the next but one, half a period later still."""
    shown = sound.bulk
    assert shown.time[-1] == pytest.approx(1.0 / BOARD.mains.frequency, rel=0.02)
    at = np.interp(np.array([0.25, 0.5, 0.75, 1.0]) / BOARD.mains.frequency, shown.time, shown.voltage)
    assert at[0] > at[1] > at[2] < at[3]


def test_dried_out_bulk_has_a_deeper_valley(sound):
    """Common practice, no source: a bulk capacitor that lost its capacitance lets the mains through to the output."""
    worn = waveforms(BOARD, (Fault("C1", "low_capacitance"),), mains=BOARD.mains.nominal, load=BOARD.full_load,
                     span=float(sound.switch.time[-1]))
    assert np.ptp(worn.bulk.voltage) > 2.0 * np.ptp(sound.bulk.voltage)
    assert worn.switch.time[-1] == pytest.approx(sound.switch.time[-1], rel=0.05)


def test_mains_frequency_families_show_their_reservoir_and_no_switch():
    board = load_profile("choir-keyboard-supply")
    found = waveforms(board, (), mains=board.mains.nominal, load=board.full_load)
    assert found.switch is None and found.frequency == 0.0
    assert 0.0 < np.ptp(found.output.voltage) < np.ptp(found.bulk.voltage), "the regulator takes the ripple away"


@pytest.mark.parametrize("ref", ["C1", "C5"])
def test_ripple_current_is_that_of_the_simulated_circuit(ref, outside_check):
    """The owner's bound for currents, 10 %; both parts together are the whole."""
    found = ripple(BOARD, ref, mains=BOARD.mains.low, load=BOARD.full_load)
    known = healthy_table("rcc-zener")["low_full", ref, "i_ripple_rms"]
    outside_check("waveforms", SOURCE, float(np.hypot(found.slow, found.fast)), known, 0.10, what=f"{ref} ripple current")
    if ref == "C5":
        assert found.fast > 0.95 * known, "behind the output rectifier nearly all of it is switching"
    else:
        assert 0.3 * known < found.slow < 0.95 * known, "the bulk capacitor is filled by the mains and drawn from by the switch"
