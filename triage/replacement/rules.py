"""The hard rules: which of them a candidate fails, with numbers.

A candidate that fails one is never offered. A rating nobody has read passes no rule that needs it, and in a safety
position a value typed from memory passes none until the sheet or the print on the body has been read. Each rule is a small
function of (candidate, demand, original); ``check`` runs them all.
"""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from triage.replacement.bodies import body_fit, pin_fit
from triage.replacement.catalog import plain_number
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.demand import Demand, Requirement
from triage.replacement.wording import figure

FROM_MEMORY = "from memory"
"""Name of the rule against values from memory: reading the sheet or the body settles it."""
OLD_PART = "old part"
"""Name of the rule where the dead part's own figure counts and is not known: reading its body or sheet settles it."""
READING_SETTLES = frozenset({FROM_MEMORY, OLD_PART})
"""Rules that a look at the sheet or at a body settles, as against ratings that are too low."""


@dataclass(frozen=True, slots=True)
class Refusal:
    """One rule a candidate fails."""

    rule: str
    """``class``, ``rating``, ``value``, ``word``, ``unknown``, ``body``, ``pins``, ``gain``, ``from memory`` or ``old part``."""
    key: str
    """Catalog field, empty where the rule is about the whole part."""
    text: str
    """The reason in one line, with the figures."""


Rule = Callable[[CatalogPart, Demand, CatalogPart | None], Iterator[Refusal]]


def check(candidate: CatalogPart, demand: Demand, original: CatalogPart | None = None) -> tuple[Refusal, ...]:
    """Every rule that the candidate fails in this position; empty: it may be offered.

    ``original`` is the dead part as the catalog knows it, by default the demand's own.
    """
    old = original if original is not None else demand.original
    return tuple(refusal for rule in RULES for refusal in rule(candidate, demand, old))


def value_of(candidate: CatalogPart, requirement: Requirement, original: CatalogPart | None = None) -> tuple[str, float] | None:
    """The field and figure that answer a requirement, or None when the candidate does not give one.

    Where the old part's own figure set the bound, the same field is compared: a typical gate charge says nothing
    against a guaranteed one.
    """
    keys = (requirement.key, *requirement.alternatives)
    if original is not None and requirement.alternatives and requirement.minimum is None:
        keys = tuple(key for key in keys if original.number(key) is not None)[:1] or keys
    for key in keys:
        value = candidate.number(key)
        if value is not None:
            return key, value
    return None


def _class_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """Only the classes of the position; where there are none, only the very same type."""
    if candidate.part_class in demand.classes:
        return
    if not demand.classes:
        if plain_number(candidate.type) != plain_number(demand.original_type):
            wanted = demand.original_type or "the original type"
            yield Refusal("class", "", f"only {wanted} itself may be fitted as {demand.role}")
        return
    allowed = " or ".join(name.replace("_", " ") for name in demand.classes)
    yield Refusal("class", "", f"{candidate.part_class.replace('_', ' ')} in a place for {allowed}")


def _undecided_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """What the place itself demands must be known before anything can be promised."""
    for requirement in demand.requirements:
        if requirement.undecided:
            rule = OLD_PART if requirement.readable else "unknown"
            yield Refusal(rule, requirement.key, f"{requirement.text} of the place: {requirement.reason}")


def _figure_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """Each figure between its minimum and maximum; an unknown one fails."""
    for requirement in demand.requirements:
        if requirement.undecided or requirement.words or requirement.rule:
            continue
        found = value_of(candidate, requirement, original)
        if found is None:
            if not requirement.if_known:
                yield Refusal("unknown", requirement.key, f"{requirement.text} not known; needs {_bounds(requirement)}")
            continue
        key, value = found
        low, high = requirement.minimum, requirement.maximum
        told = f"{requirement.text} {figure(value, requirement.unit)}; needs {_bounds(requirement)}"
        if low is not None and high is not None:
            if not low <= value <= high:
                yield Refusal("value", key, told)
        elif (low is not None and abs(value) < low) or (high is not None and abs(value) > high):
            yield Refusal("rating", key, told)


def _word_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """Each word among those the place takes; an unknown one fails."""
    for requirement in demand.requirements:
        if not requirement.words or requirement.undecided:
            continue
        word = candidate.text(requirement.key)
        if not word:
            yield Refusal("unknown", requirement.key, f"{requirement.text} not known; needs {' or '.join(requirement.words)}")
        elif word not in requirement.words:
            yield Refusal("word", requirement.key, f"{requirement.text} {word}; needs {' or '.join(requirement.words)}")


def _gain_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """The gain band must meet the old gain, and its middle lie within a factor of two of it (inside the old band)."""
    for requirement in demand.requirements:
        low, high = requirement.minimum, requirement.maximum
        if not requirement.rule or low is None or high is None:
            continue
        wanted = f"needs {low:.3g} to {high:.3g} ({requirement.reason})"
        least, most = candidate.number("hfe_min"), candidate.number("hfe_max")
        if least is None or most is None:
            yield Refusal("unknown", "hfe_min", f"current gain band not known; {wanted}")
            continue
        spread = 2.0 if requirement.rule == "gain near" else 1.0
        middle = math.sqrt(least * most)
        if least > high or most < low or not low / spread <= middle <= high * spread:
            yield Refusal("gain", "hfe_min", f"current gain {least:g} to {most:g}; {wanted}")


def _body_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    fit = body_fit(candidate, original)
    if not fit.fits:
        yield Refusal("body", "case", fit.text)


def _pin_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """A pin order that cannot be reached by turning the part is refused; some places take no turned part either."""
    if original is None or candidate.part_class != original.part_class:
        return
    fit = pin_fit(candidate, original)
    if fit.verdict == "different" or (demand.same_pins and fit.verdict == "turned"):
        yield Refusal("pins", "pins", fit.text or "another pin order")
    elif demand.same_pins and demand.safety and fit.verdict == "unsure":
        yield Refusal("pins", "pins", fit.text)


def _memory_rule(candidate: CatalogPart, demand: Demand, original: CatalogPart | None) -> Iterator[Refusal]:
    """In a safety position the sheet or the print on the body decides, never a value from memory."""
    if not demand.safety:
        return
    told: set[str] = set()
    for requirement in demand.requirements:
        if requirement.words:
            key, shown = requirement.key, candidate.text(requirement.key)
        else:
            found = value_of(candidate, requirement, original)
            if found is None:
                continue
            key, shown = found[0], figure(found[1], requirement.unit)
        if shown and key not in told and candidate.is_remembered(key):
            told.add(key)
            yield Refusal(
                FROM_MEMORY, key,
                f"{requirement.text} {shown} is from memory; safety part: read it in the sheet or on the body first",
            )


def _bounds(requirement: Requirement) -> str:
    """The bounds of a requirement with the way they were reached."""
    words = []
    if requirement.minimum is not None:
        words.append(f"at least {figure(requirement.minimum, requirement.unit)}")
    if requirement.maximum is not None:
        words.append(f"at most {figure(requirement.maximum, requirement.unit)}")
    return " and ".join(words) + (f" ({requirement.reason})" if requirement.reason else "")


RULES: tuple[Rule, ...] = (
    _class_rule, _undecided_rule, _figure_rule, _word_rule, _gain_rule, _body_rule, _pin_rule, _memory_rule,
)
"""Every hard rule, in the order their refusals are shown."""
