# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled behaviour of parts that are more than a junction: field-effect transistors, shunt references, three-terminal
regulators, current-mode controllers; switchers with their own transistor are in transient_switchers.

A behaviour has up to five terminals, its parameters, and a state that changes only between steps. ``currents`` gives what
flows from the nodes into the terminals; the slopes are taken by differences. ``advance`` moves the state after a step and
``margin`` says how far a comparator is from tripping, so that a step can be cut at the instant it does.

Sources: H. Shichman and D. Hodges, Modeling and simulation of insulated-gate field-effect transistor switching circuits, IEEE
Journal of Solid-State Circuits 3, 1968 (transistor); R. Mammano, peak current-mode control with slope compensation, common
practice of data sheets of the 384x class, from memory (controller).
"""

import math

import numpy as np

from triage.physics.compiled_code import njit
from triage.physics.netlist import CONTROLLER, MOSFET, PLATEAU, REGULATOR, SHUNT_REFERENCE, TERMINALS
from triage.physics.transient_devices import OPTIONS, voltage
from triage.physics.transient_switchers import LEADING_EDGE, advance_off_time, advance_plateau, next_edge, peak_sense

DIFFERENCE = 1e-6
"""Step of the slopes [V]."""
EVENT_WINDOW = 4e-9
"""A comparator's trip is located within this time [s]."""
LEVEL = 4
"""Place of the drive level in the state of a controller: it follows the drive with the time constant of an edge, and both
transistors of the output stage with it."""
LEVEL_STEP, LEVEL_CLOSE = 1.0 / 3.0, 0.01
"""Largest step in an edge, as a share of its time constant, and distance at which the edge is over [-]."""
LINEAR_VOLTS, LINEAR_SHARE = 2e-3, 5e-4
"""Move of a terminal over which a linearisation holds [V], [-]."""


@njit(**OPTIONS)
def channel(vgs, vds, kp, threshold, modulation):
    """Drain current [A] of an n-channel transistor for vds >= 0."""
    drive = vgs - threshold
    if drive <= 0.0:
        return 0.0
    if vds < drive:
        return kp * (drive - 0.5 * vds) * vds * (1.0 + modulation * vds)
    return 0.5 * kp * drive * drive * (1.0 + modulation * vds)


@njit(**OPTIONS)
def step_up(x, width):
    """Smooth step from 0 to 1 about x = 0."""
    return 0.5 * (1.0 + math.tanh(x / width))


@njit(**OPTIONS)
def currents(kind, u, p, s, out):
    """Currents [A] into the terminals at voltages ``u`` [V], written into ``out``."""
    for k in range(TERMINALS):
        out[k] = 0.0
    if kind == MOSFET:
        drain, gate, source = u[0], u[1], u[2]
        if drain >= source:
            i = channel(gate - source, drain - source, p[0], p[1], p[2])
        else:
            i = -channel(gate - drain, source - drain, p[0], p[1], p[2])
        out[0], out[2] = i, -i
    elif kind == SHUNT_REFERENCE:
        cathode, anode, reference = u[0], u[1], u[2]
        sink = min(max((reference - anode - p[0]) * p[1], 0.0), p[2]) + p[3]
        i = sink * step_up(cathode - anode - p[4], p[5])
        out[0], out[1] = i, -i
    elif kind == REGULATOR:
        entry, exit_, ground = u[0], u[1], u[2]
        drop = entry - exit_
        fold = min(max((drop - 12.0) / 25.0, 0.0), 0.7)
        most = p[2] * (1.0 - fold) * (1.0 - step_up(s[0] - p[5], 4.0))
        i = min(max((p[0] - (exit_ - ground)) * p[1], 0.0), most) * step_up(drop - p[3], 0.12)
        quiet = p[4] * math.tanh(max(entry - ground, 0.0) / 3.0)
        out[0], out[1], out[2] = i + quiet, -i, -quiet
    elif kind >= CONTROLLER:
        supply, drive, feedback, ground = u[0], u[1], u[2], u[4]
        awake, level = s[0], s[LEVEL] if kind == CONTROLLER else s[1]
        source = (supply - drive) * max(2.0 * level - 1.0, 0.0) / p[9]
        sink = (drive - ground) * max(awake - 2.0 * level, 0.0) / p[10]
        quiet = (p[8] if awake > 0.5 else 0.0) + (supply - ground) / p[11]
        pull = (feedback - ground - (p[12] if awake > 0.5 else 0.0)) / p[7] if kind == CONTROLLER else 0.0
        out[0] = source + quiet
        out[1] = sink - source
        out[2] = pull
        out[4] = -quiet - sink - pull


@njit(**OPTIONS)
def stamp_behaviours(a, rhs, v, behaviour, at):
    """Linearise every behaviour about ``v``; ``at`` keeps the voltages of the terminals."""
    nodes, slots, kinds, params, states = behaviour
    base, moved = np.empty(TERMINALS), np.empty(TERMINALS)
    for b in range(kinds.shape[0]):
        u = at[b]
        for k in range(TERMINALS):
            u[k] = voltage(v, nodes[b, k])
        currents(kinds[b], u, params[b], states[b], base)
        for k in range(TERMINALS):
            if nodes[b, k] >= 0:
                rhs[nodes[b, k]] -= base[k]
        for j in range(TERMINALS):
            kept = u[j]
            u[j] = kept + DIFFERENCE
            currents(kinds[b], u, params[b], states[b], moved)
            u[j] = kept
            for k in range(TERMINALS):
                g = (moved[k] - base[k]) / DIFFERENCE
                if g != 0.0:
                    a[slots[b, k * TERMINALS + j]] += g
                    if nodes[b, k] >= 0:
                        rhs[nodes[b, k]] += g * kept


@njit(**OPTIONS)
def behaviours_close(v, behaviour, at):
    """True when no terminal has moved further from where it was linearised than the linearisation holds."""
    nodes, kinds = behaviour[0], behaviour[2]
    for b in range(kinds.shape[0]):
        for k in range(TERMINALS):
            x = voltage(v, nodes[b, k])
            if abs(x - at[b, k]) > LINEAR_VOLTS + LINEAR_SHARE * abs(x):
                return False
    return True


@njit(**OPTIONS)
def threshold(feedback, p):
    """Peak-current threshold [V] that a feedback voltage [V] asks for."""
    return min(max((feedback - p[3]) / 3.0, 0.0), p[4])


@njit(**OPTIONS)
def margin(v, behaviour, t):
    """Largest overshoot [V] of a comparator that ends a drive pulse; negative while none has tripped."""
    nodes, _, kinds, params, states = behaviour
    worst = -1e9
    for b in range(kinds.shape[0]):
        if kinds[b] == CONTROLLER and states[b, 1] > 0.5:
            p = params[b]
            ground = voltage(v, nodes[b, 4])
            ramp = (t - states[b, 3]) / p[6]
            if ramp > p[14]:
                peak = threshold(voltage(v, nodes[b, 2]) - ground, p) - p[5] * ramp
                worst = max(worst, voltage(v, nodes[b, 3]) - ground - peak)
        elif kinds[b] > CONTROLLER and states[b, 1] > 0.5 and states[b, 3] > LEADING_EDGE:
            sensed = voltage(v, nodes[b, 3]) - voltage(v, nodes[b, 4])
            worst = max(worst, sensed - peak_sense(kinds[b], params[b], states[b]))
    return worst


@njit(**OPTIONS)
def next_event(behaviour, t):
    """Earliest time after ``t`` at which a behaviour changes by the clock [s]."""
    _, _, kinds, params, states = behaviour
    soonest = 1e30
    for b in range(kinds.shape[0]):
        if kinds[b] == CONTROLLER and states[b, LEVEL] != states[b, 1]:
            soonest = min(soonest, t + LEVEL_STEP * params[b, 15])
        if kinds[b] == CONTROLLER and states[b, 0] > 0.5:
            p, s = params[b], states[b]
            for when in (s[3] + p[6], s[3] + p[13] * p[6] if s[1] > 0.5 else 1e30, s[3] + p[14] * p[6]):
                if when > t * (1.0 + 1e-15) + 1e-13:
                    soonest = min(soonest, when)
        elif kinds[b] > CONTROLLER:
            soonest = min(soonest, t + next_edge(kinds[b], params[b], states[b]))
    return soonest


@njit(**OPTIONS)
def resting(behaviour):
    """True when there are controllers and all of them are locked out: nothing is to be caught in flight."""
    kinds, states = behaviour[2], behaviour[4]
    controllers = 0
    for b in range(kinds.shape[0]):
        if kinds[b] >= CONTROLLER:
            controllers += 1
            if states[b, 0] > 0.5:
                return False
    return controllers > 0


@njit(**OPTIONS)
def advance(v, behaviour, t, h):
    """Move the states over a step of ``h`` that ended at ``t``; returns True when something jumped."""
    nodes, _, kinds, params, states = behaviour
    jumped = False
    for b in range(kinds.shape[0]):
        p, s = params[b], states[b]
        if kinds[b] == REGULATOR:
            entry, exit_, ground = voltage(v, nodes[b, 0]), voltage(v, nodes[b, 1]), voltage(v, nodes[b, 2])
            u, out = np.array([entry, exit_, ground, 0.0, 0.0]), np.empty(TERMINALS)
            currents(kinds[b], u, p, s, out)
            heat = max(-(entry - exit_) * out[1] + (entry - ground) * p[4], 0.0)
            s[0] += (25.0 + heat * p[6] - s[0]) * (1.0 - math.exp(-h / p[7]))
        elif kinds[b] == CONTROLLER:
            jumped = advance_controller(v, nodes[b], p, s, t, h) or jumped
        elif kinds[b] > CONTROLLER:
            jumped = advance_switcher(v, nodes[b], kinds[b], p, s, h) or jumped
    return jumped


@njit(**OPTIONS)
def advance_switcher(v, nodes, kind, p, s, h):
    """Move a switcher with its own transistor; True when its drive or supply current jumped."""
    ground = voltage(v, nodes[4])
    supply, feedback, sensed = voltage(v, nodes[0]) - ground, voltage(v, nodes[2]) - ground, voltage(v, nodes[3]) - ground
    if kind == PLATEAU:
        return advance_plateau(supply, feedback, sensed, p, s, h)
    return advance_off_time(supply, feedback, sensed, p, s, h)


@njit(**OPTIONS)
def advance_controller(v, nodes, p, s, t, h):
    """Lockout, latch, clock, comparator and drive level of one controller; True when the supply current jumped.

    State: awake, drive high, latched off, start of the period [s], drive level.
    """
    ground = voltage(v, nodes[4])
    supply = voltage(v, nodes[0]) - ground
    was_awake = s[0]
    s[LEVEL] += (s[1] - s[LEVEL]) * (1.0 - math.exp(-h / p[15]))
    if abs(s[1] - s[LEVEL]) < LEVEL_CLOSE:
        s[LEVEL] = s[1]
    if s[0] < 0.5 and supply > p[0]:
        s[0], s[3] = 1.0, t - p[6]
    elif s[0] > 0.5 and supply < p[1]:
        s[0], s[1], s[2] = 0.0, 0.0, 0.0
    if s[0] > 0.5:
        if supply > p[2]:
            s[2] = 1.0
        peak = threshold(voltage(v, nodes[2]) - ground, p)
        if t >= s[3] + p[6] - 1e-12:
            s[3] = t
            s[1] = 1.0 if peak > 0.03 and s[2] < 0.5 else 0.0
        elif s[1] > 0.5:
            ramp = (t - s[3]) / p[6]
            sensed = voltage(v, nodes[3]) - ground
            if ramp >= p[13] - 1e-9 or s[2] > 0.5 or peak <= 0.03 or (ramp > p[14] and sensed > peak - p[5] * ramp):
                s[1] = 0.0
    return s[0] != was_awake
