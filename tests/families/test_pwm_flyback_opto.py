"""The fixed-frequency flyback with controller: what it lives on, and what it does when that is gone."""

import pytest

from tests.families.solving import shown
from triage.board.profile import load_profile

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
