"""Bars made of characters: a share, a stress against its derated limit and rating, a row of shares over
time."""

from collections.abc import Sequence

from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, line


def share_bar(share: float, width: int, glyphs: Glyphs) -> str:
    """A share of 0 to 1 as a bar of ``width`` cells; anything above nothing fills at least one cell."""
    filled = min(width, max(round(share * width), 1 if share > 0 else 0))
    return glyphs.fill * filled + glyphs.rest * (width - filled)


def stress_bar(ratio: float, limit: float | None, width: int, glyphs: Glyphs, mark: str, span: float = 1.25) -> Line:
    """A stress as a share of its rating, with ``:`` at the derated limit and ``|`` at the rating.

    Parameters
    ----------
    ratio : stress over rating [-]
    limit : derated limit over rating [-], None when there is none
    width : cells of the bar
    mark : mark of the filled part
    span : ratio at the right end of the bar [-]; a larger ratio ends in ``>``
    """
    filled = min(width, max(round(ratio / span * width), 1 if ratio > 0 else 0))
    cells = [glyphs.fill] * filled + [" "] * (width - filled)
    if limit is not None:
        cells[min(width - 1, round(limit / span * width))] = ":"
    cells[min(width - 1, round(1 / span * width))] = "|"
    if ratio > span:
        cells[-1] = ">"
    text = "".join(cells)
    return line("[", Span(text[:filled], mark), text[filled:], "]")


def ramp(shares: Sequence[float], glyphs: Glyphs) -> str:
    """Shares of 0 to 1, one character each, the fuller the larger; anything above 1 % is visible."""
    top = len(glyphs.ramp) - 1
    levels = (min(top, max(round(share * top), 1 if share > 0.01 else 0)) for share in shares)
    return "".join(glyphs.ramp[level] for level in levels)
