# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled solution of the unpowered network with a meter on two of its nodes.

Capacitors are open, windings are their copper. The meter is part of the circuit: a voltage behind a resistance for ohms, a
current with a limited voltage for the diode test. Newton's method with junction limiting from all voltages at zero; where it
does not settle, the shunt conductance is stepped down from a larger one.

Source: L. Nagel, SPICE2, 1975, section 4.2 (Newton's method, conductance stepping).
"""

import math

import numpy as np

from triage.physics.compiled_code import njit
from triage.physics.transient_devices import (
    OPTIONS,
    VT,
    base_conductances,
    factor_and_solve,
    inject,
    limit_junction,
    stamp,
    stamp_bipolars,
    stamp_diodes,
    voltage,
)

GMIN = 1e-14
SHUNT = 1e-11
WINDING_LEAST = 1e-3
CLAMP_SATURATION = 1e-12
"""Saturation current of the junction that limits the diode test [A]."""
CLAMP_CRITICAL = VT * math.log(VT / (math.sqrt(2.0) * CLAMP_SATURATION))
FLOATING_NOISE = 5e-5
"""Change of a node that counts as none [V]: floating nodes carry the rounding of the elimination. The probes are held closer."""
DAMPED_FROM = 60
"""Iterations after which only half of each step is taken."""


@njit(**OPTIONS)
def copper_network(nonzeros, program, resistor, winding, transfer):
    """Conductance matrix of resistors, windings and transfers at direct current."""
    base = base_conductances(nonzeros, program, resistor, SHUNT)
    for t in range(transfer[1].shape[0]):
        stamp(base, transfer[0][t], transfer[1][t])
    resistance, stamps = winding[3], winding[4]
    for w in range(resistance.shape[0]):
        stamp(base, stamps[w, w], 1.0 / max(resistance[w], WINDING_LEAST))
    return base


@njit(**OPTIONS)
def meter_voltage(base, program, diode, bipolar, plus, minus, slots, conductance, current, clamp, v, extra):
    """Voltage between the probes with a meter of the given source conductance [S] and current [A]; nan: no solution.

    ``clamp`` [V] limits the voltage softly (0: no limit). ``v`` is the start and becomes the solution; ``extra`` [S] is a
    shunt from every node to the reference on top of the usual one.
    """
    nd, nq = diode[0].shape[0], bipolar[0].shape[0]
    vd, vq = np.zeros(nd), np.zeros((nq, 2))
    no_d, no_q, q_d, q_q = np.zeros(nd), np.zeros((nq, 2)), np.zeros(nd), np.zeros((nq, 2))
    a, rhs = np.empty_like(base), np.empty_like(v)
    for d in range(nd):
        vd[d] = voltage(v, diode[0][d, 0]) - voltage(v, diode[0][d, 1])
    for k in range(nq):
        sign = bipolar[3][k]
        vq[k, 0] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 2]))
        vq[k, 1] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 0]))
    across = voltage(v, plus) - voltage(v, minus)
    want = across
    pivot = program[0]
    for iteration in range(300):
        a[:] = base
        for k in range(pivot.shape[0]):
            a[pivot[k]] += extra
            rhs[k] = 0.0
        g, i = conductance, current
        if clamp > 0.0:
            e = CLAMP_SATURATION * math.exp(min((across - clamp) / VT, 60.0))
            g += e / VT
            i += e / VT * across - e
        stamp(a, slots, g)
        if plus >= 0:
            rhs[plus] += i
        if minus >= 0:
            rhs[minus] -= i
        limited = stamp_diodes(a, rhs, v, vd, diode, 0.0, no_d, q_d, GMIN)
        limited = stamp_bipolars(a, rhs, v, vq, bipolar, 0.0, no_q, q_q, GMIN) or limited
        if not factor_and_solve(a, rhs, program):
            return math.nan
        moved = False
        for k in range(v.shape[0]):
            if not math.isfinite(rhs[k]):
                return math.nan
            if abs(rhs[k] - v[k]) > 1e-5 * max(abs(rhs[k]), abs(v[k])) + FLOATING_NOISE:
                moved = True
            v[k] = rhs[k] if iteration < DAMPED_FROM else 0.5 * (rhs[k] + v[k])
        before = want
        want = voltage(v, plus) - voltage(v, minus)
        if abs(want - before) > 1e-5 * abs(want) + 1e-9:
            moved = True
        if clamp > 0.0:
            next_ = clamp + limit_junction(want - clamp, across - clamp, VT, CLAMP_CRITICAL)
            if abs(next_ - across) > 1e-6:
                moved = True
            across = next_
        if not moved and not limited and iteration > 0:
            return want
    return math.nan


@njit(**OPTIONS)
def settled(base, program, diode, bipolar, plus, minus, slots, conductance, current, clamp):
    """Meter voltage from rest, stepping the shunt down where the direct way does not settle."""
    v = np.zeros(program[0].shape[0])
    result = meter_voltage(base, program, diode, bipolar, plus, minus, slots, conductance, current, clamp, v, 0.0)
    if math.isfinite(result):
        return result
    v[:] = 0.0
    for power in range(3, 15):
        extra = 10.0 ** (-power) if power < 14 else 0.0
        result = meter_voltage(base, program, diode, bipolar, plus, minus, slots, conductance, current, clamp, v, extra)
        if not math.isfinite(result):
            v[:] = 0.0
    return result


@njit(**OPTIONS)
def by_current(base, program, diode, bipolar, plus, minus, slots, meter, ranges):
    """Ohms of a meter that steps its test current down until the voltage is low enough; inf is OL."""
    leak = 1.0 / meter[8]
    for r in range(ranges.shape[0]):
        v = settled(base, program, diode, bipolar, plus, minus, slots, leak, ranges[r], meter[6])
        if not math.isfinite(v):
            return math.nan
        if abs(v) <= meter[9]:
            ohm = max(v / ranges[r], 0.0)
            return math.inf if ohm > meter[4] else ohm
    return math.inf


@njit(**OPTIONS)
def read_all(nonzeros, program, resistor, winding, transfer, diode, bipolar, probes, slots, meter, ranges):
    """Readings of a list of probes: ohms [ohm] for probes[:, 2] = 0, diode test [V] for 1; inf is OL, nan no solution.

    ``meter`` = (ohms source voltage [V], its low and high resistance [ohm], change of range [ohm], highest reading [ohm],
    diode-test current [A], its limit [V], highest diode reading [V], input resistance [ohm], highest voltage of a range [V]).
    ``ranges`` = test currents [A] from the lowest range up; empty for a meter that tests with a voltage.
    """
    base = copper_network(nonzeros, program, resistor, winding, transfer)
    out = np.empty(probes.shape[0])
    leak = 1.0 / meter[8]
    for k in range(probes.shape[0]):
        plus, minus = probes[k, 0], probes[k, 1]
        if probes[k, 2] == 1:
            v = settled(base, program, diode, bipolar, plus, minus, slots[k], leak, meter[5], meter[6])
            out[k] = math.inf if v > meter[7] else (max(v, 0.0) if math.isfinite(v) else math.nan)
            continue
        if ranges.shape[0] > 0:
            out[k] = by_current(base, program, diode, bipolar, plus, minus, slots[k], meter, ranges)
            continue
        ohm = math.nan
        for high in range(2):
            source = meter[1 + high]
            v = settled(base, program, diode, bipolar, plus, minus, slots[k], 1.0 / source + leak, meter[0] / source, 0.0)
            current = (meter[0] - v) / source - v * leak
            ohm = v / current if current > 1e-18 else math.inf
            if not ohm > meter[3]:
                break
        out[k] = math.inf if ohm > meter[4] else (max(ohm, 0.0) if math.isfinite(ohm) else math.nan)
    return out


@njit(**OPTIONS)
def rest_point(nonzeros, program, resistor, winding, transfer, diode, bipolar, source):
    """(found, node voltages [V], winding currents [A]) at direct current with every source at its value at time zero."""
    base = copper_network(nonzeros, program, resistor, winding, transfer)
    drive = np.zeros(program[0].shape[0])
    for s in range(source[0].shape[0]):
        par = source[2][s]
        stamp(base, source[1][s], par[3])
        inject(drive, source[0][s, 0], source[0][s, 1], -par[3] * par[0] * math.sin(par[2]))
    v = np.zeros(program[0].shape[0])
    nd, nq = diode[0].shape[0], bipolar[0].shape[0]
    no_d, no_q, q_d, q_q = np.zeros(nd), np.zeros((nq, 2)), np.zeros(nd), np.zeros((nq, 2))
    found = False
    for power in range(2, 15):
        extra = 10.0 ** (-power) if power < 14 else 0.0
        found = _rest_newton(base, drive, program, diode, bipolar, v, extra, no_d, no_q, q_d, q_q)
    currents = np.zeros(winding[3].shape[0])
    for w in range(currents.shape[0]):
        across = voltage(v, winding[0][w, 0]) - voltage(v, winding[0][w, 1])
        currents[w] = across / max(winding[3][w], WINDING_LEAST)
    return found, v, currents


@njit(**OPTIONS)
def _rest_newton(base, drive, program, diode, bipolar, v, extra, no_d, no_q, q_d, q_q):
    """Newton's method at direct current with a shunt ``extra`` [S] from every node; True when it settled."""
    pivot = program[0]
    vd, vq = np.zeros(no_d.shape[0]), np.zeros(no_q.shape)
    for d in range(vd.shape[0]):
        vd[d] = min(voltage(v, diode[0][d, 0]) - voltage(v, diode[0][d, 1]), 1.0)
    for k in range(vq.shape[0]):
        sign = bipolar[3][k]
        vq[k, 0] = min(sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 2])), 1.0)
        vq[k, 1] = min(sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 0])), 1.0)
    a, rhs = np.empty_like(base), np.empty_like(v)
    for iteration in range(300):
        a[:] = base
        rhs[:] = drive
        for k in range(pivot.shape[0]):
            a[pivot[k]] += extra
        limited = stamp_diodes(a, rhs, v, vd, diode, 0.0, no_d, q_d, GMIN)
        limited = stamp_bipolars(a, rhs, v, vq, bipolar, 0.0, no_q, q_q, GMIN) or limited
        if not factor_and_solve(a, rhs, program):
            return False
        moved = False
        for k in range(v.shape[0]):
            if not math.isfinite(rhs[k]):
                return False
            if abs(rhs[k] - v[k]) > 1e-6 * abs(v[k]) + 1e-7:
                moved = True
            v[k] = rhs[k]
        if not moved and not limited and iteration > 0:
            return True
    return False
