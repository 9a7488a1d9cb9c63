"""Marking codes and preferred values against the published tables.

Sources are named beside each table: IEC 60062 (marking codes for resistors and capacitors), IEC 60063
(preferred number series), EIA-96, EIA RS-198 and the EIA voltage codes, as collected in handbook topic 08 of
the reference data and read there in public copies of the tables.
"""

import tomllib
from pathlib import Path

import pytest

from tests.reference.conftest import OutsideChecks
from triage.quantities import parse
from triage.replacement.marking_codes import decode, is_preferred, series_values

LETTER_CODE_OHM = {
    "R47": 0.47,
    "4R7": 4.7,
    "470R": 470.0,
    "2K2": 2200.0,
    "4K7": 4700.0,
    "47K3": 47300.0,
    "1M0": 1e6,
    "4M7": 4.7e6,
    "R010": 0.010,
    "10R0": 10.0,
}
"""IEC 60062, clause 4: letter code for resistance."""

LETTER_CODE_FARAD = {"p33": 0.33e-12, "4p7": 4.7e-12, "2n2": 2.2e-9, "100n": 100e-9, "4u7": 4.7e-6}
"""IEC 60062, clause 4: letter code for capacitance."""

E_SERIES = {
    "E3": (10, 22, 47),
    "E6": (10, 15, 22, 33, 47, 68),
    "E12": (10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82),
    "E24": (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91),
    "E48": (
        100,
        105,
        110,
        115,
        121,
        127,
        133,
        140,
        147,
        154,
        162,
        169,
        178,
        187,
        196,
        205,
        215,
        226,
        237,
        249,
        261,
        274,
        287,
        301,
        316,
        332,
        348,
        365,
        383,
        402,
        422,
        442,
        464,
        487,
        511,
        536,
        562,
        590,
        619,
        649,
        681,
        715,
        750,
        787,
        825,
        866,
        909,
        953,
    ),
}
"""IEC 60063:2015, tables 1 and 2; E48 written out from memory of the table, not made by the rule."""

PRINTED = [
    # Letter code with tolerance letter: IEC 60062, clauses 4 and 5.
    ("4K7J", "resistance", 4700.0, 0.05),
    ("4R7J", "resistance", 4.7, 0.05),
    ("2M2", "resistance", 2.2e6, None),
    ("R47", "resistance", 0.47, None),
    ("10RJ", "resistance", 10.0, 0.05),
    # Chip codes: IEC 60062, clause 4; EIA-96 examples of handbook topic 08 (from memory).
    ("472", "resistance", 4700.0, None),
    ("103", "resistance", 10e3, None),
    ("1002", "resistance", 10e3, 0.01),
    ("1R0", "resistance", 1.0, None),
    ("R100", "resistance", 0.1, None),
    ("01A", "resistance", 100.0, 0.01),
    ("01C", "resistance", 10e3, 0.01),
    ("68X", "resistance", 49.9, 0.01),
    ("66B", "resistance", 4750.0, 0.01),
    # Three digits in pF: EIA RS-198 / IEC 60062.
    ("104", "capacitance", 100e-9, None),
    ("472", "capacitance", 4.7e-9, None),
    ("101", "capacitance", 100e-12, None),
    ("475", "capacitance", 4.7e-6, None),
    ("479", "capacitance", 4.7e-12, None),
    ("4R7", "capacitance", 4.7e-12, None),
    ("2A104J", "capacitance", 100e-9, 0.05),
    ("104J 630V", "capacitance", 100e-9, 0.05),
    ("222M", "capacitance", 2.2e-9, 0.20),
    ("103K 1KV", "capacitance", 10e-9, 0.10),
    ("471K", "capacitance", 470e-12, 0.10),
    ("n47", "capacitance", 470e-12, None),
    (".1uF 275V X2", "capacitance", 100e-9, None),
    ("0.22µF", "capacitance", 220e-9, None),
    # Lines in clear: common practice, no source.
    ("470uF 25V 105C", "capacitance", 470e-6, None),
    ("4.7µF400V", "capacitance", 4.7e-6, None),
    # Colours: IEC 60062:2016, table 1.
    ("yellow violet black gold", "resistance", 47.0, 0.05),
    ("brown black gold gold", "resistance", 1.0, 0.05),
    # Discs: common maker practice, no source.
    ("NTC5D-9", "resistance", 5.0, None),
    ("10D-11", "resistance", 10.0, None),
    ("07D471K", "varistor_voltage", 470.0, 0.10),
    ("07D471K", "ac_voltage", 300.0, 0.10),
    ("10D561K", "ac_voltage", 350.0, 0.10),
    ("14D431K", "ac_voltage", 275.0, 0.10),
    ("S10K275", "varistor_voltage", 430.0, 0.10),
    ("07K300", "varistor_voltage", 470.0, 0.10),
    # Fuses: IEC 60127-1.
    ("T3.15A250V", "current", 3.15, None),
    ("F2AL250V", "ac_voltage", 250.0, None),
    ("T500mAH250V", "current", 0.5, None),
    # Zener: Pro Electron code.
    ("BZX55C4V7", "zener_voltage", 4.7, 0.05),
]

DECODE_CHECKS = [
    # Handbook topic 08, [[decode_check]]: mark, key, value, tolerance, voltage.
    ("yellow violet red gold", "resistance", 4700.0, 0.05, None),
    ("brown black black red brown", "resistance", 10e3, 0.01, None),
    ("green blue gold gold", "resistance", 5.6, 0.05, None),
    ("red red silver gold", "resistance", 0.22, 0.05, None),
    ("2G103J", "capacitance", 10e-9, 0.05, 400.0),
    ("1H222K", "capacitance", 2.2e-9, 0.10, 50.0),
]

VOLTAGE_CODES = {
    "0E": 2.5,
    "0G": 4.0,
    "0J": 6.3,
    "1A": 10.0,
    "1C": 16.0,
    "1D": 20.0,
    "1E": 25.0,
    "1V": 35.0,
    "1H": 50.0,
    "1J": 63.0,
    "2A": 100.0,
    "2C": 160.0,
    "2D": 200.0,
    "2E": 250.0,
    "2V": 350.0,
    "2G": 400.0,
    "2W": 450.0,
    "2H": 500.0,
    "2J": 630.0,
    "3A": 1000.0,
    "3C": 1600.0,
}
"""EIA voltage code tables."""


@pytest.mark.parametrize(("text", "value"), LETTER_CODE_OHM.items())
def test_letter_code_of_resistance(text: str, value: float, outside_check: OutsideChecks) -> None:
    got = [parse(text, "ohm"), decode(text)[0].values["resistance"]]
    outside_check("marking, letter code", "IEC 60062", got, value, 1e-13, what=text)


@pytest.mark.parametrize(("text", "value"), LETTER_CODE_FARAD.items())
def test_letter_code_of_capacitance(text: str, value: float, outside_check: OutsideChecks) -> None:
    got = [parse(text, "F"), decode(text)[0].values["capacitance"]]
    outside_check("marking, letter code", "IEC 60062", got, value, 1e-13, what=text)


@pytest.mark.parametrize("series", E_SERIES)
def test_preferred_values(series: str, outside_check: OutsideChecks) -> None:
    assert len(series_values(series)) == len(E_SERIES[series])
    outside_check("preferred values", "IEC 60063:2015", series_values(series), E_SERIES[series], 0.0, absolute=True)


def test_fine_series_have_their_length_and_contain_the_coarser_one() -> None:
    """IEC 60063: E48 is every second value of E96, E96 every second of E192; E192 has 920, not 919."""
    assert (len(series_values("E96")), len(series_values("E192"))) == (96, 192)
    assert series_values("E96")[::2] == series_values("E48")
    assert series_values("E192")[::2] == series_values("E96")
    assert 920 in series_values("E192") and 919 not in series_values("E192")
    assert is_preferred(49.9, "E96") and not is_preferred(50.0, "E96")


@pytest.mark.parametrize(("text", "key", "value", "tolerance"), PRINTED)
def test_printed_code(text: str, key: str, value: float, tolerance: float | None) -> None:
    readings = [reading for reading in decode(text) if key in reading.values]
    assert readings, f"no reading with {key}"
    assert readings[0].values[key] == pytest.approx(value, rel=1e-12)
    assert readings[0].tolerance == tolerance


@pytest.mark.parametrize(("mark", "key", "value", "tolerance", "voltage"), DECODE_CHECKS)
def test_decode_check_of_the_handbook(
    mark: str, key: str, value: float, tolerance: float, voltage: float | None, outside_check: OutsideChecks
) -> None:
    first = decode(mark)[0]
    outside_check("marking, decoded", "IEC 60062:2016; EIA RS-198", first.values[key], value, 1e-12, what=mark)
    assert first.tolerance == tolerance
    assert first.values.get("voltage") == voltage


def test_no_decode_check_of_the_handbook_is_left_out(shared: Path) -> None:
    """The list above holds every [[decode_check]] of the reference data."""
    handbook = tomllib.loads((shared / "reference/handbook/08_component_marking.toml").read_text("utf-8"))
    ours = {mark: value for mark, _, value, _, _ in DECODE_CHECKS}
    assert ours == {check["mark"]: pytest.approx(check["value"]) for check in handbook["decode_check"]}


@pytest.mark.parametrize(("code", "volts"), VOLTAGE_CODES.items())
def test_voltage_code(code: str, volts: float, outside_check: OutsideChecks) -> None:
    got = decode(f"{code}104K")[0].values["voltage"]
    outside_check("marking, voltage code", "EIA voltage code tables", got, volts, 0.0, absolute=True, what=code)


@pytest.mark.parametrize(
    ("letter", "tolerance"),
    [("F", 0.01), ("G", 0.02), ("H", 0.03), ("J", 0.05), ("K", 0.10), ("M", 0.20), ("Z", 0.80)],
)
def test_tolerance_letters_of_capacitors(letter: str, tolerance: float, outside_check: OutsideChecks) -> None:
    """EIA RS-198 / IEC 60062; Z is -20 +80 %, kept by its wider side."""
    got = decode(f"104{letter} 100V")[0].tolerance
    outside_check("marking, tolerance letter", "IEC 60062:2016; EIA RS-198", got, tolerance, 0.0, absolute=True, what=letter)


@pytest.mark.parametrize(("letter", "picofarads"), [("B", 0.1), ("C", 0.25), ("D", 0.5), ("F", 1.0)])
def test_tolerance_letters_below_ten_picofarads(letter: str, picofarads: float) -> None:
    """EIA RS-198 / IEC 60062: in pF, not in percent."""
    reading = next(reading for reading in decode(f"479{letter}") if "capacitance" in reading.values)
    assert reading.tolerance == pytest.approx(picofarads / 4.7)


KEYS = {
    "fuse": {"current": ("in_A", 1.0)},
    "film_capacitor": {"capacitance": ("c_F", 1.0)},
    "ntc": {"resistance": ("r25_ohm", 1.0), "diameter": ("disc_mm", 1e-3)},
    "varistor": {
        "varistor_voltage": ("v1mA_V", 1.0),
        "ac_voltage": ("vac_max_V", 1.0),
        "dc_voltage": ("vdc_max_V", 1.0),
        "diameter": ("disc_mm", 1e-3),
    },
}
"""Class of the reference part lists -> our key -> (their field, factor to SI)."""


@pytest.mark.parametrize("part_class", KEYS)
def test_markings_of_the_reference_parts(shared: Path, part_class: str) -> None:
    """The first reading of every printed marking in the reference part lists is the part it stands on."""
    parts = tomllib.loads((shared / f"reference/parts/{part_class}.toml").read_text("utf-8"))["part"]
    wrong = []
    for part in parts:
        expected = {key: part[their] * factor for key, (their, factor) in KEYS[part_class].items()}
        for marking in part["marking"]:
            values = decode(marking)[0].values if decode(marking) else {}
            if {key: values.get(key) for key in expected} != pytest.approx(expected):
                wrong.append((marking, values))
    assert len(parts) > 30
    assert wrong == []
