"""Capacitor droppers: the mean current that a capacitor in series with the mains passes into a shunt regulator.

One charge a period (zener that conducts forward in the other half-wave, then a diode): the capacitor voltage swings between
the crest and the crest less the output, and that swing of charge goes through the load once a period. All formulas neglect the
inrush resistor, whose drop is in quadrature with the capacitor's.
"""

import math

from triage.physics.values import Values


def dropper_current(capacitance: Values, mains: Values, frequency: Values, output: Values) -> Values:
    """Mean direct current behind a dropper capacitor with one charge a period.

    capacitance [F]: dropper capacitor.
    mains [V]: rms voltage of the mains.
    frequency [Hz]: of the mains.
    output [V]: voltage of the zener.

    Returns [A]: f C (2 sqrt2 V - Vz - 0.7), the charge of one swing times the periods in a second.
    Source: charge balance of the capacitor, own derivation; application notes on transformerless supplies give the same with
        the last two terms left out, from memory.

    >>> round(float(dropper_current(1e-6, 230.0, 50.0, 13.0)) * 1e3, 1)
    31.8
    """
    return frequency * capacitance * (2.0 * math.sqrt(2.0) * mains - output - 0.7)


def dropper_capacitance(current: Values, mains: Values, frequency: Values, output: Values) -> Values:
    """Capacitor that passes a wanted mean current with one charge a period.

    current [A]: mean direct current, load and zener together.
    mains [V]: lowest rms voltage of the mains.
    frequency [Hz]: of the mains.
    output [V]: voltage of the zener.

    Returns [F]: the inverse of dropper_current.
    Source: charge balance of the capacitor, own derivation.

    >>> round(float(dropper_capacitance(0.0318, 230.0, 50.0, 13.0)) * 1e6, 2)
    1.0
    """
    return current / (frequency * (2.0 * math.sqrt(2.0) * mains - output - 0.7))


def dropper_rms_current(capacitance: Values, mains: Values, frequency: Values) -> Values:
    """Rms current from the mains, which the inrush resistor carries too.

    capacitance [F]: dropper capacitor.
    mains [V]: rms voltage of the mains.
    frequency [Hz]: of the mains.

    Returns [A]: 2 pi f C V; the output voltage is small beside the mains.
    Source: reactance of a capacitor, any textbook.

    >>> round(float(dropper_rms_current(1e-6, 230.0, 50.0)) * 1e3, 1)
    72.3
    """
    return 2.0 * math.pi * frequency * capacitance * mains
