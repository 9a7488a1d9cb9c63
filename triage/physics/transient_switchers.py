# mypy: disable-error-code="no-untyped-def,call-overload"
"""Compiled behaviour of switchers with their own transistor: one reads the plateau of an auxiliary winding, one has a time off.

PLATEAU, a primary-side regulator: the peak current is set and the period stretched as the sampled plateau rises; the sample is
what the winding shows last before the secondary current ends (the knee), half of it that of the pulse before. The period also
stays above the time of that current over a set share, which limits the mean output current. OFF_TIME, a step-down switcher: a
pulse ends at the peak current, the next begins after a fixed time off as soon as the feedback is below its reference; with no
feedback for long it rests.

All times are counted since the last edge, so nothing depends on where a stretch of the solution begins. State of both: awake,
drive high, latched off or resting, time since turn-on [s], time since turn-off [s], then PLATEAU: tracked plateau [V] (below 0:
knee seen), last sample [V], time of the secondary current [s]; OFF_TIME: time without feedback [s], time of rest [s].

Source: common practice of such controllers' data sheets (sampled auxiliary winding, frequency modulation, current limit by the
share of the secondary current; on/off control with a current limit), from memory; the equations are our own.
"""

import math

from triage.physics.compiled_code import njit
from triage.physics.netlist import PLATEAU
from triage.physics.transient_devices import OPTIONS

LEADING_EDGE = 2.5e-7
"""The current sense is blind after turn-on [s]."""
PLATEAU_FILTER = 4e-7
"""Time constant of the plateau's follower [s]."""
SLOW_FILTER = 6e-6
"""The same once the voltage bends away from the plateau, so that the fall at its end is not followed [s]."""
BEND, KNEE, NO_PLATEAU = 0.98, 0.85, 0.02
"""Shares of the plateau at which it bends and has ended, and of the reference below which there was none [-]."""


@njit(**OPTIONS)
def wake_or_sleep(supply, p, s):
    """Lockout by the supply voltage [V]; waking begins with a pulse."""
    if s[0] < 0.5 and supply > p[0]:
        s[0], s[1], s[2], s[3], s[4], s[5], s[6], s[7] = 1.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0
        if p[7] > 0.0:
            s[5] = -1.0
    elif s[0] > 0.5 and supply < p[1]:
        s[0], s[1], s[2] = 0.0, 0.0, 0.0


@njit(**OPTIONS)
def demand(p, s):
    """How hard a primary-side regulator works, 0 to 1, by its last sample."""
    return min(max((p[3] - s[6]) / p[12] + 0.5, 0.0), 1.0)


@njit(**OPTIONS)
def period(p, s):
    """Time from one turn-on to the next [s]."""
    return max(p[6] * (p[7] / p[6]) ** (1.0 - demand(p, s)), s[7] / p[15])


@njit(**OPTIONS)
def peak_sense(kind, p, s):
    """Sense voltage that ends a pulse [V]."""
    return p[4] * (p[5] + (1.0 - p[5]) * demand(p, s)) if kind == PLATEAU else p[4]


@njit(**OPTIONS)
def follow_plateau(feedback, p, s, h):
    """Follow the feedback voltage until its knee, which makes it the sample."""
    if s[5] < 0.0 or s[4] <= p[14]:
        return
    if feedback < NO_PLATEAU * p[3] and s[5] == 0.0:
        s[6], s[7], s[5] = 0.0, s[4], -1.0
    elif s[5] == 0.0:
        s[5] = feedback
    elif feedback < KNEE * s[5] or s[4] > p[7]:
        s[6], s[7], s[5] = 0.5 * (s[6] + s[5]), s[4], -1.0
    else:
        lag = PLATEAU_FILTER if feedback > BEND * s[5] else SLOW_FILTER
        s[5] += (feedback - s[5]) * (1.0 - math.exp(-h / lag))


@njit(**OPTIONS)
def advance_plateau(supply, feedback, sensed, p, s, h):
    """Move a primary-side regulator over a step of ``h`` [s]; True when drive or supply current jumped."""
    was_awake, was_high = s[0], s[1]
    s[3] += h
    s[4] += h
    wake_or_sleep(supply, p, s)
    if s[0] > 0.5:
        if supply > p[2]:
            s[2] = 1.0
        if s[1] > 0.5:
            if s[2] > 0.5 or s[3] >= p[13] - 1e-12 or (s[3] > LEADING_EDGE and sensed > peak_sense(PLATEAU, p, s)):
                s[1], s[4], s[5] = 0.0, 0.0, 0.0
        else:
            follow_plateau(feedback, p, s, h)
            if s[5] < 0.0 and s[2] < 0.5 and s[3] >= period(p, s) - 1e-12:
                s[1], s[3] = 1.0, 0.0
    return s[0] != was_awake or s[1] != was_high


@njit(**OPTIONS)
def rest(feedback, p, s, h):
    """Count the time without feedback, and the rest that follows it."""
    if s[2] > 0.5:
        s[6] += h
        if s[6] > p[15]:
            s[2], s[5] = 0.0, 0.0
    else:
        s[5] = 0.0 if feedback >= p[3] else s[5] + h
        if s[5] > p[12]:
            s[2], s[6] = 1.0, 0.0


@njit(**OPTIONS)
def advance_off_time(supply, feedback, sensed, p, s, h):
    """Move a step-down switcher over a step of ``h`` [s]; True when drive or supply current jumped."""
    was_awake, was_high = s[0], s[1]
    s[3] += h
    s[4] += h
    wake_or_sleep(supply, p, s)
    if s[0] > 0.5:
        rest(feedback, p, s, h)
        if s[1] > 0.5:
            if s[2] > 0.5 or s[3] >= p[13] - 1e-12 or (s[3] > LEADING_EDGE and sensed > p[4]):
                s[1], s[4] = 0.0, 0.0
        elif s[2] < 0.5 and feedback < p[3] and s[4] >= p[6] - 1e-12:
            s[1], s[3] = 1.0, 0.0
    return s[0] != was_awake or s[1] != was_high


@njit(**OPTIONS)
def ahead(left, soonest):
    """The sooner of two times [s], if the first is still to come."""
    return left if 1e-13 < left < soonest else soonest


@njit(**OPTIONS)
def next_edge(kind, p, s):
    """Time until a timer of a switcher runs out [s]; very long when none is running."""
    soonest = 1e30
    if s[0] < 0.5:
        return soonest
    if s[1] > 0.5:
        return ahead(LEADING_EDGE - s[3], ahead(p[13] - s[3], soonest))
    if kind != PLATEAU:
        return ahead(p[6] - s[4], soonest)
    if s[5] >= 0.0:
        return ahead(p[14] - s[4], soonest)
    return ahead(period(p, s) - s[3], soonest)
