"""Adjustable references and regulators: set-point, divider, optocoupler bias.

One equation serves the shunt reference (reference over the lower resistor), the three-terminal adjustable
regulator (reference over the upper one) and the transistor with zener. ``sense`` is the resistor that carries
the reference voltage.
"""

from triage.physics.values import Values


def set_point(reference: Values, sense: Values, other: Values, pin_current: Values = 0.0) -> Values:
    """Voltage across both resistors of the divider of an adjustable reference.

    reference [V]: reference voltage.
    sense [ohm]: resistor that carries it.
    other [ohm]: the other resistor.
    pin_current [A]: current of the reference or adjust pin through the other resistor.

    Returns [V]: Vref (1 + other/sense) + I other.
    Source: R. L. Boylestad, L. Nashelsky, Electronic Devices and Circuit Theory, example 15.15 (13.99 V).

    >>> round(set_point(1.25, 240.0, 2400.0, 100e-6), 2)
    13.99
    """
    return reference * (1.0 + other / sense) + pin_current * other


def resistor_for_output(output: Values, reference: Values, sense: Values,
                        pin_current: Values = 0.0) -> Values:
    """The other resistor for a wanted output.

    output [V]: wanted voltage.
    reference [V]: reference voltage.
    sense [ohm]: resistor that carries it.
    pin_current [A]: current of the reference or adjust pin.

    Returns [ohm]: sense (V - Vref) / (Vref + I sense).
    Source: R. A. Gayakwad, Op-Amps and Linear Integrated Circuits, example 9.11 (0.71 kohm and 2.03 kohm).

    >>> round(resistor_for_output(12.0, 1.25, 240.0, 100e-6))
    2025
    """
    return sense * (output - reference) / (reference + pin_current * sense)


def divider_current(output: Values, reference: Values, other: Values) -> Values:
    """Current through the upper resistor of a shunt reference.

    output [V]: output voltage.
    reference [V]: reference voltage.
    other [ohm]: resistor from output to reference pin.

    Returns [A]: (V - Vref) / other.
    Source: Ohm's law.

    >>> round(divider_current(5.008, 2.495, 10e3) * 1e3, 4)
    0.2513
    """
    return (output - reference) / other


def led_current(supply: Values, feedback: Values, pull_up: Values, transfer_ratio: Values) -> Values:
    """LED current that holds a feedback pin at a voltage through an optocoupler.

    supply [V]: supply of the pull-up resistor.
    feedback [V]: voltage of the pin; the saturation voltage for the most the loop may ask for.
    pull_up [ohm]: pull-up resistor.
    transfer_ratio [-]: current transfer ratio.

    Returns [A]: (Vcc - Vfb) / (R CTR).
    Source: Ohm's law.

    >>> round(led_current(5.0, 2.0, 4700.0, 1.0) * 1e3, 3)
    0.638
    """
    return (supply - feedback) / (pull_up * transfer_ratio)


def cathode_current(led: Values, led_voltage: Values, bias: Values,
                    series_resistance: Values = 0.0) -> Values:
    """Current of a shunt reference with a bias resistor around the LED branch.

    led [A]: LED current.
    led_voltage [V]: LED voltage.
    bias [ohm]: resistor across the LED and its series resistor.
    series_resistance [ohm]: series resistor inside that branch; 0 where the bias resistor bridges the LED
        alone.

    Returns [A]: If + (VF + If R)/Rbias.
    Source: Ohm's law; TI support forum, thread 509117.

    >>> round(cathode_current(0.638e-3, 1.2, 1000.0) * 1e3, 3)
    1.838
    """
    return led + (led_voltage + led * series_resistance) / bias


def bias_resistance(led: Values, led_voltage: Values, series_resistance: Values, cathode: Values) -> Values:
    """Bias resistor across the LED branch for a cathode current.

    led [A]: LED current.
    led_voltage [V]: LED voltage.
    series_resistance [ohm]: series resistor of the LED.
    cathode [A]: wanted cathode current.

    Returns [ohm]: (VF + If R) / (Ika - If).
    Source: TI support forum, thread 509117 (153 ohm).

    >>> round(bias_resistance(3e-3, 1.2, 470.0, 20e-3))
    154
    """
    return (led_voltage + led * series_resistance) / (cathode - led)


def cathode_voltage(output: Values, led_voltage: Values, led: Values, series_resistance: Values) -> Values:
    """Voltage across a shunt reference behind the LED and its resistor.

    output [V]: voltage the branch hangs on.
    led_voltage [V]: LED voltage.
    led [A]: LED current.
    series_resistance [ohm]: series resistor of the LED.

    Returns [V]: Vo - VF - If R; must stay above the reference voltage.
    Source: TI support forum, thread 509117 (12.59 V).

    >>> round(cathode_voltage(15.2, 1.2, 3e-3, 470.0), 2)
    12.59
    """
    return output - led_voltage - led * series_resistance


def highest_led_resistance(output: Values, led_voltage: Values, cathode_least: Values,
                           led: Values) -> Values:
    """Highest LED series resistor that still lets the loop pull the feedback pin down.

    output [V]: voltage the branch hangs on.
    led_voltage [V]: LED voltage.
    cathode_least [V]: least voltage of the shunt reference.
    led [A]: LED current the loop may ask for, at the lowest transfer ratio.

    Returns [ohm]: (Vo - VF - Vka)/If.
    Source: Ohm's law.

    >>> round(highest_led_resistance(5.0, 1.2, 2.5, led_current(5.0, 0.2, 4700.0, 0.5)), 1)
    636.5
    """
    return (output - led_voltage - cathode_least) / led
