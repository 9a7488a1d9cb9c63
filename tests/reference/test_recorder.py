"""The recorder itself: what it lets pass, what it fails, what it counts."""

import datetime

import numpy as np
import pytest

from tests.reference.conftest import WIDEST, OutsideChecks, cut
from tests.reference.write_table import BEGIN, END, condense, markdown, put, source_of


def test_counts_every_element_and_keeps_the_worst_share() -> None:
    checks = OutsideChecks()
    checks("s", "book", [1.0, 2.002, 3.0], [1.0, 2.0, 3.0], 0.01)
    checks("s", "book", 10.5, 10.0, 1.0, absolute=True)
    assert checks.lines() == [("s", "book", "4", "50 %", "1 absolute")]
    assert checks.summary == "4 checks against 1 sources, 0 failed"


@pytest.mark.parametrize("got, expected", [
    (1.02, 1.0), (np.nan, 1.0), (1.0, np.nan), (np.inf, 1.0), (1.0, np.inf), (0.1, 0.0), ([1.0, 1.02], [1.0, 1.0])])
def test_fails_and_records_what_is_off(got: object, expected: object) -> None:
    checks = OutsideChecks()
    with pytest.raises(AssertionError):
        checks("s", "book", got, expected, 0.01)
    assert checks.rows["s", "book"].failed == 1


def test_open_line_and_missing_value_agree_with_themselves() -> None:
    OutsideChecks()("s", "book", [np.inf, np.nan, 0.0], [np.inf, np.nan, 0.0], 0.01)


def test_texts_and_rates() -> None:
    checks = OutsideChecks()
    checks.same("s", "book", "open", "open")
    checks.at_least("s", "book", 0.97, 0.95)
    with pytest.raises(AssertionError):
        checks.same("s", "book", "open", "short")
    with pytest.raises(AssertionError):
        checks.at_least("s", "book", 0.94, 0.95)
    assert checks.rows["s", "book"].failed == 2


def test_cells_of_the_terminal_table_are_cut() -> None:
    assert cut("a book") == "a book"
    assert len(cut("b" * 200)) == WIDEST and cut("b" * 200).endswith("…")


def test_the_condensed_table_counts_what_the_full_one_holds() -> None:
    table = """| subject | source | checks | worst, share of bound | bound |
| --- | --- | --- | --- | --- |
| flyback | book | 4 | 50 % | 1 % |
| flyback | sheet | 2 (1 failed) | 120 % | 2 % |
| thermal | book | 3 | 10 % | 5 % |
"""
    found = condense(table)
    assert set(found) == {"converters and magnetics", "heat"}
    text = markdown(found, datetime.date(2026, 1, 2))
    assert "| converters and magnetics | book; sheet | 6 (1 failed) | 120 % | 2 % |" in text
    assert "9 checks against 2 sources, 1 failed" in text and "2026-01-02" in text
    with pytest.raises(ValueError, match="no row"):
        condense("nothing")


@pytest.mark.parametrize(("cell", "name"), [
    ("IEC 60664-1:2007, table F.5", "IEC 60664-1:2007"),
    ("Gelman et al.: Bayesian Data Analysis, 3rd ed. (2013), section 2.4", "Gelman et al."),
    ("D. W. Hart, Power Electronics", "D. W. Hart, Power Electronics"),
    ("ngspice, live run of the program's deck", "ngspice"),
    ("computed by an independent method", ""), ("own numbers", ""), ("usual practice of consumer supplies", ""),
])
def test_a_source_is_a_publication_whatever_the_place_in_it(cell: str, name: str) -> None:
    assert source_of(cell) == name


def test_the_table_is_put_between_its_marks_only() -> None:
    assert put("new\n", f"a\n{BEGIN}\nold\n{END}\nb\n") == f"a\n{BEGIN}\nnew\n{END}\nb\n"
    with pytest.raises(ValueError, match="needs one line"):
        put("new", "no marks")
