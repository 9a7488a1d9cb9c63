"""Leakage through Y capacitors and what a touch-current meter shows of it."""

from typing import NamedTuple

import numpy as np

from triage.physics.values import Values


def leakage_current(capacitance: Values, rms_voltage: Values, frequency: Values) -> Values:
    """Current through a capacitor between mains and a touched part.

    capacitance [F]: all Y capacitors side by side.
    rms_voltage [V]: mains voltage.
    frequency [Hz]: mains frequency.

    Returns [A]: 2 pi f C V, rms; the most that can flow.
    Source: definition of capacitance.

    >>> round(leakage_current(4.7e-9, 240.0, 50.0) * 1e3, 3)
    0.354
    """
    return 2.0 * np.pi * frequency * capacitance * rms_voltage


def leakage_from_bulk_rail(capacitance: Values, rms_voltage: Values, frequency: Values) -> Values:
    """Current through a capacitor between the bulk negative rail behind a bridge and an earthed output.

    capacitance [F]: Y capacitor.
    rms_voltage [V]: mains voltage.
    frequency [Hz]: mains frequency.

    Returns [A]: leakage_current over sqrt 2, rms: the rail follows the mains in one half wave only.
    Valid: order of magnitude; between conduction the rail floats with its stray capacitance.
    Source: ideal rail waveform, no publication.

    >>> round(float(leakage_from_bulk_rail(2.2e-9, 230.0, 50.0)) * 1e6, 1)
    112.4
    """
    return leakage_current(capacitance, rms_voltage, frequency) / np.sqrt(2.0)


class TouchReading(NamedTuple):
    """What the measuring network for touch current shows, rms."""

    current: Values
    """Through the network [A]."""
    unweighted: Values
    """Voltage across the body resistance over 500 ohm [A]."""
    weighted: Values
    """Voltage behind the perception filter over 500 ohm [A]."""


def touch_reading(capacitance: Values, rms_voltage: Values, frequency: Values) -> TouchReading:
    """Touch current through the perception and reaction network.

    capacitance [F]: all Y capacitors side by side.
    rms_voltage [V]: mains voltage.
    frequency [Hz]: mains frequency.

    Returns [A]: current and both readings.
    Source: IEC 60990, figure 4: 1500 ohm beside 0.22 uF, 500 ohm, filter 10 kohm and 22 nF (values from
        memory).

    >>> round(float(touch_reading(2.2e-9, 264.0, 60.0).weighted) * 1e6, 1)
    218.1
    """
    s = 2j * np.pi * np.asarray(frequency, float)
    skin = 1.0 / (1.0 / 1500.0 + s * 0.22e-6)
    branch = 10e3 + 1.0 / (s * 22e-9)
    body = 1.0 / (1.0 / 500.0 + 1.0 / branch)
    current = rms_voltage / (1.0 / (s * capacitance) + skin + body)
    across = current * body
    behind = across / (s * 22e-9) / branch
    return TouchReading(np.abs(current), np.abs(across) / 500.0, np.abs(behind) / 500.0)
