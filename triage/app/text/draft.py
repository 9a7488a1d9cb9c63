"""A board from its label in lines: what was seen, the families it may be, every estimated value with its range."""

from collections.abc import Sequence

from triage.app.lines import Line, Span, clip, columns, line, wrapped
from triage.app.text.stress import amount
from triage.job.draft_views import DraftPartView, DraftView, FamilyView, KnownView

MODEL_ONLY = ("saturation_factor", "damping_resistance", "coupling")
"""Values that no meter shows and no part carries."""
_MARKS = {"+": ("[+]", "good"), "-": ("[-]", "near"), "": ("[ ]", "quiet")}
_KNOWN = {"estimated": "near", "marking": "good", "measured": "good", "rating": "quiet"}
_HOW = "what is printed on it, or m and what was measured"
CORE = "core_area"
"""Key of the line for the cross-section of a core."""


def seen_line(feature: str, said: str) -> Line:
    """One thing to look for: seen, not there, not looked at, or how many."""
    sign, mark = _MARKS.get(said, (f"[{said}]", "good"))
    return line(Span(sign, mark), f" {feature}")


def family_line(found: FamilyView, width: int) -> Line:
    """One family with its chance."""
    return clip(line(Span(f"{found.chance * 100:3.0f} %", "strong"), f" {found.title}"), width)


def family_detail(found: FamilyView, width: int) -> tuple[Line, ...]:
    """Its name in full, and what speaks for and against it."""
    reasons = "; ".join(found.reasons) or "nothing seen tells it from the others"
    return (*wrapped(found.title, width, "strong"), *wrapped(reasons, width))


def draft_head(width: int) -> Line:
    """Head of the list of parts."""
    text = f"{'part':6}{'role or value':25}{'value':>12}  {'9 of 10 boards':24} known by"
    return line(Span(text[:width].ljust(width), "head"))


def draft_rows(found: DraftView, width: int) -> list[tuple[str, Line]]:
    """A row a part, then one a value; the key of a row is ``ref`` or ``ref key``."""
    rows: list[tuple[str, Line]] = []
    for part in found.parts:
        rows.append((part.ref, _part_line(part, width)))
        rows += [(f"{part.ref} {one.key}", _value_line(one, width)) for one in part.values if one.key not in MODEL_ONLY]
        if any(one.key == "primary_turns" for one in part.values):
            hint = Span("not measured: the usual one for the power", "quiet")
            rows.append((f"{part.ref} {CORE}", clip(line("      core area [mm2]".ljust(45), hint), width)))
    return rows


def _part_line(part: DraftPartView, width: int) -> Line:
    kind = part.type or "no marking read"
    return clip(columns([(Span(part.ref, "strong"), 6), (Span(part.role, "strong"), 39), (kind, max(width - 46, 12))], 0), width)


def _value_line(one: KnownView, width: int) -> Line:
    unit = "" if one.unit == "-" else one.unit
    name = _named(one)
    span = f"{amount(one.low, unit)} to {amount(one.high, unit)}" if one.high > one.low else ""
    cells: list[tuple[str | Span, int]] = [("", 6), (name, 25), (amount(one.value, unit), -12), ("", 2), (span, 24)]
    return clip(columns([*cells, (Span(one.known, _KNOWN[one.known]), 10)], 0), width)


def row_detail(found: DraftView, key: str, width: int) -> tuple[Line, ...]:
    """What can be typed for the row, and why its value was estimated so."""
    ref, _, name = key.partition(" ")
    part = next((one for one in found.parts if one.ref == ref), None)
    if part is None:
        return ()
    if not name:
        nodes = ", ".join(f"{pin} on {node}" for pin, node in part.pins)
        kind = part.kind.replace("_", " ")
        return wrapped(f"{ref} ({kind}): {nodes}. Type its marking, type number or value code.", width)
    if name == CORE:
        return wrapped("Cross-section of the middle leg of the core; with the turns it tells how far the core is driven.", width)
    one = next(value for value in part.values if value.key == name)
    why = f" Estimated: {one.reason}." if one.reason else ""
    how = "the count" if name.endswith("_turns") else "what is printed on it" if one.known == "rating" else _HOW
    return wrapped(f"{ref} {_named(one)}: type {how}.{why}", width)


def _named(one: KnownView) -> str:
    name = "ESR" if one.key == "esr" else one.key.replace("_", " ")
    return name + (" rating" if one.known == "rating" else "")


def check_lines(found: DraftView, width: int) -> tuple[Line, ...]:
    """What counted turns say, the odd ones first."""
    rows: list[Line] = []
    for one in sorted(found.checks, key=lambda check: check.fits):
        sign = Span("ok ", "good") if one.fits else Span("!! ", "over")
        note = f" ({one.note})" if one.note else ""
        rows.append(clip(line(sign, f"{one.text}: {one.shown}{note}"), width))
    return tuple(rows)


def unread(parts: Sequence[DraftPartView]) -> int:
    """Parts of which nothing was read or measured."""
    return sum(not part.type and all(one.known in ("estimated", "rating") for one in part.values) for part in parts)
