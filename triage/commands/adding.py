"""``triage add JOB KIND ...``: one entry typed as words.

A table says for each kind what follows it and which call of the bench takes it. Options are ``--name value``;
everything else stands in its place, a negative reading too.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from triage.errors import EntryError

if TYPE_CHECKING:
    from triage.job.bench import Bench
    from triage.job.views import JobView


@dataclass(frozen=True, slots=True)
class Kind:
    """One kind of entry as it is typed."""

    places: tuple[str, ...]
    """What follows, in order; a name in brackets may be left out."""
    options: dict[str, str]
    """Option -> its value when it is not given."""
    take: "Callable[[Bench, dict[str, str]], JobView]"


def _yes(text: str) -> bool:
    words = {"on": True, "yes": True, "off": False, "no": False}
    if text not in words:
        raise EntryError("power", f"{text!r}", "on or off")
    return words[text]


def _complain(bench: "Bench", said: dict[str, str]) -> "JobView":
    from triage.board.evidence import STATES
    from triage.job.complaint_words import state_of

    words = said["words"]
    state = said["state"] or (words if words in STATES else state_of(words))
    if state not in STATES:
        wrong = f"{said['state']!r} is no state" if said["state"] else f"{words!r} tells no state"
        raise EntryError("complaint", wrong, "one of " + ", ".join(STATES), "give your own words and --state STATE")
    return bench.complain(said["words"], state, said["condition"] or said["load"] or "full")


KINDS: dict[str, Kind] = {
    "complaint": Kind(("words", "[load]"), {"state": "", "condition": ""}, _complain),
    "sign": Kind(("sign", "[ref]"), {}, lambda bench, said: bench.see(said["sign"], said["ref"])),
    "look": Kind(("item", "answer", "[ref]"), {}, lambda bench, said: bench.look(said["item"], said["answer"], said["ref"])),
    "reading": Kind(
        ("function", "plus", "minus", "value"),
        {"condition": "", "instrument": ""},
        lambda bench, said: bench.read(
            said["function"], said["plus"], said["minus"], said["condition"] or "cold", said["value"], said["instrument"]
        ),
    ),
    "skip": Kind(
        ("function", "plus", "minus", "[reason]"),
        {"condition": ""},
        lambda bench, said: bench.skip(
            said["function"], said["plus"], said["minus"], said["condition"] or "cold", said["reason"]
        ),
    ),
    "undo": Kind((), {}, lambda bench, said: bench.undo()),
    "hunch": Kind(("ref",), {}, lambda bench, said: bench.suspect(said["ref"])),
    "ack": Kind(("caution",), {}, lambda bench, said: bench.acknowledge(said["caution"])),
    "power": Kind(("on|off",), {}, lambda bench, said: bench.power(_yes(said["on|off"]))),
    "fitted": Kind(("ref", "type"), {}, lambda bench, said: bench.fit(said["ref"], said["type"])),
    "repaired": Kind(("result",), {}, lambda bench, said: bench.repaired(said["result"])),
    "retest": Kind(("line", "value|yes|no"), {}, lambda bench, said: bench.retest(said["line"], said["value|yes|no"])),
    "closed": Kind(("verdict",), {}, lambda bench, said: bench.close(said["verdict"])),
    "returned": Kind(("reason",), {}, lambda bench, said: bench.returned(said["reason"])),
    "note": Kind(("text",), {}, lambda bench, said: bench.note(said["text"])),
}
"""Kind of entry -> how it is typed."""


def usage(kind: str) -> str:
    """How an entry of this kind is typed."""
    options = "".join(f" [--{option} {option.upper()}]" for option in KINDS[kind].options)
    return " ".join((kind, *KINDS[kind].places)) + options


def parse_entry(kind: str, words: Sequence[str]) -> dict[str, str]:
    """The words after a kind by their names. Raises EntryError that shows how the entry is typed.

    Between the nodes and the value of a reading its condition may stand, as the suggestion names it.
    """
    if kind not in KINDS:
        raise EntryError("add", f"{kind!r} is no kind of entry", "one of " + ", ".join(KINDS))
    rule = KINDS[kind]
    said = dict(rule.options)
    placed: list[str] = []
    rest = list(words)
    while rest:
        word = rest.pop(0)
        if word.startswith("--") and word[2:].partition("=")[0] in rule.options:
            name, equals, value = word[2:].partition("=")
            if not equals and not rest:
                raise EntryError("add", f"no value after {word}", usage(kind))
            said[name] = value if equals else rest.pop(0)
        else:
            placed.append(word)
    if "condition" in said and kind != "complaint" and len(placed) >= 4 and _is_condition(placed[3]):
        said["condition"] = placed.pop(3)
    least = sum(not place.startswith("[") for place in rule.places)
    if not least <= len(placed) <= len(rule.places):
        raise EntryError(f"add {kind}", f"{len(placed)} words after it", usage(kind))
    placed += [""] * (len(rule.places) - len(placed))
    return said | dict(zip((place.strip("[]") for place in rule.places), placed, strict=True))


def _is_condition(word: str) -> bool:
    from triage.board.probe import CONDITIONS

    return word in CONDITIONS


def take_entry(bench: "Bench", kind: str, words: Sequence[str]) -> Any:
    """Enter it and return the new view."""
    return KINDS[kind].take(bench, parse_entry(kind, words))
