"""How a capacitor charges and discharges: bleeders, X capacitors, stored energy, hold-up.

What is left after the plug is pulled decides when a board may be touched; limits are in the safety room.
"""

import numpy as np

from triage.physics.values import Values


def stored_energy(capacitance: Values, voltage: Values) -> Values:
    """Energy in a capacitor.

    capacitance [F]: capacitance.
    voltage [V]: voltage.

    Returns [J]: C V^2 / 2.
    Source: TT electronics (Welwyn), capacitor discharge calculation sheet (219.375 J).

    >>> round(stored_energy(195e-6, 1500.0), 3)
    219.375
    """
    return 0.5 * capacitance * voltage ** 2


def capacitance_for_energy(energy: Values, voltage: Values) -> Values:
    """Capacitance that holds an energy.

    energy [J]: energy.
    voltage [V]: voltage.

    Returns [F]: 2 W / V^2.
    Source: OpenStax, College Physics, defibrillator example (8 uF).

    >>> round(capacitance_for_energy(400.0, 10e3) * 1e6, 1)
    8.0
    """
    return 2.0 * energy / voltage ** 2


def voltage_after(time: Values, start: Values, resistance: Values, capacitance: Values) -> Values:
    """Voltage left after a discharge through a resistor.

    time [s]: time.
    start [V]: voltage at the beginning.
    resistance [ohm]: discharge resistance; infinite for none.
    capacitance [F]: capacitance.

    Returns [V]: V0 exp(-t/RC).
    Source: M. H. Rashid, Power Electronics, example 2.4 (139.64 V).

    >>> round(float(voltage_after(2e-6, 220.0, 44.0, 0.1e-6)), 2)
    139.64
    """
    return start * np.exp(-np.asarray(time, float) / (resistance * capacitance))


def time_to_voltage(start: Values, end: Values, resistance: Values, capacitance: Values) -> Values:
    """Time until a capacitor has discharged to a voltage.

    start [V]: voltage at the beginning.
    end [V]: voltage to be reached, above 0.
    resistance [ohm]: discharge resistance; infinite for none.
    capacitance [F]: capacitance.

    Returns [s]: R C ln(V0/V), 0 where it is below already.
    Source: TT electronics (Welwyn), capacitor discharge calculation sheet (15.06 ms).

    >>> round(float(time_to_voltage(1500.0, 320.0, 50.0, 195e-6)) * 1e3, 3)
    15.063
    """
    return resistance * capacitance * np.log(np.maximum(np.asarray(start, float) / end, 1.0))


def resistance_for_time(time: Values, start: Values, end: Values, capacitance: Values) -> Values:
    """Discharge resistor for a time.

    time [s]: allowed time.
    start [V]: voltage at the beginning.
    end [V]: voltage to be reached, below start.
    capacitance [F]: capacitance.

    Returns [ohm]: t / (C ln(V0/V)).
    Source: X capacitor rule of IEC 60950-1: 37 % after 1 s (5 Mohm for 200 nF).

    >>> round(float(resistance_for_time(1.0, 1.0, 0.367879441, 200e-9)) / 1e6, 2)
    5.0
    """
    return time / (capacitance * np.log(np.asarray(start, float) / end))


def charging_time(source: Values, end: Values, resistance: Values, capacitance: Values) -> Values:
    """Time until an empty capacitor has charged to a voltage; the start-up of a controller supply.

    source [V]: voltage behind the resistor.
    end [V]: voltage to be reached, below source.
    resistance [ohm]: charging resistance.
    capacitance [F]: capacitance.

    Returns [s]: -R C ln(1 - V/E).
    Source: OpenStax, University Physics 2, relaxation oscillator example (8.13 s).

    >>> round(float(charging_time(100.0, 80.0, 101.0, 50e-3)), 2)
    8.13
    """
    return -resistance * capacitance * np.log(1.0 - np.asarray(end, float) / source)


def charging_resistance(time: Values, source: Values, end: Values, capacitance: Values) -> Values:
    """Charging resistor for a time.

    time [s]: wanted time.
    source [V]: voltage behind the resistor.
    end [V]: voltage to be reached, below source.
    capacitance [F]: capacitance.

    Returns [ohm]: -t / (C ln(1 - V/E)).
    Source: OpenStax, University Physics 2, windshield wiper example (558.11 ohm).

    >>> round(float(charging_resistance(10.0, 12.0, 10.0, 10e-3)), 2)
    558.11
    """
    return -time / (capacitance * np.log(1.0 - np.asarray(end, float) / source))


def hold_up_time(start: Values, end: Values, capacitance: Values, power: Values) -> Values:
    """Time a converter of constant power runs on its bulk capacitor.

    start [V]: voltage when the mains goes.
    end [V]: lowest voltage the converter works at.
    capacitance [F]: bulk capacitance.
    power [W]: power drawn.

    Returns [s]: C (V1^2 - V2^2) / (2 P).
    Source: energy balance.

    >>> round(hold_up_time(325.0, 120.0, 100e-6, 45.0) * 1e3, 1)
    101.4
    """
    return capacitance * (start ** 2 - end ** 2) / (2.0 * power)


def bleeder_power(rms_voltage: Values, resistance: Values) -> Values:
    """Heat of a resistor across the mains or a direct voltage.

    rms_voltage [V]: rms voltage.
    resistance [ohm]: resistance.

    Returns [W]: V^2 / R.
    Source: Ohm's law.

    >>> bleeder_power(230.0, 1e6)
    0.0529
    """
    return rms_voltage ** 2 / resistance
