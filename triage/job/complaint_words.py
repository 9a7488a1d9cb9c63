"""The owner's words at intake: which state of the adapter they mean.

The words are held against the phrases of ``complaint_words.toml`` by likeness (rapidfuzz), in any of their languages; the answer
is a proposal that the technician confirms or overrides.
"""

import tomllib
from functools import cache
from pathlib import Path
from typing import NamedTuple

from triage.board.evidence import STATES
from triage.errors import EntryError

PHRASES = Path(__file__).with_name("complaint_words.toml")
LEAST = 60.0
"""Likeness below which a phrase does not count, of 100."""
LONGEST = 300
"""Words beyond this many characters are not looked at."""


class Meaning(NamedTuple):
    """One state that the words may mean."""

    state: str
    """One of STATES; empty when the words tell no state, such as "broken"."""
    likeness: float
    """Of the nearest phrase, 0 to 100."""
    phrase: str
    """That phrase."""


@cache
def phrases(path: Path = PHRASES) -> tuple[tuple[str, str], ...]:
    """(phrase, state) pairs. Raises EntryError for a state that does not exist."""
    says = tomllib.loads(path.read_text("utf-8"))["says"]
    for state in says:
        if state and state not in STATES:
            raise EntryError(f"{path.name}, says", repr(state), f"one of {', '.join(STATES)}")
    return tuple((plain, state) for state, found in says.items() for plain in found)


def meanings(words: str) -> tuple[Meaning, ...]:
    """The states that an owner's words may mean, the likeliest first, one line each; empty when nothing is near.

    >>> meanings("LED keeps blinking")[0].state, meanings("lädt nicht mehr!")[0].state, meanings("xyzzy")
    ('pulsing', 'dead', ())
    """
    from rapidfuzz import utils

    said = utils.default_process(words[:LONGEST])
    best: dict[str, Meaning] = {}
    for phrase, state in phrases():
        likeness = _likeness(said, utils.default_process(phrase))
        if likeness >= LEAST and (state not in best or likeness > best[state].likeness):
            best[state] = Meaning(state, likeness, phrase)
    return tuple(sorted(best.values(), key=lambda one: -one.likeness))


def state_of(words: str) -> str:
    """The state that words plainly mean; empty when they tell none."""
    found = meanings(words)
    return found[0].state if found else ""


def _likeness(said: str, phrase: str) -> float:
    """Likeness of what was said and a phrase, 0 to 100.

    The mean of the two orders of strictness: all words alike wherever they stand, and the shared words alone, which a long story
    around a phrase does not lower. Phrases of one short word must be met as a word.
    """
    from rapidfuzz import fuzz

    if " " not in phrase and len(phrase) <= 5:
        return 90.0 if phrase in said.split() and said != phrase else 100.0 * (said == phrase)
    return (float(fuzz.token_sort_ratio(said, phrase)) + float(fuzz.token_set_ratio(said, phrase))) / 2.0
