"""Ringing choke converter: a flyback that times itself, on the edge between both current modes.

The switch stays on until its drive can no longer carry the collector current (or a sensing transistor ends
it), the core empties into the output, the drain or collector rings down to its valley and the switch turns on
again. Equations are loss-free; currents and voltages of one stroke are in ``flyback``.
"""

import numpy as np

from triage.physics.values import Values


def stroke_time(inductance: Values, peak: Values, voltage: Values) -> Values:
    """Time in which the primary current runs between zero and its peak.

    inductance [H]: primary inductance.
    peak [A]: primary peak current.
    voltage [V]: bulk voltage while on, reflected voltage while off.

    Returns [s]: L Ip / V.
    Source: definition of inductance; Linear Technology, LT3512 data sheet, p. 17.

    >>> round(stroke_time(2e-3, 0.3, 100.0) * 1e6, 2)
    6.0
    """
    return inductance * peak / voltage


def valley_delay(inductance: Values, capacitance: Values) -> Values:
    """Time from the empty core to the first valley of the switch voltage.

    inductance [H]: primary inductance.
    capacitance [F]: capacitance of the switch node.

    Returns [s]: pi sqrt(L C), half a ring.
    Source: ring frequency 1/(2 pi sqrt(L C)): Infineon, AN-PS0045, p. 8.

    >>> round(float(valley_delay(2e-3, 100e-12)) * 1e6, 3)
    1.405
    """
    return np.pi * np.sqrt(np.asarray(inductance, float) * capacitance)


def valley_voltage(input_voltage: Values, reflected: Values) -> Values:
    """Lowest switch voltage before turn-on.

    input_voltage [V]: bulk voltage.
    reflected [V]: output seen from the primary.

    Returns [V]: Vin - Vor, 0 where it would be negative.
    Source: Infineon, AN-PS0045, p. 8.

    >>> float(valley_voltage(325.0, 75.0))
    250.0
    """
    return np.maximum(np.asarray(input_voltage, float) - reflected, 0.0)


def frequency(inductance: Values, peak: Values, input_voltage: Values, reflected: Values,
              delay: Values = 0.0) -> Values:
    """Switching frequency.

    inductance [H]: primary inductance.
    peak [A]: primary peak current.
    input_voltage [V]: bulk voltage.
    reflected [V]: output seen from the primary.
    delay [s]: time between empty core and turn-on, see valley_delay.

    Returns [Hz]: 1 / (L Ip/Vin + L Ip/Vor + delay).
    Source: Linear Technology, LT3512 data sheet, p. 17, step 3 (prints 240 kHz).

    >>> round(frequency(200e-6, 0.39, 48.0, 31.0) / 1e3)
    241
    """
    on, off = stroke_time(inductance, peak, input_voltage), stroke_time(inductance, peak, reflected)
    return 1.0 / (on + off + delay)


def peak_for_power(power: Values, inductance: Values, input_voltage: Values, reflected: Values,
                   delay: Values = 0.0) -> Values:
    """Primary peak current that carries a power.

    power [W]: power through the core.
    inductance [H]: primary inductance.
    input_voltage [V]: bulk voltage.
    reflected [V]: output seen from the primary.
    delay [s]: time between empty core and turn-on.

    Returns [A]: root of L Ip^2 / 2 = P (L Ip (1/Vin + 1/Vor) + delay).
    Source: energy balance of one period.

    >>> round(float(peak_for_power(6.0, 2e-3, 100.0, 75.0)), 3)
    0.28
    """
    edge = power * (1.0 / np.asarray(input_voltage, float) + 1.0 / np.asarray(reflected, float))
    return edge + np.sqrt(edge ** 2 + 2.0 * power * delay / inductance)


def inductance_for_frequency(power: Values, wanted: Values, input_voltage: Values,
                             reflected: Values) -> Values:
    """Primary inductance that gives a frequency at a power; for a transformer that cannot be read.

    power [W]: power through the core.
    wanted [Hz]: switching frequency.
    input_voltage [V]: bulk voltage.
    reflected [V]: output seen from the primary.

    Returns [H]: 1 / (2 P f (1/Vin + 1/Vor)^2), without delay.
    Source: frequency and peak_for_power solved for the inductance.

    >>> round(inductance_for_frequency(6.0, 76530.6, 100.0, 75.0) * 1e3, 3)
    2.0
    """
    return 1.0 / (2.0 * power * wanted * (1.0 / input_voltage + 1.0 / reflected) ** 2)


def power_carried(inductance: Values, peak: Values, rate: Values) -> Values:
    """Power through the core.

    inductance [H]: primary inductance.
    peak [A]: primary peak current.
    rate [Hz]: switching frequency.

    Returns [W]: L Ip^2 f / 2.
    Source: energy balance.

    >>> round(power_carried(2e-3, 0.3, 64901.35), 3)
    5.841
    """
    return 0.5 * inductance * peak ** 2 * rate


def drive_current(input_voltage: Values, drive_ratio: Values, base_voltage: Values,
                  resistance: Values) -> Values:
    """Base current that the feedback winding gives while the switch is on.

    input_voltage [V]: bulk voltage.
    drive_ratio [-]: feedback over primary turns.
    base_voltage [V]: base-emitter voltage.
    resistance [ohm]: base drive resistor.

    Returns [A]: (Vin Nfb/Np - Vbe) / R, 0 where negative.
    Source: standard blocking-oscillator relation (common practice, no source).

    >>> round(float(drive_current(100.0, 0.06, 0.8, 220.0)) * 1e3, 2)
    23.64
    """
    return np.maximum(np.asarray(input_voltage, float) * drive_ratio - base_voltage, 0.0) / resistance


def peak_from_gain(base_current: Values, gain: Values) -> Values:
    """Collector current at which the transistor leaves saturation and the stroke ends.

    base_current [A]: base current.
    gain [-]: current gain at that current.

    Returns [A]: gain times base current.
    Source: standard blocking-oscillator relation (common practice, no source).

    >>> round(peak_from_gain(0.0236363636, 15.0), 3)
    0.355
    """
    return gain * base_current


def peak_from_sense(base_voltage: Values, resistance: Values) -> Values:
    """Primary peak current at which a sensing transistor ends the stroke.

    base_voltage [V]: base-emitter voltage of the sensing transistor, about 0.6 V.
    resistance [ohm]: emitter resistor of the switch.

    Returns [A]: Vbe / R.
    Source: Ohm's law.

    >>> round(peak_from_sense(0.6, 2.2), 3)
    0.273
    """
    return base_voltage / resistance


def sense_power(peak: Values, duty: Values, resistance: Values) -> Values:
    """Heat in the emitter resistor.

    peak [A]: primary peak current.
    duty [-]: share of the period the switch is on.
    resistance [ohm]: emitter resistor.

    Returns [W]: Ip^2 D/3 R.
    Source: rms value of a triangle, as in Power Integrations, AN-23, p. 9, step 19.

    >>> round(sense_power(0.272727, 0.4, 2.2) * 1e3, 1)
    21.8
    """
    return peak ** 2 * duty / 3.0 * resistance


def output_from_rail(rail: Values, rail_diode: Values, output_diode: Values, ratio: Values) -> Values:
    """Output voltage that an auxiliary rail of the same flyback pulse stands for.

    rail [V]: voltage of the auxiliary rail: zener voltage and base-emitter voltage where a zener regulates
        it.
    rail_diode [V]: drop of the auxiliary rectifier.
    output_diode [V]: drop of the output rectifier.
    ratio [-]: secondary over auxiliary turns.

    Returns [V]: ratio (rail + drop) - output drop.
    Valid: tight coupling; light load on the auxiliary rail reads high by the leakage spike.
    Source: equal volts per turn of windings on one core.

    >>> round(output_from_rail(6.0, 0.7, 0.35, 19 / 21), 2)
    5.71
    """
    return ratio * (rail + rail_diode) - output_diode
