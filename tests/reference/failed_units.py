"""Failed adapters of the reference circuits: what is really wrong, what the customer says, what instruments show.

Source of all readings: the reference circuits (ngspice 39), independent of the program's own physics.
"""

import math
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any
from unittest.mock import patch

from tests.reference.reference_circuits import (
    FUNCTIONS,
    PROFILES,
    cold_table,
    collateral_cold_table,
    fault_of,
    lifted_readings,
    live_table,
    not_repeated,
    number,
    observation,
    own_meters,
)
from triage.board.evidence import Symptom
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.diagnosis.engine import Diagnosis
from triage.families.live import state_class
from triage.families.live import summary as live_summary
from triage.families.points import LOADS
from triage.job import workshop
from triage.job.learning import NONE
from triage.job.wiring import Wiring

WORDS = {"bang": "dead", "ripple": "hum or ripple", "high": "output high", "low": "output low",
         "noload_only": "works only without load"}
"""Complaint words of two circuits -> those of the program."""


@dataclass(frozen=True)
class Unit:
    """One failed adapter."""

    name: str
    needed: frozenset[str]
    symptom: Symptom
    readings: dict[Probe, float]


def diagnosis_of(circuit: str) -> Diagnosis:
    """The program's own expectations of the circuit, for the meter its readings were taken with."""
    with patch.object(workshop, "own_instruments", lambda: own_meters(circuit)):
        return Wiring().diagnosis(load_profile(PROFILES[circuit]), NONE)


def single_faults(circuit: str) -> list[Unit]:
    """Every single fault, with its collateral at the load where the customer first noticed something.

    A fault that takes other parts along than its record tells, when the deck is run again, is left out.
    """
    board = load_profile(PROFILES[circuit])
    skipped = not_repeated(circuit, board)
    live, cold, chains = live_table(circuit, board), cold_table(circuit), collateral_cold_table(circuit)
    loads = [load for load in LOADS if ("healthy", load) in live]
    sound = {load: live_summary(board, live["healthy", load][1], load) for load in loads}
    found = []
    for fault in dict.fromkeys(name for name, _ in live if name != "healthy"):
        after = {load: live.get((fault, load + "_after"), live[fault, load]) for load in loads}
        seen = {x: _counted(live_summary(board, after[x][1], x)) for x in loads}
        states = {load: state_class(board, load, seen, sound) for load in loads}
        load = next((x for x in reversed(loads) if states[x] != "normal"), "full")
        if (fault, load) in skipped:
            continue
        collateral = after[load][0]
        faults = frozenset((*fault_of(fault), *collateral))
        readings = dict(chains.get(faults, {}) if collateral else cold.get(fault, cold["healthy"]))
        for x in loads:
            readings |= after[x][1] if after[x][0] == collateral else {}
        readings |= lifted_readings(circuit, faults)
        state = "dead" if states[load] == "fuse gone" else states[load]
        found.append(Unit(fault, frozenset(f.ref for f in faults), Symptom(state, load), readings))
    return found


def _counted(seen: dict[str, float]) -> dict[str, float]:
    """A counter finds nothing between the bursts of a hiccup."""
    return seen | {"hertz": 0.0 if math.isnan(seen["hertz"]) else seen["hertz"]}


def perturbed_units(circuit: str, folder: Path) -> list[Unit]:
    """Whole units of cases.toml: parts drawn within tolerance, one hidden fault with its collateral.

    The readings with a leg lifted are those of nominal parts: the units have none of their own.
    """
    board, units = load_profile(PROFILES[circuit]), []
    for case in tomllib.loads((folder / circuit / "cases.toml").read_text("utf-8"))["case"]:
        truth = case["truth"]
        faults = fault_of("+".join((truth["fault"], *truth["collateral"])))
        word = case.get("complaint_class") or truth["symptom"]
        readings = {**_live(board, case["readings"]), **_cold(case["cold"]), **lifted_readings(circuit, faults)}
        symptom = Symptom(WORDS.get(word, word), case["load"])
        units.append(Unit(case["id"], frozenset(f.ref for f in faults), symptom, readings))
    return units


def _live(board: Board, told: Any) -> dict[Probe, float]:
    """Live readings, which the two generators write as rows or as tables by load."""
    rows = [(load, name, value) for load, row in told.items() for name, value in row.items()] if isinstance(told, dict) else [
        (load, name, value) for load, name, value, _ in told
    ]
    found = {}
    for load, name, value in rows:
        probe = observation(board, name, load)
        if probe is not None and not isinstance(value, str) and math.isfinite(value):
            found[probe] = float(value)
    return found


def _cold(told: Any) -> dict[Probe, float]:
    rows = told["rows"] if isinstance(told, dict) else told
    return {Probe(FUNCTIONS.get(mode, mode), plus, minus): number(str(value), mode) for plus, minus, mode, value, _ in rows}
