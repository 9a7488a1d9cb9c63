"""Whether a body fits the place of another, and how its pins stand compared with the old ones.

The groups of bodies are in ``bodies.toml``. Pin orders come from the catalog as text, sometimes with the note that makers
differ; then every order named is kept and none is taken for granted.
"""

import re
import tomllib
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

from triage.replacement.catalog_part import CatalogPart
from triage.replacement.wording import fit_of

LEAD_SLACK = 0.05
"""A lead may be thicker than the old one by this much and still pass its hole [mm]."""

_TABLE = Path(__file__).with_name("bodies.toml")
_PIN_NAMES = ("E", "B", "C", "G", "D", "S", "IN", "GND", "OUT", "ADJ", "REF", "A", "K", "A1", "A2", "+", "-", "~")


@dataclass(frozen=True, slots=True)
class BodyGroup:
    """Cases that fit the same holes."""

    name: str
    cases: tuple[str, ...]
    tab: bool = False
    """Bolted to a heatsink, so that the part cannot be turned."""
    also: tuple[str, ...] = ()
    """Groups that may replace this one."""
    also_note: str = ""
    refusal: str = ""


@dataclass(frozen=True, slots=True)
class BodyFit:
    """How a body fits the old one's place."""

    fits: bool
    text: str
    """Why not, or what to watch; empty when there is nothing to say."""


@dataclass(frozen=True, slots=True)
class PinFit:
    """How the pins of a part stand compared with the old one's."""

    verdict: str
    """``same``, ``turned`` (fits when turned by half a turn), ``unsure`` (makers differ), ``different`` or ``unknown``."""
    text: str
    drawing: str = ""
    """Both pin orders drawn as text; empty when they are the same."""


@cache
def body_groups() -> tuple[BodyGroup, ...]:
    """The groups of ``bodies.toml``."""
    groups = []
    for record in tomllib.loads(_TABLE.read_text(encoding="utf-8"))["group"]:
        listed: dict[str, Any] = {
            key: tuple(value) if isinstance(value, list) else value for key, value in record.items()
        }
        groups.append(BodyGroup(**listed))
    return tuple(groups)


def group_of(case: str) -> BodyGroup:
    """The group of a case; a case in no group is a group of its own."""
    plain = case.partition(" (")[0].partition(",")[0].strip()
    for group in body_groups():
        if plain in group.cases:
            return group
    return BodyGroup(name=plain or case, cases=(plain,))


def body_fit(candidate: CatalogPart, original: CatalogPart | None) -> BodyFit:
    """Whether the candidate's body goes where the original's was; with either unknown: to be compared by eye."""
    had, case = original.text("case") if original else "", candidate.text("case")
    if not had or not case:
        size = fit_of(candidate)
        return BodyFit(True, f"compare body and pitch with the board{': ' + size if size else ''}")
    old, new = group_of(had), group_of(case)
    if new.name != old.name:
        if new.name in old.also:
            return BodyFit(True, old.also_note)
        return BodyFit(False, old.refusal or f"body {case} in place of {had}")
    assert original is not None
    lead, old_lead = candidate.number("lead_dia_mm"), original.number("lead_dia_mm")
    if lead is not None and old_lead is not None and lead > old_lead + LEAD_SLACK:
        return BodyFit(False, f"leads of {lead:g} mm do not pass holes for {old_lead:g} mm")
    pitch, old_pitch = candidate.number("lead_pitch_min_mm"), original.number("lead_pitch_min_mm")
    if pitch is not None and old_pitch is not None and pitch > old_pitch:
        return BodyFit(True, f"longer body: needs a hole spacing of {pitch:g} mm, the old one {old_pitch:g} mm")
    return BodyFit(True, "")


def pin_orders(text: str) -> tuple[tuple[str, ...], ...]:
    """Every pin order a catalog text names: ``E C B or B C E`` -> (E, C, B), (B, C, E)."""
    orders: list[tuple[str, ...]] = []
    for piece in re.split(r"\bor\b|;", re.sub(r"\([^)]*\)", " ", text)):
        words = [word for word in re.split(r"[\s,]+", piece) if not word.isdigit()]
        order = tuple(word for word in words if word in _PIN_NAMES)
        if len(order) >= 2 and len(order) == len([word for word in words if word]):
            orders.append(order)
    return tuple(dict.fromkeys(orders))


def pin_fit(candidate: CatalogPart, original: CatalogPart | None) -> PinFit:
    """Compares the pin orders of two parts and draws them where they differ."""
    had, has = original.text("pins") if original else "", candidate.text("pins")
    if not has or not had:
        return PinFit("unknown", f"pins: {has}; compare with the board" if has else "")
    if had == has and len(pin_orders(had)) <= 1:
        return PinFit("same", "")
    old, new = pin_orders(had), pin_orders(has)
    if not old or not new:
        return PinFit("unsure", f"pin order depends on the maker ({has}): compare with the board", _drawing(had, has))
    if len(old) > 1 or len(new) > 1:
        possible = set(old) & set(new) or {order[::-1] for order in old} & set(new)
        if possible:
            text = "makers differ in the pin order: find the pins with a tester before fitting"
            return PinFit("unsure", text, _drawing(had, has))
        return PinFit("different", f"pin order {has} in place of {had}", _drawing(had, has))
    if old[0] == new[0]:
        return PinFit("same", "")
    if old[0][::-1] == new[0] and not group_of(candidate.text("case")).tab:
        return PinFit("turned", "turn it by half a turn: the printed side faces the other way", _drawing(had, has))
    return PinFit("different", f"pin order {has} in place of {had}", _drawing(had, has))


def _drawing(had: str, has: str) -> str:
    """Both parts seen from the printed side, leads down."""
    blocks = [_body("old part", had), _body("new part", has)]
    return "\n".join("    ".join(lines).rstrip() for lines in zip(*blocks, strict=True))


def _body(title: str, pins: str) -> list[str]:
    orders = pin_orders(pins)
    names = orders[0] if orders else ("?", "?", "?")
    width = 5 * len(names) + 1
    feet = "".join(f"{name:^5}" for name in names)
    second = " or ".join("".join(f"{name:^5}" for name in order).strip() for order in orders[1:])
    lines = [
        f"{title:<{width}}", "." + "-" * (width - 2) + ".", "|" + "printed side"[: width - 2].center(width - 2) + "|",
        "'" + "-+---" * (len(names) - 1) + "-+-".ljust(width - 2 - 5 * (len(names) - 1), "-") + "'",
        " " + "  |  " * len(names), " " + feet, f"{'or ' + ' '.join(second.split()) if second else '':<{width}}",
    ]
    widest = max(map(len, lines))
    return [line.ljust(widest) for line in lines]
