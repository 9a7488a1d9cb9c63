# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled time-domain solution: steps of two implicit stages over the arrays of a netlist.

A step from t to t + h has two stages with the same leading coefficient: the trapezoidal rule to t + GAMMA h, and the second
backward difference over both points to t + h. The method is L-stable, needs nothing from earlier steps, and sums derivatives
with the weights STAGE_WEIGHT, STAGE_WEIGHT, END_WEIGHT; the statistics of the ports use the same weights, so that summed
currents are the change of the stored charges exactly. For the same reason the charge of a junction is the linearised one
that the last Newton iteration balanced, never one evaluated afterwards: over an abrupt change the difference would be lost.

The truncation error is passed through the factorised circuit, which takes out what a stiff part of it cannot follow anyway.

Sources: R. Bank et al., Transient simulation of silicon devices and circuits, IEEE Transactions on Computer-Aided Design 4,
1985 (the two stages); M. Hosea and L. Shampine, Analysis and implementation of TR-BDF2, Applied Numerical Mathematics 20, 1996
(size of the second stage, truncation error and its filtering).
"""

import math
from typing import NamedTuple

import numpy as np

from triage.physics.compiled_code import njit
from triage.physics.netlist import TERMINALS
from triage.physics.transient_behaviour import (
    EVENT_WINDOW,
    advance,
    behaviours_close,
    margin,
    next_event,
    resting,
    stamp_behaviours,
)
from triage.physics.transient_devices import (
    INNER,
    PLAIN,
    base_conductances,
    factor_and_solve,
    inject,
    junction_voltages,
    junctions_close,
    resolve,
    stamp,
    stamp_bipolars,
    stamp_diodes,
    voltage,
)
from triage.physics.transient_storage import (
    add_charges,
    charge_moves,
    charges_at_rest,
    inject_charges,
    inject_storage,
    stamp_storage,
    storage_states,
)

GMIN = 1e-12
SHUNT = 1e-12
PEAK_MEMORY = 50e-6
"""Time constant with which the remembered size of a state fades [s]: a few switching periods."""
GAMMA = 2.0 - math.sqrt(2.0)
"""Share of the first stage in a step: both stages then have the leading coefficient LEAD / h."""
LEAD = 2.0 / GAMMA
BACK_STAGE = -1.0 / (GAMMA * (1.0 - GAMMA))
BACK_START = (1.0 - GAMMA) / GAMMA
STAGE_WEIGHT = math.sqrt(2.0) / 4.0
END_WEIGHT = GAMMA / 2.0
TRUNCATION = (3.0 * GAMMA * GAMMA - 4.0 * GAMMA + 2.0) / (6.0 * (2.0 - GAMMA))
EULER_STEPS = 3
"""Steps of the implicit Euler rule at the start, until the derivatives are those of the circuit."""
WHOLE_MOVES = 12
"""Iterations of Newton's method that take their whole move."""
QUIET_STEPS = 16
"""Steps at the start of a run that are not searched for extremes."""
EULER_START = 10.0
"""First step as a multiple of the smallest."""
AFTER_JUMP = 1e-10
"""Step after the drive of a controller has jumped [s]."""
RESTING_STEP = 1e-4
"""Largest step while every controller is locked out [s]: their supply climbs over hundreds of milliseconds then."""
SAFETY, GROW_MOST, SHRINK_MOST, NEWTON_SHRINK = 0.8, 2.5, 0.15, 0.2
"""Share of the step size that the truncation error allows, and limits of its change [-]."""
V_MIN, V_MAX, V_SUM, V_SQUARE, I_MIN, I_MAX, I_SUM, I_SQUARE, VI_SUM = range(9)


class Memory(NamedTuple):
    """Arrays of a run: nodes v, states y with derivatives f, matrices, junctions, ports."""

    v: np.ndarray
    v_start: np.ndarray
    v_stage: np.ndarray
    slope: np.ndarray
    y_start: np.ndarray
    f_start: np.ndarray
    y_stage: np.ndarray
    f_stage: np.ndarray
    y: np.ndarray
    f: np.ndarray
    history: np.ndarray
    history_d: np.ndarray
    history_q: np.ndarray
    error: np.ndarray
    peak: np.ndarray
    floor: np.ndarray
    base: np.ndarray
    linear: np.ndarray
    matrix: np.ndarray
    drive: np.ndarray
    rhs: np.ndarray
    inverse: np.ndarray
    flux: np.ndarray
    emf: np.ndarray
    vd: np.ndarray
    vq: np.ndarray
    lin_d: np.ndarray
    lin_q: np.ndarray
    lin_b: np.ndarray
    no_d: np.ndarray
    no_q: np.ndarray
    port_start: np.ndarray
    port_stage: np.ndarray
    port_end: np.ndarray
    stats: np.ndarray


def memory(compiled, nodes, floor):
    """Arrays for a run over a compiled netlist; ``nodes`` is moved by the run, ``floor`` has one entry per state."""
    n, width, states, ports = len(nodes), compiled.nonzeros + 1, len(floor), len(compiled.port[1])
    nw, nd, nq = (len(compiled.names[kind]) for kind in ("winding", "diode", "bipolar"))
    first = states - nd - 2 * nq
    history = np.zeros(states)
    stats = np.zeros((9, ports))
    stats[[V_MIN, I_MIN]], stats[[V_MAX, I_MAX]] = 1e30, -1e30
    base = base_conductances(compiled.nonzeros, compiled.program, compiled.resistor, SHUNT)
    return Memory(
        nodes, nodes.copy(), nodes.copy(), np.zeros(n), *(np.zeros(states) for _ in range(6)),
        history, history[first:first + nd], history[first + nd:].reshape(nq, 2), np.zeros(states), np.zeros(states), floor,
        base, np.zeros(width), np.zeros(width), np.zeros(n), np.zeros(n),
        np.zeros((nw, nw)), np.zeros(nw), np.zeros(len(compiled.names["source"])),
        np.zeros(nd), np.zeros((nq, 2)), np.zeros(2 * nd), np.zeros((nq, 5)),
        np.zeros((len(compiled.behaviour[2]), TERMINALS)), np.zeros(nd), np.zeros((nq, 2)),
        *(np.zeros((2, ports)) for _ in range(3)), stats)


@njit(**INNER)
def copy(target, origin):
    """Overwrite a one-dimensional array."""
    for k in range(target.shape[0]):
        target[k] = origin[k]


@njit(**INNER)
def solve_point(linear, drive, a, rhs, v, vd, vq, a0, diode, history_d, lin_d, bipolar, history_q, lin_q, behaviour, lin_b,
                program, share, error, most):
    """Newton's method at one time; ``v`` holds the guess and becomes the solution. Returns whether it settled.

    Beyond ``WHOLE_MOVES`` iterations it goes half the way: about a kink of a behaviour whole moves can go round in circles.
    """
    for number in range(most):
        copy(a, linear)
        copy(rhs, drive)
        limited = stamp_diodes(a, rhs, v, vd, diode, a0, history_d, lin_d, GMIN)
        limited = stamp_bipolars(a, rhs, v, vq, bipolar, a0, history_q, lin_q, GMIN) or limited
        stamp_behaviours(a, rhs, v, behaviour, lin_b)
        if not factor_and_solve(a, rhs, program):
            return False
        total = 0.0
        for k in range(v.shape[0]):
            v[k] = rhs[k] if number < WHOLE_MOVES else 0.5 * (v[k] + rhs[k])
            total += abs(rhs[k])
        if not math.isfinite(total):
            return False
        if (not limited and junctions_close(v, diode, vd, bipolar, vq, share, error)
                and behaviours_close(v, behaviour, lin_b)):
            return True
    return False


@njit(**INNER)
def source_drive(t, source, emf, drive):
    """Open-circuit voltages of the sources at the time ``t``, and the currents they drive into the nodes."""
    ends, _, p = source
    for k in range(drive.shape[0]):
        drive[k] = 0.0
    for s in range(emf.shape[0]):
        emf[s] = p[s, 0] * math.sin(2.0 * math.pi * p[s, 1] * t + p[s, 2])
        inject(drive, ends[s, 0], ends[s, 1], -p[s, 3] * emf[s])


@njit(**INNER)
def solve_states(m, program, capacitor, winding, diode, bipolar, behaviour, a0, share, error, most):
    """Node voltages and states at one time from the history in ``m``; returns whether Newton's method settled."""
    inject_storage(m.drive, a0, m.history, capacitor, winding, m.inverse, m.flux)
    if not solve_point(m.linear, m.drive, m.matrix, m.rhs, m.v, m.vd, m.vq, a0, diode, m.history_d, m.lin_d, bipolar,
                       m.history_q, m.lin_q, behaviour, m.lin_b, program, share, error, most):
        return False
    first = capacitor[2].shape[0] + winding[3].shape[0]
    storage_states(m.v, a0, m.history, capacitor, winding, m.inverse, m.flux, m.y)
    charge_moves(m.v, first, diode, m.vd, m.lin_d, bipolar, m.vq, m.lin_q, m.y)
    add_charges(first, m.lin_d, m.lin_q, m.y)
    for k in range(m.y.shape[0]):
        m.f[k] = a0 * m.y[k] + m.history[k]
    return True


@njit(**INNER)
def prepare_stage(m, stage, h):
    """History of the states and guess of the node voltages: stage 0 Euler, 1 trapezoidal, 2 backward difference."""
    if stage == 0:
        for k in range(m.y.shape[0]):
            m.history[k] = -m.y_start[k] / h
        return
    if stage == 1:
        for k in range(m.y.shape[0]):
            m.history[k] = -LEAD / h * m.y_start[k] - m.f_start[k]
        for k in range(m.v.shape[0]):
            m.v[k] = m.v_start[k] + m.slope[k] * (GAMMA * h)
        return
    for k in range(m.y.shape[0]):
        m.history[k] = (BACK_STAGE * m.y_stage[k] + BACK_START * m.y_start[k]) / h
    for k in range(m.v.shape[0]):
        m.v[k] = m.v_stage[k] + (m.v_stage[k] - m.v_start[k]) * ((1.0 - GAMMA) / GAMMA)


@njit(**INNER)
def truncation(m, program, capacitor, winding, diode, bipolar, a0, scale):
    """Largest ratio of the truncation error of a step to what is allowed, over the states.

    Allowed is ``scale`` times the largest size the state had lately plus its floor.
    """
    for k in range(m.y.shape[0]):
        bend = m.f_start[k] / GAMMA - m.f_stage[k] / (GAMMA * (1.0 - GAMMA)) + m.f[k] / (1.0 - GAMMA)
        m.history[k] = -LEAD * TRUNCATION * bend
    for k in range(m.rhs.shape[0]):
        m.rhs[k] = 0.0
    first = capacitor[2].shape[0] + winding[3].shape[0]
    inject_storage(m.rhs, a0, m.history, capacitor, winding, m.inverse, m.flux)
    inject_charges(m.rhs, first, m.history, diode, bipolar)
    resolve(m.matrix, m.rhs, program)
    storage_states(m.rhs, a0, m.history, capacitor, winding, m.inverse, m.flux, m.error)
    charge_moves(m.rhs, first, diode, m.no_d, m.lin_d, bipolar, m.no_q, m.lin_q, m.error)
    worst = 0.0
    for k in range(m.y.shape[0]):
        worst = max(worst, abs(m.error[k]) / (scale * max(abs(m.y[k]), m.peak[k]) + m.floor[k]))
    return worst


@njit(**INNER)
def port_values(v, y, f, emf, port, resistor, capacitor, source, out):
    """Voltage and current of every port, written into the two rows of ``out``."""
    ends, kinds, index = port
    for p in range(kinds.shape[0]):
        out[0, p] = voltage(v, ends[p, 0]) - voltage(v, ends[p, 1])
        k, kind, i = index[p], kinds[p], 0.0
        if kind == 0:
            i = resistor[2][k] * (voltage(v, resistor[0][k, 0]) - voltage(v, resistor[0][k, 1]))
        elif kind == 1:
            i = capacitor[2][k] * f[k]
        elif kind == 2:
            i = y[capacitor[2].shape[0] + k]
        elif kind == 3:
            i = source[2][k, 3] * (emf[k] - voltage(v, source[0][k, 0]) + voltage(v, source[0][k, 1]))
        out[1, p] = i


@njit(**INNER)
def accumulate(stats, start, stage, end, h, peaks):
    """Add one step of length ``h`` to extremes and integrals of every port.

    Extremes look at the ends of steps only: the inner stage of a step over a stiff part overshoots, and the end takes that
    back. They leave out the first steps of a run (``peaks`` False), some picoseconds in which junctions take up their charges.
    """
    w, w1 = h * STAGE_WEIGHT, h * END_WEIGHT
    for p in range(end.shape[1]):
        v0, vs, v1 = start[0, p], stage[0, p], end[0, p]
        i0, js, i1 = start[1, p], stage[1, p], end[1, p]
        if peaks:
            stats[V_MIN, p] = min(stats[V_MIN, p], v1)
            stats[V_MAX, p] = max(stats[V_MAX, p], v1)
            stats[I_MIN, p] = min(stats[I_MIN, p], i1)
            stats[I_MAX, p] = max(stats[I_MAX, p], i1)
        stats[V_SUM, p] += w * (v0 + vs) + w1 * v1
        stats[V_SQUARE, p] += w * (v0 * v0 + vs * vs) + w1 * v1 * v1
        stats[I_SUM, p] += w * (i0 + js) + w1 * i1
        stats[I_SQUARE, p] += w * (i0 * i0 + js * js) + w1 * i1 * i1
        stats[VI_SUM, p] += w * (v0 * i0 + vs * js) + w1 * v1 * i1


@njit(**INNER)
def hold_ports(m):
    """Let the ports of an Euler step have their end values throughout, as its derivatives do."""
    for p in range(m.port_end.shape[1]):
        for k in range(2):
            m.port_start[k, p] = m.port_end[k, p]
            m.port_stage[k, p] = m.port_end[k, p]


@njit(**INNER)
def keep(m, h, euler):
    """Make the end of a step the start of the next."""
    fade = math.exp(-h / PEAK_MEMORY)
    for k in range(m.y.shape[0]):
        m.peak[k] = max(abs(m.y[k]), m.peak[k] * fade)
        m.y_start[k], m.f_start[k] = m.y[k], m.f[k]
    for k in range(m.v.shape[0]):
        m.slope[k] = 0.0 if euler else (m.v[k] - m.v_stage[k]) / ((1.0 - GAMMA) * h)
        m.v_start[k] = m.v[k]
    for p in range(m.port_end.shape[1]):
        m.port_start[0, p], m.port_start[1, p] = m.port_end[0, p], m.port_end[1, p]


@njit(**INNER)
def excursion(v, swing, low, high, up):
    """(swing state, 1 at the end of an excursion) of the watched switch: 1 after it was above ``high`` of the bulk voltage.

    ``swing`` = (switch node, its reference, bulk node, its reference); an excursion ends below ``low`` of the bulk voltage [-].
    """
    if swing[0] < 0:
        return up, 0
    level = voltage(v, swing[0]) - voltage(v, swing[1])
    bulk = voltage(v, swing[2]) - voltage(v, swing[3])
    if bulk > 15.0 and level > high * bulk:
        return 1, 0
    if level < low * bulk:
        return -1, 1 if up == 1 else 0
    return up, 0


@njit(**INNER)
def begin(m, transfer, source, diode, bipolar, vc, iw):
    """States at the start of a run; sources and transfers join the resistors in the constant part of the matrix."""
    for s in range(m.emf.shape[0]):
        stamp(m.base, source[1][s], source[2][s, 3])
    for k in range(transfer[1].shape[0]):
        stamp(m.base, transfer[0][k], transfer[1][k])
    junction_voltages(m.v, diode, m.vd, bipolar, m.vq)
    nc, nw = vc.shape[0], iw.shape[0]
    for c in range(nc):
        m.y[c] = vc[c]
    for w in range(nw):
        m.y[nc + w] = iw[w]
    charges_at_rest(nc + nw, diode, m.vd, bipolar, m.vq, m.y)
    for k in range(m.y.shape[0]):
        m.y_start[k], m.peak[k] = m.y[k], abs(m.y[k])


@njit(**PLAIN)
def run(m, program, resistor, transfer, capacitor, winding, diode, bipolar, behaviour, source, port, vc, iw, times,
        tolerances, swing, trace):
    """Integrate from times[0] to times[1]; returns (status, steps, time reached, excursions, trace rows used).

    ``vc``, ``iw`` and the nodes in ``m`` are read and left at the end point. ``times`` = (start, stop, start of statistics,
    largest step, smallest step, step below which the error is not asked, time from which the waking of a locked-out controller
    ends the run). ``tolerances`` = (move of a blocked junction [-],
    error of a conducting junction [V], error of a step [-], end and begin of an excursion [-]). ``trace`` = (start, interval,
    nodes, rows).
    """
    stop, stats_from, h_max, h_min, h_trust = times[1], times[2], times[3], times[4], times[5]
    share, error, scale, low, high = tolerances
    begin(m, transfer, source, diode, bipolar, vc, iw)
    t, h, steps, up, swings, used, next_trace = times[0], h_min * EULER_START, 0, 0, 0, 0, trace[0]
    since, overshoot = 0, -1.0
    while t < stop * (1.0 - 1e-12):
        h = min(h, stop - t, next_event(behaviour, t) - t)
        euler = since < EULER_STEPS
        a0 = 1.0 / h if euler else LEAD / h
        copy(m.linear, m.base)
        stamp_storage(m.linear, a0, capacitor, winding, m.inverse)
        settled = False
        for stage in range(0 if euler else 1, 1 if euler else 3):
            prepare_stage(m, stage, h)
            source_drive(t + (GAMMA * h if stage == 1 else h), source, m.emf, m.drive)
            settled = solve_states(m, program, capacitor, winding, diode, bipolar, behaviour, a0, share, error,
                                   10 if h > 2.0 * h_min and not euler else 200)
            if not settled:
                break
            if stage == 1:
                copy(m.v_stage, m.v)
                copy(m.y_stage, m.y)
                copy(m.f_stage, m.f)
                port_values(m.v, m.y, m.f, m.emf, port, resistor, capacitor, source, m.port_stage)
        worst = 0.0
        if settled and not euler:
            worst = truncation(m, program, capacitor, winding, diode, bipolar, a0, scale)
        if not settled or (worst > 1.0 and h > 1.001 * h_trust):
            h = max(h * max(SAFETY * worst ** (-1.0 / 3.0), SHRINK_MOST), h_trust) if settled else h * NEWTON_SHRINK
            if h < h_min:
                return 1, steps, t, swings, used
            copy(m.v, m.v_start)
            junction_voltages(m.v, diode, m.vd, bipolar, m.vq)
            continue
        past = margin(m.v, behaviour, t + h)
        if past > 0.0 and overshoot < 0.0 and h > EVENT_WINDOW:
            # Cut the step at the instant the comparator trips, by the straight line between its two ends.
            h = max(h * min(overshoot / (overshoot - past), 0.9), 0.5 * EVENT_WINDOW)
            copy(m.v, m.v_start)
            junction_voltages(m.v, diode, m.vd, bipolar, m.vq)
            continue
        port_values(m.v, m.y, m.f, m.emf, port, resistor, capacitor, source, m.port_end)
        if euler:
            hold_ports(m)
        if t >= stats_from:
            accumulate(m.stats, m.port_start, m.port_stage, m.port_end, h, steps >= QUIET_STEPS)
        t += h
        steps += 1
        since += 1
        keep(m, h, euler)
        slept = resting(behaviour)
        if advance(m.v, behaviour, t, h):
            since, worst, h = 0, 1.0, AFTER_JUMP
        if slept and t >= times[6] and not resting(behaviour):
            break
        overshoot = margin(m.v, behaviour, t)
        up, ended = excursion(m.v, swing, low, high, up)
        if t >= stats_from:
            swings += ended
        if t >= next_trace and used < trace[3].shape[0]:
            trace[3][used, 0] = t
            for j in range(trace[2].shape[0]):
                trace[3][used, j + 1] = voltage(m.v, trace[2][j])
            used += 1
            next_trace += trace[1]
        h *= min(max(SAFETY * max(worst, 1e-6) ** (-1.0 / 3.0), SHRINK_MOST), GROW_MOST)
        h = min(max(h, h_trust), max(h_max, RESTING_STEP) if resting(behaviour) else h_max)
    for c in range(vc.shape[0]):
        vc[c] = m.y[c]
    for w in range(iw.shape[0]):
        iw[w] = m.y[vc.shape[0] + w]
    return 0, steps, t, swings, used
