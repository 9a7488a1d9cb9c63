"""The demand of a position: figures by hand, the dead part's mistake, and what stays open where too little is known."""

import math
from dataclasses import replace

import pytest

from tests.replacement.boards import SECOND, board, part, stress
from triage.board.stress import Stress
from triage.errors import EntryError
from triage.replacement.catalog import Catalog
from triage.replacement.demand import Demand, Requirement, demand
from triage.replacement.positions import Position, plain_role, position_of, positions
from triage.replacement.ranking import candidates, to_confirm
from triage.replacement.wording import WORDS, figure, unit_of

CATALOG = Catalog()


def _need(asked: Demand, key: str) -> Requirement:
    return next(requirement for requirement in asked.requirements if requirement.key == key)


def test_minimum_is_stress_over_factor_with_its_reason() -> None:
    """By hand: 439 V / 0.8 = 548.75 V."""
    dead = part("D2", "diode", "clamp diode")
    asked = demand(board(dead), "D2", stress("D2", reverse_voltage=439.0), CATALOG)
    need = _need(asked, "vrrm_V")
    assert need.minimum == pytest.approx(548.75)
    assert need.reason == "439 V at 253 V, full load / 0.8"
    assert "MIL-HDBK-338B" in need.source
    assert need.unit == "V" and need.text == "repetitive reverse voltage"


def test_the_old_rating_counts_too() -> None:
    """Both must hold: the stress asks for 549 V, the old part offered 1000 V."""
    dead = part("D2", "diode", "clamp diode", "FR107")
    need = _need(demand(board(dead), "D2", stress("D2", reverse_voltage=439.0), CATALOG), "vrrm_V")
    assert (need.minimum, need.offered, need.stressed) == (1000.0, 1000.0, pytest.approx(548.75))
    assert need.mistake == ""


def test_a_dead_part_below_the_demand_is_told_as_the_mistake() -> None:
    """Carried 0.6 A average against a rating of 0.2 A."""
    dead = part("D5", "diode", "auxiliary rectifier", "1N4148", rated_current=0.2)
    asked = demand(board(dead), "D5", stress("D5", average_current=0.6), CATALOG)
    assert asked.mistakes == ("carried 0.6 A average current against a rating of 0.2 A: it was past its rating",)
    assert _need(asked, "if_av_A").minimum == pytest.approx(1.2)
    thin = demand(board(dead), "D5", stress("D5", average_current=0.15), CATALOG)
    assert thin.mistakes == ("carried 0.15 A average current against a rating of 0.2 A, of which 0.5 is the recommended share",)


def test_mains_floors_follow_the_mains_and_the_side() -> None:
    """1000 V at 230 V mains, 400 V at 120 V, none behind the transformer (reference: replacement rules)."""
    dead = part("D1", "diode", "mains rectifier")
    behind = part("D1", "diode", "bridge diode", pins=SECOND)
    low = stress("D1", reverse_voltage=20.0)
    assert _need(demand(board(dead), "D1", low, CATALOG), "vrrm_V").minimum == 1000.0
    assert _need(demand(board(dead, high=132.0), "D1", low, CATALOG), "vrrm_V").minimum == 400.0
    assert _need(demand(board(behind), "D1", low, CATALOG), "vrrm_V").minimum == pytest.approx(40.0)


def test_a_melting_integral_becomes_a_surge_of_one_half_wave() -> None:
    """By hand: I2t of a half sine is I² t / 2, so 0.5 A²s in 8.3 ms is sqrt(2 x 0.5 / 0.0083) = 10.98 A, / 0.8 = 13.7 A."""
    dead = part("D1", "diode", "mains rectifier")
    need = _need(demand(board(dead), "D1", stress("D1", i2t=0.5), CATALOG), "ifsm_A")
    assert need.minimum == pytest.approx(math.sqrt(1.0 / 8.3e-3) / 0.8)


def test_zener_current_from_power_where_no_current_is_known() -> None:
    """By hand: 10.4 mW / 6.2 V = 1.68 mA, five times that 8.39 mA."""
    dead = part("DZ1", "zener", "regulation zener", zener_voltage=6.2, rated_power=0.5)
    need = _need(demand(board(dead), "DZ1", stress("DZ1", power=0.0104), CATALOG), "izt_A")
    assert need.maximum == pytest.approx(5 * 0.0104 / 6.2)


def test_an_unknown_place_promises_nothing() -> None:
    """Neither stress nor rating nor type: every candidate is refused, and told why."""
    dead = part("D5", "diode", "output rectifier", pins=SECOND)
    asked = demand(board(dead), "D5", (), CATALOG)
    assert _need(asked, "vrrm_V").undecided
    assert candidates(CATALOG, asked) == ()
    zener = demand(board(part("DZ1", "zener", "regulation zener")), "DZ1", (), CATALOG)
    assert _need(zener, "vz_V").undecided and candidates(CATALOG, zener) == ()


def test_what_the_print_on_the_old_part_says_is_used() -> None:
    """T1.6A gives current and speed; size and standard are to be read, and F fuses are refused for good."""
    asked = demand(board(part("F1", "fuse", "mains fuse", "T1.6A")), "F1", (), CATALOG)
    assert _need(asked, "speed").words == ("T",)
    assert _need(asked, "case").undecided and _need(asked, "case").readable
    offered = to_confirm(CATALOG, asked)
    assert offered and all(one.part.type.startswith("T 1.6A") for one in offered)
    assert candidates(CATALOG, asked) == ()


def test_a_missing_part_is_an_entry_error() -> None:
    """The board has no such part."""
    with pytest.raises(EntryError, match="not on this board"):
        demand(board(part("D1", "diode", "mains rectifier")), "D9", (), CATALOG)


def test_stresses_of_other_parts_and_without_value_are_passed_over() -> None:
    """NaN and infinity decide nothing."""
    dead = part("D2", "diode", "clamp diode", "FR107")
    odd = (
        Stress("D2", "reverse_voltage", math.nan),
        Stress("D2", "average_current", math.inf),
        Stress("Q1", "reverse_voltage", 5e3),
    )
    need = _need(demand(board(dead), "D2", odd, CATALOG), "vrrm_V")
    assert need.minimum == 1000.0


def test_every_role_of_the_shipped_profiles_has_its_position() -> None:
    """No role of an adapter is left to the fallback of its kind (needs the profile loader)."""
    from triage.board.profile import load_profile
    from triage.data import data_folder

    missing = []
    for path in sorted(data_folder("profiles").glob("*.toml")):
        adapter = load_profile(path)
        for one in adapter.parts:
            position = position_of(adapter, one)
            if position is None or plain_role(one.role) not in position.roles:
                missing.append(f"{path.name}: {one.ref} {one.role}")
    assert missing == []


def test_the_position_table_names_only_what_exists() -> None:
    """Every class is a file of the catalog, every field is known there, every key has its words."""
    fields = {name: set(CATALOG.file(name).parts[0].numbers) if CATALOG.file(name).parts else set() for name in CATALOG.classes}
    for name in CATALOG.classes:
        file = CATALOG.file(name)
        for known in (*file.parts, *(size.template for size in file.sizes)):
            fields[name] |= known.numbers.keys() | known.texts.keys()
        fields[name] |= {file.value_key}
    for position in positions():
        assert isinstance(position, Position)
        assert set(position.classes) <= set(CATALOG.classes), position.roles
        for need in position.needs:
            assert need.key in WORDS
            assert any({need.key, *need.alternatives} & fields[name] for name in position.classes), (position.roles, need.key)


@pytest.mark.parametrize(
    ("role", "plain"),
    [
        ("mains fuse, slow", "mains fuse"),
        ("regulation zener (auxiliary rail to base)", "regulation zener"),
        ("clamp diode", "clamp diode"),
    ],
)
def test_remarks_are_no_part_of_a_role(role: str, plain: str) -> None:
    """The role is what stands before a bracket or comma."""
    assert plain_role(role) == plain


@pytest.mark.parametrize(
    ("key", "unit", "value", "text"),
    [
        ("vrrm_V", "V", 1000.0, "1000 V"),
        ("c_F", "F", 4.7e-6, "4.7 uF"),
        ("trr_max_s", "s", 75e-9, "75 ns"),
        ("r_ohm", "ohm", 330e3, "330 kohm"),
        ("r_ohm", "ohm", 1e6, "1 Mohm"),
        ("rth_ja_K_per_W", "K/W", 50.0, "50 K/W"),
        ("tol_percent", "%", 5.0, "5 %"),
        ("hfe_min", "", 25.0, "25"),
    ],
)
def test_units_and_figures(key: str, unit: str, value: float, text: str) -> None:
    """The unit is the end of the key; figures carry four digits at most."""
    assert unit_of(key) == unit
    assert figure(value, unit) == text


def test_a_dead_part_of_the_wrong_class_is_the_mistake() -> None:
    """1N4007 as auxiliary rectifier at the switching frequency (common practice: replace it by a fast one)."""
    dead = part("D4", "diode", "auxiliary rectifier", "1N4007")
    asked = demand(board(dead), "D4", stress("D4", reverse_voltage=39.0, average_current=0.01), CATALOG)
    assert asked.mistakes == ("1N4007 is a rectifier: the place takes small signal diode or fast rectifier or schottky",)
    assert _need(asked, "vr_dc_V").minimum == pytest.approx(39.0 / 0.7)
    offered = {one.part.type for one in candidates(CATALOG, asked, limit=300)}
    assert {"FR104", "UF4002"} <= offered and "1N4007" not in offered
    assert not any(CATALOG.find(name).text("case") == "SMA" for name in offered)  # type: ignore[union-attr]


def test_a_type_of_another_kind_is_not_taken_for_the_dead_part() -> None:
    """1N60 on a diode is the germanium diode, not the MOSFET of the catalog."""
    asked = demand(board(part("D9", "diode", "small-signal diode", "1N60")), "D9", stress("D9", reverse_voltage=10.0), CATALOG)
    assert asked.original is None


def test_a_place_without_a_rule_takes_the_very_same_type_only() -> None:
    """A part that no table knows: nothing is computed, nothing is offered."""
    asked = demand(board(part("SG1", "spark_gap", "spark gap", "SG-75")), "SG1", (), CATALOG)
    assert asked.requirements == () and asked.classes == () and asked.original_type == "SG-75"
    assert "fit the very same type" in asked.note and candidates(CATALOG, asked) == ()


def test_an_estimated_value_is_to_be_read_before_ordering() -> None:
    """A designer's estimate says what to look for, not what to order."""
    dead = replace(part("C1", "electrolytic", "bulk capacitor", capacitance=4.7e-6), origin="estimated")
    assert "only estimated" in demand(board(dead), "C1", (), CATALOG).note
    assert "only estimated" not in demand(board(replace(dead, origin="marking")), "C1", (), CATALOG).note


def test_the_gain_of_a_switch_comes_from_its_value_or_from_the_band_of_its_type() -> None:
    """A base drive is made for the gain: 30 % either way of a known one, the band of the sheet where only the type is."""
    known = _need(demand(board(part("Q1", "bipolar_transistor", "main switch", gain=20.0)), "Q1", (), CATALOG), "hfe_min")
    assert (known.minimum, known.maximum, known.rule) == (pytest.approx(14.0), pytest.approx(26.0), "gain near")
    typed = _need(demand(board(part("Q1", "bipolar_transistor", "main switch", "MJE13003")), "Q1", (), CATALOG), "hfe_min")
    sheet = CATALOG.find("MJE13003")
    assert sheet is not None
    assert (typed.minimum, typed.maximum, typed.rule) == (sheet.numbers["hfe_min"], sheet.numbers["hfe_max"], "gain band")
    nothing = demand(board(part("Q1", "bipolar_transistor", "main switch")), "Q1", (), CATALOG)
    assert not any(need.key == "hfe_min" for need in nothing.requirements)


def test_an_output_capacitor_is_asked_for_its_impedance_only_where_the_old_one_is_known() -> None:
    """1.3 times the old series resistance at most; no figure out of nothing."""
    dead = part("C5", "electrolytic", "output capacitor", "", SECOND, capacitance=470e-6, esr=0.1)
    assert _need(demand(board(dead), "C5", (), CATALOG), "z_100kHz_20C_ohm").maximum == pytest.approx(0.13)
    silent = part("C5", "electrolytic", "output capacitor", "", SECOND, capacitance=470e-6)
    assert not any(need.key == "z_100kHz_20C_ohm" for need in demand(board(silent), "C5", (), CATALOG).requirements)


def test_a_zener_current_that_is_known_is_taken_as_it_is() -> None:
    """Five times 2 mA."""
    dead = part("DZ1", "zener", "regulation zener", zener_voltage=6.2, rated_power=0.5)
    asked = demand(board(dead), "DZ1", stress("DZ1", average_current=0.002, power=0.5), CATALOG)
    assert _need(asked, "izt_A").maximum == pytest.approx(0.01)


def test_a_surge_beyond_the_old_rating_is_no_designers_mistake() -> None:
    """A melting integral is turned into a surge by a rule of thumb: too rough to blame anybody."""
    dead = part("D1", "diode", "mains rectifier", "1N4007", rated_surge_current=5.0)
    asked = demand(board(dead), "D1", stress("D1", i2t=50.0), CATALOG)
    assert not any("surge" in text for text in asked.mistakes)
