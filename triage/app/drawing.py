"""The drawing of a board with what matters now marked on it, by signs first and by colour second.

Parts and nodes stand in a drawing as words. A mark takes the place of the character beside the word, so that
the drawing keeps its shape: ``?Q1`` is suspected, ``*Q1`` most of all, ``Q1!`` runs past its derated limit,
``{+bulk}`` is where the red lead goes, ``{-pgnd}`` where the black one goes, ``{R1}`` a part that is read alone.
"""

import re
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field
from itertools import groupby

from triage.app.lines import Line, Span, line, plain

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
    alone: str = ""
    """Ref of a part that is read alone, with one leg lifted: both leads go to it."""

    def around(self, word: str) -> tuple[str, str, str, str]:
        """Signs left and right of a word, the polarity of a lead, and the mark; all empty for a word without
        one."""
        if word in (self.red, self.black):
            return ("{", "}", "+", "red") if word == self.red else ("{", "}", "-", "black")
        if word == self.alone:
            return "{", "}", "", "red"
        right = "!" if word in self.over else ""
        if word in self.suspects:
            return "*" if word == self.suspects[0] else "?", right, "", "suspect"
        return "", right, "", "over" if right else ""


def marked(drawing: str, marks: Marks) -> tuple[Line, ...]:
    """The drawing as lines, with a column of margin where a word stands at an edge and needs room for its
    marks."""
    rows = [row.rstrip() for row in drawing.expandtabs(4).strip("\n").splitlines()]
    margin = " " if any(row[:1].isalnum() for row in rows) else ""
    return tuple(_marked_row(f"{margin}{row}{'  ' if row[-1:].isalnum() else ''}", marks) for row in rows)


def _marked_row(row: str, marks: Marks) -> Line:
    chars = list(row)
    regions: list[tuple[int, int, str]] = []
    for found in _WORD.finditer(row):
        left, right, polarity, mark = marks.around(found.group())
        if not mark:
            continue
        taken = regions[-1][1] if regions else 0
        before, after = _room(row, found.start(), taken, -1), _room(row, found.end(), len(row), 1)
        if polarity and before > 1:
            left += polarity
        elif polarity and after > 1:
            right = polarity + right
        left, right = left[: before if left else 0], right[:after]
        start, end = found.start() - len(left), found.end() + len(right)
        chars[start:end] = left + found.group() + right
        regions.append((start, end, mark))
    spans: list[Span] = []
    at = 0
    for start, end, mark in regions:
        spans += [Span("".join(chars[at:start])), Span("".join(chars[start:end]), mark)]
        at = end
    return line(*spans, "".join(chars[at:]))


def _room(row: str, edge: int, bound: int, step: int) -> int:
    """How many characters (up to 2) beside a word may carry its signs: neither of another word nor beyond the
    bound."""
    count = 0
    at = edge - 1 if step < 0 else edge
    while count < 2 and (bound <= at if step < 0 else at < bound) and not (row[at].isalnum() or row[at] == "_"):
        count += 1
        at += step
    return count


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
    for _ in range(max(width - columns, 0)):
        at = _idlest_column(full)
        if at is None:
            break
        full = [row[:at] + row[at + 1 :] for row in full]
    return "\n".join(row.rstrip() for row in full)


def _idlest_column(rows: list[str]) -> int | None:
    """The column that every row can spare, where the shortest run of wire or blank around it is longest; or
    None."""
    shortest = [min(lengths) for lengths in zip(*map(_runs, rows), strict=True)]
    best = max(shortest, default=0)
    return shortest.index(best) if best > 1 else None


def _runs(row: str) -> list[int]:
    """For each character the length of the run of its like that it stands in; 0 for what is neither wire nor
    blank."""
    lengths: list[int] = []
    for char, run in groupby(row):
        count = len(list(run))
        lengths += [count if char in _ALONG else 0] * count
    return lengths


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
