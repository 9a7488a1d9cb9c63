"""How well a marking as read agrees with a marking as printed.

Both are folded first: capitals, no separators, characters that look alike on a small body counted as one. The agreement is
an alignment priced by what happens on a bench: an unreadable character costs little, a missing prefix or end costs little
for each character, anything else costs a whole character. Measured on damaged markings, see tests/bench/bench_search.py.
"""

from typing import cast

from rapidfuzz.distance import OSA, Levenshtein

_Edits = list[tuple[str, int, int]]
"""(edit, place in what was read, place in what is printed)"""

UNREADABLE = "?"
"""What one types for a character that cannot be read."""

COST_UNREADABLE = 0.12
"""An unreadable character standing for a printed one."""
COST_LEAD = 0.22
"""A printed character missing before the first one read: small bodies drop the registration prefix."""
COST_TAIL = 0.18
"""A printed character missing after the last one read: ranks and packing suffixes."""
COST_INNER = 0.9
"""A printed character missing in the middle."""
COST_WRONG = 1.0
"""A character read that is not printed there."""
COST_SWAPPED = 1.0
"""Two neighbours in the wrong order."""
COST_NO_CHARACTER = 0.6
"""An unreadable character where nothing is printed."""

_LOOK_ALIKE = str.maketrans("OQDILSBZG", "000115826")


class _Kept(dict[int, str | None]):
    """Translation that keeps A-Z, 0-9 and the unreadable mark and drops the rest."""

    def __missing__(self, code: int) -> None:
        return None


_PLAIN = _Kept({ord(char): char.upper() for char in "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789?"})
_FOLDED = _Kept({code: char.translate(_LOOK_ALIKE) for code, char in _PLAIN.items() if char})


def plain_marking(text: str) -> str:
    """A marking in capitals without separators: ``2sc-1815 gr`` -> ``2SC1815GR``."""
    return text.translate(_PLAIN)


def folded_marking(text: str) -> str:
    """A plain marking with look-alikes counted as one: O Q D as 0, I L as 1, S 5, B 8, Z 2, G 6."""
    return text.translate(_FOLDED)


def score(read: str, printed: str) -> float:
    """Agreement of two folded markings, 1 when they are the same, below 0 when they have nothing in common.

    Two alignments are priced, one that prefers to agree at the front and one at the end; the cheaper counts. Dividing by
    the characters read makes a long suffix cost as little as it means.

    >>> score("1N47?3A", "1N4733A") > 0.98, score("C1815", "25C1815") > 0.9
    (True, True)
    """
    return 1.0 - cost(read, printed) / len(read) if read else 0.0


def cost(read: str, printed: str) -> float:
    """Price of turning the printed folded marking into the one read."""
    if printed.startswith(read):
        return COST_TAIL * (len(printed) - len(read))
    if printed.endswith(read):
        return COST_LEAD * (len(printed) - len(read))
    return _aligned(read, printed)


def _aligned(read: str, printed: str) -> float:
    price, is_inner = 0.0, False
    end, wrong = len(read), 0
    edits = cast(_Edits, Levenshtein.editops(read, printed).as_list())
    for edit, at, _ in edits:
        if edit == "insert":
            if at == end:
                price += COST_TAIL
            elif at == 0:
                price += COST_LEAD
            else:
                price += COST_INNER
                is_inner = True
        elif read[at] == UNREADABLE:
            price += COST_UNREADABLE if edit == "replace" else COST_NO_CHARACTER
        else:
            price += COST_WRONG
            wrong += 1
    if wrong and price > COST_SWAPPED and end == len(printed) and OSA.distance(read, printed) == 1:
        return COST_SWAPPED
    if is_inner or (wrong and UNREADABLE in read):
        return min(price, _backward(read, printed))
    return price


WEIGHTS = (round(100 * COST_TAIL), round(100 * COST_WRONG), round(100 * COST_WRONG))
"""Hundredths of a character for one added, lost or exchanged: an edit distance that runs in C++ and bounds the price."""


def within(price: float, unreadable: int) -> int:
    """The weighted edit distance above which ``cost`` is surely more than ``price``.

    Every edit is priced at least as in WEIGHTS, except that each of the ``unreadable`` characters may cost as little as
    COST_UNREADABLE where the distance counts a whole one. (A swap, priced below its two edits, lies inside for every
    price that would show it: that takes four characters, and 0.3 of four is more than its weighted distance.)
    """
    return int(100 * price + 1e-6) + round(100 * (COST_WRONG - COST_UNREADABLE)) * unreadable


def _backward(read: str, printed: str) -> float:
    price, end, backwards = 0.0, len(read), read[::-1]
    edits = cast(_Edits, Levenshtein.editops(backwards, printed[::-1]).as_list())
    for edit, at, _ in edits:
        if edit == "insert":
            price += COST_LEAD if at == end else COST_TAIL if at == 0 else COST_INNER
        elif backwards[at] == UNREADABLE:
            price += COST_UNREADABLE if edit == "replace" else COST_NO_CHARACTER
        else:
            price += COST_WRONG
    return price
