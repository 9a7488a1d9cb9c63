"""Preferred values of resistors and capacitors (E series), IEC 60063:2015.

E3 to E24 are listed, E48 to E192 follow the rounding rule of the standard with its one exception. A printed
code whose value is in no series is more often misread than special.
"""

import math
from collections.abc import Mapping
from functools import cache

_E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)
SERIES_TOLERANCE: Mapping[str, float] = {
    "E3": 0.5,
    "E6": 0.2,
    "E12": 0.1,
    "E24": 0.05,
    "E48": 0.02,
    "E96": 0.01,
    "E192": 0.005,
}
"""Series -> relative tolerance it belongs to. IEC 60063:2015; coarsest first."""


@cache
def series_values(series: str) -> tuple[int, ...]:
    """The values of one decade as whole numbers: from 10 for E3 to E24, from 100 for E48 to E192.

    series: ``E3``, ``E6``, ``E12``, ``E24``, ``E48``, ``E96`` or ``E192``. Raises KeyError for another one.

    >>> series_values("E6")
    (10, 15, 22, 33, 47, 68)
    """
    if series not in SERIES_TOLERANCE:
        raise KeyError(f"series {series!r} is not one of {', '.join(SERIES_TOLERANCE)}")
    count = int(series[1:])
    if count <= 24:
        return _E24[:: 24 // count]
    rounded = (round(100 * 10 ** (step / count)) for step in range(count))
    return tuple(920 if value == 919 else value for value in rounded)


def nearest_preferred(value: float, series: str = "E24") -> float:
    """The value of the series that is nearest in ratio.

    value: above 0, any unit. Raises ValueError for a value that is not above 0 and finite, KeyError for an
    unknown series.

    >>> nearest_preferred(5000.0), nearest_preferred(5000.0, "E96"), nearest_preferred(9.6e-6, "E12")
    (5100.0, 4990.0, 1e-05)
    """
    if not (value > 0 and math.isfinite(value)):
        raise ValueError(f"{value} is not a finite value above 0")
    decade = series_values(series)
    exponent = math.floor(math.log10(value)) - (1 if len(decade) <= 24 else 2)
    candidates = [float(f"{digits}e{exponent}") for digits in (*decade, 10 * decade[0])]
    return min(candidates, key=lambda candidate: abs(math.log(candidate / value)))


def is_preferred(value: float, series: str) -> bool:
    """Whether a value above 0 stands in the series."""
    return math.isclose(nearest_preferred(value, series), value, rel_tol=1e-6)


def coarsest_series(value: float) -> str | None:
    """The first series, from E3 to E192, in which the value stands; None where it stands in none."""
    if not (value > 0 and math.isfinite(value)):
        return None
    return next((series for series in SERIES_TOLERANCE if is_preferred(value, series)), None)


def decade_digits(value: float) -> float:
    """The value without its power of ten, from 1 up to 10, rounded to six digits.

    value: above 0.

    >>> decade_digits(0.315)
    3.15
    """
    return float(f"{value:.5e}".partition("e")[0])
