"""Markings typed at intake: the rating comes with the part."""

import pytest

from triage.board.estimate.assemble import estimate
from triage.board.estimate.template import template_of
from triage.board.part import Board, Label
from triage.errors import EntryError
from triage.job.intake import with_marking
from triage.replacement.catalog import Catalog


@pytest.fixture(scope="module")
def catalog() -> Catalog:
    return Catalog()


@pytest.fixture
def board() -> Board:
    return estimate(template_of("ringing_choke_zener"), Label("198-253 V~ 50 Hz", 5.0, 0.6))


@pytest.mark.parametrize(("ref", "marking", "rating", "figure"), [
    ("Q1", "MJE13003", "voltage", 700.0), ("D5", "SB260", "voltage", 60.0), ("D5", "sb 260", "current", 2.0),
    ("D1", "1N4007", "voltage", 1000.0), ("D3", "1N4148", "voltage", 75.0),
])  # fmt: skip
def test_the_rating_comes_with_the_type(board, catalog, ref, marking, rating, figure):
    """Ratings of the catalog, which carries the maker's sheet of each."""
    part = with_marking(board, ref, marking, catalog)[0].part(ref)
    assert part.ratings[rating] == figure
    assert part.origin == "marking" and part.type


def test_the_gain_of_a_transistor_is_narrowed_to_its_sheet(board, catalog):
    part = with_marking(board, "Q1", "MJE13003", catalog)[0].part("Q1")
    sheet = catalog.find("MJE13003")
    low, high = sheet.number("hfe_min"), sheet.number("hfe_max")
    assert part.value["gain"] == pytest.approx((low * high) ** 0.5)
    assert "gain" not in part.spread and 0.0 < part.tolerance["gain"] <= 0.9


def test_a_zener_is_known_by_its_type(board, catalog):
    part = with_marking(board, "DZ1", "BZX55C6V2", catalog)[0].part("DZ1")
    assert part.value["zener_voltage"] == 6.2 and "zener_voltage" not in part.spread


@pytest.mark.parametrize(("ref", "marking", "key", "value", "tolerance"), [
    ("C2", "102", "capacitance", 1e-9, None), ("C2", "2A472J", "capacitance", 4.7e-9, 0.05),
    ("R3", "2k2", "resistance", 2200.0, None),
    ("R1", "brown black green gold", "resistance", 1e6, 0.05),
])  # fmt: skip
def test_a_value_code_is_read(board, catalog, ref, marking, key, value, tolerance):
    """IEC 60062: letter and digit code, colour bands; three digits as on small capacitors."""
    part = with_marking(board, ref, marking, catalog)[0].part(ref)
    assert part.value[key] == pytest.approx(value) and key not in part.spread
    assert part.tolerance[key] == (tolerance if tolerance is not None else {"C2": 0.1, "R3": 0.05}[ref])


def test_the_rated_voltage_in_a_code_becomes_a_rating(board, catalog):
    assert with_marking(board, "C2", "2A472J", catalog)[0].part("C2").ratings["voltage"] == 100.0


def test_a_half_read_marking_names_the_nearest_types(board, catalog):
    with pytest.raises(EntryError, match="SB260"):
        with_marking(board, "D5", "SB26", catalog)


@pytest.mark.parametrize(("ref", "marking"), [("Q1", "1N4007"), ("R1", "MJE13003"), ("C1", "\x1b[2J"), ("D1", "")])
def test_a_marking_of_another_kind_is_refused(board, catalog, ref, marking):
    with pytest.raises(EntryError, match="marking of"):
        with_marking(board, ref, marking, catalog)
