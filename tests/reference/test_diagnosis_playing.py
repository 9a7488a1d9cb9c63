"""Whole diagnoses on simulated faults: the reference tables answer, a meter with 2 % error reads them.

The expectations come straight from the same simulated tables (one reading a fault, spread by hand), so these
plays judge the way of deciding, not the physics; plays with the program's own expectations stand beside them.
"""

from pathlib import Path

import numpy as np
import pytest

from tests.reference import stand_in
from tests.reference.playing import Meter, Play, play, summary
from triage.board.evidence import Sign
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.expectations import Expectations
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
    signs = [Sign("sound")] if looked else []
    return [
        play(diagnosis, unit.name, unit.needed, [unit.symptom, *signs], unit.readings.get, 100 + number, meter)
        for number, unit in enumerate(stand_in.fault_units(tables))
    ]


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


@pytest.mark.long
def test_faults_that_are_not_listed_do_not_fit(tables: stand_in.Tables) -> None:
    """A tenth of the faults left out of the list and played, for each tenth: at least half are flagged.

    The rest of the plays end in a repair of the same part in another mode, or in the finding that the board
    looks sound.
    """
    expected = stand_in.expectations(tables)
    units = stand_in.fault_units(tables)
    mixed = np.random.default_rng(4).permutation(len(units))
    plays = []
    for tenth in range(10):
        out = [units[i] for i in mixed[tenth::10]]
        gone = {stand_in.hypothesis(unit.name) for unit in out}
        keep = [i for i, h in enumerate(expected.hypotheses) if h not in gone]
        fewer = Expectations(
            tuple(expected.hypotheses[i] for i in keep), expected.probes, expected.samples[keep], expected.states[keep]
        )
        weights = {h.root[0]: Weight(1.0) for h in fewer.hypotheses if h.root}
        blind = Diagnosis(fewer, prior_of(weights, {}, pair_share=0), tables.kinds, tables.sides, pins=tables.pins)
        plays += [
            play(blind, u.name, u.needed, [u.symptom, Sign("sound")], u.readings.get, 10 * tenth + k) for k, u in enumerate(out)
        ]
    got = summary(plays)
    print({key: round(value, 3) for key, value in got.items()})
    assert got["does not fit"] >= 0.5
    assert sum(p.status == "found" and not p.cured for p in plays) <= 0.25 * len(plays)
