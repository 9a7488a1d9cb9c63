"""Answers as lines of text for a person at a terminal."""

import math
from collections.abc import Sequence

from triage.commands.output import columns, percent
from triage.job.report import SAYS, stress_text
from triage.job.views import (
    NO_PART_FAULT,
    CandidateView,
    CombinationView,
    DemandView,
    JobView,
    MatchView,
    ReadingExpected,
    StockView,
    StressView,
    SuspectView,
    WorthView,
)
from triage.quantities import engineering
from triage.units import UNITS

MOST_SUSPECTS = 12
"""Suspects listed: those after them share what is left."""
SETS = 6
"""Sets of parts named that could together explain the odd readings; the others are counted."""


def suspect_lines(suspects: Sequence[SuspectView]) -> list[str]:
    """Suspects, likeliest first."""
    rows = [
        (percent(one.probability), one.ref or "-", one.mode, " ".join(one.collateral), one.role, one.stress)
        for one in suspects[:MOST_SUSPECTS]
    ]
    rest = sum(one.probability for one in suspects[MOST_SUSPECTS:])
    lines = columns(("chance", "part", "fault", "took with it", "role", "stress past its limit"), rows)
    return lines + ([f"{len(suspects) - MOST_SUSPECTS} others together {percent(rest)}"] if rest else [])


def verdict_lines(view: JobView) -> list[str]:
    """What the job has come to."""
    verdict = view.verdict
    lines = [f"verdict: {SAYS[verdict.status]}"]
    if verdict.status == "open":
        return lines
    if verdict.ref:
        lines[0] += f": {verdict.ref} {verdict.mode.replace('_', ' ')}, {percent(verdict.probability)}"
    if verdict.collateral:
        lines.append("it took with it: " + ", ".join(verdict.collateral))
    if verdict.repair:
        lines.append("replace: " + ", ".join(verdict.repair))
    if verdict.why:
        lines.append("why: " + verdict.why)
    if verdict.rivals:
        lines.append("not ruled out: " + ", ".join(verdict.rivals))
    if verdict.left:
        more = f", and {len(verdict.left) - SETS} more" if len(verdict.left) > SETS else ""
        lines.append("the odd readings could come from: " + ", ".join(verdict.left[:SETS]) + more)
    return lines + [f"  {text}" for text in verdict.evidence]


def worth_lines(worth: WorthView) -> list[str]:
    """Whether the repair is worth while."""
    lines = [worth.reason]
    rows = [(one.choice, "barred" if math.isinf(one.cost) else f"{one.cost:.2f}", one.text) for one in worth.options]
    return lines + columns(("way out", "cost", "how it comes about"), rows) + [f"design: {text}" for text in worth.upgrades]


def next_lines(view: JobView) -> list[str]:
    """The next reading, or the verdict and what the gates wait for."""
    one = view.suggestion
    if one is None:
        waits = [f"first: {text}" for text in view.waits_for] if view.verdict.status == "open" else []
        return [*verdict_lines(view), *waits]
    lines = [f"{one.function} {one.plus} {one.minus} {one.condition}   ({one.minutes:.1f} min)", one.reason]
    if one.hazard:
        lines.append("mind: " + one.hazard)
    rows = [(outcome.text, percent(outcome.probability), outcome.says) for outcome in one.outcomes]
    return lines + columns(("outcome", "chance", "would mean"), rows)


def view_lines(view: JobView) -> list[str]:
    """A job after an entry: what was noted, what leads, what comes next."""
    lines = [f"{view.id}: {view.message}" if view.message else view.id]
    if view.suspects:
        lead = view.suspects[0]
        name = f"{lead.ref} {lead.mode}" if lead.ref else NO_PART_FAULT
        lines.append(f"stage {view.stage}; leading suspect {name}, {percent(lead.probability)}")
    return lines + next_lines(view)


def stress_lines(stresses: Sequence[StressView]) -> list[str]:
    """Stresses by part."""
    rows = [(one.ref, one.role, stress_text(one), one.condition, one.source) for one in stresses]
    return columns(("part", "role", "stress", "worst at", "source of the limit"), rows)


def demand_lines(demand: DemandView) -> list[str]:
    """What a position asks for."""
    rows = [(one.text, _bounds(one.minimum, one.maximum, one.unit), one.reason, one.source) for one in demand.requirements]
    lines = [f"{demand.ref} {demand.role}" + (": safety part, like for like only" if demand.safety_part else "")]
    lines += columns(("asks for", "limits", "because", "source"), rows) if rows else []
    return lines + ([demand.note] if demand.note else [])


def _bounds(low: float | None, high: float | None, unit: str) -> str:
    def show(value: float) -> str:
        return engineering(value, unit) if unit in UNITS else f"{value:.4g} {unit}".strip()

    if low is not None and high is not None:
        return f"{show(low)} to {show(high)}"
    if low is not None:
        return f"at least {show(low)}"
    return f"at most {show(high)}" if high is not None else ""


def candidate_lines(candidates: Sequence[CandidateView]) -> list[str]:
    """Catalog parts for a position, what to watch with each behind it: body, pins with their drawing, order number."""
    rows = [
        (one.type, one.part_class, f"{one.score:.2f}", _stock(one.stock, one.where), _price(one.price),
         "; ".join(one.margins if one.accepted else one.refusals), one.confidence)
        for one in candidates
    ]  # fmt: skip
    head, *lines = columns(("type", "class", "score", "stock", "price", "margins or refusals", "confidence"), rows)
    return [head, *(text for line, one in zip(lines, candidates, strict=True) for text in (line, *_indented(one.notes)))]


def _stock(quantity: int, where: str) -> str:
    return f"{quantity} in {where}" if quantity and where else str(quantity) if quantity else "-"


def _price(price: float | None) -> str:
    return "-" if price is None else f"{price:.2f}"


def _indented(lines: Sequence[str]) -> list[str]:
    return [f"    {line}" for line in lines]


def combination_lines(combinations: Sequence[CombinationView]) -> list[str]:
    """Combinations, each with its sharing."""
    if not combinations:
        return ["no combination: a safety part, or none that passes every rule"]
    return [
        text
        for one in combinations
        for text in (one.text + (" (in the drawers)" if one.in_stock else ""), *_indented(one.arithmetic))
    ]


def stock_lines(stock: Sequence[StockView]) -> list[str]:
    """The drawers."""
    rows = [
        (one.type, str(one.quantity), one.where or "-", _price(one.price), one.part_class or "not in the catalog", one.read)
        for one in stock
    ]
    return columns(("type", "number", "drawer", "price", "class", "ratings"), rows)


def match_lines(matches: Sequence[MatchView]) -> list[str]:
    """Catalog parts a marking may mean."""
    return columns(
        ("type", "class", "match", "ratings"),
        [(one.type, one.part_class, f"{one.score:.0f} {one.band}", one.text) for one in matches],
    )


def expected_lines(expected: Sequence[ReadingExpected]) -> list[str]:
    """Readings to expect."""
    rows = [
        (one.function, one.plus, one.minus, one.condition, one.text,
         f"{engineering(one.low, one.unit)} to {engineering(one.high, one.unit)}")
        for one in expected
    ]  # fmt: skip
    return columns(("function", "plus", "minus", "condition", "reading", "90 % of boards"), rows)
