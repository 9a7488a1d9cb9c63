"""Limits of the safety room against the printed figures of standards, copied here with their source.

How each figure was read is said beside it: ``verified`` was read in a public text (a public copy, test
report, law text or data sheet, not the priced standard), ``from memory`` was not read again.
"""

from datetime import date

import pytest

from tests.safety.boards import brick
from triage.physics.capacitor_discharge import stored_energy
from triage.safety import discharge, energy, insulation, output, safety_parts, touch_current
from triage.safety.limits import Source

MM = 1e-3

CREEPAGE_ROWS = [
    # IEC 60664-1:2007, table F.5, PD2 other than printed wiring; verified in an open insulation-coordination
    # model.
    (50.0, 0.60, 0.85, 1.20),
    (100.0, 0.71, 1.00, 1.40),
    (125.0, 0.75, 1.05, 1.50),
    (160.0, 0.80, 1.10, 1.60),
    (200.0, 1.00, 1.40, 2.00),
    (250.0, 1.25, 1.80, 2.50),
    (320.0, 1.60, 2.20, 3.20),
    (400.0, 2.0, 2.8, 4.0),
]


@pytest.mark.parametrize(("volts", "one", "two", "three"), CREEPAGE_ROWS)
def test_creepage_at_the_printed_rows(volts, one, two, three, outside_check) -> None:
    for group, printed in (("I", one), ("II", two), ("III", three)):
        outside_check(
            "creepage [m]",
            "IEC 60664-1:2007, table F.5",
            insulation.creepage(volts, group),
            printed * MM,
            1e-9,
            absolute=True,
        )


def test_creepage_between_the_rows(outside_check) -> None:
    """Interpolation at 230 V: 2.3 mm basic, 4.6 mm reinforced (linear between 2.0 and 2.5 mm)."""
    source = "IEC 60664-1:2007, table F.5"
    outside_check("creepage [m]", source, insulation.creepage(230.0), 2.3 * MM, 1e-9, absolute=True)
    outside_check("creepage [m]", source, insulation.creepage(230.0, grade="reinforced"), 4.6 * MM, 1e-9, absolute=True)


def test_creepage_reinforced_at_250_v(outside_check) -> None:
    """IEC 60950-1 table 2L/2N: 250 V, PD2, IIIa: 5.0 mm (quoted on a product-safety engineers' list;
    verified)."""
    outside_check(
        "creepage [m]",
        "IEC 60950-1, table 2N",
        insulation.creepage(250.0, grade="reinforced"),
        5.0 * MM,
        1e-9,
        absolute=True,
    )


@pytest.mark.parametrize(
    ("mains", "category", "impulse"),
    [
        (230.0, "II", 2500.0),
        (120.0, "II", 1500.0),
        (230.0, "III", 4000.0),
        (300.0, "I", 1500.0),
        (50.0, "II", 500.0),
    ],
)
def test_rated_impulse(mains, category, impulse, outside_check) -> None:
    """IEC 60664-1:2007, table F.1; 2500 V for 240 V mains also in a published test report. Verified."""
    outside_check(
        "rated impulse [V]",
        "IEC 60664-1:2007, table F.1",
        insulation.rated_impulse(mains, category),
        impulse,
        0.0,
        absolute=True,
    )


@pytest.mark.parametrize(("impulse", "printed"), [(1500.0, 0.5), (2500.0, 1.5), (4000.0, 3.0), (6000.0, 5.5)])
def test_clearance_rows(impulse, printed, outside_check) -> None:
    """IEC 60664-1:2007, table F.2 case A, PD2; verified."""
    outside_check(
        "clearance [m]",
        "IEC 60664-1:2007, table F.2",
        insulation.clearance(impulse),
        printed * MM,
        1e-9,
        absolute=True,
    )


def test_reinforced_clearance_meets_the_product_standard(outside_check) -> None:
    """The next preferred impulse after 2500 V gives the 3.0 mm of IEC 62368-1:2014, table 15 (test report,
    verified)."""
    outside_check(
        "clearance [m]",
        "IEC 62368-1:2014, table 15",
        insulation.clearance(2500.0, grade="reinforced"),
        3.0 * MM,
        1e-9,
        absolute=True,
    )


@pytest.mark.parametrize(("altitude", "factor"), [(2000.0, 1.0), (3000.0, 1.14), (5000.0, 1.48), (10000.0, 3.02)])
def test_altitude_factor(altitude, factor, outside_check) -> None:
    outside_check(
        "altitude factor",
        "IEC 60664-1:2007, table A.2",
        insulation.altitude_factor(altitude),
        factor,
        1e-9,
        absolute=True,
    )


def test_solid_insulation(outside_check) -> None:
    outside_check(
        "distance through insulation [m]",
        "IEC 60950-1, 2.10.5.2",
        insulation.through_insulation(),
        0.4 * MM,
        1e-9,
        absolute=True,
    )


ENERGY_ROWS = [
    # Commission Regulation (EU) 2019/1782, Annex II (law text, verified); level, class, watts, efficiency,
    # no-load watts.
    ("EU 2019/1782", "low voltage", 2.5, 0.6819, 0.10),
    ("EU 2019/1782", "low voltage", 5.0, 0.7362, 0.10),
    ("EU 2019/1782", "low voltage", 10.0, 0.7870, 0.10),
    ("EU 2019/1782", "low voltage", 12.0, 0.7994, 0.10),
    ("EU 2019/1782", "basic", 0.9, 0.6100, 0.10),
    ("EU 2019/1782", "basic", 6.0, 0.7888, 0.10),
    ("EU 2019/1782", "basic", 12.0, 0.8296, 0.10),
    ("EU 2019/1782", "basic", 24.0, 0.8620, 0.10),
    ("EU 2019/1782", "basic", 36.0, 0.8740, 0.10),
    ("EU 2019/1782", "basic", 49.0, 0.8777, 0.10),
    ("EU 2019/1782", "basic", 65.0, 0.8800, 0.21),
    ("EU 2019/1782", "basic", 90.0, 0.8800, 0.21),
    # AS/NZS 4665 mark V, tables 5 and 6; International Efficiency Marking Protocol (verified).
    ("Level V", "basic", 5.0, 0.7228, 0.30),
    ("Level V", "basic", 12.0, 0.7776, 0.30),
    ("Level V", "basic", 65.0, 0.8700, 0.50),
    ("Level IV", "basic", 5.0, 0.6448, 0.50),
    ("Level IV", "basic", 12.0, 0.7236, 0.50),
    ("Level IV", "basic", 65.0, 0.8500, 0.50),
]


@pytest.mark.parametrize(("level", "supply", "watts", "efficiency", "idle"), ENERGY_ROWS)
def test_energy_limits(level, supply, watts, efficiency, idle, outside_check) -> None:
    found = energy.level_limit(level, supply, watts)
    assert found is not None
    source = found.source.document
    outside_check("average efficiency", source, found.average, efficiency, 1e-4, absolute=True)
    outside_check("no-load power [W]", source, found.no_load, idle, 0.0, absolute=True)


def test_energy_level_of_the_day(outside_check) -> None:
    """A 65 W brick: 0.5 W under (EC) 278/2009 stage 2 in 2019, 0.21 W under (EU) 2019/1782 from 1 April
    2020."""
    for day, idle in ((date(2019, 6, 1), 0.5), (date(2020, 4, 1), 0.21)):
        found = energy.limit_in_force("basic", 65.0, day)
        assert found is not None
        outside_check("no-load power in force [W]", found.source.document, found.no_load, idle, 0.0, absolute=True)


BLEED_ROWS = [
    # Exponential discharge through 2.2 kohm: C [F], V0 [V], E [J], tau [s], t to 60 V [s], t to 10 V [s], I
    # [A], P [W].
    (4.7e-6, 325.0, 0.2482, 0.01034, 0.01747, 0.036, 0.1477, 48.01),
    (10e-6, 373.0, 0.6956, 0.022, 0.0402, 0.07962, 0.1695, 63.24),
    (120e-6, 373.0, 8.348, 0.264, 0.4824, 0.9554, 0.1695, 63.24),
    (220e-6, 400.0, 17.6, 0.484, 0.9182, 1.785, 0.1818, 72.73),
    (470e-6, 200.0, 9.4, 1.034, 1.245, 3.098, 0.09091, 18.18),
]


@pytest.mark.parametrize(("farad", "volts", "joule", "tau", "t60", "t10", "amps", "watts"), BLEED_ROWS)
def test_bleed_through_2k2(farad, volts, joule, tau, t60, t10, amps, watts, outside_check) -> None:
    kind = discharge.ResistorKind("wirewound", 10.0, 700.0, 10.0)
    bleeder = discharge.Bleeder(kind, 1, 2200.0, volts, farad, Source("bleed table"))
    source = "bleed table of a 2.2 kohm resistor, V0 exp(-t/RC)"
    for subject, got, expected in (
        ("stored energy [J]", stored_energy(farad, volts), joule),
        ("time constant [s]", bleeder.time_constant, tau),
        ("time to 60 V [s]", bleeder.time_to(60.0), t60),
        ("time to 10 V [s]", bleeder.time_to(10.0), t10),
        ("first current [A]", bleeder.peak_current, amps),
        ("first power [W]", bleeder.peak_power, watts),
    ):
        outside_check(subject, source, got, expected, 5e-4 * expected, absolute=True)


def test_touch_current_of_the_brick(outside_check) -> None:
    """IEC 60990:2016, figure 4: U2/500 for 2.2 nF, 264 V, 60 Hz, from an independent phasor solution:
    218.097 uA."""
    outside_check(
        "touch current of a board [A]",
        "IEC 60990:2016, figure 4",
        touch_current.touch_current(brick()).expected,
        0.000218096969,
        1e-9,
        absolute=True,
    )


def test_plug_discharge_resistor(outside_check) -> None:
    """IEC 62368-1, 5.5.2.2: 3.317 Mohm across 0.33 uF takes the plug of a 373 V crest to 60 V in 2 s."""
    kind = discharge.ResistorKind("metal film", 0.25, 500.0, 1.0)
    bleeder = discharge.Bleeder(kind, 1, 3.317e6, 373.0, 0.33e-6, Source("IEC 62368-1:2014"))
    outside_check("time of the X discharge resistor [s]", "IEC 62368-1:2014, 5.5.2.2", bleeder.time_to(60.0), 2.0, 1e-3)


OUTPUT_ROWS = [
    # USB 2.0 7.2.2 and table 7-7, VBUS ECN 2014, BC 1.2 section 4 (verified); low power and PD from memory.
    ("USB", 5.0, 4.75, 5.25),
    ("USB since 2014", 5.0, 4.75, 5.50),
    ("USB low power", 5.0, 4.40, 5.25),
    ("USB dedicated charger", 5.0, 4.75, 5.25),
    ("USB PD", 20.0, 19.0, 21.0),
    ("barrel", 12.0, 11.4, 12.6),
]


@pytest.mark.parametrize(("kind", "volts", "low", "high"), OUTPUT_ROWS)
def test_output_windows(kind, volts, low, high, outside_check) -> None:
    found = output.window(kind, volts)
    source = f"{found.source.document} {found.source.clause}".strip()
    outside_check("output low [V]", source, found.low, low, 1e-9, absolute=True)
    outside_check("output high [V]", source, found.high, high, 1e-9, absolute=True)


SAFETY_CLASSES = [
    # IEC 60384-14, tables of classes (public notes and a capacitor data sheet quoting IEC 384-14:1993;
    # verified).
    ("X1", 4000.0),
    ("X2", 2500.0),
    ("Y1", 8000.0),
    ("Y2", 5000.0),
    ("Y4", 2500.0),
    ("X3", 0.0),
    ("Y3", 0.0),
]


@pytest.mark.parametrize(("name", "impulse"), SAFETY_CLASSES)
def test_safety_capacitor_impulse(name, impulse, outside_check) -> None:
    outside_check(
        "impulse of the class [V]",
        "IEC 60384-14",
        safety_parts.impulse_voltage(name),
        impulse,
        0.0,
        absolute=True,
    )


def test_safety_capacitor_above_a_microfarad(outside_check) -> None:
    """IEC 60384-14: Up / sqrt(C / 1 uF) for X1, X2 and Y2; Y1 and Y4 keep theirs (verified)."""
    for name, expected in (("X2", 2500.0 / 1.5), ("Y1", 8000.0)):
        outside_check(
            "impulse of the class [V]",
            "IEC 60384-14",
            safety_parts.impulse_voltage(name, 2.25e-6),
            expected,
            1e-6,
            absolute=True,
        )


FUSE_GATES = [
    # IEC 60127-2 as printed in maker data sheets: marking, times rated, least and most seconds (verified:
    # sheets 3, 5).
    ("T2AH250V", 2.75, 0.75, 80.0),
    ("T2AH250V", 4.0, 0.095, 5.0),
    ("T2AH250V", 10.0, 0.010, 0.150),
    ("T5AH250V", 4.0, 0.150, 5.0),
    ("T5AH250V", 10.0, 0.020, 0.150),
    ("T1AL250V", 2.75, 0.6, 10.0),
    ("T1AL250V", 10.0, 0.020, 0.300),
    ("T80mAL250V", 4.0, 0.040, 3.0),
    # Sheets 1 and 2 from memory.
    ("F1AL250V", 4.0, 0.010, 0.300),
    ("F1AH250V", 4.0, 0.003, 0.300),
]


@pytest.mark.parametrize(("marking", "times", "least", "most"), FUSE_GATES)
def test_fuse_gates(marking, times, least, most, outside_check) -> None:
    gate = safety_parts.parse_fuse(marking).gate(times)
    assert gate is not None
    for subject, got, expected in (
        ("opens not before [s]", gate[0], least),
        ("opens not after [s]", gate[1], most),
    ):
        outside_check(subject, "IEC 60127-2", got, expected, 0.0, absolute=True)


@pytest.mark.parametrize(
    ("marking", "amps"), [("T1AL250V", 35.0), ("T6.3AL250V", 63.0), ("T1AH250V", 1500.0), ("T1AE250V", 150.0)]
)
def test_fuse_breaking_capacity(marking, amps, outside_check) -> None:
    """IEC 60127-2: L 35 A or ten times rated, H 1500 A (maker data sheets, verified); E 150 A from memory."""
    found = safety_parts.parse_fuse(marking).breaking_capacity
    outside_check("breaking capacity [A]", "IEC 60127-2", found, amps, 1e-9, absolute=True)
