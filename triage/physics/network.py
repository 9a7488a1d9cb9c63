"""Readings of a meter on the unpowered board: ohms, diode test, series resistance and capacitance.

Ohms and diode test are direct-current solutions with the meter as part of the circuit; the bridge that reads capacitors is a
small-signal solution at its test frequency with every junction at rest.
"""

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from triage.physics.netlist import THERMAL_VOLTAGE, Compiled


@dataclass(frozen=True, slots=True)
class Meter:
    """What a meter puts on its probes; the defaults are those of an ordinary hand multimeter, common practice, no source."""

    ohms_voltage: float = 0.25
    """Open-circuit voltage of the ohms function [V]: too low to open a junction."""
    ohms_low: float = 1e3
    """Source resistance of the low ranges [ohm]."""
    ohms_high: float = 1e6
    """Source resistance of the high ranges [ohm]."""
    ohms_change: float = 20e3
    """Reading above which the high ranges are used [ohm]."""
    ohms_most: float = 20e6
    """Highest reading before OL [ohm]."""
    diode_current: float = 1e-3
    """Test current of the diode function [A]."""
    diode_limit: float = 2.7
    """Voltage at which the diode function begins to limit [V]."""
    diode_most: float = 3.0
    """Highest diode reading before OL [V]."""
    input_resistance: float = 1e9
    """Resistance of the input itself [ohm]."""
    ohms_currents: tuple[float, ...] = ()
    """Test currents of the ohms ranges [A], lowest range first, for a meter that tests with a current; empty otherwise."""
    range_voltage: float = 0.3
    """Voltage above which such a meter steps to the next range [V]."""
    bridge_esr_frequency: float = 100e3
    """Test frequency of the series-resistance reading [Hz]."""
    bridge_capacitance_frequency: float = 100.0
    """Test frequency of the capacitance reading [Hz]."""

    capacitance_most: float = 0.1
    """Highest capacitance before OL [F]."""
    bridge_series: bool = False
    """True for a bridge that shows the series capacitance, False for one that shows the parallel capacitance."""
    bridge_impedance: float = 1e9
    """Impedance above which a bridge of the first kind shows OL [ohm]: no current is left to tell its phase by."""

    def numbers(self) -> np.ndarray:
        """The values in the order the compiled solver takes them."""
        return np.array([self.ohms_voltage, self.ohms_low, self.ohms_high, self.ohms_change, self.ohms_most,
                         self.diode_current, self.diode_limit, self.diode_most, self.input_resistance,
                         self.range_voltage])


HAND_METER = Meter()


def read_network(compiled: Compiled, probes: Sequence[tuple[str, str, str]], meter: Meter = HAND_METER) -> np.ndarray:
    """Readings of (function, plus node, minus node) for the functions ohms and diode; inf is OL, nan no solution.

    The netlist must have been compiled with the probe pairs as extra pairs. Shape (len(probes),).
    """
    from triage.physics.network_solver import read_all

    table = np.array([[compiled.index(a), compiled.index(b), f == "diode"] for f, a, b in probes], dtype=np.int64)
    slots = np.array([_slots(compiled, row[0], row[1]) for row in table], dtype=np.int64)
    result: np.ndarray = read_all(compiled.nonzeros, compiled.program, compiled.resistor, compiled.winding, compiled.transfer,
                                  compiled.diode, compiled.bipolar, table, slots, meter.numbers(),
                                  np.array(meter.ohms_currents, dtype=float))
    return result


def _slots(compiled: Compiled, i: int, j: int) -> list[int]:
    """Matrix slots of a conductance between two nodes. Raises KeyError when the netlist has no room for it."""
    _, lower_start, lower_row, lower_slot, upper_start, upper_col, upper_slot, _, _ = compiled.program
    dummy = compiled.nonzeros

    def off(r: int, c: int) -> int:
        if r < 0 or c < 0:
            return dummy
        low, high = min(r, c), max(r, c)
        if r > c:
            span = slice(lower_start[low], lower_start[low + 1])
            rows, slots = lower_row[span], lower_slot[span]
        else:
            span = slice(upper_start[low], upper_start[low + 1])
            rows, slots = upper_col[span], upper_slot[span]
        found = np.nonzero(rows == high)[0]
        if not len(found):
            raise KeyError(f"no room for a meter between nodes {i} and {j}")
        return int(slots[found[0]])

    pivot = compiled.program[0]
    return [int(pivot[i]) if i >= 0 else dummy, int(pivot[j]) if j >= 0 else dummy, off(i, j), off(j, i)]


def read_bridge(compiled: Compiled, probes: Sequence[tuple[str, str, str]], meter: Meter = HAND_METER) -> np.ndarray:
    """Readings of (function, plus node, minus node) for the functions esr [ohm] and capacitance [F]. Shape (len(probes),)."""
    out = np.empty(len(probes))
    for function, frequency in (("esr", meter.bridge_esr_frequency),
                                ("capacitance", meter.bridge_capacitance_frequency)):
        rows = [k for k, probe in enumerate(probes) if probe[0] == function]
        if not rows:
            continue
        omega = 2.0 * math.pi * frequency
        matrix = _admittance(compiled, omega)
        drive = np.zeros((compiled.size, len(rows)), dtype=complex)
        ends = [(compiled.index(probes[k][1]), compiled.index(probes[k][2])) for k in rows]
        for column, (i, j) in enumerate(ends):
            if i >= 0:
                drive[i, column] += 1.0
            if j >= 0:
                drive[j, column] -= 1.0
        v = np.linalg.solve(matrix, drive)
        for column, (k, (i, j)) in enumerate(zip(rows, ends, strict=True)):
            z = (v[i, column] if i >= 0 else 0.0) - (v[j, column] if j >= 0 else 0.0)
            if function == "esr":
                out[k] = z.real
            else:
                out[k] = _capacitance(z, omega, meter)
    return out


def _capacitance(impedance: complex, omega: float, meter: Meter) -> float:
    """Capacitance that the bridge shows for an impedance [ohm] at ``omega`` [rad/s]; 0 for a short [F]."""
    if meter.bridge_series:
        driven = impedance.imag < 0.0 and abs(impedance) < meter.bridge_impedance
        value = -1.0 / (omega * impedance.imag) if driven else math.inf
    else:
        admittance = 1.0 / impedance
        value = admittance.imag / omega if abs(admittance) < 10.0 else 0.0
    return math.inf if value > meter.capacitance_most else value


def _admittance(compiled: Compiled, omega: float) -> np.ndarray:
    """Small-signal admittance matrix with every junction at zero volts. Shape (nodes, nodes), complex."""
    n = compiled.size
    y = np.zeros((n + 1, n + 1), dtype=complex)
    y[range(n), range(n)] = 1e-11

    def add(ends: np.ndarray, values: np.ndarray) -> None:
        for (i, j), value in zip(ends, values, strict=True):
            y[i, i] += value
            y[j, j] += value
            y[i, j] -= value
            y[j, i] -= value

    add(compiled.resistor[0], compiled.resistor[2])
    ends, _, farad, esr, _ = compiled.capacitor
    add(ends, 1.0 / (esr + 1.0 / (1j * omega * farad)))
    add(compiled.diode[0], _junction(compiled.diode[2][:, 0], compiled.diode[2][:, 1], compiled.diode[2][:, 2], omega))
    ends, _, p, _ = compiled.bipolar
    ones = np.ones(len(p))
    leak = p[:, 5] / (p[:, 6] * THERMAL_VOLTAGE)
    add(ends[:, [1, 2]], _junction(p[:, 0] / p[:, 1], ones, p[:, 7], omega) + leak)
    add(ends[:, [1, 0]], _junction(p[:, 0] / p[:, 2], ones, p[:, 10], omega))
    add(ends[:, [0, 2]], p[:, 0] / THERMAL_VOLTAGE)
    ends, starts, inductance, resistance, _ = compiled.winding
    for lo, hi in itertools.pairwise(starts):
        impedance = 1j * omega * inductance[lo:hi, lo:hi] + np.diag(np.maximum(resistance[lo:hi], 1e-6))
        inverse = np.linalg.inv(impedance)
        for p_, q in np.ndindex(hi - lo, hi - lo):
            (a, b), (c, d) = ends[lo + p_], ends[lo + q]
            value = inverse[p_, q]
            y[a, c] += value
            y[b, d] += value
            y[a, d] -= value
            y[b, c] -= value
    return y[:n, :n]


def _junction(saturation: np.ndarray, emission: np.ndarray, capacitance: np.ndarray, omega: float) -> np.ndarray:
    """Admittance of a junction at zero volts."""
    return saturation / (emission * THERMAL_VOLTAGE) + 1j * omega * capacitance
