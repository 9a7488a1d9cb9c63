"""What a technician types into the reading field: a value, or one of a few words.

Values stay text: the bench reads them. Here only the words are told apart, so that one hand on the number pad
will do.
"""

from typing import NamedTuple

from triage.board.probe import COLD_FUNCTIONS, CONDITIONS, LIVE_FUNCTIONS, Probe

_OPEN_LINE = ("ol", "o.l", "o.l.", "o", "*", "inf", "open")
_SKIP = ("skip", "s")
_NO_REACH = ("can't reach", "cant reach", "cannot reach", "c")
_COMMANDS = {
    "undo": ("undo", "u"),
    "menu": ("/",),
    "other": ("+",),
    "on": ("on", "power"),
    "off": ("off", "unplug", "unplugged"),
    "stop": ("stop",),
    "go": ("go", "go on"),
}
"""What is meant -> the words for it."""


class Typed(NamedTuple):
    """What was meant."""

    kind: str
    """``reading``, ``skip``, ``undo``, ``menu``, ``other`` (a form for any reading), ``on``, ``off``, ``stop``, ``go``
    or ``nothing``."""
    text: str = ""
    """The value as typed, or the reason of a skip."""
    probe: Probe | None = None
    """The reading named in the line, or None for the suggested one."""


def understand(text: str) -> Typed:
    """Tell a value from a word.

    >>> understand("4k7").kind, understand("can't reach").text, understand("*").text
    ('reading', 'cannot reach', 'OL')
    >>> understand("ohms bulk pgnd 4k7").probe
    Probe(function='ohms', plus='bulk', minus='pgnd', condition='cold')
    """
    text = " ".join(text.split())
    word = text.lower()
    if not word:
        return Typed("nothing")
    if word in _OPEN_LINE:
        return Typed("reading", "OL")
    if word in _NO_REACH:
        return Typed("skip", "cannot reach")
    if word in _SKIP:
        return Typed("skip", "skipped")
    if word.startswith(("skip ", "s ")):
        return Typed("skip", text.split(" ", 1)[1])
    kind = next((kind for kind, words in _COMMANDS.items() if word in words), "")
    if kind:
        return Typed(kind)
    return _whole_reading(text) or Typed("reading", text)


def _whole_reading(text: str) -> Typed | None:
    """``FUNCTION PLUS MINUS [CONDITION] VALUE`` typed in one line, or None."""
    words = text.split(" ")
    if len(words) < 4 or words[0].lower() not in COLD_FUNCTIONS + LIVE_FUNCTIONS:
        return None
    function, plus, minus, *rest = words
    condition = rest.pop(0) if rest[0] in CONDITIONS else "cold"
    value = " ".join(rest)
    value = "OL" if value.lower() in _OPEN_LINE else value
    return Typed("reading", value, Probe(function.lower(), plus, minus, condition))
