"""Printed codes: which readings there are, in which order, and that nothing typed upsets the reader.

Figures of the codes themselves are checked against the published tables in
tests/reference/test_marking_codes_published.py. What is expected here is common maker practice, no source,
unless a line says otherwise.
"""

import math
import os

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.hang import answers_in_time
from triage.replacement.marking_codes import (
    VALUE_UNITS,
    coarsest_series,
    decode,
    is_preferred,
    nearest_preferred,
    series_values,
)

LONG = int(os.environ.get("TRIAGE_LONG_EXAMPLES", "1000"))
"""Inputs of the long run; set TRIAGE_LONG_EXAMPLES=100000 for the full one (some minutes)."""

FIRST = [
    # text, part class, values, tolerance
    ("5W10RJ", "resistor", {"resistance": 10.0, "power": 5.0}, 0.05),
    ("5W 0.1ΩJ", "resistor", {"resistance": 0.1, "power": 5.0}, 0.05),
    ("1/4W 330K", "resistor", {"resistance": 330e3, "power": 0.25}, None),
    ("4.7k 5%", "resistor", {"resistance": 4700.0}, 0.05),
    ("000", "resistor", {"resistance": 0.0}, None),
    ("104J 630V", "film_capacitor", {"capacitance": 100e-9, "voltage": 630.0}, 0.05),
    ("222M 1kV", "ceramic_capacitor", {"capacitance": 2.2e-9, "voltage": 1000.0}, 0.20),
    ("101K1KV", "ceramic_capacitor", {"capacitance": 100e-12, "voltage": 1000.0}, 0.10),
    ("X7R 104K 50V", "ceramic_capacitor", {"capacitance": 100e-9, "voltage": 50.0}, 0.10),
    ("CBB22 104J 630V", "film_capacitor", {"capacitance": 100e-9, "voltage": 630.0}, 0.05),
    (
        "0.22uF 275VAC X2 40/100/21",
        "x_capacitor",
        {"capacitance": 220e-9, "ac_voltage": 275.0, "temperature": 100.0},
        None,
    ),
    ("472M Y1 400V~", "y_capacitor", {"capacitance": 4.7e-9, "ac_voltage": 400.0}, 0.20),
    ("470M X1 400V Y1 250V", "y_capacitor", {"capacitance": 47e-12, "ac_voltage": 250.0}, 0.20),
    (".47K250", "film_capacitor", {"capacitance": 470e-9, "voltage": 250.0}, 0.10),
    ("10uF 400V 105C", "electrolytic", {"capacitance": 10e-6, "voltage": 400.0, "temperature": 105.0}, None),
    (
        "68µF 450V (M) 105°C",
        "electrolytic",
        {"capacitance": 68e-6, "voltage": 450.0, "temperature": 105.0},
        0.20,
    ),
    (
        "-40+105°C 22uF 400V",
        "electrolytic",
        {"capacitance": 22e-6, "voltage": 400.0, "temperature": 105.0},
        None,
    ),
    ("4.7uF ±20% 50V", "electrolytic", {"capacitance": 4.7e-6, "voltage": 50.0}, 0.20),
    ("10u 400V", "electrolytic", {"capacitance": 10e-6, "voltage": 400.0}, None),
    ("100 16V", "electrolytic", {"capacitance": 100e-6, "voltage": 16.0}, None),
    ("107C", "electrolytic", {"capacitance": 100e-6, "voltage": 16.0}, None),
    ("T1A250V", "fuse", {"current": 1.0, "ac_voltage": 250.0}, None),
    ("T 3,15 A / 250 V", "fuse", {"current": 3.15, "ac_voltage": 250.0}, None),
    ("T3.15AH", "fuse", {"current": 3.15, "breaking_current": 1500.0}, None),
    ("F6.3AL250V", "fuse", {"current": 6.3, "ac_voltage": 250.0, "breaking_current": 63.0}, None),
    ("250V 2A", "fuse", {"current": 2.0, "ac_voltage": 250.0}, None),
    ("NTC 10D-11", "ntc", {"resistance": 10.0, "diameter": 0.011}, None),
    ("2.5D-15", "ntc", {"resistance": 2.5, "diameter": 0.015}, None),
    (
        "10N431K",
        "varistor",
        {"varistor_voltage": 430.0, "ac_voltage": 275.0, "dc_voltage": 350.0, "diameter": 0.01},
        0.10,
    ),
    ("C5V6", "zener", {"zener_voltage": 5.6}, 0.05),
]


@pytest.mark.parametrize(
    ("text", "part_class", "values", "tolerance"), FIRST, ids=[case[0] for case in FIRST]
)
def test_usual_reading_comes_first(
    text: str, part_class: str, values: dict[str, float], tolerance: float | None
) -> None:
    reading = decode(text)[0]
    assert reading.part_class == part_class
    assert reading.values == pytest.approx(values, rel=1e-12)
    assert reading.tolerance == tolerance


def _classes(text: str) -> list[str]:
    return [reading.part_class for reading in decode(text)]


def test_digits_alone_are_read_for_every_body() -> None:
    assert _classes("104") == ["resistor", "ceramic_capacitor", "film_capacitor", "inductor"]


def test_disc_code_without_disc_size_may_be_capacitor_or_varistor() -> None:
    readings = {reading.part_class: reading for reading in decode("471K")}
    assert readings["ceramic_capacitor"].values["capacitance"] == 470e-12
    assert readings["varistor"].values["varistor_voltage"] == 470.0
    assert "measure" in readings["varistor"].note


def test_d_code_with_three_digits_is_a_varistor_with_two_a_thermistor() -> None:
    assert _classes("05D471K") == ["varistor"]
    assert _classes("5D-9") == ["ntc"]


def test_r_behind_two_digits_is_ohms_first_and_chip_code_second() -> None:
    first, second = decode("10R")
    assert (first.values["resistance"], second.values["resistance"]) == (10.0, 1.24)


@pytest.mark.parametrize("text", ["4007", "4148", "4001", "1N4007", "BUT11A", "TL431"])
def test_type_numbers_are_no_resistor_codes(text: str) -> None:
    """Four digits that give no preferred value, or one no adapter has, are not read as a chip resistor."""
    assert "resistor" not in _classes(text)


def test_bands_are_read_from_both_ends() -> None:
    first, second = decode("brown black black red brown")
    assert (first.values["resistance"], first.tolerance, first.note) == (10e3, 0.01, "")
    assert (second.values["resistance"], second.note) == (120.0, "read from the other end")


def test_bands_held_the_wrong_way_round_are_turned() -> None:
    """Gold cannot be a digit, so only the other end makes sense."""
    (reading,) = decode("gold red violet yellow")
    assert reading.values["resistance"] == 4700.0
    assert reading.note == "read from the other end"


def test_bands_that_give_no_preferred_value_come_after_those_that_do() -> None:
    """91 x 10 ohm 10 % exists, 19 kohm does not, whichever end was named first."""
    readings = decode("brown white orange brown")
    assert [is_preferred(reading.values["resistance"], "E24") for reading in readings] == sorted(
        (is_preferred(reading.values["resistance"], "E24") for reading in readings), reverse=True
    )
    assert "look at the colours again" in decode("brown white orange gold")[0].note


def test_colours_in_two_letters_and_other_spellings() -> None:
    """IEC 60757 letters."""
    assert decode("YE VT RD GD")[0].values == {"resistance": 4700.0}
    assert (
        decode("grey-red-brown-gold")[0].values
        == decode("gray red brown gold")[0].values
        == {"resistance": 820.0}
    )


def test_white_fifth_band_marks_a_fusible_resistor() -> None:
    """Maker practice, no source."""
    reading = decode("brown black gold gold white")[0]
    assert (reading.part_class, reading.values["resistance"]) == ("fusible_resistor", 1.0)
    assert "fusible" in reading.note


def test_six_bands_carry_the_temperature_coefficient() -> None:
    reading = decode("brown black black red brown red")[0]
    assert reading.values["temperature_coefficient"] == 50e-6
    assert "50 ppm/K" in reading.text


def test_marks_of_a_fuse() -> None:
    reading = decode("F2AL250V")[0]
    assert (reading.marks["speed"], reading.marks["breaking_class"]) == ("F", "L")
    assert "speed not printed" in decode("2A 250V")[0].note
    assert "IEC 60127" in decode("T3.16A250V")[0].note


def test_uneven_tolerance_keeps_its_sides() -> None:
    reading = decode("223Z 50V")[0]
    assert (reading.tolerance, reading.marks["tolerance"]) == (0.80, "-20/+80 %")
    assert "-20/+80 %" in reading.text


def test_every_reading_is_complete() -> None:
    for text in [case[0] for case in FIRST]:
        for reading in decode(text):
            assert reading.source and reading.confidence in ("verified", "from memory")
            assert set(reading.values) <= set(VALUE_UNITS)
            assert reading.text.isprintable() and reading.text


@pytest.mark.parametrize(
    "text", ["", " ", "x" * 10_000, "4k7\x1b[31m", "٤٧", "\ud800", "hello", "----", "red", "9" * 60, "nan"]
)
def test_what_is_no_print_has_no_reading(text: str) -> None:
    assert decode(text) == ()


def test_nearest_preferred_value() -> None:
    """Reasoned: nearest in ratio, across the end of a decade too."""
    assert nearest_preferred(5000.0) == 5100.0
    assert nearest_preferred(9.6e-6, "E12") == 10e-6
    assert nearest_preferred(0.47) == 0.47
    assert coarsest_series(4700.0) == "E3"
    assert (coarsest_series(4640.0), coarsest_series(4750.0)) == ("E48", "E96")
    assert coarsest_series(4701.0) is None
    assert coarsest_series(0.0) is None
    with pytest.raises(ValueError, match="above 0"):
        nearest_preferred(-1.0)
    with pytest.raises(KeyError, match="E13"):
        series_values("E13")


@given(st.floats(1e-15, 1e12), st.sampled_from(["E3", "E6", "E12", "E24", "E48", "E96", "E192"]))
def test_no_value_is_farther_from_the_series_than_half_a_step(value: float, series: str) -> None:
    """Reasoned: the widest step of a series of n values is about 10**(1/n); rounding of the values widens
    it a little."""
    nearest = nearest_preferred(value, series)
    assert abs(math.log10(nearest / value)) < 0.62 / int(series[1:]) + 0.002
    assert is_preferred(nearest, series)


PRINTED = st.one_of(
    st.text(max_size=70),
    st.text("0123456789KJMRDVAWXYTFLuncpmkC.,-+/% °µΩ()~HEZ", max_size=20),
    st.lists(
        st.sampled_from(["red", "gold", "black", "bn", "white", "pink", "none", "silver", "grey"]), max_size=8
    ).map(" ".join),
)


def _check_reading(text: str) -> None:
    with answers_in_time():
        readings = decode(text)
    for reading in readings:
        assert all(math.isfinite(value) and value >= 0 for value in reading.values.values())
        assert (reading.text + reading.note).isprintable()


@given(PRINTED)
@settings(deadline=None)
def test_any_text_is_read_or_left(text: str) -> None:
    _check_reading(text)


@pytest.mark.long
@given(PRINTED)
@settings(deadline=None, max_examples=LONG, database=None)
def test_any_text_long_run(text: str) -> None:
    """As many inputs as TRIAGE_LONG_EXAMPLES says."""
    _check_reading(text)
