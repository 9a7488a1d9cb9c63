"""Operating points of a board at mains frequency: solved once, kept, read again, followed to what they destroy."""

import json
import math

import pytest

from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.board.stress import Stress
from triage.families import points as room
from triage.families.points import OperatingPoints, fingerprint, point_key
from triage.families.stresses import conditions, inrush_i2t, stresses
from triage.physics.transient import QUICK, NoConvergence

BOARD = load_profile("harbour-gate-timer")
ZENER, DROPPER = Fault("DZ1", "open"), Fault("CX1", "short")


@pytest.fixture(scope="module")
def solved() -> OperatingPoints:
    """The sound board, and the chains of an open zener and of a shorted dropper capacitor."""
    told: list[tuple[int, int]] = []
    points = OperatingPoints(BOARD, progress=lambda done, wanted: told.append((done, wanted)))
    points.chains([ZENER, DROPPER])
    assert told and all(done <= wanted for done, wanted in told)
    return points


def test_without_its_zener_a_half_wave_dropper_carries_no_load(solved: OperatingPoints) -> None:
    """The zener is the way back of the current: without it the capacitor blocks. Reasoned."""
    sound, hurt = (solved.at(faults, "full").readings for faults in ((), (ZENER,)))
    output = next(probe for probe in sound if probe.plus == "out" and probe.function == "volts_dc")
    assert hurt[output] < 0.3 * sound[output]


def test_a_shorted_dropper_capacitor_takes_a_part_in_its_path_along(solved: OperatingPoints) -> None:
    """Mains across a 12 V zener and a few watts of resistor: one of them goes at once. Reasoned."""
    chain = solved.chains([DROPPER])[DROPPER]
    assert all(faults and {fault.ref for fault in faults} & {"RF1", "DZ1"} for faults in chain.values())
    assert solved.at((DROPPER,), "full").breaks == chain["full"][:1]


def test_points_survive_being_kept(solved: OperatingPoints) -> None:
    kept = json.loads(json.dumps(solved.kept()))
    again = OperatingPoints(BOARD, kept)
    assert again.kept() == solved.kept()
    assert point_key((ZENER,), "noload") in again
    assert again.at((ZENER,), "noload") == solved.at((ZENER,), "noload")


def test_points_of_another_board_are_not_taken(solved: OperatingPoints) -> None:
    other = load_profile("mast-lamp-adapter")
    assert fingerprint(other) != fingerprint(BOARD)
    assert point_key((), "full") not in OperatingPoints(other, solved.kept())


def test_the_order_of_faults_names_the_same_point() -> None:
    one, two = Fault("C1", "open"), Fault("R1", "open")
    assert point_key((one, two), "full") == point_key((two, one), "full") != point_key((one,), "full")


def test_a_solution_that_breaks_off_leaves_its_readings_unknown(monkeypatch: pytest.MonkeyPatch) -> None:
    def breaks(*given: object, **more: object) -> None:
        raise NoConvergence(1e-3)

    monkeypatch.setattr(room, "settle", breaks)
    point = room.solve_point(BOARD, (), "full", {})
    assert point.readings and all(math.isnan(value) for value in point.readings.values())
    assert point.breaks == () and point.powers == {}
    monkeypatch.undo()
    lost = OperatingPoints(BOARD)
    lost._points[point_key((), "full")] = point
    again = OperatingPoints(BOARD, json.loads(json.dumps(lost.kept()))).at((), "full")
    assert all(math.isnan(value) for value in again.readings.values())


def test_stresses_are_the_worst_of_all_corners_with_rating_and_place() -> None:
    """A mains-frequency board with a bridge's worth of diodes and a transformer."""
    board = load_profile("mast-lamp-adapter")
    heard: list[tuple[int, int]] = []
    found = stresses(board, quality=QUICK, progress=lambda done, wanted: heard.append((done, wanted)))
    assert heard == [(len(conditions(board)),) * 2]
    by_quantity: dict[tuple[str, str], Stress] = {(one.ref, one.quantity): one for one in found}
    reservoir = board.by_role("reservoir capacitor")
    assert reservoir is not None
    volts = by_quantity[reservoir.ref, "peak_voltage"]
    assert f"{board.mains.high:g} V, no load" in volts.condition and volts.rating == reservoir.ratings["voltage"]
    assert {"power"} <= {quantity for ref, quantity in by_quantity if board.part(ref).kind == "transformer"}
    assert any(quantity == "reverse_voltage" for _, quantity in by_quantity)


def test_the_cold_start_at_the_crest_heats_the_fusible_resistor_like_an_rc() -> None:
    """Integral of the squared current of an RC at a step of V: V^2 C / 2R, elementary theory; the empty reservoir behind it takes
    a volt, the mains current of the next milliseconds adds a percent or two."""
    dropper, fusible = BOARD.by_role("dropper capacitor"), BOARD.by_role("fusible input resistor")
    assert dropper is not None and fusible is not None
    crest = 2.0**0.5 * BOARD.mains.high
    ohms = fusible.value["resistance"] + BOARD.mains.source_resistance
    assert inrush_i2t(BOARD)[fusible.ref] == pytest.approx(crest**2 * dropper.value["capacitance"] / (2.0 * ohms), rel=0.03)
    assert inrush_i2t(load_profile("choir-keyboard-supply")) == {}, "a thermal fuse in a transformer is none to melt at once"
