"""Typed text made plain, and the number at its head.

Knows no units: ``clean`` turns what keyboards, labels and other programs produce into printable ASCII or
refuses it, ``leading_number`` takes a number with decimal point, decimal comma, thousands marks or exponent
off the front, ``shown`` makes any text fit to stand in a one-line message. Numbers are kept as Decimal, so
that 100 n is 1e-07 and not 1.0000000000000001e-07.
"""

import re
from decimal import Decimal

from triage.errors import QuantityError

MAX_LENGTH = 64
"""Longest text that is looked at [characters]; a value with unit, tolerance and remark is shorter."""
SHOWN_LENGTH = 40
"""Longest piece of typed text repeated in a message [characters]."""

_PLAIN = str.maketrans(
    {
        **dict.fromkeys("µμ", "u"),
        **dict.fromkeys("ΩΩω", "ohm"),
        **dict.fromkeys("−–—‐‑﹣－", "-"),
        **dict.fromkeys("\u00a0\u2007\u2009\u200a\u202f\t", " "),
        **dict.fromkeys("’‘ʹ′´`", "'"),
        **dict.fromkeys("×·⋅∙", "*"),
        "±": "+-",
        "∞": "inf",
        "°": "deg",
        "℃": "degC",
        "²": "^2",
        "⎓": "=",
        "∼": "~",
        "％": "%",
    }
)

_NUMBER = re.compile(
    r"""[+-]?\s?
    (?: \d{1,3}(?:[ ']\d{3})+(?!\d) (?:[.,]\d*)?
      | \d+(?:[.,]\d+)*[.,]?
      | [.,]\d+ )
    (?:[eE][+-]?\d{1,3}(?![\d.,]))?""",
    re.VERBOSE | re.ASCII,
)
_GROUPS_OF_THREE = re.compile(r"\d{1,3}(?:([.,])\d{3})(?:\1\d{3})*", re.ASCII)


def shown(text: str) -> str:
    """The text as it may be repeated in a message: one line, printable, at most SHOWN_LENGTH characters and
    dots.
    """
    if len(text) > SHOWN_LENGTH:
        text = text[:SHOWN_LENGTH].rstrip() + "..."
    return "".join(ch if ch.isprintable() else "?" for ch in text)


def clean(text: str, expected: str) -> str:
    """The text in printable ASCII with single spaces, signs and symbols of the trade spelled out (``µ`` u,
    ``Ω`` ohm, ``±`` +-).

    expected: what was asked for, for the error line. Raises QuantityError for empty or overlong text and for
    characters that have no place in a value (control characters, digits of other scripts).
    """
    if len(text) > MAX_LENGTH:
        raise QuantityError(
            "", f"{shown(text)} is {len(text)} characters long", expected, "type the value alone"
        )
    plain = text.strip(" \t\r\n").translate(_PLAIN)
    if not plain.strip():
        raise QuantityError("", "nothing was typed", expected)
    odd = next((ch for ch in plain if not (ch.isascii() and ch.isprintable())), "")
    if odd:
        name = odd if odd.isprintable() else f"U+{ord(odd):04X}"
        raise QuantityError(
            "", f"{shown(text)} has a character that is no part of a value ({name})", expected
        )
    return re.sub(r" {2,}", " ", plain).strip()


def leading_number(text: str, expected: str) -> tuple[Decimal, str] | None:
    """The number at the head of a cleaned text and the rest of it, or None where there is no number.

    ``1 000`` and ``1'000`` are thousands; ``1.234,5`` and ``1,234.5`` are read by their last mark; a single
    comma is the decimal comma. Raises QuantityError for one comma before exactly three digits (``4,700``),
    which is 4.7 to one reader and 4700 to the next.
    """
    match = _NUMBER.match(text)
    if match is None:
        return None
    digits, _, exponent = match.group().replace(" ", "").replace("'", "").lower().partition("e")
    mantissa = _decimal_point(digits, expected)
    if mantissa is None:
        return None
    return Decimal(f"{mantissa}e{exponent or 0}"), text[match.end() :].strip()


def _decimal_point(digits: str, expected: str) -> str | None:
    """Digits with a point at most, from digits with points and commas; None where the marks make no
    number.
    """
    sign, body = (digits[0], digits[1:]) if digits[0] in "+-" else ("", digits)
    marks = [ch for ch in body if ch in ".,"]
    if len(marks) <= 1:
        if marks == [","] and _GROUPS_OF_THREE.fullmatch(body) and not body.startswith("0"):
            whole, part = body.split(",")
            raise QuantityError(
                "",
                f"{shown(digits)} can be read as {whole}.{part} and as {whole}{part}",
                expected,
                f"type {whole}.{part} or {whole}{part}",
            )
        return sign + body.replace(",", ".")
    if len(set(marks)) == 1:
        return sign + body.replace(marks[0], "") if _GROUPS_OF_THREE.fullmatch(body) else None
    whole, _, part = body.rpartition(marks[-1])
    if marks.count(marks[-1]) == 1 and _GROUPS_OF_THREE.fullmatch(whole):
        return f"{sign}{whole.replace(marks[0], '')}.{part}"
    return None
