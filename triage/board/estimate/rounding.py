"""Rounds what design equations give to what is sold: preferred values, usual ratings."""

import math

from triage.board.estimate.design import Draws

E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)
"""Preferred values of a decade. IEC 60063:2015; every second is E12, every fourth E6."""
SERIES = {
    ("resistor", "resistance"): 12, ("fusible_resistor", "resistance"): 12, ("zener", "zener_voltage"): 24,
    ("electrolytic", "capacitance"): 6, ("capacitor", "capacitance"): 6, ("x_capacitor", "capacitance"): 6,
    ("y_capacitor", "capacitance"): 6, ("inductor", "inductance"): 6,
}
"""(kind, value key) -> steps a decade of the series the value is made in."""
RATINGS = {
    ("electrolytic", "voltage"): (6.3, 10.0, 16.0, 25.0, 35.0, 50.0, 63.0, 100.0, 160.0, 200.0, 250.0, 350.0, 400.0, 450.0),
    ("diode", "voltage"): (40.0, 50.0, 60.0, 100.0, 150.0, 200.0, 400.0, 600.0, 800.0, 1000.0),
    ("diode", "current"): (0.15, 0.5, 1.0, 2.0, 3.0, 5.0, 8.0, 10.0, 16.0, 20.0, 30.0),
    ("bridge", "current"): (0.5, 1.0, 1.5, 2.0, 4.0, 6.0, 8.0, 10.0),
    ("resistor", "power"): (0.125, 0.25, 0.5, 1.0, 2.0, 3.0, 5.0, 7.0, 10.0),
    ("fusible_resistor", "power"): (0.5, 1.0, 2.0, 3.0, 5.0),
    ("fuse", "current"): (0.315, 0.4, 0.5, 0.63, 0.8, 1.0, 1.25, 1.6, 2.0, 2.5, 3.15, 4.0, 5.0, 6.3),
    ("mosfet", "current"): (1.0, 2.0, 4.0, 7.0, 10.0, 14.0, 20.0),
    ("ntc", "current"): (1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0),
}
"""(kind, rating key) -> usual ratings [SI]; common practice, no source."""
TIGHT = 0.05
"""Half-width below which a value is not rounded to a series [-]: a reference or a coupling is no catalog value."""
LEAST_SPREAD = 1.0005


def preferred(value: float, steps: int) -> float:
    """The nearest value of the series with so many steps a decade, in ratio.

    >>> preferred(5.2e-6, 6)
    4.7e-06
    """
    decade = math.floor(math.log10(value))
    near = [float(f"{e}e{d - 1}") for d in (decade - 1, decade, decade + 1) for e in E24[:: 24 // steps]]
    return min(near, key=lambda one: abs(math.log(one / value)))


def estimate_of(draws: Draws, kind: str, key: str, precise: bool = False) -> tuple[float, float]:
    """Value and spread factor [-] of a quantity: its median as it would be sold, and how far the middle 90 % lie from that.

    precise: keep three digits instead of rounding to the series of the kind.
    """
    order = sorted(float(value) for value in draws)
    low, median, high = (order[round(share * (len(order) - 1))] for share in (0.05, 0.5, 0.95))
    steps = SERIES.get((kind, key))
    if key.endswith("_turns"):
        value = float(max(round(median), 1))
    elif precise:
        value = float(f"{median:.3g}")
    elif steps:
        value = preferred(median, steps)
    else:
        value = median if high / low < 1.0 + 2.0 * TIGHT else float(f"{median:.2g}")
    return float(f"{value:.5g}"), float(f"{max(high / value, value / low, LEAST_SPREAD):.5g}")


def rating_of(draws: Draws, kind: str, key: str) -> float:
    """The median of a rating, rounded up to the next usual one."""
    median = sorted(float(value) for value in draws)[len(draws) // 2]
    return next((usual for usual in RATINGS.get((kind, key), ()) if usual >= 0.999 * median), float(f"{median:.2g}"))
