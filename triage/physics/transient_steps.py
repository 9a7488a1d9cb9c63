"""Compiled time-domain solution: variable-step second-order backward differences over the arrays of a netlist.

A step is accepted when the solution agrees with its extrapolation from the three points before within the tolerance on every
stored charge and winding current. Statistics of every port are summed on the way, so no waveform has to be kept.

Source: C. Gear, Simultaneous numerical solution of differential-algebraic equations, IEEE Transactions on Circuit Theory 18,
1971 (backward differences); truncation error from divided differences.
"""

import math

import numpy as np
from numba import njit

from triage.physics.transient_devices import (
    OPTIONS,
    base_conductances,
    bipolar_state,
    clear,
    diode_state,
    factor_and_solve,
    inject,
    stamp,
    stamp_bipolars,
    stamp_diodes,
    voltage,
)

GMIN = 1e-12
SHUNT = 1e-12
PEAK_MEMORY = 50e-6
"""Time constant with which the remembered size of a state fades [s]: a few switching periods."""
V_MIN, V_MAX, V_SUM, V_SQUARE, I_MIN, I_MAX, I_SUM, I_SQUARE, VI_SUM = range(9)


@njit(**OPTIONS)
def coefficients(h, h_old, first):
    """(a0, a1, a2) of the derivative at the new point from the new, the last and the last but one value."""
    if first:
        return 1.0 / h, -1.0 / h, 0.0
    w = h / h_old
    return (1.0 + 2.0 * w) / (h * (1.0 + w)), -(1.0 + w) / h, w * w / (h * (1.0 + w))


@njit(**OPTIONS)
def invert_group(matrix, resistance, start, stop, a0, out):
    """Inverse of a0 x inductances + series resistances of one core, written into ``out``."""
    n = stop - start
    work = np.zeros((n, 2 * n))
    for p in range(n):
        for q in range(n):
            work[p, q] = matrix[start + p, start + q] * a0
        work[p, p] += resistance[start + p]
        work[p, n + p] = 1.0
    for k in range(n):
        d = work[k, k]
        for q in range(2 * n):
            work[k, q] /= d
        for p in range(n):
            if p != k and work[p, k] != 0.0:
                f = work[p, k]
                for q in range(2 * n):
                    work[p, q] -= f * work[k, q]
    for p in range(n):
        for q in range(n):
            out[start + p, start + q] = work[p, n + q]


@njit(**OPTIONS)
def stamp_storage(a, rhs, a0, capacitor, hist_c, winding, hist_w, inverse):
    """Companion conductances and sources of the capacitors and windings at a step."""
    ends, slots, farad, esr, _ = capacitor
    for c in range(farad.shape[0]):
        g = 1.0 / (esr[c] + 1.0 / (a0 * farad[c]))
        stamp(a, slots[c], g)
        inject(rhs, ends[c, 0], ends[c, 1], g * hist_c[c] / a0)
    ends, starts, matrix, resistance, stamps = winding
    for group in range(starts.shape[0] - 1):
        lo, hi = starts[group], starts[group + 1]
        invert_group(matrix, resistance, lo, hi, a0, inverse)
        for p in range(lo, hi):
            back = 0.0
            for q in range(lo, hi):
                stamp(a, stamps[p, q], inverse[p, q])
                flux = 0.0
                for r in range(lo, hi):
                    flux += matrix[q, r] * hist_w[r]
                back += inverse[p, q] * flux
            inject(rhs, ends[p, 0], ends[p, 1], -back)


@njit(**OPTIONS)
def update_storage(v, a0, capacitor, hist_c, vc, ic, winding, hist_w, inverse, iw):
    """Capacitor voltages and currents and winding currents that belong to the node voltages ``v``."""
    ends, _, farad, esr, _ = capacitor
    for c in range(farad.shape[0]):
        x = voltage(v, ends[c, 0]) - voltage(v, ends[c, 1])
        g = 1.0 / (esr[c] + 1.0 / (a0 * farad[c]))
        ic[c] = g * (x + hist_c[c] / a0)
        vc[c] = x - esr[c] * ic[c]
    ends, starts, matrix, _, _ = winding
    for group in range(starts.shape[0] - 1):
        lo, hi = starts[group], starts[group + 1]
        for p in range(lo, hi):
            s = 0.0
            for q in range(lo, hi):
                drive = voltage(v, ends[q, 0]) - voltage(v, ends[q, 1])
                for r in range(lo, hi):
                    drive -= matrix[q, r] * hist_w[r]
                s += inverse[p, q] * drive
            iw[p] = s


@njit(**OPTIONS)
def deviation(new, y1, y2, y3, h, h1, h2, floor, scale, peak):
    """Largest ratio of (solution - quadratic extrapolation) to the allowed deviation over the entries of a state.

    Allowed is ``scale`` times the largest size the entry had lately (``peak``) plus ``floor``.
    """
    worst = 0.0
    for k in range(new.shape[0]):
        d1 = (y1[k] - y2[k]) / h1
        d2 = ((y1[k] - y2[k]) / h1 - (y2[k] - y3[k]) / h2) / (h1 + h2)
        predicted = y1[k] + d1 * h + d2 * h * (h + h1)
        size = max(abs(new[k]), peak[k])
        worst = max(worst, abs(new[k] - predicted) / (scale * size + floor[k]))
    return worst


@njit(**OPTIONS)
def remember(new, peak, fade):
    """Let the remembered size of each entry fade, or follow the entry when it is larger."""
    for k in range(new.shape[0]):
        peak[k] = max(abs(new[k]), peak[k] * fade)


@njit(**OPTIONS)
def port_values(v, port, resistor, ic, iw, source, t, out):
    """Voltage and current of every port, written into ``out`` (ports x 2)."""
    ends, kinds, index = port
    for p in range(kinds.shape[0]):
        out[p, 0] = voltage(v, ends[p, 0]) - voltage(v, ends[p, 1])
        k = index[p]
        if kinds[p] == 0:
            out[p, 1] = resistor[2][k] * (voltage(v, resistor[0][k, 0]) - voltage(v, resistor[0][k, 1]))
        elif kinds[p] == 1:
            out[p, 1] = ic[k]
        elif kinds[p] == 2:
            out[p, 1] = iw[k]
        elif kinds[p] == 3:
            s = source[2][k]
            emf = s[0] * math.sin(2.0 * math.pi * s[1] * t + s[2])
            x = voltage(v, source[0][k, 0]) - voltage(v, source[0][k, 1])
            out[p, 1] = s[3] * (emf - x)
        else:
            out[p, 1] = 0.0


@njit(**OPTIONS)
def accumulate(stats, old, new, h):
    """Add one step of length ``h`` to extremes and trapezoidal integrals of every port."""
    for p in range(new.shape[0]):
        v, i, v0, i0 = new[p, 0], new[p, 1], old[p, 0], old[p, 1]
        s = stats[p]
        s[V_MIN] = min(s[V_MIN], v)
        s[V_MAX] = max(s[V_MAX], v)
        s[V_SUM] += 0.5 * h * (v + v0)
        s[V_SQUARE] += 0.5 * h * (v * v + v0 * v0)
        s[I_MIN] = min(s[I_MIN], i)
        s[I_MAX] = max(s[I_MAX], i)
        s[I_SUM] += 0.5 * h * (i + i0)
        s[I_SQUARE] += 0.5 * h * (i * i + i0 * i0)
        s[VI_SUM] += 0.5 * h * (v * i + v0 * i0)


@njit(**OPTIONS)
def solve_point(a_lin, r_lin, v, vd, vq, a0, diode, hist_d, q_d, bipolar, hist_q, q_q, program, relative, absolute, most):
    """Newton's method at one time; ``v`` holds the guess and becomes the solution. Returns the iterations, 0 when it failed."""
    a, rhs = np.empty_like(a_lin), np.empty_like(r_lin)
    for iteration in range(most):
        a[:] = a_lin
        rhs[:] = r_lin
        limited = stamp_diodes(a, rhs, v, vd, diode, a0, hist_d, q_d, GMIN)
        limited = stamp_bipolars(a, rhs, v, vq, bipolar, a0, hist_q, q_q, GMIN) or limited
        if not factor_and_solve(a, rhs, program):
            return 0
        moved = False
        for k in range(v.shape[0]):
            x = rhs[k]
            if not math.isfinite(x):
                return 0
            if abs(x - v[k]) > relative * max(abs(x), abs(v[k])) + absolute:
                moved = True
            v[k] = x
        if not moved and not limited and iteration > 0:
            return iteration + 1
    return 0


@njit(**OPTIONS)
def run(program, nonzeros, resistor, capacitor, winding, diode, bipolar, source, port, state, times, tolerances, swing,
        trace):
    """Integrate from times[0] to times[1]; returns (status, steps, time reached, statistics, swings, trace rows used).

    ``state`` = (v, vc, iw) is read and left at the end point. ``times`` = (start, stop, start of statistics, largest step,
    smallest step, step below which the deviation is not asked). ``tolerances`` = (relative of Newton, absolute of Newton [V],
    relative of a step, floor per capacitor, per winding, per diode, per transistor). ``swing`` = (switch node, its
    reference, bulk node, its reference) counts excursions of the switch above 1.03 and below 0.78 of the bulk voltage. ``trace`` = (start, interval, nodes, rows).
    """
    v, vc, iw = state
    stop, stats_from, h_max, h_min, h_trust = times[1], times[2], times[3], times[4], times[5]
    n, nc, nw, nd, nq = v.shape[0], vc.shape[0], iw.shape[0], diode[0].shape[0], bipolar[0].shape[0]
    base = base_conductances(nonzeros, program, resistor, SHUNT)
    for s in range(source[0].shape[0]):
        stamp(base, source[1][s], source[2][s, 3])
    inverse = np.zeros((nw, nw))
    ic, vc_new, iw_new = np.zeros(nc), vc.copy(), iw.copy()
    vd, vq, q_d, q_q = np.zeros(nd), np.zeros((nq, 2)), np.zeros(nd), np.zeros((nq, 2))
    for d in range(nd):
        vd[d] = voltage(v, diode[0][d, 0]) - voltage(v, diode[0][d, 1])
        q_d[d] = diode_state(min(vd[d], 1.5), diode[2][d])[2]
    for k in range(nq):
        sign = bipolar[3][k]
        vq[k, 0] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 2]))
        vq[k, 1] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 0]))
        b = bipolar_state(min(vq[k, 0], 1.0), min(vq[k, 1], 1.0), bipolar[2][k])
        q_q[k, 0], q_q[k, 1] = b[6], b[7]
    c1, c2, c3 = vc.copy(), vc.copy(), vc.copy()
    w1, w2, w3 = iw.copy(), iw.copy(), iw.copy()
    d1, d2, d3 = q_d.copy(), q_d.copy(), q_d.copy()
    b1, b2, b3 = q_q.copy(), q_q.copy(), q_q.copy()
    c_peak, w_peak, d_peak, b_peak = np.abs(vc), np.abs(iw), np.abs(q_d), np.abs(q_q)
    v1, v2 = v.copy(), v.copy()
    a_lin, r_lin = base.copy(), np.zeros(n)
    ports = port[1].shape[0]
    stats = np.zeros((ports, 9))
    stats[:, V_MIN], stats[:, V_MAX], stats[:, I_MIN], stats[:, I_MAX] = 1e30, -1e30, 1e30, -1e30
    old, new = np.zeros((ports, 2)), np.zeros((ports, 2))
    t, h, h1, h2, points, steps, failures, swung, swings = times[0], h_min * 10.0, h_min, h_min, 0, 0, 0, 0, 0
    used, next_trace, blunt = 0, trace[0], False
    while t < stop * (1.0 - 1e-12):
        h = min(h, stop - t)
        first = points < 1 or blunt
        a0, a1, a2 = coefficients(h, h1, first)
        hist_c, hist_w, hist_d = a1 * c1 + a2 * c2, a1 * w1 + a2 * w2, a1 * d1 + a2 * d2
        hist_q = a1 * b1 + a2 * b2
        a_lin[:] = base
        clear(r_lin)
        for s in range(source[0].shape[0]):
            par = source[2][s]
            emf = par[0] * math.sin(2.0 * math.pi * par[1] * (t + h) + par[2])
            inject(r_lin, source[0][s, 0], source[0][s, 1], -par[3] * emf)
        stamp_storage(a_lin, r_lin, a0, capacitor, hist_c, winding, hist_w, inverse)
        for k in range(n):
            v[k] = v1[k] + (v1[k] - v2[k]) * (h / h1) if points > 1 else v1[k]
        count = solve_point(a_lin, r_lin, v, vd, vq, a0, diode, hist_d, q_d, bipolar, hist_q, q_q, program,
                            tolerances[0], tolerances[1], 12 if h > 2.0 * h_min else 200)
        if count == 0:
            failures += 1
            h *= 0.125
            if h < h_min or failures > 100000:
                return 1, steps, t, stats, swings, used
            v[:] = v1
            for d in range(nd):
                vd[d] = voltage(v, diode[0][d, 0]) - voltage(v, diode[0][d, 1])
            for k in range(nq):
                sign = bipolar[3][k]
                vq[k, 0] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 2]))
                vq[k, 1] = sign * (voltage(v, bipolar[0][k, 1]) - voltage(v, bipolar[0][k, 0]))
            continue
        update_storage(v, a0, capacitor, hist_c, vc_new, ic, winding, hist_w, inverse, iw_new)
        worst = 0.0
        if points > 2 and not blunt:
            worst = deviation(vc_new, c1, c2, c3, h, h1, h2, tolerances[3], tolerances[2], c_peak)
            worst = max(worst, deviation(iw_new, w1, w2, w3, h, h1, h2, tolerances[4], tolerances[2], w_peak))
            worst = max(worst, deviation(q_d, d1, d2, d3, h, h1, h2, tolerances[5], tolerances[2], d_peak))
            for j in range(2):
                worst = max(worst, deviation(q_q[:, j], b1[:, j], b2[:, j], b3[:, j], h, h1, h2, tolerances[6][:, j],
                                             tolerances[2], b_peak[:, j]))
            if worst > 1.0 and h > 1.001 * h_trust:
                h = max(h * max(0.9 * worst ** (-1.0 / 3.0), 0.2), h_trust)
                continue
            if worst > 1.0:
                blunt = True
                v[:] = v1
                continue
        if blunt:
            points, worst, blunt = 0, 0.5, False
        port_values(v, port, resistor, ic, iw_new, source, t + h, new)
        if t >= stats_from:
            accumulate(stats, old, new, h)
        t += h
        steps += 1
        points += 1
        fade = math.exp(-h / PEAK_MEMORY)
        remember(vc_new, c_peak, fade)
        remember(iw_new, w_peak, fade)
        remember(q_d, d_peak, fade)
        for j in range(2):
            remember(q_q[:, j], b_peak[:, j], fade)
        c3[:], c2[:], c1[:] = c2, c1, vc_new
        w3[:], w2[:], w1[:] = w2, w1, iw_new
        d3[:], d2[:], d1[:] = d2, d1, q_d
        b3[:], b2[:], b1[:] = b2, b1, q_q
        v2[:], v1[:] = v1, v
        old[:] = new
        if swing[0] >= 0:
            level = voltage(v, swing[0]) - voltage(v, swing[1])
            bulk = voltage(v, swing[2]) - voltage(v, swing[3])
            if bulk > 15.0 and level > 1.03 * bulk:
                swung = 1
            elif level < 0.78 * bulk:
                if swung == 1 and t >= stats_from:
                    swings += 1
                swung = -1
        if t >= next_trace and used < trace[3].shape[0]:
            trace[3][used, 0] = t
            for j in range(trace[2].shape[0]):
                trace[3][used, j + 1] = voltage(v, trace[2][j])
            used += 1
            next_trace += trace[1]
        h2, h1 = h1, h
        grow = 2.0 if worst <= 0.0 else min(0.9 * worst ** (-1.0 / 3.0), 2.0)
        h = min(max(h * max(grow, 0.3), min(h_trust, 2.0 * h)), h_max)
    vc[:], iw[:] = c1, w1
    return 0, steps, t, stats, swings, used
