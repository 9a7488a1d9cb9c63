"""Which characters the terminal can show, and how text is written with fewer of them.

Three levels: ``FULL`` (braille dots and blocks), ``BOX`` (line drawing only, as on the Linux console) and
``ASCII``. Text from files passes ``Glyphs.fold`` on its way to the screen: control characters and invisible
ones never reach the terminal, and what the level cannot show is written with its nearest plain letters.
"""

import unicodedata
from dataclasses import dataclass

_NAMED = {
    "\u03a9": "ohm",
    "\u2126": "ohm",
    "µ": "u",
    "μ": "u",
    "°": "deg",
    "±": "+-",
    "×": "x",
    "·": ".",
    "–": "-",
    "—": "-",
    "−": "-",
    "→": "->",
    "←": "<-",
    "≥": ">=",
    "≤": "<=",
    "…": "...",
    "²": "2",
    "³": "3",
    "‘": "'",
    "’": "'",
    "“": '"',
    "”": '"',
    "•": "*",
    "▲": "^",
    "▼": "v",
    "█": "#",
    "░": ".",
    "▸": ">",
    "≈": "~",
    "√": "sqrt",
    "Δ": "d",
    "○": "o",
    "●": "o",
}
_HORIZONTAL = "─━═╌┄╴╶╸╺"
_VERTICAL = "│┃║╎┆╵╷╹╻"


def _box_to_ascii(char: str) -> str:
    if char in _HORIZONTAL:
        return "-"
    return "|" if char in _VERTICAL else "+"


@dataclass(frozen=True, slots=True)
class Glyphs:
    """The signs of one level."""

    name: str
    box: bool
    """Line drawing characters can be shown."""
    braille: bool
    """Braille dots and blocks can be shown."""
    up: str
    down: str
    rule: str
    fill: str
    """Filled cell of a bar."""
    rest: str
    """Empty cell of a bar."""
    ramp: str
    """From nothing to full, for one cell that stands for a share."""

    def fold(self, text: str) -> str:
        """``text`` as this level can show it, without control, format and private characters."""
        if text.isascii() and text.isprintable():
            return text
        return "".join(map(self._fold_char, text))

    def _fold_char(self, char: str) -> str:
        if char == "\t":
            return " "
        if unicodedata.category(char)[0] == "C":
            return "?"
        if char.isascii() or (self.braille and char.isprintable()):
            return char
        if "─" <= char <= "╿":
            return char if self.box else _box_to_ascii(char)
        if char in _NAMED:
            return _NAMED[char]
        letters = unicodedata.normalize("NFKD", char).encode("ascii", "ignore").decode()
        return letters or "?"


FULL = Glyphs("full", box=True, braille=True, up="▲", down="▼", rule="─", fill="█", rest="░", ramp=" ▁▂▃▄▅▆▇█")
BOX = Glyphs("box", box=True, braille=False, up="^", down="v", rule="─", fill="#", rest=".", ramp=" .:-=+*#@")
ASCII = Glyphs("ascii", box=False, braille=False, up="^", down="v", rule="-", fill="#", rest=".", ramp=" .:-=+*#@")
