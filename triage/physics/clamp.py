"""Leakage of the transformer: clamp of resistor, capacitor and diode, snubbers, ringing.

The energy of the leakage inductance cannot go to the secondary. It charges the clamp capacitor above the
reflected voltage, and the clamp resistor turns it into heat. Diodes are ideal here; the clamp voltage counts
from the bulk rail.
"""

from dataclasses import dataclass

import numpy as np

from triage.physics.values import Values


@dataclass(frozen=True, slots=True)
class ClampCycle:
    """Steady state of a clamp, cycle by cycle; fields are floats or arrays."""

    valley: Values
    """Clamp voltage just before turn-off [V]."""
    peak: Values
    """Clamp voltage after the leakage has emptied [V]."""
    rms: Values
    """Rms voltage across the clamp resistor [V]."""
    power: Values
    """Heat in the clamp resistor [W]."""
    reset_time: Values
    """Time the leakage current takes to die [s]."""


def clamp_voltage(leakage: Values, peak: Values, frequency: Values, reflected: Values,
                  resistance: Values) -> Values:
    """Voltage at which a clamp settles, its ripple left out.

    leakage [H]: leakage inductance of the primary.
    peak [A]: primary peak current.
    frequency [Hz]: switching frequency.
    reflected [V]: output seen from the primary.
    resistance [ohm]: clamp resistor.

    Returns [V]: (Vor + sqrt(Vor^2 + 2 L Ip^2 f R)) / 2.
    Valid: large clamp capacitor; within 0.1 % of the rms of the exact cycle.
    Source: Fairchild, AN-4147 (from memory): L Ip^2 f V / (2 (V - Vor)) = V^2/R.

    >>> round(float(clamp_voltage(30e-6, 0.6, 65e3, 80.0, 100e3)), 1)
    231.6
    """
    energy = 0.5 * leakage * np.asarray(peak, float) ** 2 * frequency
    return 0.5 * (reflected + np.sqrt(reflected ** 2 + 4.0 * energy * resistance))


def clamp_power(leakage: Values, peak: Values, frequency: Values, reflected: Values,
                clamped: Values) -> Values:
    """Heat that a clamp takes at a given voltage: the leakage energy and what the primary adds meanwhile.

    leakage [H]: leakage inductance of the primary.
    peak [A]: primary peak current.
    frequency [Hz]: switching frequency.
    reflected [V]: output seen from the primary.
    clamped [V]: clamp voltage, above reflected.

    Returns [W]: L Ip^2 f / 2 times V/(V - Vor).
    Source: Fairchild, AN-4147 (from memory).

    >>> round(clamp_power(30e-6, 0.6, 65e3, 80.0, 231.57), 3)
    0.536
    """
    return 0.5 * leakage * peak ** 2 * frequency * clamped / (clamped - reflected)


def clamp_resistance(power: Values, clamped: Values) -> Values:
    """Clamp resistor for a wanted voltage.

    power [W]: heat at that voltage, see clamp_power.
    clamped [V]: wanted clamp voltage.

    Returns [ohm]: V^2 / P.
    Source: Ohm's law.

    >>> round(clamp_resistance(0.5363, 231.57) / 1e3)
    100
    """
    return clamped ** 2 / power


def clamp_ripple(clamped: Values, resistance: Values, capacitance: Values, frequency: Values) -> Values:
    """Ripple of the clamp voltage.

    clamped [V]: clamp voltage.
    resistance [ohm]: clamp resistor.
    capacitance [F]: clamp capacitor.
    frequency [Hz]: switching frequency.

    Returns [V]: V / (C R f).
    Source: Fairchild, AN-4147 (from memory).

    >>> round(clamp_ripple(231.57, 100e3, 1e-9, 65e3), 1)
    35.6
    """
    return clamped / (capacitance * resistance * frequency)


def clamp_cycle(leakage: Values, peak: Values, frequency: Values, reflected: Values, resistance: Values,
                capacitance: Values) -> ClampCycle:
    """Clamp solved cycle by cycle, with the ring of leakage and clamp capacitor.

    leakage [H]: leakage inductance of the primary.
    peak [A]: primary peak current.
    frequency [Hz]: switching frequency.
    reflected [V]: output seen from the primary.
    resistance [ohm]: clamp resistor.
    capacitance [F]: clamp capacitor.

    Returns [SI]: the steady state.
    Valid: clamp above the reflected voltage all the time; below it the load current flows through the clamp.
    Source: quarter ring of L and C from current Ip and voltage V - Vor, then discharge through R; steady
        state by bisection.

    >>> cycle = clamp_cycle(30e-6, 0.6, 65e3, 80.0, 100e3, 1e-9)
    >>> round(float(cycle.peak), 1), round(float(cycle.power), 3)
    (249.3, 0.536)
    """
    leakage, capacitance = np.asarray(leakage, float), np.asarray(capacitance, float)
    impedance, speed = np.sqrt(leakage / capacitance), 1.0 / np.sqrt(leakage * capacitance)
    kick, tau, period = peak * impedance, resistance * capacitance, 1.0 / np.asarray(frequency, float)

    def rise(valley: Values) -> tuple[Values, Values]:
        above = valley - reflected
        reset = np.arctan2(kick, above) / speed
        top = reflected + np.hypot(above, kick)
        # what the resistor takes away while the leakage current still flows
        return top - 0.5 * (valley + top) * reset / tau, reset

    low = reflected + 0.0 * kick * tau * period
    high = low + kick + 20.0 * (clamp_voltage(leakage, peak, frequency, reflected, resistance) - reflected)
    for _ in range(60):
        valley = 0.5 * (low + high)
        top, reset = rise(valley)
        falls = top * np.exp(-(period - reset) / tau) < valley
        low, high = np.where(falls, low, valley), np.where(falls, valley, high)
    top, reset = rise(valley)
    fall = top ** 2 * tau / 2.0 * (1.0 - np.exp(-2.0 * (period - reset) / tau))
    rms = np.sqrt((fall + reset * (valley ** 2 + valley * top + top ** 2) / 3.0) / period)
    return ClampCycle(valley, top, rms, rms ** 2 / resistance, reset)


def ring_frequency(inductance: Values, capacitance: Values) -> Values:
    """Natural frequency of an inductance with a capacitance.

    inductance [H]: inductance.
    capacitance [F]: capacitance.

    Returns [Hz]: 1 / (2 pi sqrt(L C)).
    Source: Infineon, AN-PS0045, p. 8.

    >>> round(float(ring_frequency(5.44025674e-07, 1.16402116e-10)) / 1e6, 2)
    20.0
    """
    return 1.0 / (2.0 * np.pi * np.sqrt(np.asarray(inductance, float) * capacitance))


def parasitic_capacitance(ring: Values, slowed: Values, added: Values) -> Values:
    """Capacitance of a ringing node, from how a known capacitor slows the ring.

    ring [s]: period of the ring.
    slowed [s]: period with the capacitor added.
    added [F]: the capacitor.

    Returns [F]: C / ((t2/t1)^2 - 1).
    Source: Linear Technology, LT3798 data sheet, p. 12.

    >>> round(parasitic_capacitance(50e-9, 85e-9, 220e-12) * 1e12, 1)
    116.4
    """
    return added / ((slowed / ring) ** 2 - 1.0)


def parasitic_inductance(ring: Values, capacitance: Values) -> Values:
    """Inductance of a ringing node.

    ring [s]: period of the ring.
    capacitance [F]: its capacitance.

    Returns [H]: t^2 / (4 pi^2 C).
    Source: Linear Technology, LT3798 data sheet, p. 12.

    >>> round(parasitic_inductance(50e-9, 1.16402e-10) * 1e9)
    544
    """
    return ring ** 2 / (4.0 * np.pi ** 2 * capacitance)


def characteristic_resistance(inductance: Values, capacitance: Values, damping: Values = 0.5) -> Values:
    """Snubber resistor for an inductance and capacitance in series.

    inductance [H]: inductance.
    capacitance [F]: capacitance.
    damping [-]: damping ratio; 0.5 gives sqrt(L/C).

    Returns [ohm]: 2 damping sqrt(L/C).
    Source: Linear Technology, LT3798 data sheet, p. 12; B. R. Gupta, V. Singhal, Power Electronics, example
        2.37.

    >>> round(float(characteristic_resistance(0.2e-3, 0.13462e-6, 0.65)), 1)
    50.1
    """
    return 2.0 * damping * np.sqrt(np.asarray(inductance, float) / capacitance)


def snubber_capacitance_for_slope(peak_voltage: Values, slope: Values, inductance: Values) -> Values:
    """Snubber capacitor that holds the slope of a voltage behind an inductance.

    peak_voltage [V]: step of the voltage.
    slope [V/s]: allowed slope.
    inductance [H]: source inductance.

    Returns [F]: (0.564 V / slope)^2 / (2 L).
    Source: B. R. Gupta, V. Singhal, Power Electronics, example 2.37.

    >>> round(float(snubber_capacitance_for_slope(2**0.5 * 230, 25e6, 0.2e-3)) * 1e6, 4)
    0.1346
    """
    return (0.564 * peak_voltage / slope) ** 2 / (2.0 * inductance)


def snubber_capacitance_behind_resistance(voltage: Values, slope: Values, load: Values,
                                          resistance: Values) -> Values:
    """Snubber capacitor that holds the slope of a voltage behind a resistive load.

    voltage [V]: step of the voltage.
    slope [V/s]: allowed mean slope to 63 % of the step.
    load [ohm]: load resistance.
    resistance [ohm]: snubber resistor.

    Returns [F]: (1 - 1/e) RL V / (slope (R + RL)^2).
    Source: B. R. Gupta, V. Singhal, Power Electronics, example 2.38.

    >>> round(float(snubber_capacitance_behind_resistance(300.0, 100e6, 10.0, 3.0)) * 1e6, 3)
    0.112
    """
    return (1.0 - np.exp(-1.0)) * load * voltage / (slope * (resistance + load) ** 2)


def snubber_power(capacitance: Values, voltage: Values, frequency: Values, edges: Values = 2) -> Values:
    """Heat of a snubber.

    capacitance [F]: snubber capacitor.
    voltage [V]: step of the voltage.
    frequency [Hz]: switching frequency.
    edges [-]: 2 where the resistor carries charge and discharge, 1 where a diode spares it one of them.

    Returns [W]: edges C V^2 f / 2.
    Source: energy of a capacitor; B. R. Gupta, V. Singhal, Power Electronics, example 2.38 (one edge, 10.08
        W).

    >>> round(snubber_power(0.112e-6, 300.0, 2e3, 1), 2)
    10.08
    """
    return 0.5 * edges * capacitance * voltage ** 2 * frequency


@dataclass(frozen=True, slots=True)
class StepResponse:
    """Voltage across resistor and capacitor when a step meets them through an inductance."""

    decay: Values
    """[1/s]"""
    damping: Values
    """Damping ratio [-], below 1."""
    speed: Values
    """Damped angular frequency [rad/s]."""
    peak_time: Values
    """[s]"""
    peak: Values
    """[V]"""
    first_slope: Values
    """Slope at the start [V/s]."""


def snubbed_step(voltage: Values, inductance: Values, resistance: Values,
                 capacitance: Values) -> StepResponse:
    """Overshoot of a diode or switch with a snubber, no starting current.

    voltage [V]: step.
    inductance [H]: source inductance.
    resistance [ohm]: snubber resistor.
    capacitance [F]: snubber capacitor.

    Returns [SI]: peak, its time and the first slope.
    Valid: damping ratio below 1.
    Source: series circuit of R, L and C; M. H. Rashid, Power Electronics, 4th edition, example 17.4.

    >>> response = snubbed_step(220.0, 50e-6, 6.6, 0.75e-6)
    >>> round(float(response.peak), 1), round(float(response.peak_time) * 1e6, 2)
    (299.3, 15.46)
    """
    decay = np.asarray(resistance, float) / (2.0 * inductance)
    natural = 1.0 / np.sqrt(np.asarray(inductance, float) * capacitance)
    damping = decay / natural
    speed = natural * np.sqrt(1.0 - damping ** 2)
    turn = np.arctan2(2.0 * damping * np.sqrt(1.0 - damping ** 2), 1.0 - 2.0 * damping ** 2)
    time = (np.pi - turn) / speed
    return StepResponse(decay, damping, speed, time, voltage * (1.0 + np.exp(-decay * time)),
                        voltage * resistance / inductance)
