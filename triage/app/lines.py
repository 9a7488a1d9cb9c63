"""Lines of marked text: what every panel of the app shows, as plain data that needs no terminal to be tested.

A line is a row of spans; a span is text with the name of a mark (``suspect``, ``over``, ``red`` ...) that a
style sheet turns into an attribute of the terminal. Text is never markup: nothing in it is read as a style or
as a terminal escape.
"""

import textwrap
from collections.abc import Iterable
from typing import NamedTuple

from rich.cells import cell_len, set_cell_size

MARKS = (
    "strong",
    "quiet",
    "head",
    "key",
    "suspect",
    "over",
    "near",
    "good",
    "bad",
    "red",
    "black",
    "fill",
    "cursor",
)
"""Names of marks; each has a component class ``panel--<mark>`` in ``widgets/panel.tcss``."""


class Span(NamedTuple):
    """A run of text with one mark."""

    text: str
    mark: str = ""
    """One of MARKS, or empty."""
    action: str = ""
    """Action of the app that a mouse click runs, or empty."""


Line = tuple[Span, ...]


def line(*parts: str | Span) -> Line:
    """A line of spans; plain strings become spans without a mark, empty ones are left out."""
    spans = (part if isinstance(part, Span) else Span(part) for part in parts)
    return tuple(span for span in spans if span.text)


def merged(row: Line) -> Line:
    """The line with neighbouring spans of the same mark and action joined: fewer style changes to send."""
    spans: list[Span] = []
    for span in row:
        if spans and spans[-1][1:] == span[1:]:
            spans[-1] = spans[-1]._replace(text=spans[-1].text + span.text)
        else:
            spans.append(span)
    return tuple(spans)


def plain(row: Line) -> str:
    """The text of a line without its marks."""
    return "".join(span.text for span in row)


def width_of(row: Line) -> int:
    """Columns a line takes in the terminal."""
    return sum(cell_len(span.text) for span in row)


def clip(row: Line, width: int, more: str = "~") -> Line:
    """The line cut to ``width`` columns; a cut is shown by ``more`` in the last column."""
    if width_of(row) <= width:
        return row
    kept: list[Span] = []
    left = width - len(more)
    for span in row:
        cells = cell_len(span.text)
        if cells >= left:
            kept.append(span._replace(text=set_cell_size(span.text, max(left, 0))))
            break
        kept.append(span)
        left -= cells
    return line(*kept, Span(more, "quiet"))


def drop(row: Line, columns: int) -> Line:
    """The line without its first columns."""
    kept: list[Span] = []
    for span in row:
        cells = cell_len(span.text)
        if columns >= cells:
            columns -= cells
            continue
        kept.append(span._replace(text=span.text[columns:]))
        columns = 0
    return tuple(kept)


def fit(text: str, width: int, more: str = "~") -> str:
    """``text`` in exactly ``width`` columns: padded, or cut with ``more`` at its end."""
    if cell_len(text) <= width:
        return set_cell_size(text, width)
    return set_cell_size(text, max(width - len(more), 0)) + more[: max(width, 0)]


def apart(left: Line, right: Line, width: int) -> Line:
    """Two lines in one of ``width`` columns, the second at its right end; the first gives way when there is
    no room."""
    right = clip(right, width)
    room = width - width_of(right)
    left = clip(left, max(room - 1, 0))
    return (*left, Span(" " * (room - width_of(left))), *right)


def wrapped(text: str, width: int, mark: str = "", first: str = "", rest: str = "") -> tuple[Line, ...]:
    """``text`` broken at spaces into lines of at most ``width`` columns, each with its lead-in."""
    rows = textwrap.wrap(text, max(width, 8), initial_indent=first, subsequent_indent=rest) or [first]
    return tuple(line(Span(row, mark)) for row in rows)


def columns(cells: Iterable[tuple[str | Span, int]], gap: int = 1) -> Line:
    """Cells with their widths as one line; a negative width sets the text to the right."""
    spans: list[str | Span] = []
    for cell, width in cells:
        span = cell if isinstance(cell, Span) else Span(cell)
        text = fit(span.text, abs(width))
        if width < 0 and cell_len(span.text) < -width:
            text = " " * (-width - cell_len(span.text)) + span.text
        spans += [span._replace(text=text), " " * gap]
    return line(*spans[:-1])
