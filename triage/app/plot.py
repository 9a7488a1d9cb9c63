"""Plots made of characters: points -> dots -> text, with limits drawn as named lines.

Pure functions without a terminal. A cell holds 2 x 4 dots; with braille each dot is seen, in ASCII a cell
shows how high its dots lie. Axes carry round figures.
"""

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, line, merged
from triage.quantities import engineering

_DOT_BITS = ((0x01, 0x08), (0x02, 0x10), (0x04, 0x20), (0x40, 0x80))
"""Bits of a braille cell by dot row and column (Unicode Standard, block U+2800)."""
_FAR, _ROOM = 0.5, 0.05
"""Share of the highest value above which the lowest leaves zero out of the axis, and room left above and below [-]."""
_NEAR = 0.02
"""Share of the last x below which the first one counts as zero [-]."""
_FIGURE = 16
"""Columns for a figure on the lower axis."""
_HEIGHTS = "'-.,"
"""A lone dot of a cell in ASCII, by its row from the top."""


@dataclass(frozen=True, slots=True)
class Series:
    """One curve."""

    name: str
    points: tuple[tuple[float, float], ...]
    """x and y, x rising."""
    limit: bool = False
    """True for a limit that changes along the chart."""


@dataclass(frozen=True, slots=True)
class Level:
    """A horizontal line at a rating or a limit."""

    name: str
    value: float


Grid = list[list[int]]
"""Rows of cells, each cell a braille bit pattern."""


def round_ticks(low: float, high: float, count: int) -> tuple[float, ...]:
    """At most ``count`` + 1 values in 1-2-5 steps between ``low`` and ``high``."""
    if not high > low or count < 1:
        return (low,)
    raw = (high - low) / count
    power = 10.0 ** math.floor(math.log10(raw))
    step = next(power * factor for factor in (1, 2, 5, 10) if power * factor >= raw * (1 - 1e-9))
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    return tuple(round(number * step, 12) for number in range(first, last + 1))


def dots(
    points: Sequence[tuple[float, float]],
    columns: int,
    rows: int,
    x_range: tuple[float, float],
    y_range: tuple[float, float],
) -> Grid:
    """The grid of ``rows`` x ``columns`` cells with the points joined by straight lines; points that are no
    number break it."""
    grid: Grid = [[0] * columns for _ in range(rows)]
    before: tuple[int, int] | None = None
    for x, y in points:
        if not (math.isfinite(x) and math.isfinite(y)):
            before = None
            continue
        here = (_place(x, x_range, columns * 2), rows * 4 - 1 - _place(y, y_range, rows * 4))
        for column, row in _joined(before or here, here):
            if 0 <= column < columns * 2 and 0 <= row < rows * 4:
                grid[row // 4][column // 2] |= _DOT_BITS[row % 4][column % 2]
        before = here
    return grid


def _place(value: float, span: tuple[float, float], count: int) -> int:
    low, high = span
    if not high > low:
        return count // 2
    return round((value - low) / (high - low) * (count - 1))


def _joined(start: tuple[int, int], end: tuple[int, int]) -> Iterable[tuple[int, int]]:
    steps = max(abs(end[0] - start[0]), abs(end[1] - start[1]), 1)
    for step in range(steps + 1):
        yield (
            round(start[0] + (end[0] - start[0]) * step / steps),
            round(start[1] + (end[1] - start[1]) * step / steps),
        )


def grid_text(grid: Grid, braille: bool) -> tuple[str, ...]:
    """The grid as text, one string a row."""
    return tuple("".join(_cell(bits, braille) for bits in row) for row in grid)


def _cell(bits: int, braille: bool) -> str:
    if not bits:
        return " "
    if braille:
        return chr(0x2800 + bits)
    rows = [index for index, pair in enumerate(_DOT_BITS) if bits & (pair[0] | pair[1])]
    return _HEIGHTS[rows[0]] if len(rows) == 1 else ":" if len(rows) == 2 else "|"


def chart(
    series: Sequence[Series],
    levels: Sequence[Level],
    width: int,
    height: int,
    glyphs: Glyphs,
    x_unit: str = "",
    y_unit: str = "",
) -> tuple[Line, ...]:
    """Curves and limit lines in a frame of ``width`` x ``height`` characters with round figures along both
    axes.

    The first series is drawn plainly, the second as ``suspect``, limits in a mark of their own; limit lines carry their
    name at the right end. The upright axis begins at zero, unless everything lies far above it.
    """
    points = [point for curve in series for point in curve.points if all(map(math.isfinite, point))]
    if not points or width < 24 or height < 4:
        return (line(Span("nothing to draw", "quiet")),)
    first, last = min(x for x, _ in points), max(x for x, _ in points)
    x_range = (0.0 if 0.0 < first < _NEAR * last else first, last)
    y_range = _upright([y for _, y in points] + [level.value for level in levels])
    labels = 8
    columns, rows = width - labels - 1, height - 1
    canvas = _canvas(series, levels, columns, rows, x_range, y_range, glyphs)
    ticks = {rows - 1 - _place(y, y_range, rows * 4) // 4: y for y in round_ticks(*y_range, max(rows // 2, 1))}
    out = []
    for row in range(rows):
        label = f"{ticks[row]:.4g} {y_unit}" if row in ticks else ""
        out.append(line(Span(label.rjust(labels), "quiet"), "|", *canvas[row]))
    out.append(line(" " * (labels + 1), Span(_foot(x_range, columns, x_unit), "quiet")))
    return tuple(out)


def _upright(values: Sequence[float]) -> tuple[float, float]:
    """Range of the upright axis [unit of the values]."""
    low, high = min(values), max(values)
    if low > _FAR * high > 0.0:
        room = _ROOM * (high - low) or high
        return low - room, high + room
    return min(0.0, low), high * 1.02 or 1.0


def _foot(x_range: tuple[float, float], columns: int, unit: str) -> str:
    """Round figures along the lower axis, each under its place as far as there is room."""
    foot = ""
    for x in round_ticks(*x_range, max(columns // _FIGURE, 1)):
        text = engineering(x, unit, 4) if unit else f"{x:.4g}"
        at = min(max(_place(x, x_range, columns) - len(text) // 2, 0), columns - len(text))
        if at > len(foot) or not foot:
            foot = foot.ljust(at) + text
    return foot


def _canvas(
    series: Sequence[Series],
    levels: Sequence[Level],
    columns: int,
    rows: int,
    x_range: tuple[float, float],
    y_range: tuple[float, float],
    glyphs: Glyphs,
) -> list[Line]:
    cells: list[list[tuple[str, str]]] = [[(" ", "")] * columns for _ in range(rows)]
    names: dict[int, list[str]] = {}
    for level in levels:
        names.setdefault(rows - 1 - _place(level.value, y_range, rows * 4) // 4, []).append(level.name)
    for row in names:
        cells[row] = [(glyphs.rule, "near")] * columns
    for number, curve in enumerate(series):
        grid = grid_text(dots(curve.points, columns, rows, x_range, y_range), glyphs.braille)
        for row, text in enumerate(grid):
            for column, char in enumerate(text):
                if char != " ":
                    shown = char if glyphs.braille or number == 0 or curve.limit else "x"
                    cells[row][column] = (shown, "near" if curve.limit else "suspect" if number else "strong")
    for row, found in names.items():
        name = (" " + ", ".join(found))[-columns:]
        cells[row][columns - len(name) :] = [(char, "near") for char in name]
    return [merged(tuple(Span(char, mark) for char, mark in row)) for row in cells]
