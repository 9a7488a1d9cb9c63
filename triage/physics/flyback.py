"""Flyback converter: energy balance, duty, currents, voltages and ripple, with or without current gaps.

Loss-free equations of the switch cell; put losses into the power (output over efficiency) and the diode drop
into the output voltage. ``ratio`` is primary over secondary turns. Discontinuous: the core empties in every
period. The ringing choke converter runs on the edge between both (``ringing_choke``); leakage is in
``clamp``.
"""

from dataclasses import dataclass

import numpy as np

from triage.physics.values import Values


@dataclass(frozen=True, slots=True)
class FlybackPoint:
    """Steady state of a flyback converter; fields are floats or arrays."""

    duty: Values
    """Share of the period the switch is on [-]."""
    demagnetising: Values
    """Share of the period the secondary conducts [-]; duty and this add to 1 in continuous mode."""
    primary_peak: Values
    """[A]"""
    primary_start: Values
    """Primary current at turn-on [A]; 0 in discontinuous mode."""
    primary_average: Values
    """Mean over the period [A]."""
    primary_rms: Values
    """[A]"""
    secondary_peak: Values
    """[A]"""
    secondary_rms: Values
    """[A]"""
    capacitor_rms: Values
    """Ripple current of the output capacitor [A]."""
    reflected: Values
    """Output voltage seen from the primary [V]."""
    switch_plateau: Values
    """Switch voltage after turn-off without the leakage spike [V]."""
    diode_reverse: Values
    """Reverse voltage of the output rectifier without ringing [V]."""


def reflected_voltage(output: Values, diode_drop: Values, ratio: Values) -> Values:
    """Output voltage seen from the primary.

    output [V]: output voltage.
    diode_drop [V]: drop of the output rectifier.
    ratio [-]: primary over secondary turns.

    Returns [V]: ratio (output + drop).
    Source: Linear Technology, LT3573 data sheet, p. 15.

    >>> reflected_voltage(5.0, 0.5, 15.0)
    82.5
    """
    return ratio * (output + diode_drop)


def turns_ratio(reflected: Values, output: Values, diode_drop: Values) -> Values:
    """Turns ratio for a wanted reflected voltage; for estimating a transformer that cannot be read.

    reflected [V]: output seen from the primary, 60 V to 130 V in most adapters (common practice, no source).
    output [V]: output voltage.
    diode_drop [V]: drop of the output rectifier.

    Returns [-]: primary over secondary turns.
    Source: reflected_voltage backwards.

    >>> turns_ratio(82.5, 5.0, 0.5)
    15.0
    """
    return reflected / (output + diode_drop)


def highest_turns_ratio(switch_rating: Values, input_voltage: Values, spike: Values, output: Values,
                        diode_drop: Values) -> Values:
    """Highest turns ratio that the switch stands.

    switch_rating [V]: voltage rating of the switch.
    input_voltage [V]: highest input voltage.
    spike [V]: allowance for the leakage spike.
    output [V]: output voltage.
    diode_drop [V]: drop of the output rectifier.

    Returns [-]: primary over secondary turns.
    Source: Linear Technology, LT3512 data sheet, p. 16, step 1 (prints 2.45).

    >>> round(highest_turns_ratio(150.0, 72.0, 40.0, 15.0, 0.5), 2)
    2.45
    """
    return (switch_rating - input_voltage - spike) / (output + diode_drop)


def continuous_duty(input_voltage: Values, reflected: Values) -> Values:
    """Duty at the edge of and within continuous mode.

    input_voltage [V]: bulk voltage less the drop of the switch.
    reflected [V]: output seen from the primary.

    Returns [-]: Vor / (Vin + Vor).
    Source: Linear Technology, LT3512 data sheet, p. 16; D. W. Hart, Power Electronics, example 7-1 (0.385).

    >>> round(continuous_duty(24.0, 15.0), 3)
    0.385
    """
    return reflected / (input_voltage + reflected)


def input_for_duty(reflected: Values, duty: Values) -> Values:
    """Input voltage that gives a duty in continuous mode.

    reflected [V]: output seen from the primary.
    duty [-]: share of the period the switch is on.

    Returns [V]: Vor (1 - D)/D.
    Source: M. H. Rashid, Power Electronics, example 13.1.

    >>> round(input_for_duty(98.8, 0.5), 1)
    98.8
    """
    return reflected * (1.0 - duty) / duty


def ramp(voltage: Values, inductance: Values, time: Values) -> Values:
    """Rise of the current of an inductance.

    voltage [V]: voltage across it.
    inductance [H]: inductance.
    time [s]: duration.

    Returns [A]: V t / L.
    Source: definition of inductance; M. H. Rashid, Power Electronics, example 2.9 (44 A).

    >>> round(ramp(220.0, 250e-6, 50e-6), 1)
    44.0
    """
    return voltage * time / inductance


def inductance_for_ramp(voltage: Values, time: Values, current: Values) -> Values:
    """Inductance whose current rises by a given amount.

    voltage [V]: voltage across it.
    time [s]: duration.
    current [A]: rise.

    Returns [H]: V t / I.
    Source: definition of inductance; M. H. Rashid, Power Electronics, example 13.1 (1.67 mH).

    >>> round(inductance_for_ramp(100.0, 0.5e-3, 30.0) * 1e3, 2)
    1.67
    """
    return voltage * time / current


def stored_energy(inductance: Values, current: Values) -> Values:
    """Energy in the core.

    inductance [H]: primary inductance.
    current [A]: primary current.

    Returns [J]: L I^2 / 2.
    Source: definition; M. H. Rashid, Power Electronics, example 2.9 (0.242 J).

    >>> round(stored_energy(250e-6, 44.0), 3)
    0.242
    """
    return 0.5 * inductance * current ** 2


def discontinuous_peak(power: Values, inductance: Values, frequency: Values) -> Values:
    """Primary peak current that carries a power in discontinuous mode.

    power [W]: power through the core.
    inductance [H]: primary inductance.
    frequency [Hz]: switching frequency.

    Returns [A]: sqrt(2 P / (L f)).
    Source: energy balance L I^2 f / 2 = P, as in Linear Technology, LT3757 data sheet, p. 19.

    >>> round(float(discontinuous_peak(5.5, 1.5e-3, 65e3)), 3)
    0.336
    """
    return np.sqrt(2.0 * np.asarray(power, float) / (inductance * frequency))


def peak_from_duty(power: Values, input_voltage: Values, duty: Values) -> Values:
    """Primary peak current when the current starts from zero.

    power [W]: input power (output over efficiency).
    input_voltage [V]: bulk voltage.
    duty [-]: share of the period the switch is on.

    Returns [A]: 2 P / (Vin D).
    Source: Linear Technology, LT3512 data sheet, p. 17, step 3 (0.39 A).

    >>> round(peak_from_duty(3.0 / 0.83, 48.0, 31.0 / 79.0), 2)
    0.38
    """
    return 2.0 * power / (input_voltage * duty)


def power_from_peak(peak: Values, input_voltage: Values, duty: Values) -> Values:
    """Input power when the current starts from zero.

    peak [A]: primary peak current.
    input_voltage [V]: bulk voltage.
    duty [-]: share of the period the switch is on.

    Returns [W]: Vin D Ip / 2.
    Source: Linear Technology, LT3512 data sheet, p. 16, step 2.

    >>> round(0.83 * power_from_peak(0.44, 36.0, 31.0 / 67.0), 1)
    3.0
    """
    return 0.5 * input_voltage * duty * peak


def edge_output_current(peak: Values, duty: Values, ratio: Values, efficiency: Values = 1.0) -> Values:
    """Output current on the edge between both modes.

    peak [A]: primary peak current.
    duty [-]: share of the period the switch is on.
    ratio [-]: primary over secondary turns.
    efficiency [-]: of the whole converter.

    Returns [A]: eff (1 - D) ratio Ip / 2.
    Source: Linear Technology, LT3573 data sheet, p. 15, table 6.

    >>> round(edge_output_current(1.25, 16.5 / 36.5, 3.0, 0.8), 3)
    0.822
    """
    return efficiency * (1.0 - duty) * 0.5 * ratio * peak


def edge_inductance(input_voltage: Values, duty: Values, power: Values, frequency: Values) -> Values:
    """Primary inductance that puts the converter on the edge between both modes.

    input_voltage [V]: bulk voltage.
    duty [-]: share of the period the switch is on.
    power [W]: power through the core.
    frequency [Hz]: switching frequency.

    Returns [H]: (Vin D)^2 / (2 P f); below it the current has gaps.
    Source: energy balance, as in Linear Technology, LT3757 data sheet, p. 19.

    >>> round(edge_inductance(100.0, 101.6 / 201.6, 12.7, 65e3) * 1e3, 3)
    1.538
    """
    return (input_voltage * duty) ** 2 / (2.0 * power * frequency)


def discontinuous_output(input_voltage: Values, duty: Values, resistance: Values, inductance: Values,
                         frequency: Values) -> Values:
    """Output voltage of a discontinuous converter at a fixed duty.

    input_voltage [V]: bulk voltage.
    duty [-]: share of the period the switch is on.
    resistance [ohm]: load.
    inductance [H]: primary inductance.
    frequency [Hz]: switching frequency.

    Returns [V]: Vin D sqrt(R / (2 L f)), whatever the turns ratio.
    Source: D. W. Hart, Power Electronics, chapter 7.

    >>> round(float(discontinuous_output(24.0, 0.385, 20.0, 0.5e-3, 40e3)), 2)
    6.53
    """
    return input_voltage * duty * np.sqrt(np.asarray(resistance, float) / (2.0 * inductance * frequency))


def magnetising_average(output_current: Values, duty: Values, ratio: Values) -> Values:
    """Mean magnetising current in continuous mode, on the primary.

    output_current [A]: output current.
    duty [-]: share of the period the switch is on.
    ratio [-]: primary over secondary turns.

    Returns [A]: I / (ratio (1 - D)).
    Source: R. W. Erickson, D. Maksimovic, Fundamentals of Power Electronics, chapter 14 (1.25 A).

    >>> round(magnetising_average(5.0, 0.4, 1 / 0.15), 2)
    1.25
    """
    return output_current / (ratio * (1.0 - duty))


def ramp_rms(peak: Values, start: Values, share: Values) -> Values:
    """Rms over the period of a current that runs straight from one value to another in part of it.

    peak [A]: one end.
    start [A]: other end; 0 for a triangle.
    share [-]: share of the period the current flows.

    Returns [A]: sqrt(share (a^2 + a b + b^2)/3).
    Source: Power Integrations, AN-23, p. 9, step 19, with start = peak (1 - K_RP).

    >>> round(float(ramp_rms(1.5, 0.6, 0.5)), 4)
    0.7649
    """
    return np.sqrt(np.asarray(share, float) * (peak ** 2 + peak * start + start ** 2) / 3.0)


def capacitor_ripple_current(secondary_rms: Values, output_current: Values) -> Values:
    """Ripple current of the output capacitor.

    secondary_rms [A]: rms secondary current.
    output_current [A]: output current.

    Returns [A]: sqrt(Is^2 - Io^2).
    Source: Power Integrations, AN-16, p. 22, step 27.

    >>> round(float(capacitor_ripple_current(1.833, 1.0)), 3)
    1.536
    """
    return np.sqrt(np.maximum(np.asarray(secondary_rms, float) ** 2 - output_current ** 2, 0.0))


def switch_plateau(input_voltage: Values, reflected: Values) -> Values:
    """Switch voltage after turn-off, without the leakage spike.

    input_voltage [V]: bulk voltage.
    reflected [V]: output seen from the primary.

    Returns [V]: Vin + Vor.
    Source: M. H. Rashid, Power Electronics, example 13.1 (198.8 V); Linear Technology, LT3573 data sheet,
        table 6.

    >>> switch_plateau(100.0, 98.8)
    198.8
    """
    return input_voltage + reflected


def diode_reverse(output: Values, input_voltage: Values, ratio: Values) -> Values:
    """Reverse voltage of the output rectifier, without ringing.

    output [V]: output voltage.
    input_voltage [V]: highest bulk voltage.
    ratio [-]: primary over secondary turns.

    Returns [V]: Vo + Vin / ratio.
    Source: Linear Technology, LT3512 data sheet, p. 17, step 4 (51 V).

    >>> diode_reverse(15.0, 72.0, 2.0)
    51.0
    """
    return output + input_voltage / ratio


def capacitive_ripple(point: FlybackPoint, output_current: Values, capacitance: Values,
                      frequency: Values) -> Values:
    """Peak-to-peak ripple of the output capacitor from its charge.

    point [SI]: operating point.
    output_current [A]: output current.
    capacitance [F]: output capacitor.
    frequency [Hz]: switching frequency.

    Returns [V]: charge above the output current over C; the ESR adds esr_ripple.
    Source: integral of the straight-line secondary current.

    >>> p = operating_point(100.0, 5.0, 1.0, 15.0, 1.5e-3, 65e3, diode_drop=0.5)
    >>> round(float(capacitive_ripple(p, 1.0, 470e-6, 65e3)), 4)
    0.021
    """
    period = 1.0 / np.asarray(frequency, float)
    time = point.demagnetising * period
    end = point.secondary_peak * point.primary_start / point.primary_peak
    above = point.secondary_peak - output_current
    fall = (point.secondary_peak - end) / time
    until = np.minimum(time, above / fall)
    return (above * until - 0.5 * fall * until ** 2) / capacitance


def esr_ripple(point: FlybackPoint, esr: Values) -> Values:
    """Ripple that the series resistance of the output capacitor adds.

    point [SI]: operating point.
    esr [ohm]: series resistance at the switching frequency.

    Returns [V]: ESR times the secondary peak current.
    Source: Ohm's law; the secondary current begins at its peak.

    >>> p = operating_point(100.0, 5.0, 1.0, 15.0, 1.5e-3, 65e3, diode_drop=0.5)
    >>> round(float(esr_ripple(p, 0.05)), 3)
    0.252
    """
    return esr * point.secondary_peak


def operating_point(input_voltage: Values, output: Values, output_current: Values, ratio: Values,
                    inductance: Values, frequency: Values, diode_drop: Values = 0.7) -> FlybackPoint:
    """All currents and voltages of a regulated converter of fixed frequency.

    input_voltage [V]: bulk voltage.
    output [V]: regulated output voltage.
    output_current [A]: output current, above 0.
    ratio [-]: primary over secondary turns.
    inductance [H]: primary inductance.
    frequency [Hz]: switching frequency.
    diode_drop [V]: drop of the output rectifier.

    Returns [SI]: the steady state, in the mode that the inductance asks for.
    Source: energy balance in discontinuous, volt-second balance in continuous mode: R. W. Erickson, D.
        Maksimovic, Fundamentals of Power Electronics, chapters 5 and 6.

    >>> p = operating_point(100.0, 19.0, 3.42, 5.0, 0.6e-3, 65e3, diode_drop=0.5)
    >>> round(float(p.primary_peak), 3), round(float(p.capacitor_rms), 2)
    (1.984, 3.62)
    """
    input_voltage = np.asarray(input_voltage, float)
    reflected = reflected_voltage(output, diode_drop, ratio)
    power = output_current * (output + diode_drop)
    full = continuous_duty(input_voltage, reflected)
    gaps = inductance < edge_inductance(input_voltage, full, power, frequency)
    peak_gaps = discontinuous_peak(power, inductance, frequency)
    duty = np.where(gaps, peak_gaps * inductance * frequency / input_voltage, full)
    middle, swing = power / (input_voltage * duty), ramp(input_voltage, inductance, duty / frequency)
    peak = np.where(gaps, peak_gaps, middle + 0.5 * swing)
    start = np.where(gaps, 0.0, middle - 0.5 * swing)
    away = np.where(gaps, peak_gaps * inductance * frequency / reflected, 1.0 - full)
    secondary = ratio * ramp_rms(peak, start, away)
    return FlybackPoint(
        duty, away, peak, start, power / input_voltage, ramp_rms(peak, start, duty), ratio * peak, secondary,
        capacitor_ripple_current(secondary, output_current), reflected,
        switch_plateau(input_voltage, reflected), diode_reverse(output, input_voltage, ratio))
