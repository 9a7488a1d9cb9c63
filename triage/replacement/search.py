"""From a half-read marking to the parts it may be.

Type numbers, printed markings and type numbers without their registration prefix are compared with what was read
(``triage.replacement.alignment``); long lists are narrowed first (``triage.replacement.marking_index``). Equal scores are
ties and are told apart by measuring, not by us. Codes that carry a value (``104J``, ``T1A250V``) are decoded beside that
and offered as readings, never as a verdict.
"""

import re
from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from rapidfuzz import process
from rapidfuzz.distance import Levenshtein

from triage.replacement.alignment import UNREADABLE, WEIGHTS, cost, folded_marking, plain_marking, within
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.marking_index import INDEX_FROM, MarkingIndex, wanted_count
from triage.replacement.wording import figure, unit_of

BANDS = ((0.90, "probably"), (0.80, "possible"), (0.70, "weak: compare case and circuit"))
"""Least score of each band and what it means; below the last one a match is not shown."""
READ_AS_CODE = "read as a code"
"""Band of a match that is a decoded value and not a type of the catalog."""

_LEAST = BANDS[-1][0]
_PREFIX = re.compile(r"(?:[12]N|2S[A-D]?|MJE|BZX|BZY|LM|UA|KA|MC|L)(?=[0-9A-Z]{3,})")
"""Registration and maker's prefixes that small bodies drop."""
_LONGEST_QUERY = 40
_RATINGS_TOLD = 4
_SHORT_CODE = 3
"""Marks of so few characters repeat between makers, on chips above all: a candidate, never a verdict."""
_MOST_OF_A_CODE = 0.89
"""Score of a short or decoded code at best: it stays below the first band."""
_CODES_REPEAT = "short codes repeat between makers: a candidate, not a verdict"
_LEAST_READABLE = 2
_SAME = 1e-9
_WEIGHTED = {"weights": WEIGHTS}


@dataclass(frozen=True, slots=True)
class Match:
    """One part that a marking may stand for."""

    type: str
    """Type number, or the decoded value."""
    part_class: str
    score: float
    """Agreement, 1 at best."""
    band: str
    """What the score is worth: ``probably``, ``possible``, ``weak ...`` or ``read as a code``."""
    text: str
    """What else to know: how many tie, the chief ratings, other prints."""
    alike: int = 1
    """How many parts found agree equally well: more than one is a tie, told apart by measuring."""


class MarkingList:
    """Entries with their markings, searchable: the catalog, one class of it, or a supplier's list."""

    def __init__(self, entries: Iterable[Sequence[str]]) -> None:
        """``entries``: for each entry its type number and then its other markings, as printed."""
        owners: dict[str, list[int]] = {}
        self._plain: list[str] = []
        self._lengths: list[int] = []
        for number, markings in enumerate(entries):
            self._lengths.append(len(markings[0]))
            for plain in _plain_keys(markings):
                folded = folded_marking(plain)
                owned = owners.get(folded)
                if owned is None:
                    owners[folded] = [number]
                    self._plain.append(folded if folded == plain else plain)
                elif owned[-1] != number:
                    owned.append(number)
        self.keys = list(owners)
        """Folded markings that are compared, each once."""
        self._owners = list(owners.values())
        self._index = MarkingIndex(self.keys) if len(self.keys) >= INDEX_FROM else None

    def __len__(self) -> int:
        return len(self._lengths)

    def nearest(self, read: str, limit: int = 10) -> list[tuple[int, float, int]]:
        """The entries most like a marking as typed: (number, score, how many score the same), best first.

        At equal score the one that agrees without folding look-alikes comes first, then the shorter, then the earlier.
        """
        folded = folded_marking(read[:_LONGEST_QUERY])
        if len(folded) - folded.count(UNREADABLE) < _LEAST_READABLE:
            return []
        if self._index is None:
            places: Sequence[int] = range(len(self.keys))
        else:
            places = self._index.nearest(folded, wanted_count(len(self.keys)))
        return self._ranked(self._priced(folded, places, limit), plain_marking(read), len(folded), limit)

    def nearest_of_all(self, read: str, limit: int = 10) -> list[tuple[int, float, int]]:
        """As ``nearest``, comparing every marking: what the index is measured against."""
        folded = folded_marking(read[:_LONGEST_QUERY])
        if len(folded) - folded.count(UNREADABLE) < _LEAST_READABLE:
            return []
        return self._ranked(self._priced(folded, range(len(self.keys)), limit), plain_marking(read), len(folded), limit)

    def _priced(self, folded: str, places: Sequence[int], limit: int) -> dict[int, tuple[float, int]]:
        """Entries that agree well enough to be shown: number -> (price, key that agrees best).

        Keys come in the order of a bound on their price; once ``limit`` entries are found, only what may be no dearer than
        the last of them is priced.
        """
        keys, owners = self.keys, self._owners
        chosen = keys if len(places) == len(keys) else [keys[place] for place in places]
        unreadable = folded.count(UNREADABLE)
        most = (1.0 - _LEAST) * len(folded) + _SAME
        farthest = within(most, unreadable)
        best: dict[int, tuple[float, int]] = {}
        for key, distance, at in process.extract(
            folded, chosen, scorer=Levenshtein.distance, scorer_kwargs=_WEIGHTED, processor=None, limit=len(chosen),
            score_cutoff=farthest,
        ):
            if distance > farthest:
                break
            price = cost(folded, key)
            if price <= most:
                place = places[at]
                for number in owners[place]:
                    if number not in best or price < best[number][0]:
                        best[number] = (price, place)
                if len(best) >= limit:
                    bar = sorted([price for price, _ in best.values()])[limit - 1] + _SAME
                    if bar < most:
                        most = bar
                        farthest = within(most, unreadable)
        return best

    def _ranked(
        self, best: dict[int, tuple[float, int]], plain: str, length: int, limit: int
    ) -> list[tuple[int, float, int]]:
        order = sorted([(round(price, 6), number, place) for number, (price, place) in best.items()])
        if not order:
            return []
        counts = Counter([price for price, _, _ in order])
        bar = order[min(limit, len(order)) - 1][0]
        front = sorted(
            [
                (price, Levenshtein.distance(plain, self._plain[place]), self._lengths[number], number)
                for price, number, place in order if price <= bar
            ]
        )
        return [(number, 1.0 - price / length, counts[price]) for price, _, _, number in front[:limit]]


def search(catalog: Catalog, marking: str, part_class: str | None = None, limit: int = 10) -> list[Match]:
    """The parts that a marking as read may be, best first; with ``part_class`` only those of that class.

    ``?`` stands for a character that cannot be read. Value codes are decoded and added as readings of their own.
    Never raises for any text; an empty list means that nothing in the catalog comes near.
    """
    listed = _listed(catalog, part_class)
    parts = catalog.parts(part_class)
    is_short = len(plain_marking(marking)) <= _SHORT_CODE
    matches = []
    for number, agreement, alike in listed.nearest(marking, limit):
        part, told = parts[number], _told(catalog, parts[number], alike)
        if is_short:
            agreement, told = min(agreement, _MOST_OF_A_CODE), f"{_CODES_REPEAT}; {told}"
        matches.append(Match(part.type, part.part_class, agreement, band_of(agreement), told, alike))
    codes = _decoded(marking, part_class)
    if matches and matches[0].score >= _MOST_OF_A_CODE:
        return (matches + codes)[: max(limit, len(matches))]
    return (codes + matches)[:limit]


def band_of(agreement: float) -> str:
    """What a score is worth in words; empty below the least band."""
    return next((name for least, name in BANDS if agreement >= least), "")


def _listed(catalog: Catalog, part_class: str | None) -> MarkingList:
    listed = catalog.search_lists.get(part_class or "")
    if listed is None:
        listed = MarkingList([(part.type, *part.markings) for part in catalog.parts(part_class)])
        catalog.search_lists[part_class or ""] = listed
    return listed


def _plain_keys(markings: Sequence[str]) -> list[str]:
    """Plain keys of one entry: as printed, and without the prefix that small bodies drop."""
    keys = []
    for marking in markings:
        plain = plain_marking(marking)
        if plain:
            keys.append(plain)
            match = _PREFIX.match(plain)
            if match:
                keys.append(plain[match.end():])
    return keys


def _told(catalog: Catalog, part: CatalogPart, alike: int) -> str:
    """Ties first, then the chief ratings and the body, then other prints."""
    words = []
    if alike > 1:
        words.append(f"one of {alike} that agree equally: tell them apart by measuring")
    ratings = [
        figure(part.numbers[key], unit_of(key)) if key in part.numbers else part.text(key)
        for key in catalog.file(part.part_class).needed[:_RATINGS_TOLD]
    ]
    words.append(", ".join(word for word in (*ratings, part.text("case")) if word))
    if part.markings:
        words.append("printed " + ", ".join(part.markings[:3]))
    return "; ".join(words)


def _decoded(marking: str, part_class: str | None) -> list[Match]:
    from triage.replacement.marking_codes import decode

    return [
        Match(reading.text, reading.part_class, _MOST_OF_A_CODE / (1 + reading.doubt), READ_AS_CODE, reading.note or reading.text)
        for reading in decode(marking)
        if part_class is None or reading.part_class == part_class
    ]
