"""Inrush of the bulk capacitor and the melting integral of fuses and fusible resistors.

I2t is the integral of the squared current: a fuse melts when a pulse brings more than its melting I2t, and
    tires when a pulse comes near it often. Worst moment of switching on is the crest with an empty capacitor
    and a cold thermistor.
"""

import numpy as np

from triage.physics.values import Values

PULSE_SHAPES = {
    "rectangle": 1.0, "triangle": 1.0 / 3.0, "half sine": 0.5, "parabola": 0.2, "exponential": 0.5}
"""Shape -> I2t over peak squared times duration (of an exponential: times time constant).
Source: Littelfuse, fuse circuit protection products, chart 1."""

PULSE_LIMITS = {100: 0.48, 1000: 0.38, 10_000: 0.29, 100_000: 0.22}
"""Number of pulses -> share of the melting I2t a pulse may bring. Source: Littelfuse, chart 2."""


def inrush_peak(crest: Values, resistance: Values) -> Values:
    """Peak of the inrush current.

    crest [V]: crest of the mains.
    resistance [ohm]: everything in the path: mains, cord, fusible resistor or cold thermistor, ESR.

    Returns [A]: V / R.
    Source: Ametherm, Selecting an inrush current limiter.

    >>> round(inrush_peak(2**0.5 * 253, 11.0), 1)
    32.5
    """
    return crest / resistance


def inrush_resistance(crest: Values, current: Values) -> Values:
    """Resistance that keeps the inrush below a current.

    crest [V]: crest of the mains.
    current [A]: allowed peak.

    Returns [ohm]: V / I.
    Source: Ametherm, Selecting an inrush current limiter (25 ohm).

    >>> round(inrush_resistance(746.59, 30.0), 1)
    24.9
    """
    return crest / current


def inrush_i2t(crest: Values, resistance: Values, capacitance: Values, frequency: Values,
               pulses: int = 2, steps: int = 4000) -> Values:
    """Melting integral of one mains period, an empty capacitor switched on at the crest, no load.

    crest [V]: crest of the mains.
    resistance [ohm]: everything in the path.
    capacitance [F]: bulk capacitance.
    frequency [Hz]: mains frequency.
    pulses [-]: charging pulses a mains period: 2 for a bridge, 1 for a single diode.
    steps [-]: steps a period.

    Returns [A2s]: a little less than V^2 C / (2 R), which a direct step would give.
    Source: series circuit of R and C on the rectified cosine, each step solved exactly for a constant source.

    >>> round(float(inrush_i2t(2**0.5 * 253, 11.0, 47e-6, 50.0)), 3)
    0.266
    """
    tau = np.asarray(resistance, float) * capacitance
    step = 1.0 / (np.asarray(frequency, float) * steps)
    decay = np.exp(-step / tau)
    voltage = 0.0 * tau * step * crest
    total = 0.0 * voltage
    wave = np.cos((np.arange(steps) + 0.5) / steps * 2.0 * np.pi)
    for height in np.abs(wave) if pulses == 2 else wave:
        above = np.maximum(crest * height - voltage, 0.0)
        total = total + (above / resistance) ** 2 * tau / 2.0 * (1.0 - decay ** 2)
        voltage = voltage + above * (1.0 - decay)
    return total


def pulse_i2t(peak: Values, duration: Values, shape: str = "half sine") -> Values:
    """Melting integral of a pulse.

    peak [A]: peak current.
    duration [s]: duration, or time constant of an exponential.
    shape [key]: one of PULSE_SHAPES.

    Returns [A2s]: factor Ip^2 t.
    Source: Littelfuse, fuse circuit protection products, chart 1; B. R. Gupta, V. Singhal, Power Electronics,
        example 2.17 (20 000 A2s).

    >>> round(pulse_i2t(2000.0, 0.01))
    20000
    """
    return PULSE_SHAPES[shape] * peak ** 2 * duration


def time_at_current(i2t: Values, current: Values) -> Values:
    """Time a part stands a current by its melting integral.

    i2t [A2s]: melting integral.
    current [A]: rms current, far above the rated one.

    Returns [s]: I2t / I^2.
    Source: R. S. Sedha, A Textbook of Applied Electronics, example 17.2 (7.5 ms).

    >>> time_at_current(75.0, 100.0)
    0.0075
    """
    return i2t / current ** 2


def melting_i2t_needed(pulse: Values, pulses: int = 100_000) -> Values:
    """Melting integral that a fuse needs to stand a pulse many times.

    pulse [A2s]: integral of one pulse.
    pulses [-]: 100, 1000, 10 000 or 100 000.

    Returns [A2s]: pulse over the share of PULSE_LIMITS.
    Source: Littelfuse, Fuseology selection guide, example (0.2327 A2s; from memory).

    >>> round(melting_i2t_needed(pulse_i2t(8.0, 0.004, "parabola")), 4)
    0.2327
    """
    return pulse / PULSE_LIMITS[pulses]


def rated_current_needed(current: Values, share: Values = 0.75) -> Values:
    """Rated current of a fuse for a lasting current.

    current [A]: rms current.
    share [-]: share of the rating it may carry: 0.75 for UL 248-14, 1 for IEC 60127 at 25 degC.

    Returns [A]: I / share.
    Source: Littelfuse, Fuseology selection guide, example (1.0 A; from memory).

    >>> rated_current_needed(0.75)
    1.0
    """
    return current / share
