"""Cells on the scale of the reading's own error. Reasoned checks unless a source is named."""

import math

import numpy as np
import pytest

from triage.diagnosis.axis import CELL, WIDTHS, Axis, draw_width, from_axis, smear_table, to_axis
from triage.diagnosis.settings import Instrument, instruments

OHMS = instruments()["ohms"]


@pytest.mark.parametrize("value", [0.0, 0.02, 1.0, 470.0, 1e6, 2e7])
def test_the_axis_can_be_walked_back(value: float) -> None:
    assert from_axis(float(to_axis(value, OHMS)), OHMS) == pytest.approx(value, rel=1e-12, abs=1e-12)


@pytest.mark.parametrize("value", [0.0, 0.5, 10.0, 1e4, 9e5])
def test_one_step_on_the_axis_is_one_standard_error(value: float) -> None:
    """du/dx = 1 / sqrt(a^2 + (r x)^2), the definition of a variance-stabilising scale."""
    error = math.hypot(OHMS.absolute, OHMS.relative * value)
    step = float(to_axis(value + 1e-4 * error, OHMS) - to_axis(value, OHMS))
    assert step == pytest.approx(1e-4, rel=1e-3)


def test_above_the_knee_the_error_is_a_larger_share() -> None:
    value = 5.0 * OHMS.knee
    step = float(to_axis(value * 1.0001, OHMS) - to_axis(value, OHMS))
    assert step == pytest.approx(1e-4 / OHMS.relative_above_knee, rel=1e-3)
    assert OHMS.relative_above_knee > 2 * OHMS.relative


def test_readings_find_their_cells() -> None:
    axis = Axis.spanning(np.array([10.0, 1e3, np.inf, np.nan]), OHMS)
    ten, thousand, open_line, unknown, above = axis.index(np.array([10.0, 1e3, np.inf, np.nan, 25e6]))
    assert 0 < ten < thousand < axis.cells
    assert open_line == above == axis.cells and unknown == -1
    assert axis.index(0.0) == 0 and axis.index(5e6) == axis.cells - 1


def test_censoring_at_the_limit_of_the_range() -> None:
    """P(OL) = 1 - Phi((limit - mu) / sd): Tobin, Econometrica 26 (1958) 24-36. Expected at half a cell's
    resolution.
    """
    meter = Instrument("multimeter", 0.05, 0.1, 20e6, 0.1)
    samples = np.geomspace(10.0, 20e6, 50)
    axis = Axis.spanning(samples, meter)
    value = from_axis(float(to_axis(20e6, meter)) - 1.0, meter)
    cell = axis.index(value)
    got = 1 - float(axis.below(axis.cells, cell, np.uint8(0)))
    distance = (axis.cells - 0.5 - int(cell)) * CELL
    assert got == pytest.approx(0.5 * math.erfc(distance / math.sqrt(2)), abs=1e-12)
    assert abs(distance - 1.0) <= CELL / 2 + 1e-9


def test_smearing_is_a_distribution_function() -> None:
    table = smear_table()
    assert table.shape[0] == len(WIDTHS) and (np.diff(table, axis=1) >= 0).all()
    assert (table[:, 0] == 0).all() and (table[:, -1] == 1).all()


def test_few_draws_are_widened_and_equal_ones_are_not() -> None:
    rng = np.random.default_rng(1)
    spread = rng.normal(scale=20.0, size=(1, 30))
    same = np.zeros((1, 30))
    widths = draw_width(np.concatenate([spread, same]))
    silverman = 0.9 * min(spread.std(), (np.sort(spread)[0, 22] - np.sort(spread)[0, 7]) / 1.34) * 30**-0.2
    assert WIDTHS[widths[0]] == pytest.approx(math.hypot(1, silverman), rel=0.2)
    assert widths[1] == 0


def test_a_display_without_a_sign_shows_zero() -> None:
    """The bridge of a capacitance meter finds a negative value across a coil; the display shows none."""
    assert to_axis(-3e-3, instruments()["capacitance"]) == 0.0
    assert to_axis(-3.0, instruments()["volts_dc"]) < 0
