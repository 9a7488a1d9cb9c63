"""Cautions fit the board, carry its numbers, and are keyed for acknowledgement."""

import pytest

from tests.safety.boards import brick, charger, iron
from triage.safety.cautions import GATES, cautions, needed, time_text
from triage.safety.discharge import ResistorKind
from triage.safety.power_up import first_power_up, input_current


def by_key(board, resistors=None):
    return {caution.key: caution for caution in cautions(board, resistors)}


@pytest.mark.parametrize("board", [charger(), brick(), iron()], ids=["cube", "brick", "iron"])
def test_every_caution_is_short_keyed_and_sourced(board) -> None:
    shown = cautions(board)
    assert len({caution.key for caution in shown}) == len(shown)
    for caution in shown:
        assert caution.gate in GATES
        assert 20 < len(caution.text) < 400
        assert "{" not in caution.text
        assert caution.source.document


def test_stored_energy_names_capacitor_volts_and_times() -> None:
    text = by_key(charger())["stored energy"].text
    for piece in ("C1", "358 V", "0.36 J", "below 60 V", "if R1 is open", "bulk to pgnd"):
        assert piece in text


def test_iron_transformer_adapter_has_no_bulk_caution() -> None:
    keys = by_key(iron())
    assert "stored energy" not in keys
    assert "bleed" not in keys
    assert "after power" not in keys
    assert "isolation" in keys


def test_plug_pins_only_with_an_x_capacitor() -> None:
    assert "plug pins" not in by_key(charger())
    assert "0.86 s to fall below 60 V. Do not" in by_key(brick())["plug pins"].text
    assert "more than the 2 s allowed" in by_key(brick(None))["plug pins"].text


def test_without_a_fitting_resistor_no_bleeder_is_proposed() -> None:
    assert "bleed" not in by_key(brick(), [ResistorKind("carbon film", 0.25, 250.0, 1.0)])


def test_scope_caution_lists_every_primary_node() -> None:
    text = by_key(brick())["scope"].text
    for node in brick().sides["primary"]:
        assert node in text
    assert "sgnd only" in text


def test_codes_stand_before_both_gates() -> None:
    for gate in GATES:
        assert any("icensed" in caution.text for caution in cautions(charger()) if caution.gate == gate)


def test_needed_keys_split_by_gate() -> None:
    cold, live = needed(charger(), "cold"), needed(charger(), "live")
    assert "stored energy" in cold and "current limit" in live
    assert not cold & live


def test_lamp_grows_with_the_adapter() -> None:
    """Common practice: 25 to 40 W up to 10 W of output, 100 W or more for a laptop brick."""
    small, large = first_power_up(charger()), first_power_up(brick())
    assert small.lamp_power in (25.0, 40.0)
    assert large.lamp_power in (100.0, 150.0)
    assert small.lamp_current == pytest.approx(small.lamp_power / 230.0)


def test_the_lamp_passes_a_light_load() -> None:
    for board in (charger(), brick(), iron()):
        assert first_power_up(board).lamp_current >= 0.1 * input_current(board)


def test_the_limit_lets_the_adapter_run_at_full_load() -> None:
    for board in (charger(), brick(), iron()):
        first = first_power_up(board)
        assert first.current_limit > first.input_current
        assert first.transformer_va >= 100.0


def test_times_read_as_a_person_says_them() -> None:
    assert [time_text(t) for t in (0.0402, 8.44, 154.0, float("inf"))] == ["40 ms", "8.4 s", "3 min", "hours"]
