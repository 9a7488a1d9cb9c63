"""The drawing of a board with what matters now marked on it, by signs first and by colour second.

Parts and nodes stand in a drawing as words. A mark takes the place of the character beside the word, so that
the drawing keeps its shape: ``?Q1`` is suspected, ``*Q1`` most of all, ``Q1!`` runs past its derated limit,
``+bulk+`` is where the red lead goes and ``-pgnd-`` where the black one goes.
"""

import re
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field

from triage.app.lines import Line, Span, plain

_WORD = re.compile(r"[A-Za-z][A-Za-z0-9_]*")
_ALONG = " -─━═"
"""Characters that carry a wire, or nothing, on to the right."""
_DOWN = frozenset(" |│┃║")
"""Characters that carry a wire, or nothing, down."""


@dataclass(frozen=True, slots=True)
class Marks:
    """What is to be marked."""

    suspects: Sequence[str] = ()
    """Refs, most suspected first."""
    over: Collection[str] = field(default_factory=frozenset)
    """Refs of parts with a stress past rating or derated limit."""
    red: str = ""
    """Node of the red lead."""
    black: str = ""
    """Node of the black lead."""

    def around(self, word: str) -> tuple[str, str, str]:
        """The sign left of a word, the sign right of it, and the mark of the word; empty signs where there
        is none."""
        if word == self.red:
            return "+", "+", "red"
        if word == self.black:
            return "-", "-", "black"
        right = "!" if word in self.over else ""
        if word in self.suspects:
            return "*" if word == self.suspects[0] else "?", right, "suspect"
        return "", right, "over" if right else ""


def marked(drawing: str, marks: Marks) -> tuple[Line, ...]:
    """The drawing as lines, with a column of margin where a word stands at an edge and needs room for its
    marks."""
    rows = [row.rstrip() for row in drawing.expandtabs(4).strip("\n").splitlines()]
    margin = " " if any(row[:1].isalnum() for row in rows) else ""
    return tuple(_marked_row(f"{margin}{row}{' ' if row[-1:].isalnum() else ''}", marks) for row in rows)


def _marked_row(row: str, marks: Marks) -> Line:
    chars = list(row)
    regions: list[tuple[int, int, str]] = []
    for found in _WORD.finditer(row):
        left, right, mark = marks.around(found.group())
        if not mark:
            continue
        start, end = found.span()
        if left and not row[start - 1].isalnum():
            chars[start - 1], start = left, start - 1
        if right and end < len(row) and not row[end].isalnum():
            chars[end], end = right, end + 1
        regions.append((start, end, mark))
    spans: list[Span] = []
    at = 0
    for start, end, mark in regions:
        spans.append(Span("".join(chars[at:start])))
        spans.append(Span("".join(chars[max(start, at) : end]), mark))
        at = end
    spans.append(Span("".join(chars[at:])))
    return tuple(span for span in spans if span.text)


def squeezed(drawing: str, columns: int, rows: int) -> str:
    """The drawing made to fit, as far as it can be without losing a word or a joint.

    Columns that only carry wires on are left out until ``columns`` is met, and rows that only carry wires
    down until ``rows`` is met; a drawing that fits is left alone.
    """
    lines = [row.rstrip() for row in drawing.expandtabs(4).strip("\n").splitlines()]
    bars = [number for number, row in enumerate(lines) if row and set(row) <= _DOWN]
    for number in reversed(bars[: max(len(lines) - rows, 0)]):
        del lines[number]
    width = max(map(len, lines), default=0)
    full = [row.ljust(width) for row in lines]
    idle = [at for at in range(1, width) if all(row[at] == row[at - 1] and row[at] in _ALONG for row in full)]
    excess = max(width - columns, 0)
    step = max(len(idle) / excess, 1.0) if excess else 1.0
    gone = {idle[int(number * step)] for number in range(min(excess, len(idle)))}
    return "\n".join("".join(char for at, char in enumerate(row) if at not in gone).rstrip() for row in full)


def rows_of(drawing: Sequence[Line], word: str) -> tuple[int, ...]:
    """Numbers of the rows in which the word stands."""
    return tuple(number for number, row in enumerate(drawing) if word in _WORD.findall(plain(row)))


def pin_list(pins: Mapping[str, Sequence[str]], width: int) -> str:
    """A drawing for a board that has none: each node with the part pins that meet there."""
    margin = max(map(len, pins), default=0)
    rows = []
    for node, places in pins.items():
        row = f"{node.rjust(margin)} --"
        for place in places:
            if len(row) + len(place) + 4 > width:
                rows.append(row)
                row = " " * margin + "   "
            row += f" {place} -"
        rows.append(row)
    return "\n".join(rows)
