"""Which of many markings are worth comparing with the one read.

Every pair of neighbouring characters (and of neighbours but one) is a row of bits, one bit a marking, kept in one Python
integer. A query adds up the rows of its own pairs in a carry chain over all markings at once, and takes those that share
most. No numpy is needed to ask; a list of more than ``NUMPY_FROM`` markings is built with it.
"""

import re
from collections.abc import Sequence

from triage.replacement.alignment import UNREADABLE

INDEX_FROM = 256
"""Fewer markings than this are compared one by one: the index would not pay."""
NUMPY_FROM = 30_000
"""From here on the rows are built with numpy."""
_HEAVY_SHARE = 48
"""A pair that fewer than one in this many markings have counts twice."""

_FEW_MORE = 12
"""So many above the count are compared rather than dropped."""
_LONG_ROW = 16_384
"""Rows of more bits are searched byte by byte, shorter ones as text of binary digits."""
_SET_BYTE = re.compile(rb"[^\x00]")
_SYMBOLS = "^$0123456789ACEFHJKMNPRTUVWXY"
"""What a folded marking can hold, with the marks for its start and end."""


_COUNTS = ((1_500, 28), (3_000, 40), (30_000, 100), (float("inf"), 400))


def wanted_count(size: int) -> int:
    """How many markings of a list of this size are compared in detail (coverage measured in tests/bench)."""
    return next(count for most, count in _COUNTS if size < most)


class MarkingIndex:
    """Folded markings, ready to be asked for those most like a query."""

    def __init__(self, markings: Sequence[str]) -> None:
        self.size = len(markings)
        rows = _rows_by_numpy(markings) if self.size >= NUMPY_FROM else _rows(markings)
        self._rows = {
            pair: (1 if row.bit_count() * _HEAVY_SHARE < self.size else 0, row) for pair, row in rows.items()
        }
        self._all = (1 << self.size) - 1

    def nearest(self, read: str, count: int) -> list[int]:
        """Numbers of ``count`` markings that share most pairs with the folded marking read; at a tie the first ones."""
        planes: list[int] = []
        rows = self._rows
        for pair in _pairs_read(read):
            if pair not in rows:
                continue
            plane, carry = rows[pair]
            while carry:
                while plane >= len(planes):
                    planes.append(0)
                had = planes[plane]
                planes[plane] = had ^ carry
                carry &= had
                plane += 1
        sure, tied = 0, self._all
        for bits in reversed(planes):
            more = sure | (tied & bits)
            if more.bit_count() > count:
                tied &= bits
            else:
                sure = more
                tied &= ~bits
        both = sure | tied
        if both.bit_count() <= count + _FEW_MORE:
            return _numbers(both, count + _FEW_MORE)
        chosen = _numbers(sure, count)
        return chosen + _numbers(tied, count - len(chosen))


def _numbers(bits: int, count: int) -> list[int]:
    """The places of the lowest ``count`` set bits."""
    if not bits or count < 1:
        return []
    found: list[int] = []
    if bits.bit_length() < _LONG_ROW:
        place = -1
        for gap in bin(bits)[:1:-1].split("1", count)[:-1]:
            place += len(gap) + 1
            found.append(place)
        return found
    data = bits.to_bytes((bits.bit_length() + 7) // 8, "little")
    for match in _SET_BYTE.finditer(data):
        if len(found) >= count:
            break
        place = 8 * match.start()
        byte = data[match.start()]
        while byte:
            low = byte & -byte
            found.append(place + low.bit_length() - 1)
            byte ^= low
    return found[:count]


def _pairs_printed(marking: str) -> set[str]:
    text = f"^{marking}$"
    pairs = {text[i:i + 2] for i in range(len(text) - 1)}
    pairs.update(text[i] + "_" + text[i + 2] for i in range(len(text) - 2))
    return pairs


def _pairs_read(read: str) -> set[str]:
    """Pairs of a query; across an unreadable character its two neighbours stand in."""
    text = f"^{read}$"
    if UNREADABLE not in read:
        return {text[i:i + 2] for i in range(len(text) - 1)}
    pairs = set()
    for i in range(len(text) - 1):
        if text[i] == UNREADABLE:
            continue
        if text[i + 1] != UNREADABLE:
            pairs.add(text[i:i + 2])
        elif i + 2 < len(text) and text[i + 2] != UNREADABLE:
            pairs.add(text[i] + "_" + text[i + 2])
    return pairs


def _rows(markings: Sequence[str]) -> dict[str, int]:
    width = (len(markings) + 7) // 8
    rows: dict[str, bytearray] = {}
    for number, marking in enumerate(markings):
        byte, bit = number >> 3, 1 << (number & 7)
        for pair in _pairs_printed(marking):
            row = rows.get(pair)
            if row is None:
                row = rows[pair] = bytearray(width)
            row[byte] |= bit
    return {pair: int.from_bytes(row, "little") for pair, row in rows.items()}


def _rows_by_numpy(markings: Sequence[str]) -> dict[str, int]:
    """The same rows for long lists: characters as a byte matrix, pairs as codes, one packed row a code."""
    import numpy as np

    texts = np.array([f"^{marking}$" for marking in markings], dtype="S")
    size, width = len(texts), texts.dtype.itemsize
    code_of = np.zeros(256, np.int16)
    for number, symbol in enumerate(_SYMBOLS, start=1):
        code_of[ord(symbol)] = number
    codes = code_of[texts.view(np.uint8).reshape(size, width)]
    base = len(_SYMBOLS) + 1
    rows: dict[str, int] = {}
    for gap, joint in ((1, ""), (2, "_")):
        first, second = codes[:, :-gap], codes[:, gap:]
        pair = np.where((first > 0) & (second > 0), first * base + second, 0).astype(np.int16)
        order = np.argsort(pair, axis=None, kind="stable")
        values = pair.ravel()[order]
        owners = (order // pair.shape[1]).astype(np.int32)
        starts = np.flatnonzero(np.diff(values, prepend=values[:1] - 1))
        for start, stop in zip(starts, [*starts[1:], len(values)], strict=True):
            value = int(values[start])
            if not value:
                continue
            flags = np.zeros(size, np.bool_)
            flags[owners[start:stop]] = True
            name = _SYMBOLS[value // base - 1] + joint + _SYMBOLS[value % base - 1]
            rows[name] = int.from_bytes(np.packbits(flags, bitorder="little").tobytes(), "little")
    return rows
