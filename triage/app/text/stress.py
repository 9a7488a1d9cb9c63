"""Stresses in lines: each with its bar against derated limit and rating, and in full for the one under the
cursor."""

from collections.abc import Sequence

from triage.app.bars import stress_bar
from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, columns, line, wrapped
from triage.job.views import StressView
from triage.quantities import engineering

_SIGNS = {"over rating": ("!!", "over"), "over derated limit": ("! ", "near"), "ok": ("ok", "good")}


_ORDER = ("over rating", "over derated limit", "ok", "rating unknown")


def worst_first(found: Sequence[StressView]) -> tuple[StressView, ...]:
    """The stresses by verdict, then by their share of the rating."""
    return tuple(sorted(found, key=lambda one: (_ORDER.index(one.verdict) if one.verdict in _ORDER else 9, -(one.ratio or 0.0))))


def amount(value: float | None, unit: str) -> str:
    """A value in engineering form, or a dash."""
    if value is None:
        return "-"
    return engineering(value, unit) if unit else f"{value:.3g}"


def quantity_words(quantity: str) -> str:
    """``peak_voltage`` -> ``peak voltage``."""
    return quantity.replace("_", " ")


def stress_head(width: int) -> Line:
    """Head of the list."""
    bar = " " * (_bar_width(width) + 2)
    text = f"   {'part':5} {'stress':16} {'value':>9}  {bar} {'limit':>9} {'rating':>9} share"
    return line(Span(text.ljust(width), "head"))


def _bar_width(width: int) -> int:
    return max(min(width - 66, 50), 8)


def stress_line(one: StressView, width: int, glyphs: Glyphs) -> Line:
    """One row: sign, part, stress, value, bar, limit, rating, share of the rating."""
    sign, mark = _SIGNS.get(one.verdict, ("? ", "quiet"))
    bar = _bar_width(width)
    limit = one.limit / one.rating if one.limit is not None and one.rating else None
    drawn = stress_bar(one.ratio, limit, bar, glyphs, mark) if one.ratio is not None else line(f"[{'':{bar}}]")
    left = columns(
        [
            (Span(sign, mark), 2),
            (Span(one.ref, "strong"), 5),
            (quantity_words(one.quantity), 16),
            (amount(one.value, one.unit), -9),
        ]
    )
    share = "-" if one.ratio is None else f"{one.ratio * 100:.0f} %"
    right = columns([(amount(one.limit, one.unit), -9), (amount(one.rating, one.unit), -9), (Span(share, mark), -5)])
    return (*left, Span("  "), *drawn, Span(" "), *right)


def stress_detail(one: StressView, width: int) -> tuple[Line, ...]:
    """All that is known of one stress."""
    head = line(
        Span(f"{one.ref} {one.role}: ", "strong"),
        f"{quantity_words(one.quantity)} ",
        Span(amount(one.value, one.unit), "strong"),
        f" at {one.condition}; " if one.condition else "; ",
        Span(one.verdict, _SIGNS.get(one.verdict, ("", ""))[1]),
    )
    limits = f"derated limit {amount(one.limit, one.unit)}, rating {amount(one.rating, one.unit)}"
    source = f"; derating after: {one.source}" if one.source else ""
    return (head, *wrapped(limits + source, width))


def before_after(
    before: Sequence[StressView], after: Sequence[StressView], ref: str, width: int, following: str
) -> tuple[Line, ...]:
    """Stresses of one part with the old and the new one fitted; ``following``: what to do next."""
    then = {(one.ref, one.quantity): one for one in before}
    rows = [line(Span(f"stresses of {ref}: before -> now; {following}".ljust(width), "head"))]
    for one in after:
        if one.ref != ref:
            continue
        old = then.get((one.ref, one.quantity))
        was = "-" if old is None or old.ratio is None else f"{old.ratio * 100:.0f} %"
        now = "-" if one.ratio is None else f"{one.ratio * 100:.0f} %"
        sign, mark = _SIGNS.get(one.verdict, ("? ", "quiet"))
        rows.append(
            line(
                Span(sign + " ", mark),
                quantity_words(one.quantity).ljust(18),
                amount(one.value, one.unit).rjust(10),
                f" of {amount(one.rating, one.unit)}: ".ljust(16),
                f"{was} -> ",
                Span(now, mark),
                f"  {one.verdict}",
            )
        )
    return tuple(rows)


def with_it(before: Sequence[StressView], after: Sequence[StressView], ref: str, width: int) -> tuple[Line, ...]:
    """In a line or two, the shares of rating of one part as they are and as they would be."""
    then = {(one.ref, one.quantity): one.ratio for one in before}
    told = []
    for one in after:
        if one.ref == ref and one.ratio is not None:
            was = then.get((one.ref, one.quantity))
            old = "-" if was is None else f"{was * 100:.0f} %"
            told.append(f"{quantity_words(one.quantity)} {old} -> {one.ratio * 100:.0f} %")
    return wrapped("with it: " + "; ".join(told), width, rest="  ") if told else ()
