"""The board with another part in a position: its type, and the values and ratings that the catalog gives for
it.

Which catalog figure is which rating of a part is said by the table of positions; a figure the catalog does
not give is taken out of the ratings rather than kept from the dead part, and a value that is not given stays
as it was.
"""

from dataclasses import replace

from triage.board.part import Board, Part
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.positions import position_of


def with_part(board: Board, ref: str, fitted: CatalogPart) -> Board:
    """The board with a catalog part in the position of ``ref``. Raises KeyError when the board has no such
    part."""
    old = board.part(ref)
    return replace(board, parts=tuple(_replaced(board, part, fitted) if part is old else part for part in board.parts))


def _replaced(board: Board, old: Part, fitted: CatalogPart) -> Part:
    position = position_of(board, old, fitted.part_class) or position_of(board, old)
    ratings, values = dict(old.ratings), dict(old.value)
    for need in position.needs if position else ():
        figure = fitted.number(need.key, *need.alternatives)
        for name in (need.rating, need.like_rating):
            if name and figure is not None:
                ratings[name] = abs(figure)
            elif name:
                ratings.pop(name, None)
        for name in need.value:
            if name in values and figure is not None:
                values[name] = figure
    return replace(old, type=fitted.type, ratings=ratings, value=values, origin="marking")
