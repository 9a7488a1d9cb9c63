"""Text from files is shown as text."""

import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st

from triage.job.display import plain


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("4k7 \u03a9 \u00b5F \u00b0C", "4k7 \u03a9 \u00b5F \u00b0C"),
        ("\x1b[31mred\x1b[0m", "<U+001B>[31mred<U+001B>[0m"),
        ("\x9b2J", "<U+009B>2J"),
        ("a\u202eb", "a<U+202E>b"),
        ("a\u2066b\u200bc\ufeff", "a<U+2066>b<U+200B>c<U+FEFF>"),
        ("a\r\nb\tc", "a<U+000D> b c"),
        ("\U000e0041", "<U+E0041>"),
        ("\u2800\u3164", "<U+2800><U+3164>"),
        ("e\u0301", "e\u0301"),
        ("e" + "\u0301" * 4, "e\u0301\u0301<U+0301><U+0301>"),
        (4.7, "4.7"),
    ],
)
def test_what_moves_or_hides_is_shown_by_its_code_point(text: object, shown: str) -> None:
    assert plain(text) == shown


def test_line_breaks_stay_where_they_are_wanted() -> None:
    assert plain("a\nb", lines=True) == "a\nb"


def test_a_long_text_is_cut_and_says_so() -> None:
    assert plain("x" * 10_000, limit=20) == "x" * 17 + "..."


@given(st.text())
def test_nothing_that_a_terminal_obeys_comes_through(text: str) -> None:
    shown = plain(text)
    assert len(shown) <= 500
    assert not [c for c in shown if unicodedata.category(c) in ("Cc", "Cf", "Cs", "Zl", "Zp")]
