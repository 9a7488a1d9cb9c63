"""The catalog as shipped, and what happens to a file with faults."""

import subprocess
import sys
from pathlib import Path

import pytest

from triage.data import data_folder
from triage.errors import CatalogError
from triage.replacement.catalog import Catalog, check_catalog
from triage.replacement.catalog_file import CatalogFaults, read_catalog_file
from triage.replacement.generic import read_value, written_value

HEAD = """
class = "valve"
title = "valve"
needed = ["v_V"]
ordered = [["i_min_A", "i_max_A"]]
[fields]
v_V = [1.0, 1000.0, "voltage"]
i_min_A = [0.1, 10.0, "least current"]
i_max_A = [0.1, 10.0, "most current"]
[texts]
case = "body"
[choices]
speed = ["slow", "fast"]
"""
GOOD = 'source = "a sheet"\nconfidence = "datasheet"\n'


def _faults(folder: Path, text: str) -> list[str]:
    path = folder / "valve.toml"
    path.write_text(HEAD + text, encoding="utf-8")
    with pytest.raises(CatalogFaults) as caught:
        read_catalog_file(path)
    return [str(fault) for fault in caught.value.faults]


def test_every_shipped_file_is_sound() -> None:
    """Types, ranges, unique types and physical order hold in each file."""
    assert check_catalog(data_folder("part_catalog")) == []


def test_shipped_catalog_is_complete() -> None:
    """All 948 type numbers of the reference data are there, beside the generic sizes."""
    catalog = Catalog()
    assert len(catalog.parts()) >= 948
    assert len(catalog.parts("zener")) == 190
    assert len({part.type for part in catalog.parts()}) == len(catalog.parts())


def test_every_part_says_where_its_values_are_from() -> None:
    """Source and confidence stand on every part, and from_memory names only what the part has."""
    for part in Catalog().parts():
        assert part.source
        assert part.confidence in ("datasheet", "memory")
        assert part.from_memory <= part.numbers.keys() | part.texts.keys()


def test_all_faults_of_a_file_are_reported_together(tmp_path: Path) -> None:
    """Range, order, type, unknown key, missing key, unknown word and a double type in one report."""
    text = (
        f'[[part]]\ntype = "A"\nv_V = -3.0\ni_min_A = 5.0\ni_max_A = 2.0\n{GOOD}'
        f'[[part]]\ntype = "A"\nv_V = "high"\nspeed = "quick"\ncolour = "red"\n{GOOD}'
        f'[[part]]\ntype = "B"\n{GOOD}'
    )
    faults = _faults(tmp_path, text)
    assert "valve.toml, A, v_V: -3; expected 1 to 1000: voltage" in faults
    assert any("i_min_A: 5; expected at most i_max_A = 2" in fault for fault in faults)
    assert any("the type is there twice" in fault for fault in faults)
    assert any("'high'; expected a number" in fault for fault in faults)
    assert any("speed: 'quick'; expected slow or fast" in fault for fault in faults)
    assert any("A, colour" in fault for fault in faults)
    assert any("B, v_V: missing" in fault for fault in faults)
    assert len(faults) == 7


@pytest.mark.parametrize("text", [
    f'[[series]]\n{GOOD}columns = ["type", "v_V"]\nrows = [["A", 1.0, 2.0]]',
    f"[[series]]\n{GOOD}rows = []",
    f'[[part]]\ntype = ""\nv_V = 2.0\n{GOOD}',
    '[[part]]\ntype = "A"\nv_V = 2.0\nsource = "x"\nconfidence = "sure"\n',
    '[[part]]\ntype = "A"\nv_V = 2.0\nsource = ""\nconfidence = "memory"\n',
    f'[[part]]\ntype = "A"\nv_V = nan\n{GOOD}',
    f'[[part]]\ntype = "A"\nv_V = true\n{GOOD}',
    f'[[part]]\ntype = "A"\nv_V = 2.0\nmarking = "A1"\n{GOOD}',
    f'[[part]]\ntype = "A"\nv_V = 2.0\nfrom_memory = ["w_V"]\n{GOOD}',
])
def test_each_kind_of_fault_is_found(tmp_path: Path, text: str) -> None:
    """One fault, one report."""
    assert len(_faults(tmp_path, text)) == 1


@pytest.mark.parametrize("text", ["class = 3", 'class = "valve"\ntitle = "valve"\nfields = 4', "[[[", 'class = "valve"\n\x00'])
def test_a_broken_head_is_one_catalog_error(tmp_path: Path, text: str) -> None:
    """No traceback of another kind, whatever the file holds."""
    path = tmp_path / "valve.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(CatalogError):
        read_catalog_file(path)


def test_tables_without_a_class_are_left_alone(tmp_path: Path) -> None:
    """Other data may lie in the folder."""
    (tmp_path / "device_models.toml").write_text("[model.x]\nis_A = 1e-14\n", encoding="utf-8")
    (tmp_path / "valve.toml").write_text(HEAD + f'[[part]]\ntype = "A"\nv_V = 2.0\n{GOOD}', encoding="utf-8")
    assert Catalog(tmp_path).classes == ("valve",)
    assert check_catalog(tmp_path) == []


def test_a_file_is_named_like_its_class_and_a_type_is_in_one_file(tmp_path: Path) -> None:
    """A new class is one new file; two files may not claim the same type."""
    text = HEAD + f'[[part]]\ntype = "A 1"\nv_V = 2.0\n{GOOD}'
    (tmp_path / "valve.toml").write_text(text, encoding="utf-8")
    (tmp_path / "tube.toml").write_text(text.replace('"valve"', '"tube"', 1).replace("A 1", "a-1"), encoding="utf-8")
    (tmp_path / "pump.toml").write_text(text, encoding="utf-8")
    faults = [str(fault) for fault in check_catalog(tmp_path)]
    assert any("pump.toml, class" in fault for fault in faults)
    assert any("the type is also in tube.toml" in fault for fault in faults)


def test_find_takes_type_marking_and_generic_name() -> None:
    """What is printed leads to the part when it belongs to one part alone."""
    catalog = Catalog()
    for number, wanted in (("1n4007", "1N4007"), ("IN4007", "1N4007"), ("2SC-1815", "2SC1815"), ("C1815", "2SC1815")):
        found = catalog.find(number)
        assert found is not None and found.type == wanted
    resistor = catalog.find("330k carbon film 0.25 W 250 V")
    assert resistor is not None and resistor.numbers["r_ohm"] == 330e3
    assert catalog.find("13003") is None
    assert catalog.find("") is None


def test_generic_parts_are_made_near_the_value_only() -> None:
    """E24 near 1 Mohm: 910k, 1M and 1.1M in every size that reaches so far (IEC 60063)."""
    made = list(Catalog().near("resistor", 0.9e6, 1.1e6))
    carbon = {part.numbers["r_ohm"] for part in made if part.text("kind") == "carbon film"}
    assert carbon == {0.91e6, 1.0e6, 1.1e6}
    assert not [part for part in made if part.text("kind") == "metal oxide film"]
    assert len({part.type for part in made}) == len(made)


@pytest.mark.parametrize(
    ("value", "text"), [(330e3, "330k"), (4.7, "4.7"), (1e6, "1M"), (0.68, "680m"), (4.7e-9, "4.7n"), (38.3e3, "38.3k")]
)
def test_written_values_read_back(value: float, text: str) -> None:
    """The name of a generic part holds its value."""
    assert written_value(value) == text
    assert read_value(text) == pytest.approx(value)


def test_opening_the_catalog_reads_no_file_and_needs_no_numpy() -> None:
    """The app's start does not wait for the catalog, and searching it imports neither numpy nor pint nor textual."""
    code = (
        "import sys\nfrom triage.replacement.catalog import Catalog\nfrom triage.replacement.search import MarkingList\n"
        "c = Catalog(); assert not c._files\nm = MarkingList([(p.type, *p.markings) for p in c.parts()])\n"
        "assert m.nearest('13003')\nprint([n for n in ('numpy', 'pint', 'textual', 'scipy') if n in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
