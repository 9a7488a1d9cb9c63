"""A bridge is four diodes in one body: its stresses are put together from its legs."""

import numpy as np
import pytest

from triage.board.profile import load_profile
from triage.families.steady import Settled
from triage.families.stresses import part_stresses
from triage.physics.transient import I_MEAN, POWER, V_MIN, Stretch


def test_a_bridge_carries_the_current_of_two_legs_and_the_loss_of_four() -> None:
    statistics = np.zeros((4, 9))
    statistics[:, I_MEAN] = [0.1, 0.1, 0.1, 0.1]
    statistics[:, POWER] = [0.08, 0.08, 0.09, 0.09]
    statistics[:, V_MIN] = [-325.0, -320.0, -324.0, -1.0]
    stretch = object.__new__(Stretch)
    object.__setattr__(stretch, "statistics", statistics)
    rows = {("BR1", f"_{leg}"): row for row, leg in enumerate("abcd")}
    found = part_stresses(load_profile("tide-gauge-brick").part("BR1"), Settled(stretch, rows, {}, 1, True))
    assert found == pytest.approx({"reverse_voltage": 325.0, "average_current": 0.2, "power": 0.34})
