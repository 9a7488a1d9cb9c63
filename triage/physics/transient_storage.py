# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled companion models of everything that stores: capacitors, coupled windings and the charges of junctions.

A rule of integration turns the derivative of a state y into ``a0 y + history``. The states of a circuit are one vector:
capacitor voltages [V], winding currents [A], diode charges [C], base-emitter and base-collector charge of each transistor [C].

Source: L. Nagel, SPICE2, 1975, section 4.3 (companion models).
"""

from triage.physics.compiled_code import njit
from triage.physics.transient_devices import INNER, bipolar_state, diode_state, inject, stamp, voltage


@njit(**INNER)
def invert_group(matrix, resistance, start, stop, a0, out):
    """Inverse of a0 x inductances + series resistances of one core, written into ``out`` (Gauss-Jordan, in place)."""
    for p in range(start, stop):
        for q in range(start, stop):
            out[p, q] = matrix[p, q] * a0
        out[p, p] += resistance[p]
    for k in range(start, stop):
        d = 1.0 / out[k, k]
        out[k, k] = 1.0
        for q in range(start, stop):
            out[k, q] *= d
        for p in range(start, stop):
            if p != k:
                f = out[p, k]
                out[p, k] = 0.0
                for q in range(start, stop):
                    out[p, q] -= f * out[k, q]


@njit(**INNER)
def stamp_storage(a, a0, capacitor, winding, inverse):
    """Companion conductances of the capacitors and windings; ``inverse`` receives those between windings [S]."""
    _, slots, farad, esr, _ = capacitor
    for c in range(farad.shape[0]):
        stamp(a, slots[c], 1.0 / (esr[c] + 1.0 / (a0 * farad[c])))
    _, starts, matrix, resistance, stamps = winding
    for group in range(starts.shape[0] - 1):
        lo, hi = starts[group], starts[group + 1]
        invert_group(matrix, resistance, lo, hi, a0, inverse)
        for p in range(lo, hi):
            for q in range(lo, hi):
                stamp(a, stamps[p, q], inverse[p, q])


@njit(**INNER)
def inject_storage(rhs, a0, history, capacitor, winding, inverse, flux):
    """Companion sources of the capacitors and windings; ``flux`` receives the remembered voltage of each winding [V]."""
    ends, _, farad, esr, _ = capacitor
    nc = farad.shape[0]
    for c in range(nc):
        inject(rhs, ends[c, 0], ends[c, 1], history[c] / (a0 * esr[c] + 1.0 / farad[c]))
    ends, starts, matrix, _, _ = winding
    for group in range(starts.shape[0] - 1):
        lo, hi = starts[group], starts[group + 1]
        for p in range(lo, hi):
            s = 0.0
            for q in range(lo, hi):
                s += matrix[p, q] * history[nc + q]
            flux[p] = s
        for p in range(lo, hi):
            back = 0.0
            for q in range(lo, hi):
                back += inverse[p, q] * flux[q]
            inject(rhs, ends[p, 0], ends[p, 1], -back)


@njit(**INNER)
def inject_charges(rhs, first, history, diode, bipolar):
    """Sources of the junction charges alone; their states begin at position ``first``."""
    ends = diode[0]
    for d in range(ends.shape[0]):
        inject(rhs, ends[d, 0], ends[d, 1], history[first + d])
    first += ends.shape[0]
    ends, polarity = bipolar[0], bipolar[3]
    for k in range(ends.shape[0]):
        inject(rhs, ends[k, 1], ends[k, 2], polarity[k] * history[first + 2 * k])
        inject(rhs, ends[k, 1], ends[k, 0], polarity[k] * history[first + 2 * k + 1])


@njit(**INNER)
def storage_states(v, a0, history, capacitor, winding, inverse, flux, y):
    """Capacitor voltages and winding currents that belong to the node voltages ``v``, written into ``y``."""
    ends, _, farad, esr, _ = capacitor
    nc = farad.shape[0]
    for c in range(nc):
        x = voltage(v, ends[c, 0]) - voltage(v, ends[c, 1])
        y[c] = x - esr[c] * (a0 * x + history[c]) / (a0 * esr[c] + 1.0 / farad[c])
    ends, starts, _, _, _ = winding
    for group in range(starts.shape[0] - 1):
        lo, hi = starts[group], starts[group + 1]
        for p in range(lo, hi):
            s = 0.0
            for q in range(lo, hi):
                s += inverse[p, q] * (voltage(v, ends[q, 0]) - voltage(v, ends[q, 1]) - flux[q])
            y[nc + p] = s


@njit(**INNER)
def charge_moves(v, first, diode, vd, lin_d, bipolar, vq, lin_q, y):
    """Changes of the junction charges from the voltages ``vd`` and ``vq`` to the node voltages ``v``, as linearised last."""
    ends = diode[0]
    n = ends.shape[0]
    for d in range(n):
        y[first + d] = lin_d[n + d] * (voltage(v, ends[d, 0]) - voltage(v, ends[d, 1]) - vd[d])
    first += n
    ends, polarity = bipolar[0], bipolar[3]
    for k in range(ends.shape[0]):
        base = voltage(v, ends[k, 1])
        emitter = polarity[k] * (base - voltage(v, ends[k, 2])) - vq[k, 0]
        collector = polarity[k] * (base - voltage(v, ends[k, 0])) - vq[k, 1]
        y[first + 2 * k] = lin_q[k, 2] * emitter + lin_q[k, 4] * collector
        y[first + 2 * k + 1] = lin_q[k, 3] * collector


@njit(**INNER)
def add_charges(first, lin_d, lin_q, y):
    """Add the junction charges at the voltages of the last linearisation to their moves."""
    n = lin_d.shape[0] // 2
    for d in range(n):
        y[first + d] += lin_d[d]
    for k in range(lin_q.shape[0]):
        y[first + n + 2 * k] += lin_q[k, 0]
        y[first + n + 2 * k + 1] += lin_q[k, 1]


START_ROOM = 0.15
"""A junction is not begun further above its critical voltage than this [V]: its charge would be absurd."""


@njit(**INNER)
def charges_at_rest(first, diode, vd, bipolar, vq, y):
    """Junction charges at the given junction voltages, where no linearisation is known yet."""
    n = vd.shape[0]
    for d in range(n):
        most = diode[2][d, 11] + START_ROOM
        y[first + d] = diode_state(min(vd[d], most), diode[2][d])[2]
    for k in range(vq.shape[0]):
        both = bipolar_state(min(vq[k, 0], 1.0), min(vq[k, 1], 1.0), bipolar[2][k])
        y[first + n + 2 * k], y[first + n + 2 * k + 1] = both[6], both[7]
