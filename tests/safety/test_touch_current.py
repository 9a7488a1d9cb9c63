"""Touch current of a board: Y capacitors found by the sides they join, limit by year and class."""

from dataclasses import replace

import pytest

from tests.safety.boards import brick, charger
from triage.safety.touch_current import touch_current


def test_only_capacitors_across_the_barrier_count() -> None:
    assert touch_current(charger()).capacitance == 0.0
    assert touch_current(charger()).expected == 0.0
    assert touch_current(brick()).capacitance == pytest.approx(2.2e-9)


def test_brick_is_expected_inside_its_limit() -> None:
    """2.2 nF at 264 V 60 Hz: 0.219 mA below the 0.25 mA of IEC 60950-1, table 5A."""
    found = touch_current(brick())
    assert found.voltage == pytest.approx(264.0)
    assert found.expected == pytest.approx(0.218e-3, rel=2e-3)
    assert found.expected < found.limit == pytest.approx(0.25e-3)


def test_a_larger_y_capacitor_breaks_the_limit() -> None:
    board = brick()
    parts = tuple(replace(p, value={"capacitance": 4.7e-9}) if p.ref == "CY1" else p for p in board.parts)
    found = touch_current(replace(board, parts=parts))
    assert found.expected > found.limit


def test_newer_adapters_and_earthed_ones_have_other_limits() -> None:
    assert touch_current(brick(year=2022)).limit == pytest.approx(0.5e-3)
    earthed = replace(brick(), label=replace(brick().label, insulation_class="I"))
    assert touch_current(earthed).limit == pytest.approx(3.5e-3)
