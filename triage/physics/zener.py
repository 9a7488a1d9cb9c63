"""Zener stage: series resistor, zener, load; currents, limits, output with a good, shorted or open zener."""

import numpy as np

from triage.physics.divider import divided
from triage.physics.values import Values


def series_current(input_voltage: Values, zener_voltage: Values, resistance: Values) -> Values:
    """Current through the series resistor while the zener conducts.

    input_voltage [V]: input.
    zener_voltage [V]: zener voltage.
    resistance [ohm]: series resistor.

    Returns [A]: (Vin - Vz)/R.
    Source: A. Malvino, D. J. Bates, Electronic Principles, example 5-1 (12.2 mA).

    >>> round(series_current(20.0, 10.0, 820.0) * 1e3, 1)
    12.2
    """
    return (input_voltage - zener_voltage) / resistance


def zener_current(input_voltage: Values, zener_voltage: Values, resistance: Values,
                  load_current: Values = 0.0) -> Values:
    """Current through the zener.

    input_voltage [V]: input.
    zener_voltage [V]: zener voltage.
    resistance [ohm]: series resistor.
    load_current [A]: current of the load at the zener voltage.

    Returns [A]: (Vin - Vz)/R - IL, 0 where the zener does not conduct.
    Source: A. Malvino, D. J. Bates, Electronic Principles, example 5-3 (19.63 mA).

    >>> round(float(zener_current(18.0, 10.0, 270.0, 0.01)) * 1e3, 2)
    19.63
    """
    return np.maximum(series_current(input_voltage, zener_voltage, resistance) - load_current, 0.0)


def stage_output(input_voltage: Values, zener_voltage: Values, resistance: Values, load: Values) -> Values:
    """Output of a zener stage; ``zener_voltage`` 0 for a shorted, infinite for an open zener.

    input_voltage [V]: input.
    zener_voltage [V]: zener voltage.
    resistance [ohm]: series resistor.
    load [ohm]: load resistance.

    Returns [V]: the lower of zener voltage and divider voltage.
    Source: V. K. Mehta, R. Mehta, Principles of Electronics, example 6.34 (6 V, 0 V, 10 V).

    >>> [float(stage_output(12.0, v, 1000.0, 5000.0)) for v in (6.0, 0.0, float("inf"))]
    [6.0, 0.0, 10.0]
    """
    return np.minimum(zener_voltage, divided(input_voltage, resistance, load))


def series_resistance(input_voltage: Values, zener_voltage: Values, current: Values) -> Values:
    """Series resistor for a current.

    input_voltage [V]: lowest input for the highest resistor, highest input for the lowest.
    zener_voltage [V]: zener voltage.
    current [A]: least zener current and load, or most zener current and least load.

    Returns [ohm]: (Vin - Vz)/I.
    Source: V. K. Mehta, R. Mehta, Principles of Electronics, example 6.29 (30 ohm).

    >>> series_resistance(13.0, 10.0, 0.1)
    30.0
    """
    return (input_voltage - zener_voltage) / current


def input_for_current(zener_voltage: Values, resistance: Values, load_current: Values,
                      current: Values = 0.0) -> Values:
    """Input voltage at which the zener carries a current.

    zener_voltage [V]: zener voltage.
    resistance [ohm]: series resistor.
    load_current [A]: load current.
    current [A]: zener current; 0 gives the lowest input that still regulates.

    Returns [V]: Vz + (IL + Iz) R.
    Source: V. K. Mehta, R. Mehta, Principles of Electronics, example 6.32 (33 V and 38 V).

    >>> input_for_current(30.0, 200.0, 0.015, 0.025)
    38.0
    """
    return zener_voltage + (load_current + current) * resistance


def voltage_at_current(test_voltage: Values, test_current: Values, slope_resistance: Values,
                       current: Values) -> Values:
    """Zener voltage at another current.

    test_voltage [V]: zener voltage at the test current.
    test_current [A]: test current.
    slope_resistance [ohm]: dynamic resistance.
    current [A]: the current in question.

    Returns [V]: Vz + rz (I - Itest).
    Valid: above the knee.
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.8; A. Malvino, D. J. Bates,
        Electronic Principles, example 5-7 (10.17 V).

    >>> round(voltage_at_current(10.0, 0.0, 8.5, 0.02), 2)
    10.17
    """
    return test_voltage + slope_resistance * (current - test_current)


def stage_output_with_slope(input_voltage: Values, base_voltage: Values, slope_resistance: Values,
                            resistance: Values, load_current: Values = 0.0) -> Values:
    """Output of a zener stage with the slope of the zener.

    input_voltage [V]: input.
    base_voltage [V]: zener voltage extrapolated to no current.
    slope_resistance [ohm]: dynamic resistance.
    resistance [ohm]: series resistor.
    load_current [A]: load current, smaller than the series current.

    Returns [V]: (Vin rz + Vz0 R - IL R rz) / (R + rz).
    Source: A. S. Sedra, K. C. Smith, Microelectronic Circuits, example 3.8 (6.83 V).

    >>> round(stage_output_with_slope(10.0, 6.7, 20.0, 500.0), 2)
    6.83
    """
    return ((input_voltage * slope_resistance + base_voltage * resistance
             - load_current * resistance * slope_resistance) / (resistance + slope_resistance))


def ripple_out(ripple_in: Values, slope_resistance: Values, resistance: Values) -> Values:
    """Ripple that a zener stage lets through.

    ripple_in [V]: ripple at the input.
    slope_resistance [ohm]: dynamic resistance.
    resistance [ohm]: series resistor.

    Returns [V]: divider of series resistor and slope; the book leaves rz out of the sum and prints 63 mV.
    Source: A. Malvino, D. J. Bates, Electronic Principles, example 5-8.

    >>> round(ripple_out(2.0, 8.5, 270.0) * 1e3, 1)
    61.0
    """
    return divided(ripple_in, resistance, slope_resistance)
