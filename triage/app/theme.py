"""Colours of the app: a dark and a light screen, and one that leaves colours to the terminal.

Every pair of text and background keeps a contrast of at least 4.5:1 (WCAG 2.1, success criterion 1.4.3); the
tests measure it on the drawn screens. Colour is never the only sign: each mark has a character or an
attribute besides.
"""

from textual.theme import Theme

_DARK = {
    "ink": "#d8dee4",
    "paper": "#11161b",
    "quiet": "#afafaf",
    "strong": "#ffffff",
    "head": "#ffffff",
    "head-paper": "#26394a",
    "key": "#8ccbff",
    "suspect": "#11161b",
    "suspect-paper": "#ffbe5c",
    "over": "#ff9b94",
    "near": "#ffd27a",
    "good": "#93dba0",
    "red": "#ffffff",
    "red-paper": "#b3261e",
    "black": "#11161b",
    "black-paper": "#d8dee4",
    "cursor": "#ffffff",
    "cursor-paper": "#2b5c8a",
    "blurred-paper": "#303030",
    "field": "#5fffff",
    "field-paper": "#00005f",
    "bad": "#ff9b94",
}
# The field is written anew with each character: its colours have numbers of two digits in 256 colours.
_LIGHT = {
    "ink": "#1b2127",
    "paper": "#fafaf6",
    "quiet": "#4d5a66",
    "strong": "#000000",
    "head": "#ffffff",
    "head-paper": "#2d4a63",
    "key": "#0b4f8a",
    "suspect": "#1b2127",
    "suspect-paper": "#ffc76b",
    "over": "#a3150d",
    "near": "#7a4a00",
    "good": "#14611f",
    "red": "#ffffff",
    "red-paper": "#b3261e",
    "black": "#ffffff",
    "black-paper": "#1b2127",
    "cursor": "#ffffff",
    "cursor-paper": "#0b4f8a",
    "blurred-paper": "#dadada",
    "field": "#000000",
    "field-paper": "#5fffff",
    "bad": "#a3150d",
}
_OWN = dict.fromkeys(_DARK, "ansi_default") | {
    "key": "ansi_cyan",
    "over": "ansi_red",
    "bad": "ansi_red",
    "near": "ansi_yellow",
    "good": "ansi_green",
}
_TEXTUAL_OWN = {"ansi-background": "ansi_black", "ansi-foreground": "ansi_white"}
"""Names that Textual's own style sheets want of a theme with the terminal's colours."""


def _theme(name: str, colours: dict[str, str], dark: bool, ansi: bool = False) -> Theme:
    return Theme(
        name=name,
        primary=colours["key"],
        foreground=colours["ink"],
        background=colours["paper"],
        surface=colours["paper"],
        panel=colours["paper"],
        error=colours["bad"],
        warning=colours["near"],
        success=colours["good"],
        accent=colours["key"],
        dark=dark,
        ansi=ansi,
        variables={f"t-{key}": value for key, value in colours.items()} | (_TEXTUAL_OWN if ansi else {}),
    )


DARK = _theme("bench dark", _DARK, dark=True)
LIGHT = _theme("bench light", _LIGHT, dark=False)
OWN = _theme("terminal's own", _OWN, dark=True, ansi=True)
