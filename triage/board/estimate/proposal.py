"""Which family a board on the mat belongs to, from its label and what can be seen or counted."""

import math
from collections.abc import Iterable
from dataclasses import dataclass

from triage.board.estimate.practice import NORMAL_90
from triage.board.estimate.seen import Seen
from triage.board.estimate.template import Template, templates

LEAST_SHARE = 0.001
"""Nothing seen rules a family out altogether [-]: builders do what they like, and eyes err."""
TELLING = 1.5
"""A statement is given as a reason where it makes a family so much more or less likely than the average one [-]."""


@dataclass(frozen=True, slots=True)
class Proposal:
    """One family with its chance."""

    family: str
    title: str
    chance: float
    """All proposals together make 1 [-]."""
    reasons: tuple[str, ...]
    """What speaks for and against it, the most telling first."""


def propose_family(seen: Seen, power: float | None = None, known: Iterable[Template] | None = None) -> tuple[Proposal, ...]:
    """The families, likeliest first, with what speaks for and against each.

    power: rated output [W], None where the label cannot be read. The families count as equally frequent beforehand; what is
    seen is weighed by the share of a family's adapters that show it.
    """
    known = tuple(templates().values() if known is None else known)
    told = {template.family: _statements(template, seen, power) for template in known}
    weight = {family: math.prod(statements.values()) for family, statements in told.items()}
    total = sum(weight.values())
    found = [Proposal(one.family, one.title, weight[one.family] / total, _reasons(one.family, told)) for one in known]
    return tuple(sorted(found, key=lambda proposal: -proposal.chance))


def _statements(template: Template, seen: Seen, power: float | None) -> dict[str, float]:
    """Statement -> its share in the family, or density for the power."""
    look = template.look
    found = {}
    for feature in sorted(seen.present | seen.absent):
        if feature in look.features:
            share = look.features[feature]
            there = feature in seen.present
            found[feature if there else f"no {feature}"] = max(share if there else 1.0 - share, LEAST_SHARE)
    for name, number in seen.counts().items():
        found[f"{number} {name if number != 1 else name[:-1]}"] = max(look.counts.get(name, {}).get(number, 0.0), LEAST_SHARE)
    if power is not None:
        width = math.log(look.power_spread) / NORMAL_90
        found[f"{power:.3g} W"] = math.exp(-0.5 * (math.log(power / look.power) / width) ** 2) / width
    return found


def _reasons(family: str, told: dict[str, dict[str, float]]) -> tuple[str, ...]:
    """Statements that tell this family from the average one, in words."""
    rated = []
    for statement, share in told[family].items():
        shares = [other[statement] for other in told.values() if statement in other]
        factor = share / (sum(shares) / len(shares))
        if factor >= TELLING or factor <= 1.0 / TELLING:
            rated.append((abs(math.log(factor)), f"{statement}: {'for' if factor > 1.0 else 'against'} it"))
    return tuple(text for _, text in sorted(rated, reverse=True))
