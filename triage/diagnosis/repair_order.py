"""Which repair to try first when readings no longer separate them, and when one more observation still pays.

With one fault and repairs that cost c and cure with chance p, trying them by falling p / c is cheapest on
average (Kadane, Simon, Annals of Statistics 5 (1977) 237-255; Heckerman, Breese, Rommelse, Decision-theoretic
troubleshooting, Comm. ACM 38(3) (1995) 49-57).
"""

from collections.abc import Sequence


def order(chances: Sequence[float], minutes: Sequence[float]) -> list[int]:
    """Places of the repairs in the order in which to try them; equal ones stay as they are."""
    return sorted(range(len(chances)), key=lambda i: -chances[i] / minutes[i])


def expected_minutes(chances: Sequence[float], minutes: Sequence[float], sequence: Sequence[int]) -> float:
    """Expected minutes until the cure when the repairs are tried in this sequence, each with its test [min].
    """
    total, left = 0.0, 1.0
    for i in sequence:
        total += minutes[i] * left
        left -= chances[i]
    return total


def after_observation(chances: Sequence[float], minutes: Sequence[float], outcomes: Sequence[Sequence[float]]) -> float:
    """Expected minutes of repair after an observation that costs nothing [min].

    outcomes: p(outcome | fault) for each fault, in the order of ``chances``.
    """
    total = 0.0
    for k in range(len(outcomes[0])):
        weights = [p * row[k] for p, row in zip(chances, outcomes, strict=True)]
        seen = sum(weights)
        if seen > 0:
            after = [w / seen for w in weights]
            total += seen * expected_minutes(after, minutes, order(after, minutes))
    return total
