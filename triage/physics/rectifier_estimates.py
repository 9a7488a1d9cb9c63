"""Textbook shortcuts for a rectifier with a capacitor: straight-line discharge, no source resistance.

Quick, explainable and a little pessimistic: ripple comes out 2 to 30 % too high against ``rectifier``.
``pulses`` is the
number of charging pulses a mains period: 1 for a single diode, 2 for a bridge or a centre tap.
"""

import numpy as np

from triage.physics.values import Values


def ripple(current: Values, capacitance: Values, frequency: Values, pulses: Values = 2) -> Values:
    """Peak-to-peak ripple, the discharge taken as lasting a whole charging period.

    current [A]: load current.
    capacitance [F]: reservoir.
    frequency [Hz]: mains frequency.
    pulses [-]: charging pulses a mains period.

    Returns [V]: I / (pulses f C).
    Source: D. A. Bell, Electronic Devices and Circuits, example 3.3.

    >>> round(ripple(28.0 / 200.0, 680e-6, 60.0, 1), 2)
    3.43
    """
    return current / (pulses * frequency * capacitance)


def capacitance_for_ripple(current: Values, ripple_voltage: Values, frequency: Values,
                           pulses: Values = 2) -> Values:
    """Reservoir for a wanted ripple.

    current [A]: load current.
    ripple_voltage [V]: peak to peak.
    frequency [Hz]: mains frequency.
    pulses [-]: charging pulses a mains period.

    Returns [F]: I / (pulses f Vr).
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.9.

    >>> round(capacitance_for_ripple(100.0 / 10e3, 2.0, 60.0, 1) * 1e6, 1)
    83.3
    """
    return current / (pulses * frequency * ripple_voltage)


def current_for_ripple(ripple_voltage: Values, capacitance: Values, frequency: Values,
                       pulses: Values = 2) -> Values:
    """Load current that makes a ripple; with a measured ripple it tells the load.

    ripple_voltage [V]: peak to peak.
    capacitance [F]: reservoir.
    frequency [Hz]: mains frequency.
    pulses [-]: charging pulses a mains period.

    Returns [A]: pulses f C Vr.
    Source: D. A. Bell, Electronic Devices and Circuits, example 3.3, solved for the current.

    >>> round(current_for_ripple(3.43, 680e-6, 60.0, 1), 2)
    0.14
    """
    return pulses * frequency * capacitance * ripple_voltage


def ripple_over_time(current: Values, discharge_time: Values, capacitance: Values) -> Values:
    """Fall of the capacitor in a known discharge time.

    current [A]: load current.
    discharge_time [s]: time without charging.
    capacitance [F]: reservoir.

    Returns [V]: I t / C.
    Source: R. F. Coughlin, F. F. Driscoll, Operational Amplifiers and Linear Integrated Circuits, example
        16.4 (5 ms of a 60 Hz half period).

    >>> ripple_over_time(1.0, 5e-3, 1000e-6)
    5.0
    """
    return current * discharge_time / capacitance


def capacitance_over_time(current: Values, discharge_time: Values, ripple_voltage: Values) -> Values:
    """Reservoir for a wanted ripple when the discharge time is known.

    current [A]: load current.
    discharge_time [s]: time without charging.
    ripple_voltage [V]: peak to peak.

    Returns [F]: I t / Vr.
    Source: D. A. Bell, Electronic Devices and Circuits, example 3.5.

    >>> round(capacitance_over_time(0.04, 15.54e-3, 2.0) * 1e6, 1)
    310.8
    """
    return current * discharge_time / ripple_voltage


def charge_time(valley: Values, peak: Values, frequency: Values) -> Values:
    """Time from the valley to the crest.

    valley [V]: lowest voltage.
    peak [V]: highest voltage.
    frequency [Hz]: mains frequency.

    Returns [s]: (pi/2 - asin(valley/peak)) / (2 pi f).
    Source: D. A. Bell, Electronic Devices and Circuits, example 3.5 (prints 1.16 ms from rounded angles).

    >>> round(float(charge_time(19.0, 21.0, 60.0)) * 1e3, 3)
    1.167
    """
    return np.arccos(np.asarray(valley, float) / peak) / (2.0 * np.pi * frequency)


def ripple_rms(ripple_voltage: Values) -> Values:
    """Rms value of a straight-line ripple.

    ripple_voltage [V]: peak to peak.

    Returns [V]: Vr / (2 sqrt 3).
    Source: R. L. Boylestad, L. Nashelsky, Electronic Devices and Circuit Theory, example 15.3.

    >>> round(float(ripple_rms(ripple(0.05, 100e-6, 60.0))), 1)
    1.2
    """
    return ripple_voltage / (2.0 * np.sqrt(3.0))


def average_voltage(peak: Values, ripple_voltage: Values) -> Values:
    """Mean of a straight-line ripple below the crest.

    peak [V]: crest.
    ripple_voltage [V]: peak to peak.

    Returns [V]: peak - Vr/2.
    Source: R. L. Boylestad, L. Nashelsky, Electronic Devices and Circuit Theory, example 15.4.

    >>> round(average_voltage(30.0, ripple(0.05, 100e-6, 60.0)), 1)
    27.9
    """
    return peak - 0.5 * ripple_voltage


def capacitance_for_ripple_factor(resistance: Values, frequency: Values, factor: Values) -> Values:
    """Reservoir of a bridge for a wanted ripple factor.

    resistance [ohm]: load.
    frequency [Hz]: mains frequency.
    factor [-]: rms ripple over mean.

    Returns [F]: (1 + 1/(sqrt 2 RF)) / (4 f R).
    Source: M. H. Rashid, Power Electronics, capacitor-filter example (from memory).

    >>> round(float(capacitance_for_ripple_factor(500.0, 60.0, 0.05)) * 1e6, 1)
    126.2
    """
    return (1.0 + 1.0 / (np.sqrt(2.0) * factor)) / (4.0 * frequency * resistance)


def conduction_angle(ripple_voltage: Values, peak: Values) -> Values:
    """Angle over which the diode conducts.

    ripple_voltage [V]: peak to peak, small against the peak.
    peak [V]: crest.

    Returns [rad]: sqrt(2 Vr/Vp).
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.9.

    >>> float(conduction_angle(2.0, 100.0))
    0.2
    """
    return np.sqrt(2.0 * np.asarray(ripple_voltage, float) / peak)


def diode_current_while_on(current: Values, peak: Values, ripple_voltage: Values,
                           pulses: Values = 2) -> Values:
    """Mean diode current over the conduction interval.

    current [A]: load current.
    peak [V]: crest.
    ripple_voltage [V]: peak to peak.
    pulses [-]: charging pulses a mains period.

    Returns [A]: I (1 + (2 pi / pulses) sqrt(Vp / 2 Vr)).
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.9; D. A. Neamen, Electronic Circuit
        Analysis and Design, example 2.3.

    >>> round(float(diode_current_while_on(0.01, 100.0, 2.0, 1)), 3)
    0.324
    """
    return current * (1.0 + 2.0 * np.pi / pulses * np.sqrt(np.asarray(peak, float) / (2.0 * ripple_voltage)))


def diode_peak_current(current: Values, peak: Values, ripple_voltage: Values, pulses: Values = 2) -> Values:
    """Peak diode current.

    current [A]: load current.
    peak [V]: crest.
    ripple_voltage [V]: peak to peak.
    pulses [-]: charging pulses a mains period.

    Returns [A]: I (1 + (4 pi / pulses) sqrt(Vp / 2 Vr)).
    Valid: stiff mains; source resistance lowers it much.
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.9; D. A. Neamen, Electronic Circuit
        Analysis and Design, example 2.3.

    >>> round(float(diode_peak_current(0.01, 100.0, 2.0, 1)), 3)
    0.638
    """
    return current * (1.0 + 4.0 * np.pi / pulses * np.sqrt(np.asarray(peak, float) / (2.0 * ripple_voltage)))


def repetitive_peak(current: Values, period: Values, charging: Values) -> Values:
    """Diode current if the charge flows as a rectangle.

    current [A]: load current.
    period [s]: charging period.
    charging [s]: time of conduction.

    Returns [A]: I T / t.
    Source: D. A. Bell, Electronic Devices and Circuits, examples 3.6 and 3.10.

    >>> round(repetitive_peak(0.04, 16.7e-3, 1.16e-3), 3)
    0.576
    """
    return current * period / charging


def surge_resistance(peak: Values, surge_rating: Values) -> Values:
    """Resistance that keeps the first charge below the surge rating of the diode.

    peak [V]: crest.
    surge_rating [A]: non-repetitive peak current.

    Returns [ohm]: Vp / I_FSM.
    Source: D. A. Bell, Electronic Devices and Circuits, example 3.6.

    >>> round(surge_resistance(21.7, 30.0), 2)
    0.72
    """
    return peak / surge_rating


def secondary_peak(output_peak: Values, diode_drop: Values, diodes: Values) -> Values:
    """Crest of the winding for a wanted crest behind the rectifier.

    output_peak [V]: crest behind it.
    diode_drop [V]: drop of one diode.
    diodes [-]: diodes in the path: 1 for centre tap and half wave, 2 for a bridge.

    Returns [V]: sum.
    Source: D. A. Neamen, Electronic Circuit Analysis and Design, example 2.1.

    >>> secondary_peak(9.0, 0.7, 2)
    10.4
    """
    return output_peak + diodes * diode_drop


def peak_inverse_voltage(winding_peak: Values, diode_drop: Values, circuit: str) -> Values:
    """Reverse voltage on a rectifier diode.

    winding_peak [V]: crest of the (half) winding or the mains.
    diode_drop [V]: drop of one diode; 0 on the safe side.
    circuit [key]: half wave, centre tap or bridge.

    Returns [V]: twice the crest less a drop behind one diode, once behind a bridge.
    Source: D. A. Neamen, Electronic Circuit Analysis and Design, example 2.1; D. A. Bell, Electronic Devices
        and Circuits, examples 3.6 and 3.10.

    >>> peak_inverse_voltage(9.7, 0.7, "centre tap")
    18.7
    """
    times = {"half wave": 2.0, "centre tap": 2.0, "bridge": 1.0}[circuit]
    return times * winding_peak - diode_drop


def valley_after_conduction(peak: Values, frequency: Values, capacitance: Values, power: Values,
                            conduction_time: Values = 3.2e-3, pulses: Values = 2) -> Values:
    """Lowest bulk voltage if the time of conduction is guessed.

    peak [V]: crest of the mains.
    frequency [Hz]: mains frequency.
    capacitance [F]: bulk capacitance.
    power [W]: power drawn from the capacitor (output over efficiency).
    conduction_time [s]: guessed time of conduction.
    pulses [-]: charging pulses a mains period.

    Returns [V]: sqrt(Vp^2 - 2 P (1/(pulses f) - tc)/C), 0 where that is negative.
    Valid: as good as the guess; the exact valley of the example is 86.4 V.
    Source: Power Integrations, AN-17, June 1996, p. 8 (prints 93 V).

    >>> round(float(valley_after_conduction(2**0.5 * 85, 60.0, 33e-6, 15 / 0.8)), 1)
    92.8
    """
    lost = 2.0 * power * (1.0 / (pulses * frequency) - conduction_time) / capacitance
    return np.sqrt(np.maximum(np.asarray(peak, float) ** 2 - lost, 0.0))
