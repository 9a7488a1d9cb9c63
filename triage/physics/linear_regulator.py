"""Linear regulator: output, heat, efficiency, what the heat sink allows, current limits."""

from triage.physics.values import Values


def pass_power(input_voltage: Values, output: Values, current: Values) -> Values:
    """Heat in the regulator or pass transistor.

    input_voltage [V]: input.
    output [V]: output.
    current [A]: load current.

    Returns [W]: (Vin - Vout) I; the regulator's own current is left out.
    Source: J. M. Jacob, Power Electronics, example 1.6 (5 W).

    >>> pass_power(15.0, 5.0, 0.5)
    5.0
    """
    return (input_voltage - output) * current


def current_for_power(power: Values, input_voltage: Values, output: Values) -> Values:
    """Load current that makes a heat.

    power [W]: heat allowed in the regulator.
    input_voltage [V]: input.
    output [V]: output; 0 for a shorted output.

    Returns [A]: P / (Vin - Vout).
    Source: S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, examples 11.14
        (0.556 A) and 11.10 (1.5 A shorted, 4 A folded back).

    >>> current_for_power(12.0, 8.0, 5.0)
    4.0
    """
    return power / (input_voltage - output)


def efficiency(input_voltage: Values, output: Values) -> Values:
    """Share of the input power that reaches the load.

    input_voltage [V]: input.
    output [V]: output.

    Returns [-]: Vout / Vin.
    Source: A. Malvino, D. J. Bates, Electronic Principles, example 24-8 (61.33 %).

    >>> round(efficiency(15.0, 9.2), 4)
    0.6133
    """
    return output / input_voltage


def follower_output(zener_voltage: Values, base_voltage: Values = 0.7) -> Values:
    """Output of an emitter follower on a zener.

    zener_voltage [V]: zener voltage.
    base_voltage [V]: base-emitter voltage.

    Returns [V]: Vz - Vbe.
    Source: R. L. Boylestad, L. Nashelsky, Electronic Devices and Circuit Theory, example 15.8 (11.3 V).

    >>> follower_output(12.0)
    11.3
    """
    return zener_voltage - base_voltage


def follower_base_current(output: Values, load: Values, gain: Values) -> Values:
    """Base current of an emitter follower.

    output [V]: output.
    load [ohm]: load resistance.
    gain [-]: current gain of the transistor.

    Returns [A]: Vo / (R gain).
    Source: R. L. Boylestad, L. Nashelsky, Electronic Devices and Circuit Theory, example 15.8.

    >>> round(follower_base_current(11.3, 1000.0, 50.0) * 1e3, 3)
    0.226
    """
    return output / (load * gain)


def sense_resistance(limit: Values, base_voltage: Values = 0.7) -> Values:
    """Sense resistor that limits the current at the base-emitter voltage of a transistor.

    limit [A]: current limit.
    base_voltage [V]: base-emitter voltage.

    Returns [ohm]: Vbe / I.
    Source: S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, example 11.10 (0.47
        ohm).

    >>> round(sense_resistance(1.5), 2)
    0.47
    """
    return base_voltage / limit


def input_needed(output: Values, dropout: Values, ripple: Values = 0.0) -> Values:
    """Crest of the input that keeps a regulator in regulation.

    output [V]: output.
    dropout [V]: least difference between input and output.
    ripple [V]: peak-to-peak ripple of the input.

    Returns [V]: sum.
    Source: R. A. Gayakwad, Op-Amps and Linear Integrated Circuits, example 9.10 (19 V, no ripple).

    >>> input_needed(17.0, 2.0)
    19.0
    """
    return output + dropout + ripple
