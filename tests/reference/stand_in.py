"""Expectations taken straight from the simulated reference tables, independent of the program's own physics.

The tables hold one reading for each single fault; tolerance is stood in for by a lognormal spread.
"""

import csv
import tomllib
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from triage.board.evidence import STATES, Symptom
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.expectations import LOADS, Expectations

FUNCTION = {"ohms": "ohms", "diode": "diode", "esr": "esr", "cap": "capacitance"}
KIND = {
    "fusible": "fusible_resistor",
    "ecap": "electrolytic",
    "cap": "capacitor",
    "bjt": "bipolar_transistor",
}
MODE = {"low_c": "low_capacitance", "low_vz": "low_voltage"}
SPREAD = {"ohms": 0.04, "diode": 0.015, "esr": 0.15, "capacitance": 0.1}
"""Relative spread that stands in for the part tolerances, by function; live readings 5 %."""


@dataclass(frozen=True)
class Tables:
    """One reference circuit as tables of readings."""

    bom: dict
    cold: dict[str, dict[Probe, float]]
    """Fault (as the tables spell it) -> reading."""
    live: dict[str, dict[Probe, float]]
    state: dict[str, dict[str, str | None]]
    """Fault -> load -> state of the adapter; None where a technician would notice nothing."""
    collateral: dict[str, dict[str, tuple[str, ...]]]
    """Fault -> load -> what it takes along."""

    @property
    def kinds(self) -> dict[str, str]:
        return {part["ref"]: KIND.get(part["kind"], part["kind"]) for part in self.bom["part"]}

    @property
    def pins(self) -> dict[str, frozenset[str]]:
        return {part["ref"]: frozenset(part["pins"].values()) for part in self.bom["part"]}

    @property
    def sides(self) -> dict[str, str]:
        return {node: side for side, nodes in self.bom["sides"].items() for node in nodes}


def load(folder: Path) -> Tables:
    """The tables of one folder of the reference circuits."""
    bom = tomllib.loads((folder / "bom.toml").read_text())
    cold: dict[str, dict[Probe, float]] = {}
    for row in csv.DictReader((folder / "cold.csv").open()):
        probe = Probe(FUNCTION[row["mode"]], row["probe_plus"], row["probe_minus"])
        value = float("inf") if row["value"] == "OL" else max(float(row["value"]), 0.0)
        cold.setdefault(row["fault"], {})[probe] = value
    seen: dict[str, dict[str, dict[str, float]]] = {}
    collateral: dict[str, dict[str, list[str]]] = {}
    for row in csv.DictReader((folder / "faults.csv").open()):
        if row["observation"] == "collateral":
            collateral.setdefault(row["fault"], {}).setdefault(row["condition"], []).append(row["value"])
        elif row["observation"] != "failed":
            seen.setdefault(row["fault"], {}).setdefault(row["condition"], {})[row["observation"]] = float(row["value"])
    after = {fault: {load_: rows.get(load_ + "_after", rows[load_]) for load_ in LOADS} for fault, rows in seen.items()}
    live = {fault: _live(bom, rows) for fault, rows in after.items()}
    state = {fault: {load_: _state(bom, load_, rows, after["healthy"]) for load_ in LOADS} for fault, rows in after.items()}
    taken = {fault: {load_: tuple(chain) for load_, chain in rows.items()} for fault, rows in collateral.items()}
    return Tables(bom, cold, live, state, taken)


def _live(bom: dict, rows: dict[str, dict[str, float]]) -> dict[Probe, float]:
    found = {}
    for condition, values in rows.items():
        for name, value in values.items():
            kind, _, node = name.partition(".")
            if kind in ("v_dc", "v_pp"):
                minus = bom["probes"][node]
                if node == minus:
                    continue
                found[Probe({"v_dc": "volts_dc", "v_pp": "volts_pp"}[kind], node, minus, condition)] = value
            elif kind == "v_ac":
                found[Probe("volts_ac", *node.split("-"), condition)] = value
            elif name in ("p_in", "i_ac"):
                found[Probe({"p_in": "watts", "i_ac": "amps_ac"}[name], "plug", "plug", condition)] = max(value, 0.0)
    return found


def _state(bom: dict, load_: str, rows: dict[str, dict[str, float]], healthy: dict[str, dict[str, float]]) -> str | None:
    """State of the adapter from its readings, by the rule that the blind cases of the reference use."""
    rated, here, good = bom["label"]["output_v"], rows[load_], healthy[load_]
    out = {name: values["v_dc.out"] for name, values in rows.items()}
    ripple, volts = here["v_pp.out"], out[load_]
    if all(v < 0.06 * rated for v in out.values()):
        return "dead"
    if volts > 1.12 * good["v_dc.out"]:
        return "output high"
    if load_ != "noload" and out["noload"] > 0.85 * rated and volts < 0.75 * rated:
        return "works only without load"
    if ripple > 0.3 * rated and here["f_sw"] < 0.6 * good["f_sw"]:
        return "pulsing"
    if volts < 0.92 * good["v_dc.out"]:
        return "output low"
    if ripple > 2.5 * good["v_pp.out"] and ripple > 0.04 * rated:
        return "hum or ripple"
    return "hot part" if here["p_in"] > 1.5 * good["p_in"] + 0.2 else None


def hypothesis(fault: str) -> Hypothesis:
    """The single fault that the tables spell so; ``healthy`` is no part fault."""
    if fault == "healthy":
        return Hypothesis(())
    ref, mode = fault.split(".")
    return Hypothesis((Fault(ref, MODE.get(mode, mode)),))


def expectations(tables: Tables, draws: int = 24, seed: int = 1) -> Expectations:
    """Single faults of the tables as expectations, spread by SPREAD; all of them share the draws, as one
    board does.
    """
    faults = tuple(tables.cold)
    probes = tuple(dict.fromkeys(p for f in faults for p in (*tables.cold[f], *tables.live[f])))
    value = np.array([[tables.cold[f].get(p, tables.live[f].get(p, np.nan)) for p in probes] for f in faults])
    spread = np.array([SPREAD.get(p.function, 0.05) for p in probes])
    noise = np.random.default_rng(seed).normal(size=(1, len(probes), draws))
    samples = value[:, :, None] * np.exp(spread[None, :, None] * noise)
    states = np.array([[[STATES.index(tables.state[f][c] or "normal")] for c in LOADS] for f in faults])
    return Expectations(tuple(map(hypothesis, faults)), probes, samples, states)


def complaint(tables: Tables, fault: str) -> Symptom:
    """What a user would say of the fault: the first thing noticed, at full load before half and none."""
    for condition in ("full", "half", "noload"):
        if tables.state[fault][condition]:
            return Symptom(tables.state[fault][condition] or "", condition)
    return Symptom("normal", "full")


@dataclass(frozen=True)
class Unit:
    """One whole unit to be repaired: what it shows, and what is really wrong with it."""

    name: str
    needed: frozenset[str]
    """Parts that have to be replaced."""
    symptom: Symptom
    readings: dict[Probe, float]


def fault_units(tables: Tables, with_collateral: bool = True) -> list[Unit]:
    """Every single fault of the tables on a board of nominal values.

    with_collateral: faults that take others along too, although the cold table shows the root alone.
    """
    faults = [f for f in tables.cold if f != "healthy" and (with_collateral or f not in tables.collateral)]
    return [Unit(f, hypothesis(f).repair, complaint(tables, f), {**tables.cold[f], **tables.live[f]}) for f in faults]


def blind_units(tables: Tables, folder: Path) -> list[Unit]:
    """The whole units of cases.toml: parts drawn within tolerance, hidden faults with their collateral."""
    units = []
    for case in tomllib.loads((folder / "cases.toml").read_text())["case"]:
        rows: dict[str, dict[str, float]] = {}
        for condition, name, value, _ in case["readings"]:
            rows.setdefault(condition, {})[name] = float(value)
        readings = _live(tables.bom, rows)
        for plus, minus, mode, value, _ in case["cold"]:
            shown = float("inf") if value == "OL" else max(float(value), 0.0)
            readings[Probe(FUNCTION[mode], plus, minus)] = shown
        truth = case["truth"]
        refs = frozenset(fault.split(".")[0] for fault in (truth["fault"], *truth["collateral"]))
        units.append(Unit(case["id"], refs, Symptom(case["complaint_class"], case["load"]), readings))
    return units
