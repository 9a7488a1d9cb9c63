"""What the reading field understands."""

import pytest

from triage.app.typed import understand
from triage.board.probe import Probe


@pytest.mark.parametrize("text", ["4k7", "0.62", "12 V", "2,2 kohm", "R47", "-6.1", "10"])
def test_values_are_left_as_typed(text):
    assert understand(f"  {text} ") == ("reading", text, None)


@pytest.mark.parametrize("text", ["OL", "ol", "*", "o", "O.L", "inf", "open"])
def test_over_range_has_short_names(text):
    assert understand(text) == ("reading", "OL", None)


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("skip", "skipped"),
        ("s", "skipped"),
        ("skip no ESR meter", "no ESR meter"),
        ("can't reach", "cannot reach"),
        ("cant reach", "cannot reach"),
        ("c", "cannot reach"),
    ],
)
def test_skips_carry_their_reason(text, reason):
    assert understand(text) == ("skip", reason, None)


@pytest.mark.parametrize(("text", "kind"), [("u", "undo"), ("undo", "undo"), ("/", "menu"), ("+", "other"), ("  ", "nothing")])
def test_words_of_one_hand(text, kind):
    assert understand(text).kind == kind


def test_a_whole_reading_in_one_line():
    assert understand("volts_dc out sgnd full 4.9 V") == (
        "reading",
        "4.9 V",
        Probe("volts_dc", "out", "sgnd", "full"),
    )
    assert understand("ohms bulk pgnd *") == ("reading", "OL", Probe("ohms", "bulk", "pgnd", "cold"))
