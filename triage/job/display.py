"""Makes a text from a file or from a person safe to show: data never moves, colours or reorders a screen.

One function for all screens, listings and reports. What it takes out is not dropped silently but shown by its
code point, so that a person sees that something was there. Escaping for HTML and Markdown comes on top, in
the report.
"""

import unicodedata

_HIDDEN = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
"""Unicode categories that do not draw a character of their own: controls, bidi and zero-width marks,
surrogates, private and unassigned code points, line and paragraph separators."""

_BLANK_LETTERS = frozenset("\u115f\u1160\u2800\u3164\uffa0")
"""Letters that draw nothing and could hide text as well as a zero-width mark does."""

_MARKS_IN_A_ROW = 2
"""Combining marks kept on one character; more of them overprint the neighbouring lines."""


def plain(text: object, limit: int = 500, lines: bool = False) -> str:
    """The text with everything neutralised that a terminal or a reader could take for more than text.

    text: anything; what is no string is written with ``str``.
    limit: longest result in characters [-]; what is beyond it is cut and marked with ``...``.
    lines: keep line breaks (for a drawing or a note); otherwise they become spaces.
    """
    shown: list[str] = []
    marks = 0
    source = str(text)
    for character in source[: 4 * limit]:
        if character == "\n" and lines:
            shown.append(character)
            continue
        if character in "\n\t":
            shown.append(" ")
            continue
        category = unicodedata.category(character)
        marks = marks + 1 if category in ("Mn", "Me") else 0
        if category in _HIDDEN or character in _BLANK_LETTERS or marks > _MARKS_IN_A_ROW:
            shown.append(f"<U+{ord(character):04X}>")
        else:
            shown.append(character)
    result = "".join(shown)
    if len(result) > limit or len(source) > 4 * limit:
        return result[: max(limit - 3, 0)] + "..."
    return result
