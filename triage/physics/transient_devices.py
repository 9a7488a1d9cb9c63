# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled device equations and the sparse solution, shared by the time-domain and the unpowered solver.

Everything here works on the arrays of :class:`triage.physics.netlist.Compiled`. Currents flow into the first node.

Sources: L. Nagel, SPICE2, 1975, chapters 2 and 5 (junction diode, junction limiting); H. Gummel and H. Poon, An integral
charge control model of bipolar transistors, Bell System Technical Journal 49, 1970 (transistor).
"""

import math

import numpy as np

from triage.physics.compiled_code import njit
from triage.physics.netlist import THERMAL_VOLTAGE as VT

LIVE = 6.0
"""Junctions count as conducting from this many thermal voltages below the level of limiting on: some microamperes."""
OPTIONS = {"cache": True, "nogil": True, "error_model": "numpy", "_nrt": True}
PLAIN = {**OPTIONS, "_nrt": False}
"""For functions that allocate nothing: counting no references saves a third of the time and a quarter of the compiling."""
INNER = {**PLAIN, "no_cpython_wrapper": True, "no_cfunc_wrapper": True}
"""For functions that only compiled ones call."""


@njit(**INNER)
def exponential(v, saturation, nvt):
    """Current [A] and conductance [S] of an ideal junction at ``v`` [V] with ``nvt`` = emission x kT/q [V]."""
    if v > -3.0 * nvt:
        e = math.exp(min(v / nvt, 200.0))
        return saturation * (e - 1.0), saturation * e / nvt
    arg = 3.0 * nvt / (v * math.e)
    arg = arg * arg * arg
    return -saturation * (1.0 + arg), saturation * 3.0 * arg / v


@njit(**INNER)
def depletion(v, cj, potential, grading):
    """Charge [C] and capacitance [F] of a depletion layer at ``v`` [V]; linear above half the potential."""
    edge = 0.5 * potential
    if v < edge:
        u = 1.0 - v / potential
        if grading == 0.5:
            root = math.sqrt(u)
            return 2.0 * potential * cj * (1.0 - root), cj / root
        s = math.exp(-grading * math.log(u))
        return potential * cj * (1.0 - u * s) / (1.0 - grading), cj * s
    f1 = potential * (1.0 - math.exp((1.0 - grading) * math.log(0.5))) / (1.0 - grading)
    f2 = math.exp((1.0 + grading) * math.log(0.5))
    f3 = 1.0 - 0.5 * (1.0 + grading)
    charge = cj * (f1 + (f3 * (v - edge) + grading / (2.0 * potential) * (v * v - edge * edge)) / f2)
    return charge, cj * (f3 + grading * v / potential) / f2


@njit(**INNER)
def diode_state(v, p):
    """(current, conductance, charge, capacitance) of a diode with breakdown at ``v`` [V]; ``p`` in DIODE_PARAMETERS order."""
    i, g = exponential(v, p[0], p[9])
    if p[6] > 0.0 and v < -0.3 * p[6]:
        e = p[7] * math.exp(min((-v - p[6]) / p[10], 80.0))
        i -= e
        g += e / p[10]
    q, c = 0.0, 0.0
    if p[2] > 0.0:
        q, c = depletion(v, p[2], p[3], p[4])
    return i, g, q + p[5] * i, c + p[5] * g


@njit(**INNER)
def limit_junction(new, old, nvt, critical):
    """Limit the step of a junction voltage so that the exponential stays within reach of Newton's method.

    A junction that turns on stops at ``critical`` [V] first: the logarithm of the next step then meets the current exactly,
    while a start from too large a current comes down by only one ``nvt`` per iteration.
    """
    if new > critical and abs(new - old) > 2.0 * nvt:
        if old < critical:
            return critical
        if new > old:
            return old + nvt * math.log(1.0 + (new - old) / nvt)
    return new


@njit(**INNER)
def limit_diode(new, old, p):
    """Limited junction voltage of a diode, in forward direction and in breakdown."""
    if p[6] > 0.0 and new < min(0.0, -p[6] + 10.0 * p[9]):
        return -(limit_junction(-(new + p[6]), -(old + p[6]), p[10], p[12]) + p[6])
    return limit_junction(new, old, p[9], p[11])


@njit(**INNER)
def voltage(v, node):
    """Voltage of a node; the reference (-1) is at zero."""
    return v[node] if node >= 0 else 0.0


@njit(**INNER)
def stamp(a, slots, g):
    """Add a conductance ``g`` [S] in its four matrix slots."""
    a[slots[0]] += g
    a[slots[1]] += g
    a[slots[2]] -= g
    a[slots[3]] -= g


@njit(**INNER)
def inject(rhs, plus, minus, i):
    """Let the current ``i`` [A] flow out of ``plus`` into ``minus`` through an element."""
    if plus >= 0:
        rhs[plus] -= i
    if minus >= 0:
        rhs[minus] += i


@njit(**INNER)
def stamp_diodes(a, rhs, v, vd, diode, a0, history, charge, gmin):
    """Linearise all diodes about ``v``; returns True when a junction voltage had to be limited.

    ``vd`` holds the junction voltages of the last iteration and is updated; ``a0`` is the leading coefficient of the
    integration formula (0: no charge), ``history`` the remainder of the derivative of each charge. ``charge`` receives the
    charges [C] and after them the capacitances [F], unless ``a0`` is zero.
    """
    ends, slots, p = diode
    count, limited = ends.shape[0], False
    for d in range(count):
        want = voltage(v, ends[d, 0]) - voltage(v, ends[d, 1])
        x = limit_diode(want, vd[d], p[d])
        if abs(x - want) > 1e-3 * abs(want) + 1e-4:
            limited = True
        vd[d] = x
        i, g, q, c = diode_state(x, p[d])
        g = g + a0 * c + gmin
        i = i + gmin * x
        if a0 > 0.0:
            charge[d], charge[count + d] = q, c
            i = i + a0 * q + history[d]
        stamp(a, slots[d], g)
        inject(rhs, ends[d, 0], ends[d, 1], i - g * x)
    return limited


@njit(**INNER)
def bipolar_state(vbe, vbc, p):
    """Currents and charges of a transistor: (ic, ib, dic/dvbe, dic/dvbc, dib/dvbe, dib/dvbc, qbe, qbc, cbe, cbc, dqbe/dvbc)."""
    saturation = p[0]
    ibe, gbe = exponential(vbe, saturation, VT)
    ibc, gbc = exponential(vbc, saturation, VT)
    iln, gln = 0.0, 0.0
    if p[5] > 0.0:
        iln, gln = exponential(vbe, p[5], p[6] * VT)
    q1 = 1.0 / (1.0 - vbc / p[3])
    dq1 = q1 * q1 / p[3]
    root = math.sqrt(max(1.0 + 4.0 * ibe / p[4], 0.01))
    qb = 0.5 * q1 * (1.0 + root)
    dqb_be = q1 * gbe / p[4] / root
    dqb_bc = 0.5 * dq1 * (1.0 + root)
    transport = (ibe - ibc) / qb
    gm_be = gbe / qb - transport / qb * dqb_be
    gm_bc = -gbc / qb - transport / qb * dqb_bc
    ic = transport - ibc / p[2]
    ib = ibe / p[1] + iln + ibc / p[2]
    qe, ce = depletion(vbe, p[7], p[8], p[9])
    qc, cc = depletion(vbc, p[10], p[11], p[12])
    qe += p[13] * ibe / qb
    ce += p[13] * (gbe / qb - ibe / qb / qb * dqb_be)
    cross = -p[13] * ibe / qb / qb * dqb_bc
    qc += p[14] * ibc
    cc += p[14] * gbc
    return ic, ib, gm_be, gm_bc - gbc / p[2], gbe / p[1] + gln, gbc / p[2], qe, qc, ce, cc, cross


@njit(**INNER)
def stamp_bipolars(a, rhs, v, vq, bipolar, a0, history, charge, gmin):
    """Linearise all transistors about ``v``; ``vq`` and ``history`` have columns base-emitter and base-collector.

    A row of ``charge`` receives, unless ``a0`` is zero, both charges [C], their capacitances [F] and the derivative of the
    first charge by the second voltage [F].
    """
    ends, slots, params, polarity = bipolar
    limited = False
    for k in range(ends.shape[0]):
        p, sign = params[k], polarity[k]
        c, b, e = ends[k, 0], ends[k, 1], ends[k, 2]
        want_be = sign * (voltage(v, b) - voltage(v, e))
        want_bc = sign * (voltage(v, b) - voltage(v, c))
        x = limit_junction(want_be, vq[k, 0], VT, p[15])
        y = limit_junction(want_bc, vq[k, 1], VT, p[15])
        if abs(x - want_be) > 1e-3 * abs(want_be) + 1e-4 or abs(y - want_bc) > 1e-3 * abs(want_bc) + 1e-4:
            limited = True
        vq[k, 0], vq[k, 1] = x, y
        ic, ib, c_be, c_bc, b_be, b_bc, qe, qc, ce, cc, cross = bipolar_state(x, y, p)
        ib += gmin * (x + y)
        ic -= gmin * y
        b_be += gmin
        b_bc += gmin
        c_bc -= gmin
        if a0 > 0.0:
            charge[k, 0], charge[k, 1], charge[k, 2], charge[k, 3], charge[k, 4] = qe, qc, ce, cc, cross
            i_e, i_c = a0 * qe + history[k, 0], a0 * qc + history[k, 1]
            ib += i_e + i_c
            ic -= i_c
            b_be += a0 * ce
            b_bc += a0 * (cc + cross)
            c_bc -= a0 * cc
        s = slots[k]
        e_be, e_bc = -(c_be + b_be), -(c_bc + b_bc)
        a[s[0]] -= c_bc
        a[s[1]] += c_be + c_bc
        a[s[2]] -= c_be
        a[s[3]] -= b_bc
        a[s[4]] += b_be + b_bc
        a[s[5]] -= b_be
        a[s[6]] -= e_bc
        a[s[7]] += e_be + e_bc
        a[s[8]] -= e_be
        rest_c = sign * (ic - c_be * x - c_bc * y)
        rest_b = sign * (ib - b_be * x - b_bc * y)
        if c >= 0:
            rhs[c] -= rest_c
        if b >= 0:
            rhs[b] -= rest_b
        if e >= 0:
            rhs[e] += rest_c + rest_b
    return limited


@njit(**INNER)
def junction_voltages(v, diode, vd, bipolar, vq):
    """Write the junction voltages that belong to the node voltages ``v`` into ``vd`` and ``vq``."""
    ends = diode[0]
    for d in range(ends.shape[0]):
        vd[d] = voltage(v, ends[d, 0]) - voltage(v, ends[d, 1])
    ends, polarity = bipolar[0], bipolar[3]
    for k in range(ends.shape[0]):
        base = voltage(v, ends[k, 1])
        vq[k, 0] = polarity[k] * (base - voltage(v, ends[k, 2]))
        vq[k, 1] = polarity[k] * (base - voltage(v, ends[k, 0]))


@njit(**INNER)
def junction_close(new, old, critical, nvt, potential, share, error):
    """Whether the linearisation of a junction about ``old`` still holds at ``new`` [V].

    Newton's next move of a conducting junction is about (new - old)^2 / (2 nvt); it must stay below ``error`` [V]. Without
    current only the depletion charge bends, by the square of the move over the distance to the potential.
    """
    move, high = abs(new - old), max(new, old)
    if high > critical - LIVE * nvt:
        return move * move < 2.0 * nvt * error
    return move < share * max(potential - high, 0.25 * potential)


@njit(**INNER)
def junctions_close(v, diode, vd, bipolar, vq, share, error):
    """Whether the linearisation of every junction about ``vd`` and ``vq`` still holds at the node voltages ``v``."""
    ends, _, p = diode
    for d in range(ends.shape[0]):
        x = voltage(v, ends[d, 0]) - voltage(v, ends[d, 1])
        if not junction_close(x, vd[d], p[d, 11], p[d, 9], p[d, 3], share, error):
            return False
        if p[d, 6] > 0.0 and -min(x, vd[d]) - p[d, 6] > p[d, 12] - LIVE * p[d, 10]:
            move = x - vd[d]
            if move * move > 2.0 * p[d, 10] * error:
                return False
    ends, _, p, polarity = bipolar
    for k in range(ends.shape[0]):
        base = voltage(v, ends[k, 1])
        x = polarity[k] * (base - voltage(v, ends[k, 2]))
        y = polarity[k] * (base - voltage(v, ends[k, 0]))
        if not junction_close(x, vq[k, 0], p[k, 15], VT, p[k, 8], share, error):
            return False
        if not junction_close(y, vq[k, 1], p[k, 15], VT, p[k, 11], share, error):
            return False
    return True


@njit(**INNER)
def factor_and_solve(a, b, program):
    """Solve in place by the factorisation program; ``a`` is destroyed, ``b`` becomes the solution. False: singular."""
    pivot, lower_start, lower_row, lower_slot, upper_start, upper_col, upper_slot, update_start, update = program
    n = pivot.shape[0]
    for k in range(n):
        d = a[pivot[k]]
        if not abs(d) > 1e-30:
            return False
        inverse = 1.0 / d
        a[pivot[k]] = inverse
        u0, u1 = upper_start[k], upper_start[k + 1]
        bk = b[k]
        for m in range(lower_start[k], lower_start[k + 1]):
            f = a[lower_slot[m]] * inverse
            if f != 0.0:
                t = update_start[m]
                for u in range(u0, u1):
                    a[update[t + u - u0]] -= f * a[upper_slot[u]]
                b[lower_row[m]] -= f * bk
    for k in range(n - 1, -1, -1):
        s = b[k]
        for u in range(upper_start[k], upper_start[k + 1]):
            s -= a[upper_slot[u]] * b[upper_col[u]]
        b[k] = s * a[pivot[k]]
    return True


@njit(**INNER)
def resolve(a, b, program):
    """Solve for another right-hand side ``b`` in place with the factors that factor_and_solve left in ``a``."""
    pivot, lower_start, lower_row, lower_slot, upper_start, upper_col, upper_slot, _, _ = program
    n = pivot.shape[0]
    for k in range(n):
        x = b[k] * a[pivot[k]]
        if x != 0.0:
            for m in range(lower_start[k], lower_start[k + 1]):
                b[lower_row[m]] -= a[lower_slot[m]] * x
    for k in range(n - 1, -1, -1):
        s = b[k]
        for u in range(upper_start[k], upper_start[k + 1]):
            s -= a[upper_slot[u]] * b[upper_col[u]]
        b[k] = s * a[pivot[k]]


@njit(**OPTIONS)
def base_conductances(nonzeros, program, resistor, shunt):
    """Matrix of the resistors, and of a shunt [S] from every node to the reference."""
    a = np.zeros(nonzeros + 1)
    slots, g = resistor[1], resistor[2]
    for r in range(g.shape[0]):
        stamp(a, slots[r], g[r])
    pivot = program[0]
    for k in range(pivot.shape[0]):
        a[pivot[k]] += shunt
    return a
