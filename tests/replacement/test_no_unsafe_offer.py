"""No unsafe offer: all roles, every part of the catalog, random stresses, held against the plain rules."""

import random
from dataclasses import replace

import pytest

from tests.replacement.boards import SECOND, TWO, board, part
from tests.replacement.plain_rules import RULES, Place, violations
from triage.board.stress import Stress
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.demand import demand
from triage.replacement.drawers import OWN_READING
from triage.replacement.positions import positions
from triage.replacement.ranking import candidates, possible_parts
from triage.replacement.rules import check

CATALOG = Catalog()
DRAWS = 12

OLD = {
    "mains rectifier": ("diode", ["1N4007", "", "1N4005", "FR107"]),
    "bridge diode": ("diode", ["1N4007", "1N4001", ""]),
    "mains bridge": ("bridge", ["DB107", "KBP206", "GBU4J", ""]),
    "clamp diode": ("diode", ["FR107", "UF4007", "1N4007", ""]),
    "main switch": ("bipolar_transistor", ["MJE13003", "MJE13001", "MJE13007", ""]),
    "power switch": ("mosfet", ["4N60", "10N60", "IRF840", ""]),
    "output rectifier": ("diode", ["SB260", "SB560", "MBR20100CT", "1N5819"]),
    "output rectifier, pn": ("diode", ["HER303", "UF4004", "SF24"]),
    "auxiliary rectifier": ("diode", ["1N4148", "UF4004", "BAV21", ""]),
    "regulation zener": ("zener", ["", "BZX55C6V2", "1N4735A"]),
    "optocoupler": ("optocoupler", ["PC817B", "PC817", "EL817C", "4N35", ""]),
    "shunt reference": ("shunt_reference", ["TL431", "TLV431", ""]),
    "mains fuse": ("fuse", ["T 1A 5x20 L", "F 2A 5x20 H", "T1.6A", ""]),
    "fusible input resistor": ("fusible_resistor", [""]),
    "varistor": ("varistor", ["07D471K", "10D431K", ""]),
    "inrush NTC": ("ntc", ["5D-9", "10D-11", ""]),
    "X2 capacitor": ("x_capacitor", ["X2 104 275Vac P10", ""]),
    "Y1 capacitor": ("y_capacitor", ["Y1 222 400Vac", ""]),
    "free-wheeling diode": ("diode", ["UF4005", "1N4007", ""]),
    "inrush resistor": ("resistor", [""]),
    "integrated switch": ("buck_switcher", [""]),
    "dropper capacitor": ("x_capacitor", ["X2 105 275Vac P22.5", ""]),
    "bleeder of the dropper capacitor": ("resistor", [""]),
    "secondary rectifier": ("diode", ["1N4002", "1N4007", ""]),
    "shunt zener": ("zener", ["", "1N4743A", "BZX85C12"]),
    "mains cord": ("cable", [""]),
    "common-mode choke": ("common_mode_choke", [""]),
    "X discharge resistor": ("resistor", [""]),
    "bulk capacitor": ("electrolytic", [""]),
    "output capacitor": ("electrolytic", [""]),
    "startup resistor": ("resistor", [""]),
    "base drive resistor": ("resistor", [""]),
    "clamp resistor": ("resistor", [""]),
    "current sense resistor": ("resistor", [""]),
    "clamp capacitor": ("capacitor", [""]),
    "three-terminal regulator": ("regulator", ["7809", "7805", "7905", ""]),
    "turn-off transistor": ("bipolar_transistor", ["2SC945", "2SA733", "BC547"]),
    "flyback transformer": ("transformer", [""]),
    "current-mode PWM controller": ("pwm_controller", ["UC3842"]),
}
"""Role -> kind and dead parts to try."""

_RANGES = {
    "reverse_voltage": (1.0, 900.0),
    "peak_voltage": (1.0, 700.0),
    "average_current": (1e-4, 5.0),
    "peak_current": (1e-3, 6.0),
    "rms_current": (0.01, 5.0),
    "ripple_current": (1e-3, 3.0),
    "power": (1e-3, 5.0),
    "temperature": (30.0, 120.0),
}
_LIKELY = {
    "bulk capacitor": {"capacitance": 10e-6},
    "output capacitor": {"capacitance": 470e-6, "esr": 0.3},
    "clamp capacitor": {"capacitance": 1e-9},
    "X2 capacitor": {"capacitance": 100e-9},
    "Y1 capacitor": {"capacitance": 2.2e-9},
    "dropper capacitor": {"capacitance": 1e-6},
    "inrush resistor": {"resistance": 10.0},
    "bleeder of the dropper capacitor": {"resistance": 1e6},
    "shunt zener": {"zener_voltage": 12.0},
    "fusible input resistor": {"resistance": 10.0},
    "startup resistor": {"resistance": 1e6},
    "X discharge resistor": {"resistance": 1e6},
    "current sense resistor": {"resistance": 1.0},
    "three-terminal regulator": {"output_voltage": 5.0},
    "turn-off transistor": {"gain": 25.0},
}
"""Values that go with a role: half of the draws take them, so that there is something to offer."""
_LIKELY_RATINGS = {
    "optocoupler": {"current": 0.05, "voltage": 35.0},
    "three-terminal regulator": {"current": 1.0, "voltage": 10.0},
    "turn-off transistor": {"current": 0.05, "voltage": 10.0, "power": 0.25},
}
ONLY_THE_ORIGINAL = {"integrated switch", "mains cord", "common-mode choke", "flyback transformer", "current-mode PWM controller"}
"""Roles in which nothing of the catalog may be offered for a part of unknown type."""
_VALUES = {
    "resistance": [1.0, 10.0, 22.0, 150e3, 330e3, 1e6, 2.2e3],
    "capacitance": [100e-9, 220e-9, 1e-9, 2.2e-9, 4.7e-6, 10e-6, 470e-6],
    "gain": [15.0, 25.0, 200.0],
    "zener_voltage": [5.1, 6.2, 12.0],
    "cold_resistance": [5.0, 10.0],
    "output_voltage": [5.0, 9.0, -5.0],
    "esr": [0.05, 0.3],
    "reference_voltage": [2.495, 1.24],
}
_RATINGS = {
    "voltage": [10.0, 35.0, 250.0, 400.0, 700.0],
    "current": [0.05, 1.0, 1.6, 2.0],
    "power": [0.25, 0.5, 1.0, 2.0],
    "ripple_current": [0.05, 0.8],
    "temperature": [105.0],
}


def _draw(source: random.Random, table: dict[str, list[float]], share: float) -> dict[str, float]:
    return {key: source.choice(values) for key, values in table.items() if source.random() < share}


def _stresses(source: random.Random, share: float) -> tuple[Stress, ...]:
    found = []
    for quantity, (low, high) in _RANGES.items():
        if source.random() < share:
            hardness = source.random() ** source.choice((1, 2, 5))
            found.append(Stress("X1", quantity, low * (high / low) ** hardness, condition="drawn"))
    return tuple(found)


def _all_parts() -> list[CatalogPart]:
    parts = list(CATALOG.parts())
    for name in CATALOG.classes:
        if CATALOG.file(name).sizes:
            centre = 10.0 if name.endswith("resistor") else 1e-9
            parts.extend(CATALOG.near(name, centre * 0.8, centre * 1.2))
            parts.extend(CATALOG.near(name, centre * 0.8e5, centre * 1.2e5))
    return parts


@pytest.mark.long
@pytest.mark.parametrize("role", list(RULES))
def test_no_offered_part_breaks_a_rule(role: str) -> None:
    """Whatever passes ``check`` passes the second, plain implementation too; seeds fixed by the role.

    In every other draw the parts count as read in their sheets: else hardly a safety part could be offered at all.
    """
    source = random.Random(role)
    kind, old_types = OLD[role]
    every, offered = _all_parts(), 0
    for number in range(DRAWS):
        old_type = source.choice(old_types)
        likely = source.random() < 0.5
        values = _draw(source, _VALUES, 0.9) | (_LIKELY.get(role, {}) if likely else {})
        ratings = _draw(source, _RATINGS, source.choice((0.3, 0.8))) | (_LIKELY_RATINGS.get(role, {}) if likely else {})
        stresses = _stresses(source, source.choice((0.5, 1.0)))
        plain_role = role.partition(",")[0]
        secondary = plain_role in ("output rectifier", "output capacitor", "shunt reference", "three-terminal regulator")
        dead = replace(part("X1", kind, plain_role, old_type, SECOND if secondary else TWO, **values), ratings=ratings)
        asked = demand(board(dead), "X1", stresses, CATALOG)
        place = Place({s.quantity: s.value for s in stresses}, ratings, values, asked.original)
        for one in {found.type: found for found in (*every, *possible_parts(CATALOG, asked))}.values():
            if number % 2:
                one = replace(one, confidence=OWN_READING, from_memory=frozenset())
            if not check(one, asked):
                offered += 1
                assert not violations(role, place, one), (one.type, old_type, stresses, ratings, values)
        for candidate in candidates(CATALOG, asked):
            assert candidate.accepted and not violations(role, place, candidate.part)
    print(f"\n{role}: {offered} offers checked")
    assert bool(offered) is (role not in ONLY_THE_ORIGINAL)


def test_the_plain_rules_know_every_safety_role_and_the_first_family() -> None:
    """Every position marked as a safety part has its plain rule or takes only the very same part."""
    known = {name.partition(",")[0] for name in RULES}
    for position in positions():
        if position.safety and position.classes:
            assert known & set(position.roles) or {"X capacitor", "X1 capacitor", "Y2 capacitor", "Y capacitor"} & set(
                position.roles
            )


def test_offers_are_not_empty_everywhere() -> None:
    """The property above would also hold of a program that offers nothing: common places have offers."""
    dead = part("X1", "diode", "mains rectifier", "1N4007")
    asked = demand(board(dead), "X1", (Stress("X1", "reverse_voltage", 700.0),), CATALOG)
    assert len(candidates(CATALOG, asked)) > 5
