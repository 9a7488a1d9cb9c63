"""Whole diagnoses on simulated faults: the reference tables answer, a meter with 2 % error reads them.

The expectations come straight from the same simulated tables (one reading a fault, spread by hand), so these
plays judge the way of deciding, not the physics; plays with the program's own expectations stand beside them.
"""

from pathlib import Path

import pytest

from tests.reference import stand_in
from tests.reference.playing import Meter, Play, play, summary
from triage.board.evidence import Sign
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.priors import Weight, prior_of


@pytest.fixture(scope="module")
def tables(shared: Path) -> stand_in.Tables:
    return stand_in.load(shared / "reference/circuits/rcc-zener")


@pytest.fixture(scope="module")
def diagnosis(tables: stand_in.Tables) -> Diagnosis:
    expected = stand_in.expectations(tables)
    weights = {h.root[0]: Weight(1.0) for h in expected.hypotheses if h.root}
    return Diagnosis(expected, prior_of(weights, {}, pair_share=0), tables.kinds, tables.sides, pins=tables.pins)


def play_all(diagnosis: Diagnosis, tables: stand_in.Tables, meter: Meter, looked: bool) -> list[Play]:
    """Every single fault once; ``looked``: cord, plug and joints were found sound first."""
    plays = []
    for number, fault in enumerate(f for f in tables.cold if f != "healthy"):
        truth = {**tables.cold[fault], **tables.live[fault]}
        first = [stand_in.complaint(tables, fault), *([Sign("sound")] if looked else [])]
        needed = stand_in.hypothesis(fault).repair
        plays.append(play(diagnosis, fault, needed, first, truth.get, 100 + number, meter))
    return plays


@pytest.mark.parametrize("looked", [True, False], ids=["cord looked at", "complaint only"])
def test_every_single_fault_is_found(diagnosis: Diagnosis, tables: stand_in.Tables, looked: bool) -> None:
    """At least 95 % right at the first repair; no live reading before the cold ones are done (asserted in
    ``play``).
    """
    plays = play_all(diagnosis, tables, Meter(), looked)
    got = summary(plays)
    print({key: round(value, 3) for key, value in got.items()}, [p.name for p in plays if not p.right])
    assert got["plays"] == 63
    assert got["right"] >= 0.95
    assert got["readings"] <= 7
    assert got["does not fit"] <= 0.03


def test_slipped_probes_cost_readings_not_repairs(diagnosis: Diagnosis, tables: stand_in.Tables) -> None:
    """One reading in twenty grossly wrong: at least 93 % right."""
    got = summary(play_all(diagnosis, tables, Meter(gross=0.05), True))
    print({key: round(value, 3) for key, value in got.items()})
    assert got["right"] >= 0.93
    assert got["does not fit"] <= 0.03
