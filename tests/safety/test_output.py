"""Output windows by connector kind."""

import pytest

from tests.safety.boards import brick, charger, iron
from triage.safety import output


def test_kinds_are_guessed_from_label_and_family() -> None:
    assert output.guessed_kind(charger(2014)) == "USB dedicated charger"
    assert output.guessed_kind(charger(2019)) == "USB since 2014"
    assert output.guessed_kind(brick()) == "laptop"
    assert output.guessed_kind(iron()) == "unregulated"


def test_unregulated_adapter_stands_high_without_load() -> None:
    """Common practice: a 9 V adapter reads 12 to 15 V open."""
    idle, full = output.window("unregulated", 9.0, "noload"), output.window("unregulated", 9.0, "full")
    assert idle.low < 12.0 < 15.0 < idle.high
    assert (full.low, full.high) == (pytest.approx(8.1), pytest.approx(9.9))
    half = output.window("unregulated", 9.0, "half")
    assert (half.low, half.high) == (full.low, idle.high)


@pytest.mark.parametrize("kind", output.kinds())
def test_every_window_holds_its_nominal(kind) -> None:
    found = output.window(kind, 5.0, "full")
    assert found.low < 5.0 < found.high
    assert 0.0 < found.ripple <= 0.5
    assert 0.0 < output.load_regulation_limit(kind) < 1.0


def test_unknown_kind_lists_the_known_ones() -> None:
    with pytest.raises(output.OutputKindError, match="'plug'; expected USB, "):
        output.window("plug", 5.0)


def test_cable_explains_a_low_reading_at_the_plug() -> None:
    """Reasoned: two conductors of 1.5 m AWG28 at 1 A."""
    assert output.cable_drop(1.0, 1.5) == pytest.approx(2 * 1.5 * 0.213)
