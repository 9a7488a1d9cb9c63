"""Resistors in series and parallel, dividers, sources with inner resistance, and what a meter makes of
them."""

import numpy as np

from triage.physics.values import Values


def series(*resistances: Values) -> Values:
    """Resistance of parts in a row.

    resistances [ohm]: one for each part.

    Returns [ohm]: sum.
    Source: OpenStax, College Physics, series circuit example (20 ohm).

    >>> series(1.0, 6.0, 13.0)
    20.0
    """
    return sum(resistances)


def parallel(*resistances: Values) -> Values:
    """Resistance of parts side by side.

    resistances [ohm]: one for each part; an open part may be infinite.

    Returns [ohm]: 1 / sum(1/R).
    Source: OpenStax, College Physics, parallel circuit example (0.804 ohm).

    >>> round(float(parallel(1.0, 6.0, 13.0)), 3)
    0.804
    """
    with np.errstate(divide="ignore"):
        return 1.0 / sum(1.0 / np.asarray(resistance, float) for resistance in resistances)


def divided(voltage: Values, upper: Values, lower: Values) -> Values:
    """Voltage of a divider without load.

    voltage [V]: voltage across both.
    upper [ohm]: resistance to the source.
    lower [ohm]: resistance to ground.

    Returns [V]: V lower / (upper + lower).
    Source: Ohm's law; V. K. Mehta, R. Mehta, Principles of Electronics, example 6.34 (10 V).

    >>> divided(12.0, 1000.0, 5000.0)
    10.0
    """
    return voltage * lower / (upper + lower)


def read_with_meter(voltage: Values, upper: Values, lower: Values, meter: Values = 10e6) -> Values:
    """What a voltmeter shows at a divider.

    voltage [V]: voltage across both.
    upper [ohm]: resistance to the source.
    lower [ohm]: resistance to ground.
    meter [ohm]: input resistance of the meter.

    Returns [V]: the divider with the meter beside its lower part.
    Source: Ohm's law.

    >>> round(float(read_with_meter(325.0, 2e6, 1e6)), 1)
    101.6
    """
    return divided(voltage, upper, parallel(lower, meter))


def resistance_in_circuit(resistance: Values, *around: Values) -> Values:
    """What an ohmmeter shows of a resistor with a path around it.

    resistance [ohm]: the resistor itself.
    around [ohm]: resistances in a row that bridge it.

    Returns [ohm]: the resistor beside the path.
    Source: Ohm's law.

    >>> round(float(resistance_in_circuit(39e3, 10.2e3, 2.2e3)))
    9409
    """
    return parallel(resistance, series(*around))


def loaded_voltage(open_voltage: Values, current: Values, resistance: Values) -> Values:
    """Voltage of a source under load.

    open_voltage [V]: without load.
    current [A]: load current.
    resistance [ohm]: inner resistance.

    Returns [V]: E - I R.
    Source: R. F. Coughlin, F. F. Driscoll, Operational Amplifiers and Linear Integrated Circuits, example
        16.3 (29 V).

    >>> loaded_voltage(34.0, 0.5, 10.0)
    29.0
    """
    return open_voltage - current * resistance


def source_resistance(open_voltage: Values, loaded: Values, current: Values) -> Values:
    """Inner resistance of a source from two readings.

    open_voltage [V]: without load.
    loaded [V]: under load.
    current [A]: load current.

    Returns [ohm]: (E - V)/I.
    Source: R. F. Coughlin, F. F. Driscoll, Operational Amplifiers and Linear Integrated Circuits, example
        16.2 (10 ohm).

    >>> source_resistance(34.0, 24.0, 1.0)
    10.0
    """
    return (open_voltage - loaded) / current


def current_into(open_voltage: Values, *resistances: Values) -> Values:
    """Current of a source into resistances in a row.

    open_voltage [V]: voltage without load.
    resistances [ohm]: inner resistance and load.

    Returns [A]: E / sum(R).
    Source: OpenStax, University Physics 2, battery and load example (1.188 A).

    >>> round(current_into(12.0, 0.1, 10.0), 3)
    1.188
    """
    return open_voltage / sum(resistances)


def heat(current: Values, resistance: Values) -> Values:
    """Power that a resistance turns into heat.

    current [A]: rms current.
    resistance [ohm]: resistance.

    Returns [W]: I^2 R.
    Source: OpenStax, College Physics, series circuit example (4.68 W).

    >>> round(heat(0.6, 13.0), 2)
    4.68
    """
    return current ** 2 * resistance
