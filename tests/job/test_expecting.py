"""Expected readings put together: cold ones from the real network, live ones from points that are known."""

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from triage.board.circuit import Draw
from triage.board.evidence import STATES
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.live import live_probes
from triage.families.points import LOADS, OperatingPoints, fingerprint
from triage.job import expecting
from triage.job.cache import Cache
from triage.job.wiring import Wiring

BOARD = load_profile("harbour-handset-charger")
RF1, R1 = Fault("RF1", "open"), Fault("R1", "open")


def points(known: dict[str, dict[str, float]]) -> OperatingPoints:
    """Invented points: output volts by key; input power follows the output, everything else is zero."""
    family = family_of(BOARD.family)
    content: dict[str, Any] = {}
    for key, row in known.items():
        readings = []
        for probe in live_probes(BOARD, family, key.rpartition("@")[2]):
            is_output = probe.plus == "out" and probe.function == "volts_dc"
            readings.append(row["out"] if is_output else 1.0 if probe.function == "watts" and row["out"] else 0.0)
        content[key] = {"readings": readings, "powers": {}, "breaks": row.get("breaks", ""), "capacitors": {}}
    return OperatingPoints(BOARD, {"fingerprint": fingerprint(BOARD), "points": content})


NO_POINTS = points({})


def test_cold_readings_follow_the_tolerance_and_the_fault(tmp_path: Path) -> None:
    kept = Cache(tmp_path)
    sound = expecting.expected_readings(BOARD, (), NO_POINTS, kept)
    one = next(e for e in sound if (e.function, e.plus, e.minus) == ("ohms", "mains_l", "rect"))
    tolerance = BOARD.part("RF1").tolerance["resistance"]
    assert 10 * (1 - tolerance) - 0.2 <= one.low <= one.median <= one.high <= 10 * (1 + tolerance) + 0.2
    faulty = expecting.expected_readings(BOARD, (RF1,), NO_POINTS, kept)
    assert next(e for e in faulty if (e.function, e.plus, e.minus) == ("ohms", "mains_l", "rect")).text == "OL"
    assert not any(e.condition != "cold" for e in faulty), "no live reading is known"


def test_a_kept_hypothesis_gives_the_same_and_is_not_computed_again(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    hypotheses = (Hypothesis(()), Hypothesis((RF1,)))
    kept = Cache(tmp_path)
    first = expecting.expectations(BOARD, hypotheses[1:], NO_POINTS, kept)
    asked = []
    real = expecting.cold_samples

    def counted(board: Any, missing: Any, *more: Any) -> Any:
        asked.extend(missing)
        return real(board, missing, *more)

    monkeypatch.setattr(expecting, "cold_samples", counted)
    second = expecting.expectations(BOARD, hypotheses, NO_POINTS, kept)
    assert asked == [Hypothesis(())], "only what was missing"
    np.testing.assert_array_equal(first.samples[0], second.samples[1])
    third = expecting.expectations(BOARD, hypotheses[::-1], NO_POINTS, kept)
    assert len(asked) == 1
    np.testing.assert_array_equal(third.samples[::-1], second.samples)


def test_another_value_on_the_board_is_another_answer(tmp_path: Path) -> None:
    kept = Cache(tmp_path)
    expecting.expected_readings(BOARD, (), NO_POINTS, kept)
    parts = tuple(replace(part, value={**part.value, "resistance": 22.0}) if part.ref == "RF1" else part for part in BOARD.parts)
    changed = expecting.expected_readings(replace(BOARD, parts=parts), (), NO_POINTS, kept)
    one = next(e for e in changed if (e.function, e.plus, e.minus) == ("ohms", "mains_l", "rect"))
    assert 20 < one.median < 24


def test_damaged_kept_readings_are_computed_anew(tmp_path: Path) -> None:
    kept = Cache(tmp_path)
    first = expecting.expected_readings(BOARD, (), NO_POINTS, kept)
    for path in tmp_path.glob("*.json"):
        path.write_text('["x", "y"]')
    assert expecting.expected_readings(BOARD, (), NO_POINTS, kept) == first


def test_known_points_give_live_readings_and_states(tmp_path: Path) -> None:
    known = {f"@{load}": {"out": 5.0} for load in LOADS} | {f"R1.open@{load}": {"out": 0.0} for load in LOADS}
    known["RF1.open@full"] = {"out": 0.0}
    hypotheses = (Hypothesis(()), Hypothesis((R1,)), Hypothesis((RF1,)))
    found = expecting.expectations(BOARD, hypotheses, points(known), Cache(tmp_path))
    column = found.column(Probe("volts_dc", "out", "sgnd", "full"))
    idle = found.column(Probe("volts_dc", "out", "sgnd", "noload"))
    assert column is not None and idle is not None
    assert found.samples[:, column, 0].tolist() == [5.0, 0.0, 0.0]
    assert math.isnan(found.samples[2, idle, 0]), "not solved: says nothing"
    states = [[STATES[code] if code >= 0 else "unknown" for code in row] for row in found.states[:, :, 0]]
    assert states[0] == ["normal"] * 3
    assert states[1] == ["fuse gone"] * 3, "no input power and no output"
    assert states[2] == ["unknown", "unknown", "fuse gone"]


def test_a_broken_off_solution_says_nothing(tmp_path: Path) -> None:
    known = {f"@{load}": {"out": 5.0} for load in LOADS} | {f"R1.open@{load}": {"out": math.nan} for load in LOADS}
    found = expecting.expectations(BOARD, (Hypothesis((R1,)),), points(known), Cache(tmp_path))
    assert (found.states == -1).all()


def test_an_adapter_that_tries_again_and_again_may_be_called_dead_or_pulsing() -> None:
    """Reasoned: it has no output, and it ticks. From the solved points of the brick: a shorted output capacitor makes it hiccup,
    an open start resistor leaves it still."""
    brick, wiring = load_profile("tide-gauge-brick"), Wiring()
    still, ticks = (Hypothesis((Fault(*one),)) for one in (("R2", "open"), ("C7", "short")))
    found = {one: wiring.points(brick).at(one.faults, "full") for one in (still, ticks)}
    dead = np.full(len(LOADS), STATES.index("dead"))
    heard = {one: expecting._heard(brick, {"full": point}, dead)[LOADS.index("full")] for one, point in found.items()}
    assert heard == {still: STATES.index("dead"), ticks: STATES.index("pulsing")}


def test_a_leak_of_another_size_shows_between_the_usual_one_and_the_sound_board() -> None:
    """Reasoned: a point is solved for one leak only; half the conductance departs about half as far, none departs nowhere."""
    leaky, draws = Hypothesis((Fault("C2", "leaky"),)), [Draw({}, {("C2", "leaky"): size}) for size in (1.0, 2.0, 1e9, 0.1)]
    usual, sound = np.array([1.5, 0.0, math.nan]), np.array([13.5, 4.0, 2.0])
    shown = expecting.graded(leaky, usual, sound, draws)
    assert shown[0] == pytest.approx([1.5, 7.5, 13.5, 0.0], abs=1e-6), "a heavier leak takes it to zero, not beyond"
    assert shown[1] == pytest.approx([0.0, 2.0, 4.0, 0.0], abs=1e-6)
    assert np.isnan(shown[2]).all(), "what is not known of the usual size is not known"
    other = expecting.graded(Hypothesis((R1,)), usual, sound, draws)
    assert (other[:2] == usual[:2, None]).all()


def test_collateral_is_weighted_by_the_loads_it_happens_at() -> None:
    known = {
        "C1.short@noload": {"out": 0.0}, "C1.short@half": {"out": 0.0, "breaks": "RF1.open"},
        "C1.short@full": {"out": 0.0, "breaks": "RF1.open"}, "C1.short+RF1.open@half": {"out": 0.0},
        "C1.short+RF1.open@full": {"out": 0.0, "breaks": "D1.short"},
    }  # fmt: skip
    ways = expecting.collateral_of(points(known), (Fault("C1", "short"), R1))
    assert set(ways) == {Fault("C1", "short")}
    chances = {tuple(map(str, way.faults)): way.chance for way in ways[Fault("C1", "short")]}
    third = expecting.RUN_ITS_COURSE / 3
    assert chances == pytest.approx({("RF1.open",): third, ("RF1.open", "D1.short"): third})
