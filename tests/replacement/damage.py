"""Damaged markings, as they come off a bench: the model of the measurements behind the search.

Eleven kinds: exact; lower case or another separator; one or two characters unreadable; look-alikes confused; prefix
missing; one to three last characters missing; one typing error; and three pairs of these. The mix is assumed, not
measured on a bench (common practice, no source).
"""

import random
import re
import string

CONFUSIONS = {
    "0": "OQD", "O": "0QD", "Q": "0O", "D": "0O", "1": "IL", "I": "1L", "L": "1I", "5": "S", "S": "5", "8": "B", "B": "8",
    "2": "Z", "Z": "2", "6": "G", "G": "6",
}
KINDS = (
    "exact", "case", "one unreadable", "two unreadable", "confusion", "no prefix", "cut end", "typing error",
    "no prefix, one unreadable", "no prefix, confusion", "cut end, confusion",
)
PREFIX = re.compile(r"^(?:[12][NS][A-D]?|[A-Z]{1,4})(?=[0-9A-Z]{3,})")
"""Registration or maker's prefix: 1N, 2SC, MJE, BZX ..."""


def damage(name: str, kind: str, source: random.Random) -> str | None:
    """A marking as read, with the damage of this kind; None where the name does not allow it (too short, no prefix)."""
    text = name.upper()
    for step in kind.split(", "):
        damaged = _STEPS[step](text, source)
        if damaged is None or len([char for char in damaged if char.isalnum()]) < 3:
            return None
        text = damaged
    return text


def _exact(text: str, source: random.Random) -> str | None:
    return text


def _case(text: str, source: random.Random) -> str | None:
    cut = source.randrange(1, len(text))
    return (text[:cut] + source.choice(" -/.") + text[cut:]).lower()


def _unreadable(count: int):
    def step(text: str, source: random.Random) -> str | None:
        places = [i for i, char in enumerate(text) if char.isalnum()]
        if len(places) < count + 3:
            return None
        chars = list(text)
        for place in source.sample(places, count):
            chars[place] = "?"
        return "".join(chars)

    return step


def _confusion(text: str, source: random.Random) -> str | None:
    places = [i for i, char in enumerate(text) if char in CONFUSIONS]
    if not places:
        return None
    chars = list(text)
    for place in source.sample(places, min(len(places), source.choice((1, 1, 2)))):
        chars[place] = source.choice(CONFUSIONS[chars[place]])
    return "".join(chars)


def _no_prefix(text: str, source: random.Random) -> str | None:
    match = PREFIX.match(text)
    return text[match.end():] if match else None


def _cut_end(text: str, source: random.Random) -> str | None:
    cut = source.choice((1, 2, 3))
    return text[:-cut] if len(text) - cut >= 4 else None


def _typing_error(text: str, source: random.Random) -> str | None:
    place = source.randrange(len(text))
    char = source.choice(string.ascii_uppercase + string.digits)
    kind = source.choice(("replace", "insert", "drop", "swap"))
    if kind == "replace":
        return text[:place] + char + text[place + 1:]
    if kind == "insert":
        return text[:place] + char + text[place:]
    if kind == "drop":
        return text[:place] + text[place + 1:]
    place = min(place, len(text) - 2)
    return text[:place] + text[place + 1] + text[place] + text[place + 2:]


_STEPS = {
    "exact": _exact, "case": _case, "one unreadable": _unreadable(1), "two unreadable": _unreadable(2),
    "confusion": _confusion, "no prefix": _no_prefix, "cut end": _cut_end, "typing error": _typing_error,
}


def damaged_queries(names: list[str], count: int, seed: int) -> list[tuple[str, str, str]]:
    """``count`` queries of each kind over these names: (query, damaged name, kind)."""
    source = random.Random(seed)
    queries = []
    for kind in KINDS:
        made = 0
        while made < count:
            name = source.choice(names)
            query = damage(name, kind, source)
            if query is not None:
                queries.append((query, name, kind))
                made += 1
    return queries
