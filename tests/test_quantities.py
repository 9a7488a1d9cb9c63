"""Typed values: what a technician writes down, read into SI and written back.

Values of the letter-and-digit code are published (IEC 60062, clause 4); see also
tests/reference/test_marking_codes_published.py. The other forms are common practice of the bench, no source:
their expected values follow from the meaning of prefix and unit.
"""

import math
import os
import subprocess
import sys
import unicodedata

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from tests.hang import answers_in_time
from triage.errors import QuantityError
from triage.quantities import engineering, parse, parse_reading, parse_with_tolerance
from triage.units import UNITS

LONG = int(os.environ.get("TRIAGE_LONG_EXAMPLES", "1000"))
"""Inputs of the long runs; set TRIAGE_LONG_EXAMPLES=100000 for the full one (some minutes)."""

READ = [
    ("4k7", "ohm", 4700.0), ("4K7", "ohm", 4700.0), ("R47", "ohm", 0.47), ("2R2", "ohm", 2.2),
    ("470", "ohm", 470.0),
    ("1M", "ohm", 1e6), ("1M5", "ohm", 1.5e6), ("10 Meg", "ohm", 1e7), ("1megohm", "ohm", 1e6),
    ("35mohm", "ohm", 0.035),
    ("35 mΩ", "ohm", 0.035), ("2,2 kohm", "ohm", 2200.0), ("2.2kΩ", "ohm", 2200.0), ("2.2kΩ", "ohm", 2200.0),
    ("4Ω7", "ohm", 4.7),
    ("4k7 ohm", "ohm", 4700.0), ("10R", "ohm", 10.0), ("1.5e3", "ohm", 1500.0), ("1 000", "ohm", 1000.0),
    ("1'000", "ohm", 1000.0),
    ("1\u202f000 000", "ohm", 1e6), ("1 000,5", "ohm", 1000.5), ("1,000,000", "ohm", 1e6),
    ("1.000.000", "ohm", 1e6),
    ("2.2 kilohm", "ohm", 2200.0), ("2.2 Kilohm", "ohm", 2200.0), ("3 megaohm", "ohm", 3e6),
    ("4k7 5%", "ohm", 4700.0),
    ("4u7", "F", 4.7e-6), ("100n", "F", 1e-7), ("10u", "F", 1e-5), ("1n4", "F", 1.4e-9),
    ("p33", "F", 0.33e-12),
    ("33 µF", "F", 33e-6), ("33 μF", "F", 33e-6), ("33uF", "F", 33e-6), ("33UF", "F", 33e-6),
    ("33mfd", "F", 33e-6), ("33 MFD", "F", 33e-6),
    ("100NF", "F", 1e-7), (".1uF", "F", 1e-7), ("2 microfarad", "F", 2e-6), ("4u7F", "F", 4.7e-6),
    ("2.2mF", "F", 2.2e-3),
    ("0.15A", "A", 0.15), ("0,15 A", "A", 0.15), ("0,150 A", "A", 0.15), ("150mA", "A", 0.15),
    ("150 ma", "A", 0.15), ("3A15", "A", 3.15),
    ("15 milliampere", "A", 0.015), ("20uA", "A", 20e-6),
    ("230V~", "V", 230.0), ("~230V", "V", 230.0), ("230 VAC", "V", 230.0), ("12 V=", "V", 12.0),
    ("12 V⎓", "V", 12.0), ("5V1", "V", 5.1),
    ("-12V", "V", -12.0), ("−12,5 V", "V", -12.5), ("– 3 mV", "V", -0.003), ("3.3e-3 V", "V", 3.3e-3),
    ("1,234.5", "V", 1234.5),
    ("1.234,5", "V", 1234.5), ("1kV", "V", 1000.0), ("2.3 Vpp", "V", 2.3),
    ("2.5W", "W", 2.5), ("500mW", "W", 0.5), ("100 uH", "H", 1e-4), ("65 khz", "Hz", 65e3),
    ("1MHz", "Hz", 1e6), ("50", "Hz", 50.0),
    ("5 min", "s", 300.0), ("20 ms", "s", 0.02), ("2000 hours", "h", 2000.0), ("90 min", "h", 1.5),
    ("6.4mm", "m", 6.4e-3),
    ("1 inch", "m", 0.0254), ("25C", "degC", 25.0), ("105 °C", "degC", 105.0), ("-40 ℃", "degC", -40.0),
    ("77 degF", "degC", 25.0),
    ("15 degC", "K", 15.0), ("12 A²s", "A2s", 12.0), ("62 K/W", "K/W", 62.0), ("2 Ah", "C", 7200.0),
    ("1.5 J", "J", 1.5), ("5%", "1", 0.05), ("0.9", "1", 0.9), ("120 turns", "1", 120.0),
    ("10 VA", "VA", 10.0),
]


@pytest.mark.parametrize(("text", "unit", "value"), READ)
def test_reads_what_a_technician_types(text: str, unit: str, value: float) -> None:
    """Reasoned: the value follows from prefix, mark and unit."""
    assert parse(text, unit) == pytest.approx(value, rel=1e-13)


def test_decimal_fractions_come_out_exact() -> None:
    """100 n is the float nearest to 1e-7, so that values read from text and from a file compare equal."""
    assert parse("100n", "F") == 100e-9
    assert parse("4.7 uF", "F") == 4.7e-6
    assert parse("0,33u", "F") == 0.33e-6


@pytest.mark.parametrize("number", [470, 470.0])
def test_plain_numbers_of_a_file_pass(number: float) -> None:
    assert parse(number, "ohm") == 470.0


@pytest.mark.parametrize("number", [math.nan, math.inf, -5.0, True, 10**400])
def test_senseless_numbers_of_a_file_are_refused(number: float) -> None:
    with pytest.raises(QuantityError):
        parse(number, "ohm")


OVER_RANGE = ["OL", "ol", "O.L", "0L", "0.L", ".OL", "OL.", "over", "overload", "inf", "∞", "open",
              "OL Mohm", "O.L kΩ"]


@pytest.mark.parametrize("text", OVER_RANGE)
def test_over_range_is_infinite_as_reading_only(text: str) -> None:
    assert parse_reading(text, "ohm") == math.inf
    with pytest.raises(QuantityError):
        parse(text, "ohm")


def test_reading_with_a_value_is_the_value() -> None:
    assert parse_reading("4.71k", "ohm") == 4710.0
    assert parse_reading("0.584", "V") == 0.584
    assert parse_reading(0.584, "V") == 0.584


def test_over_range_of_another_unit_is_refused() -> None:
    with pytest.raises(QuantityError):
        parse_reading("OL V", "ohm")


TOLERANCES = [
    ("4K7J", "ohm", 4700.0, 0.05), ("4k7 5%", "ohm", 4700.0, 0.05), ("10k ±1%", "ohm", 10e3, 0.01),
    ("10k +/-1 %", "ohm", 10e3, 0.01),
    ("10k (0,5%)", "ohm", 10e3, 0.005), ("10RJ", "ohm", 10.0, 0.05), ("1kF", "ohm", 1000.0, 0.01),
    ("R22K", "ohm", 0.22, 0.10),
    ("100nJ", "F", 1e-7, 0.05), ("2n2M", "F", 2.2e-9, 0.20), ("4.7 uF ±20%", "F", 4.7e-6, 0.20),
    ("4k7", "ohm", 4700.0, None),
    ("4.7K", "ohm", 4700.0, None), ("10u", "F", 1e-5, None), ("4u7F", "F", 4.7e-6, None),
]


@pytest.mark.parametrize(("text", "unit", "value", "tolerance"), TOLERANCES)
def test_tolerance_behind_a_value(text: str, unit: str, value: float, tolerance: float | None) -> None:
    """Published letters: IEC 60062, clause 5 (F 1 %, J 5 %, K 10 %, M 20 %)."""
    assert parse_with_tolerance(text, unit) == (pytest.approx(value, rel=1e-13), tolerance)


REFUSED = [
    ("4.7 uF", "ohm", "4.7 uF is a capacitance; expected a resistance in ohm, for example 4k7"),
    ("10mF", "ohm", "10mF is a capacitance; expected a resistance in ohm, for example 4k7"),
    ("2.2 kohm", "F", "2.2 kohm is a resistance; expected a capacitance in F, for example 4u7"),
    ("230 VAC", "A", "230 VAC is a voltage; expected a current in A, for example 150 mA"),
    ("3 volts", "ohm", "3 volts is a voltage; expected a resistance in ohm, for example 4k7"),
    ("2 kilovolt", "ohm", "2 kilovolt is a voltage; expected a resistance in ohm, for example 4k7"),
    ("10 uH", "F", "10 uH is an inductance; expected a capacitance in F, for example 4u7"),
    ("5 kg", "ohm", "5 kg is not a resistance; expected a resistance in ohm, for example 4k7"),
    ("10 VA", "W", "10 VA is an apparent power; expected a power in W, for example 2.5 W"),
    ("470J", "ohm", "470J is an energy; expected a resistance in ohm, for example 4k7"),
    ("", "V", "nothing was typed; expected a voltage in V, for example 12.5 V"),
    ("nan", "V", "nan is not a number; expected a voltage in V, for example 12.5 V"),
    ("4k7k", "ohm", "4k7k cannot be read; expected a resistance in ohm, for example 4k7"),
    ("fhtagn", "1", "fhtagn cannot be read; expected a plain number, for example 0.9"),
]


@pytest.mark.parametrize(("text", "unit", "message"), REFUSED)
def test_refusal_says_what_it_is_and_what_was_asked(text: str, unit: str, message: str) -> None:
    with pytest.raises(QuantityError) as caught:
        parse(text, unit)
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("text", "unit", "advice"),
    [("1m", "ohm", "M for megohm"), ("150MA", "A", "write mA"), ("33MF", "F", "write mF"),
     ("65 mHz", "Hz", "write MHz"), ("4,700", "ohm", "4.700 or 4700"), ("-5", "ohm", "discharge")],
)
def test_a_thousandfold_doubt_is_asked_back(text: str, unit: str, advice: str) -> None:
    """m against M, the comma of thousands and a negative resistance are refused with the way out."""
    with pytest.raises(QuantityError) as caught:
        parse(text, unit)
    assert advice in str(caught.value)


ABSURD = [
    "x" * 10_000, "9" * 10_000, "4k7" * 3000, "4k7\x00", "\x1b[31m4k7", "4\x0b7", "٤٧", "４７", "4²", "1e999",
    "1e-999", "-1e999",
    "9**9**9", "9^9^9^9", "2 m**9**9", "1/0", "1 /",
    "((((", "%", "5 %%", "[bold]4k7[/]", "__import__('os')", "1_000", "0x10", "1e", "--5",
    "4k7\u202e", "\ud800", "😀", "1 " + "m " * 20, "1 m*" + "m*" * 25, "lambda", "1 lambda", "1 and", ".",
    ",", "-", "+-", "1.5.2", "1,2,3", "~",
]


@pytest.mark.parametrize("unit", ["ohm", "V", "1"])
@pytest.mark.parametrize("text", ABSURD, ids=[ascii(text[:20]) for text in ABSURD])
def test_absurd_text_is_refused_at_once_in_one_printable_line(text: str, unit: str) -> None:
    with answers_in_time(), pytest.raises(QuantityError) as caught:
        parse(text, unit)
    message = str(caught.value)
    assert message.isprintable()
    assert len(message) < 250


@pytest.mark.parametrize("function", [parse, parse_reading, engineering])
def test_an_unknown_unit_key_is_the_programmers_mistake(function) -> None:
    with pytest.raises(ValueError, match="not one of"):
        function(1.0 if function is engineering else "1", "furlong")


WRITTEN = [
    (4700.0, "ohm", "4.7 kohm"), (10e3, "ohm", "10 kohm"), (999.96, "ohm", "1 kohm"),
    (123456.0, "ohm", "123 kohm"), (0.035, "ohm", "0.035 ohm"), (0.47, "ohm", "0.47 ohm"),
    (4.7e-6, "F", "4.7 uF"), (2.2e-7, "F", "220 nF"), (1e-7, "F", "100 nF"), (1.5, "F", "1.5 F"),
    (-12.34, "V", "-12.3 V"), (325.27, "V", "325 V"),
    (0.584, "V", "584 mV"), (65123.0, "Hz", "65.1 kHz"), (105.0, "degC", "105 degC"), (0.5, "h", "0.5 h"),
    (12345.0, "h", "12300 h"),
    (0.3, "1", "0.3"), (0.0, "A", "0 A"), (-0.0, "A", "0 A"), (math.inf, "ohm", "OL"),
    (-math.inf, "V", "-OL"), (math.nan, "V", "no value"),
    (1e-15, "ohm", "1e-15 ohm"), (1e18, "ohm", "1e+18 ohm"), (12.0, "A2s", "12 A2s"),
]


@pytest.mark.parametrize(("value", "unit", "text"), WRITTEN)
def test_engineering_form(value: float, unit: str, text: str) -> None:
    """Reasoned: prefix in steps of a thousand, three digits, no zeros at the end."""
    assert engineering(value, unit) == text


def test_engineering_digits() -> None:
    assert engineering(123456.0, "ohm", 5) == "123.46 kohm"
    assert engineering(123456.0, "ohm", 1) == "100 kohm"
    with pytest.raises(ValueError, match="1 to 15"):
        engineering(1.0, "ohm", 0)


def _check_round_trip(value: float, unit: str, digits: int) -> None:
    value = value if UNITS[unit].signed else abs(value)
    rounding = 0.5000001 * 10 ** (1 - digits)
    assert parse(engineering(value, unit, digits), unit) == pytest.approx(value, rel=rounding, abs=0)


SENSIBLE = st.floats(-1e30, 1e30, allow_nan=False).filter(lambda value: value == 0 or abs(value) > 1e-30)


@given(SENSIBLE, st.sampled_from(sorted(UNITS)), st.integers(1, 15))
def test_engineering_is_read_back_within_its_rounding(value: float, unit: str, digits: int) -> None:
    _check_round_trip(value, unit, digits)


TYPED = st.one_of(
    st.text(max_size=80),
    st.text("0123456789.,-+eE kKmMuµnpRrLΩFVAWHzsdegC%±~()^*/'JlOo\x00\x1b\u00a0\u0663", max_size=24),
    st.builds(
        "{}{}{}{}".format, st.sampled_from(["", "-", "−", "~", "."]),
        st.sampled_from(["1", "4", "2,2", "1 000", "1e3", "1,000", "0", "9" * 50, "1.2.3"]),
        st.sampled_from(["", " ", "\u00a0"]),
        st.sampled_from(["k7", "kohm", "uF", "mfd", "kilohm", "MA", "m", "M", "degF",
                         "V~", "furlong", "kg", "J", "%", "m**9", "s*s*s*s*s", "K/W", "OL"]),
    ),
)
"""Anything at all, text of the right characters in any order, and nearly right values."""


def _check_refusal(text: str, unit: str) -> None:
    """A finite value or a QuantityError in one printable line, without hanging."""
    for function in (parse, parse_reading):
        try:
            with answers_in_time():
                value = function(text, unit)
            assert math.isfinite(value) or (function is parse_reading and value == math.inf)
        except QuantityError as error:
            assert not [ch for ch in str(error) if unicodedata.category(ch)[0] == "C"]
            assert len(str(error)) < 300


@given(TYPED, st.sampled_from(sorted(UNITS)))
@settings(deadline=None)
@example("1 " + "s*" * 6 + "s", "V")
def test_any_text_gives_a_value_or_one_printable_line(text: str, unit: str) -> None:
    _check_refusal(text, unit)


@pytest.mark.long
@given(TYPED, st.sampled_from(sorted(UNITS)))
@settings(deadline=None, max_examples=LONG, database=None)
def test_any_text_long_run(text: str, unit: str) -> None:
    """As many inputs as TRIAGE_LONG_EXAMPLES says."""
    _check_refusal(text, unit)


@pytest.mark.long
@given(SENSIBLE, st.sampled_from(sorted(UNITS)), st.integers(1, 15))
@settings(deadline=None, max_examples=LONG // 5, database=None)
def test_round_trip_long_run(value: float, unit: str, digits: int) -> None:
    _check_round_trip(value, unit, digits)


def test_common_forms_do_not_load_the_unit_library() -> None:
    """A fresh interpreter that reads the everyday forms has not imported Pint."""
    code = (
        "import sys; from triage.quantities import parse, engineering\n"
        "for text, unit in [('4k7','ohm'),('100n','F'),('0,15 A','A'),('15 mA','A'),('230V~','V'),\n"
        "    ('33mfd','F'),('4K7J','ohm')]:\n"
        "    engineering(parse(text, unit), unit)\n"
        "print('pint' in sys.modules, 'numpy' in sys.modules)"
    )
    answer = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert answer.stdout.split() == ["False", "False"]
