"""Charts in lines: the title with what each curve is, the curves with their limits, and what is to be known besides."""

from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, clip, line, wrapped
from triage.app.plot import Level, Series, chart
from triage.job.views import ChartView
from triage.quantities import engineering

_LEAST = 8
"""Fewest rows of one chart: below that it shows nothing."""


def charts_at_once(count: int, rows: int) -> int:
    """How many charts of ``count`` fit into ``rows`` at a readable height."""
    return max(min(count, rows // (2 * _LEAST)), 1)


def chart_lines(found: ChartView, width: int, rows: int, glyphs: Glyphs) -> tuple[Line, ...]:
    """One chart in exactly ``rows`` lines of ``width`` columns."""
    head = clip(line(Span(found.title.ljust(width), "head")), width)
    legend = _legend(found, glyphs)
    note = wrapped(found.note, width, "near")[:1] if found.note else ()
    curves = [Series(one.name, one.points) for one in found.curves]
    curves += [Series(one.name, one.points, limit=True) for one in found.edges]
    levels = [Level(f"{one.name} {engineering(one.value, found.y_unit)}", one.value) for one in found.levels]
    room = rows - 2 - len(note)
    drawn = chart(curves, levels, width, room, glyphs, found.x_unit, found.y_unit)
    filled = (*drawn, *(line() for _ in range(room - len(drawn))))
    return (head, clip(legend, width), *filled, *note)


def _legend(found: ChartView, glyphs: Glyphs) -> Line:
    """Which curve is which, with its lowest and highest value."""
    spans: list[str | Span] = []
    for number, one in enumerate(found.curves):
        sign = "x " if number and not glyphs.braille else ""
        spans += [Span(f"{sign}{one.name}", "suspect" if number else "strong"), f": {_span(found, number)}   "]
    if found.edges:
        spans.append(Span("window of the output", "near"))
    return line(*spans)


def _span(found: ChartView, number: int) -> str:
    values = [y for _, y in found.curves[number].points]
    if not values:
        return "no steady state"
    return f"{engineering(min(values), found.y_unit)} to {engineering(max(values), found.y_unit)}"
