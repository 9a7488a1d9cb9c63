"""Measurement uncertainty after the GUM, and verdicts that take it into account after JCGM 106.

Plain functions on numbers. A verdict is ``pass`` or ``fail`` only where the expanded uncertainty leaves no
doubt; between the guard bands it is ``too close to call``.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from statistics import NormalDist

VERDICTS = ("pass", "fail", "too close to call")
"""What a reading says about its limits."""

COVERAGE_FACTOR = 2.0
"""Coverage factor of about 95 % for many degrees of freedom; JCGM 100:2008, G.6.6."""


def rectangular(half_width: float) -> float:
    """Standard uncertainty of a value known to lie within plus or minus a half-width. JCGM 100:2008,
    4.3.7."""
    return half_width / math.sqrt(3.0)


@dataclass(frozen=True, slots=True)
class Contribution:
    """One input of a measurement."""

    uncertainty: float
    """Standard uncertainty [unit of the input]."""
    sensitivity: float = 1.0
    """Partial derivative of the result by the input."""
    freedom: float = math.inf
    """Degrees of freedom [-]."""

    @property
    def share(self) -> float:
        """Its part of the result's standard uncertainty [unit of the result]."""
        return abs(self.sensitivity) * self.uncertainty


def combined(contributions: Sequence[Contribution]) -> float:
    """Combined standard uncertainty of independent inputs. JCGM 100:2008, equation 10."""
    return math.sqrt(sum(part.share**2 for part in contributions))


def effective_freedom(contributions: Sequence[Contribution]) -> float:
    """Effective degrees of freedom [-], ``inf`` when all are. Welch-Satterthwaite, JCGM 100:2008, equation
    G.2b."""
    below = sum(part.share**4 / part.freedom for part in contributions if math.isfinite(part.freedom))
    return combined(contributions) ** 4 / below if below > 0.0 else math.inf


def coverage_factor(level: float, freedom: float = math.inf) -> float:
    """Two-sided coverage factor [-] for a level of confidence [0..1] and degrees of freedom, truncated to an
    integer.

    Student's t. JCGM 100:2008, table G.2.

    >>> round(coverage_factor(0.99, 16.7), 2)
    2.92
    """
    if not math.isfinite(freedom) or freedom > 1e4:
        return NormalDist().inv_cdf(0.5 + level / 2.0)
    nu = max(1, math.floor(freedom))
    low, high = 0.0, 1.0
    while _t_within(high, nu) < level:
        high *= 2.0
    for _ in range(80):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if _t_within(middle, nu) < level else (low, middle)
    return 0.5 * (low + high)


def _t_within(t: float, nu: int) -> float:
    """Probability that Student's t with nu degrees of freedom lies within plus or minus t.

    Closed form for integer nu: Abramowitz and Stegun, Handbook of Mathematical Functions, 26.7.3 and 26.7.4.
    """
    angle = math.atan(t / math.sqrt(nu))
    cosine2 = math.cos(angle) ** 2
    term = total = 1.0
    first = 3 if nu % 2 else 2
    for k in range(first, nu - 1, 2):
        term *= cosine2 * (k - 1) / k
        total += term
    if nu % 2 == 0:
        return math.sin(angle) * total
    series = math.sin(angle) * math.cos(angle) * total if nu > 1 else 0.0
    return 2.0 / math.pi * (angle + series)


def expanded(contributions: Sequence[Contribution], level: float = 0.95) -> float:
    """Expanded uncertainty for a level of confidence. JCGM 100:2008, G.4."""
    return coverage_factor(level, effective_freedom(contributions)) * combined(contributions)


def verdict(
    value: float,
    uncertainty: float,
    low: float | None = None,
    high: float | None = None,
    factor: float = COVERAGE_FACTOR,
) -> str:
    """What a reading says about its limits, one of VERDICTS.

    Parameters: value and its standard uncertainty, lower and upper limit (None: none), coverage factor of
    the guard band. Guarded acceptance and guarded rejection, JCGM 106:2012, 8.3.2 and 8.3.3. A reading of
    ``inf`` (OL) passes a lower limit.

    >>> verdict(4.76, 0.03, 4.75, 5.25)
    'too close to call'
    """
    if math.isnan(value):
        return "too close to call"
    guard = factor * uncertainty if math.isfinite(value) else 0.0
    if (low is not None and value < low - guard) or (high is not None and value > high + guard):
        return "fail"
    inside = (low is None or value >= low + guard) and (high is None or value <= high - guard)
    return "pass" if inside else "too close to call"


def conformity(value: float, uncertainty: float, low: float | None = None, high: float | None = None) -> float:
    """Probability that the true value lies within its limits [0..1], normal, no prior. JCGM 106:2012, 7.4."""
    if uncertainty <= 0.0 or not math.isfinite(value):
        return float((low is None or value >= low) and (high is None or value <= high))
    spread = NormalDist(value, uncertainty)
    upper = 1.0 if high is None else spread.cdf(high)
    return upper - (0.0 if low is None else spread.cdf(low))
