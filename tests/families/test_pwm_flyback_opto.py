"""The fixed-frequency flyback with controller: what it lives on, and what it does when that is gone."""

import math

import pytest

from tests.families.solving import settled, shown
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.families.destruction import destroyed
from triage.physics.transient import V_MAX, V_MEAN, V_MIN

BOARD = load_profile("tide-gauge-brick")


@pytest.mark.long
def test_behind_an_open_bridge_the_adapter_does_not_live_on_the_charge_of_its_bulk_capacitor():
    """Reasoned: only the bleeder of the X capacitor takes power then, its voltage squared over its resistance."""
    dead = shown(BOARD, "noload", "BR1.open")
    assert dead["out"] == pytest.approx(0.0, abs=0.01) and dead["hertz"] == 0.0
    assert dead["watts"] == pytest.approx(230.0**2 / BOARD.part("R1").value["resistance"], rel=0.05)


@pytest.mark.long
def test_without_its_auxiliary_supply_the_controller_stops_and_tries_again():
    """Reasoned: pulses for as long as the supply capacitor lasts, then a wait for the start resistor."""
    sound, hiccup = shown(BOARD), shown(BOARD, "full", "D1.open")
    assert sound["hertz"] == pytest.approx(BOARD.part("U1").value["frequency"], rel=0.01)
    assert 0.05 < hiccup["hertz"] / sound["hertz"] < 0.5 and hiccup["ripple"] > hiccup["out"]


def test_no_pulse_begins_while_the_secondary_conducts():
    """The rectifier blocks the reflected bulk voltage plus the output, and rings by 27 % over it (the reference circuit's deck
    at a relative error of 1e-4); a clock that lost its place where one mains period follows another made it 40 %."""
    at = settled(BOARD)
    reflected = at.row("bulk", "node")[V_MAX] * 10.0 / 70.0 + 12.13
    assert 1.2 * reflected < -at.row("D3")[V_MIN] < 1.32 * reflected


def test_without_load_a_hiccup_is_followed_until_it_repeats():
    """Reasoned: in a pause the minimum load takes V (1 - exp(-T / RC)) off the output, far from emptying it."""
    at = settled(BOARD, "noload", "D1.open")
    low, high = at.row("out", "node")[[V_MIN, V_MAX]]
    seconds = 820.0 * (680e-6 + 470e-6)
    assert 0.5 < (high - low) / (high * (1.0 - math.exp(-0.15 / seconds))) < 1.5
    assert 11.0 < at.row("out", "node")[V_MEAN] < 13.0


def test_an_output_that_is_never_fed_again_is_empty_also_without_load():
    """The optocoupler's transistor shorted holds the controller at no pulse."""
    assert shown(BOARD, "noload", "C3.short")["out"] == pytest.approx(0.0, abs=0.05)


def test_a_shorted_switch_is_solved_without_load_too_and_takes_fuse_and_sense_resistor():
    """As in the reference circuit pwm-opto (ngspice 39). Newton's method went in circles about the kink of the reference."""
    at = settled(BOARD, "noload", "Q1.short")
    assert set(destroyed(BOARD, at, ("Q1",))) == {Fault("F1", "open"), Fault("R7", "open")}
