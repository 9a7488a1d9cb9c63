"""Readings of a powered board, and the state a user would say it is in."""

import math
from collections.abc import Mapping

from triage.board.circuit import LINE, live_ground, neutral, output_ground
from triage.board.part import Board
from triage.board.probe import Probe
from triage.families.family import Family
from triage.families.steady import Settled, swinging_pin
from triage.physics.transient import I_RMS, POWER, V_MAX, V_MEAN, V_MIN, V_RMS

INPUT_ROLES = ("fusible input resistor", "mains fuse", "thermal fuse", "inrush limiter", "inrush resistor", "mains rectifier",
               "mains bridge", "mains cord", "common-mode choke")


def live_probes(board: Board, family: Family, condition: str) -> tuple[Probe, ...]:
    """Readings that can be taken of the powered board under one condition."""
    probes = []
    for side, nodes in board.sides.items():
        for node in nodes:
            if node not in (board.ground[side], LINE, neutral(board)):
                ground = live_ground(board, side, node)
                probes += [Probe("volts_dc", node, ground, condition), Probe("volts_pp", node, ground, condition)]
    probes += [Probe("volts_ac", node, neutral(board), condition) for node in ac_nodes(board)]
    probes += [Probe("watts", LINE, neutral(board), condition), Probe("amps_ac", LINE, neutral(board), condition)]
    switch = board.by_role(family.switch_role)
    if switch is not None:
        node = switch.pins[swinging_pin(switch, family)]
        probes.append(Probe("hertz", node, board.ground["primary"], condition))
    return tuple(probes)


def ac_nodes(board: Board) -> tuple[str, ...]:
    """Nodes of the mains path up to the rectifier, where an ac voltage tells how far the mains gets."""
    nodes = [LINE]
    for part in board.parts:
        if part.role in INPUT_ROLES and part.kind != "diode" and part.kind != "bridge":
            nodes += [node for node in part.pins.values() if node not in nodes]
    return tuple(node for node in nodes if node != neutral(board))


def live_readings(board: Board, settled: Settled, probes: tuple[Probe, ...]) -> dict[Probe, float]:
    """Values of the probes in SI."""
    values = {}
    source = settled.row("ADAPTER")
    for probe in probes:
        if probe.function == "watts":
            values[probe] = float(source[POWER])
        elif probe.function == "amps_ac":
            values[probe] = float(source[I_RMS])
        elif probe.function == "hertz":
            values[probe] = settled.stretch.frequency
        else:
            row = settled.row(probe.plus, "mains" if probe.function == "volts_ac" else "node")
            if probe.function == "volts_dc":
                values[probe] = float(row[V_MEAN])
            elif probe.function == "volts_pp":
                values[probe] = float(row[V_MAX] - row[V_MIN])
            else:
                values[probe] = math.sqrt(max(float(row[V_RMS] ** 2 - row[V_MEAN] ** 2), 0.0))
    return values


def state_class(board: Board, condition: str, readings: Mapping[str, Mapping[str, float]],
                healthy: Mapping[str, Mapping[str, float]], hot: bool = False) -> str:
    """One of triage.board.evidence.STATES for a unit looked at under ``condition``.

    ``readings`` and ``healthy`` give for each load the values named ``out``, ``ripple`` [V], ``watts`` [W], ``amps`` [A] and
    ``hertz`` [Hz], see :func:`summary`. Thresholds are common practice, no source.
    """
    rated = board.label.output_voltage
    here, sound = readings[condition], healthy[condition]
    volts = here["out"]
    if all(r["out"] < 0.06 * rated for r in readings.values()):
        return "fuse gone" if here["amps"] < 1e-4 and here["watts"] < 1e-3 else "dead"
    if volts > 1.12 * sound["out"]:
        return "output high"
    idle = readings.get("noload", here)["out"]
    if condition != "noload" and idle > 0.85 * rated and volts < 0.75 * rated:
        return "works only without load"
    if here["ripple"] > 0.3 * rated and here["hertz"] < 0.6 * sound["hertz"]:
        return "pulsing"
    if volts < 0.92 * sound["out"]:
        return "output low"
    if here["ripple"] > 2.5 * sound["ripple"] and here["ripple"] > 0.04 * rated:
        return "hum or ripple"
    if hot or here["watts"] > 1.5 * sound["watts"] + 0.2:
        return "hot part"
    return "normal"


def summary(board: Board, readings: Mapping[Probe, float], condition: str) -> dict[str, float]:
    """The few values of one condition by which a state is told."""
    ground, line, back = output_ground(board), LINE, neutral(board)
    frequency = [value for probe, value in readings.items() if probe.function == "hertz" and probe.condition == condition]
    return {
        "out": readings[Probe("volts_dc", "out", ground, condition)],
        "ripple": readings[Probe("volts_pp", "out", ground, condition)],
        "watts": readings[Probe("watts", line, back, condition)],
        "amps": readings[Probe("amps_ac", line, back, condition)],
        "hertz": frequency[0] if frequency else 0.0,
    }
