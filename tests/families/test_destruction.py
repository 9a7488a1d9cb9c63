"""What an operating point destroys: each part at the limit that practice gives it, the fuse before what it protects.

The multiples of the ratings are common practice, no source; they stand in triage.families.destruction.
"""

import numpy as np
import pytest

from triage.board.fault import Fault
from triage.board.part import Board, Label, Mains, Part
from triage.families.destruction import destroyed
from triage.families.steady import Settled
from triage.physics.transient import I_MEAN, I_RMS, POWER, V_MAX, V_MEAN, V_MIN, Stretch

RATINGS = {"voltage": 400.0, "current": 2.0, "power": 0.5}


def board(*parts: Part) -> Board:
    """A board of these parts alone."""
    return Board("x", "x", "linear_unregulated", Label("230 V~", 5.0, 1.0), Mains(50.0, 207.0, 230.0, 253.0), parts, {}, {})


def part(ref: str, kind: str, **ratings: float) -> Part:
    return Part(ref, kind, "", {}, ratings=ratings or RATINGS)


def at(**ports: dict[int, float]) -> Settled:
    """An operating point: port -> column -> value; a port is named as REF or REF__suffix."""
    rows = {}
    table = np.zeros((len(ports), 9))
    for number, (name, columns) in enumerate(ports.items()):
        ref, _, suffix = name.partition("__")
        rows[ref, f"_{suffix}" if suffix else ""] = number
        for column, value in columns.items():
            table[number, column] = value
    return Settled(Stretch(table, 0.0, 1, np.zeros((0, 1))), rows, {}, 1, True)


@pytest.mark.parametrize(("kind", "column", "survives", "dies", "mode"), [
    ("fuse", I_RMS, 3.0, 6.0, "open"),
    ("fusible_resistor", POWER, 1.0, 6.0, "open"),
    ("resistor", POWER, 1.0, 6.0, "open"),
    ("zener", POWER, 0.5, 5.0, "short"),
    ("varistor", POWER, 0.5, 5.0, "short"),
    ("diode", I_MEAN, 2.0, 20.0, "short"),
    ("diode", V_MIN, -400.0, -800.0, "short"),
    ("led", I_MEAN, 2.0, 20.0, "open"),
    ("electrolytic", V_MAX, 400.0, 800.0, "open"),
    ("electrolytic", V_MIN, -1.0, -30.0, "open"),
    ("capacitor", V_MIN, -400.0, -1200.0, "short"),
    ("x_capacitor", V_MAX, 400.0, 1200.0, "short"),
    ("mosfet", V_MAX, 400.0, 800.0, "short_dgs"),
    ("mosfet", POWER, 0.5, 5.0, "short_dgs"),
    ("primary_side_switcher", V_MAX, 400.0, 800.0, "short"),
    ("buck_switcher", V_MAX, 400.0, 800.0, "short"),
    ("thermal_fuse", I_RMS, 2.0, 6.0, "open"),
])
def test_a_part_survives_its_rating_and_dies_well_beyond_it(
    kind: str, column: int, survives: float, dies: float, mode: str
) -> None:
    one = board(part("X1", kind))
    assert destroyed(one, at(X1={column: survives}), ()) == ()
    assert destroyed(one, at(X1={column: dies}), ()) == (Fault("X1", mode),)
    assert destroyed(one, at(X1={column: dies}), ("X1",)) == (), "what is at fault already dies no more"


def test_a_transistor_dies_by_voltage_or_by_the_heat_of_both_junctions() -> None:
    one = board(part("Q1", "bipolar_transistor"))
    assert destroyed(one, at(Q1={V_MAX: 400.0, POWER: 0.4}, Q1__be={POWER: 0.05}), ()) == ()
    assert destroyed(one, at(Q1={V_MAX: 800.0}, Q1__be={}), ()) == (Fault("Q1", "ce_short"),)
    assert destroyed(one, at(Q1={POWER: 5.0}, Q1__be={}), ()) == (Fault("Q1", "ce_short"),)
    assert destroyed(one, at(Q1={}, Q1__be={POWER: 5.0}), ()) == (Fault("Q1", "ce_short"),)
    small = board(part("Q2", "bipolar_transistor", voltage=50.0, power=0.5))
    assert destroyed(small, at(Q2={V_MAX: 90.0}, Q2__be={}), ()) == (), "a small transistor has a base resistor and survives"


def test_one_leg_of_a_bridge_and_the_diode_of_a_coupler_count_by_their_own_current() -> None:
    bridge = board(part("BR1", "bridge"))
    legs = {f"BR1__{leg}": {I_MEAN: 1.0} for leg in "abcd"}
    assert destroyed(bridge, at(**legs), ()) == ()
    assert destroyed(bridge, at(**(legs | {"BR1__c": {I_MEAN: 20.0}})), ()) == (Fault("BR1", "d_short"),)
    coupler = board(part("U2", "optocoupler", current=0.05))
    assert destroyed(coupler, at(U2={}, U2__led={I_MEAN: 0.04}), ()) == ()
    assert destroyed(coupler, at(U2={}, U2__led={I_MEAN: 1.0}), ()) == (Fault("U2", "led_open"),)


def test_the_heat_of_a_transformer_opens_the_thermal_fuse_in_it() -> None:
    copper = {"primary_resistance": 200.0, "secondary_resistance": 1.0}
    winding = Part("T1", "transformer", "", {}, copper, ratings={"power": 5.0})
    one = board(winding, part("F1", "thermal_fuse", current=1.0))
    assert destroyed(one, at(F1={I_RMS: 0.05}, T1__primary={I_RMS: 0.05}, T1__secondary={I_RMS: 0.5}), ()) == ()
    assert destroyed(one, at(F1={I_RMS: 0.5}, T1__primary={I_RMS: 0.5}, T1__secondary={I_RMS: 5.0}), ()) == (Fault("F1", "open"),)


def test_the_fuse_opens_before_the_diode_that_is_hurt_more() -> None:
    one = board(part("D1", "diode"), part("F1", "fuse"))
    point = at(D1={I_MEAN: 200.0}, F1={I_RMS: 10.0})
    assert destroyed(one, point, ()) == (Fault("F1", "open"),)
    assert destroyed(one, point, ("F1",)) == (Fault("D1", "short"),), "a bridged fuse protects nothing"


def mains_path() -> Board:
    """A shorted switch between bulk and sense resistor, with the fuse before and the controller beside it."""
    sense = Part("R7", "resistor", "", {}, {"resistance": 0.68}, ratings={"power": 1.0})
    far = Part("R9", "resistor", "", {}, {"resistance": 22e3}, ratings={"power": 2.0})
    fuse = Part("F1", "fuse", "", {}, ratings={"current": 1.6, "i2t": 12.0})
    controller = Part("U1", "pwm_controller", "", {"drive": "drv"}, ratings={"voltage": 30.0})
    return board(sense, far, fuse, controller)


def test_a_blowing_fuse_lets_through_what_burns_the_sense_resistor_and_the_controller_on_the_gate() -> None:
    """Melting integral and 5 J per rated watt as in the reference circuit pwm-opto; common practice, no source."""
    point = at(F1={I_RMS: 30.0}, R7={I_RMS: 28.0}, R9={I_RMS: 0.01}, drv__node={V_MAX: 240.0})
    point.rows["drv", "node"] = point.rows.pop(("drv", "_node"))
    gone = destroyed(mains_path(), point, ())
    assert gone[0] == Fault("F1", "open") and set(gone[1:]) == {Fault("R7", "open"), Fault("U1", "vcc_short")}
    assert destroyed(mains_path(), point, ("R7", "U1")) == (Fault("F1", "open"),), "what is gone already does not go again"


def test_a_controller_survives_its_own_supply_at_its_drive_pin() -> None:
    point = at(F1={}, R7={}, R9={}, drv__node={V_MAX: 28.0})
    point.rows["drv", "node"] = point.rows.pop(("drv", "_node"))
    assert destroyed(mains_path(), point, ()) == ()


def test_an_electrolytic_over_its_voltage_vents_open_where_it_is_fed_on_and_stays_shorted_where_the_controller_pauses() -> None:
    """Failure modes of the two generators of the reference circuits (their README, destruction rule)."""
    output = part("C7", "electrolytic", voltage=16.0)
    over = at(C7={V_MAX: 28.0, V_MEAN: 25.0})
    assert destroyed(board(output), over, ()) == (Fault("C7", "open"),)
    controller = Part("U1", "pwm_controller", "", {"drive": "drv"}, {"start_voltage": 16.0}, ratings={"voltage": 30.0})
    paused = board(output, controller)
    assert destroyed(paused, over, ()) == (Fault("C7", "short"),)
    assert destroyed(paused, at(C7={V_MAX: 28.0, V_MEAN: 20.0}), ()) == (), "a short peak does not break it down"
    assert destroyed(paused, at(C7={V_MIN: -12.0, V_MEAN: -5.0}), ()) == (Fault("C7", "open"),), "reversed it gasses and vents"


def test_an_unknown_rating_destroys_nothing() -> None:
    one = board(Part("D1", "diode", "", {}))
    assert destroyed(one, at(D1={I_MEAN: 1e3, V_MIN: -1e5}), ()) == ()
