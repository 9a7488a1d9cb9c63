"""The catalog against what lies outside it: the reference data it was compiled from, and IEC 60063."""

import tomllib
from pathlib import Path

from triage.replacement.catalog import Catalog


def test_every_reference_value_is_carried_over(shared: Path) -> None:
    """Each rating, text, marking, source, confidence and from_memory list of the 948 types stands in the catalog."""
    ours = {part.type: part for part in Catalog().parts()}
    compared = 0
    for path in sorted((shared / "reference/parts").glob("*.toml")):
        for record in tomllib.loads(path.read_text(encoding="utf-8")).get("part", ()):
            part = ours[record.pop("type")]
            assert list(part.markings) == list(dict.fromkeys(record.pop("marking")))
            assert part.source == record.pop("source")
            assert part.confidence == record.pop("confidence")
            assert part.from_memory == set(record.pop("from_memory", ()))
            for key, value in record.items():
                assert part.numbers.get(key, part.texts.get(key)) == value, (part.type, key)
                compared += 1
    assert compared > 9000


def test_every_grade_row_of_the_reference_is_an_orderable_capacitor(shared: Path) -> None:
    """Rows by capacitance and voltage, and rows by can size times four voltages."""
    data = tomllib.loads((shared / "reference/parts/generic_electrolytic.toml").read_text(encoding="utf-8"))
    size = ("vr_Vdc", "body_dia_mm", "body_len_mm")
    ours = {
        (part.text("grade"), round(part.numbers["c_F"] * 1e9), *(part.numbers[key] for key in size)): part.numbers
        for part in Catalog().parts("electrolytic")
    }
    names = {
        "general_105C": "general", "low_impedance_105C": "low impedance", "very_low_esr_105C": "very low ESR",
        "bulk_105C": "bulk",
    }
    count = 0
    for grade in data["grade"]:
        for row in grade.get("rows", ()):
            record = dict(zip(grade["columns"], row, strict=True))
            if "c_F" in record:
                pairs = [(record["c_F"], record["v_V"])]
            else:
                pairs = [(record[f"c_at_{volts}V_F"], float(volts)) for volts in (10, 16, 25, 35)]
            for farads, volts in pairs:
                numbers = ours[names[grade["grade"]], round(farads * 1e9), volts, record["dia_mm"], record["len_mm"]]
                for key in ("ripple_120Hz_A", "ripple_100kHz_A", "z_100kHz_20C_ohm"):
                    assert numbers.get(key) == record.get(key)
                count += 1
    assert count == len(ours)


def test_every_resistor_size_of_the_reference_can_be_ordered(shared: Path) -> None:
    """Power, voltage limit and body of each kind, at 10 ohm or 1 Mohm."""
    data = tomllib.loads((shared / "reference/parts/generic_resistor.toml").read_text(encoding="utf-8"))
    catalog = Catalog()
    for kind in data["kind"]:
        name = kind["kind"].replace("_", " ")
        made = [
            part for value in (10.0, 1e6) for group in ("resistor", "fusible_resistor")
            for part in catalog.near(group, value, value) if part.text("kind") == name
        ]
        for size in kind["sizes"]:
            assert any(
                part.numbers["p_W"] == size["p_W"] and part.numbers.get("v_lim_V") == size.get("v_lim_V")
                and part.numbers.get("body_len_mm") == size.get("body_mm", [None])[0] for part in made
            ), (name, size)


def test_decades_are_those_of_iec_60063() -> None:
    """Published: IEC 60063 E24 as printed in the standard, E96 by its rule 10^(k/96) to three figures."""
    e24 = "1.0 1.1 1.2 1.3 1.5 1.6 1.8 2.0 2.2 2.4 2.7 3.0 3.3 3.6 3.9 4.3 4.7 5.1 5.6 6.2 6.8 7.5 8.2 9.1"
    printed = {float(value) for value in e24.split()}
    made = {part.numbers["r_ohm"] for part in Catalog().near("resistor", 10.0, 99.9) if part.text("kind") == "carbon film"}
    assert {round(value / 10, 2) for value in made} == printed
    film = {part.numbers["r_ohm"] for part in Catalog().near("resistor", 100.0, 999.9) if part.text("kind") == "metal film"}
    assert {round(value / 100, 2) for value in film} == printed | {round(10 ** (k / 96), 2) for k in range(96)}
