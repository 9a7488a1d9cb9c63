"""Junction parameters of diodes and transistors by type number, from ``part_catalog/device_models.toml``."""

import tomllib
from collections.abc import Mapping
from functools import cache
from typing import Any

from triage.board.part import Part
from triage.data import data_folder
from triage.errors import CatalogError
from triage.physics.netlist import BIPOLAR_DEFAULTS, DIODE_DEFAULTS

_UNITS = ("A", "V", "F", "s", "ohm")
_KNOWN = {"diode": DIODE_DEFAULTS, "bipolar": BIPOLAR_DEFAULTS}


@cache
def _models() -> tuple[dict[tuple[str, str], Mapping[str, float]], dict[tuple[str, str], str]]:
    """Models by (class, type), and the type that stands in by (class, case)."""
    path = data_folder("part_catalog") / "device_models.toml"
    with path.open("rb") as file:
        content = tomllib.load(file)
    models: dict[tuple[str, str], Mapping[str, float]] = {}
    defaults: dict[tuple[str, str], str] = {}
    for family, known in _KNOWN.items():
        for record in content.get(family, []):
            parameters = _parameters(record, known, f"{path.name}, {family} {record.get('type', '?')}")
            for name in (record["type"], *record.get("stands_for", [])):
                models[family, name.upper()] = parameters
            if "default_for" in record:
                defaults[family, record["default_for"]] = record["type"].upper()
    return models, defaults


def _parameters(record: Mapping[str, Any], known: Mapping[str, float], where: str) -> Mapping[str, float]:
    """The numeric fields of a record under their names without unit. Raises CatalogError for a name nobody reads."""
    result = {}
    for key, value in record.items():
        if not isinstance(value, int | float):
            continue
        stem, _, unit = key.rpartition("_")
        name = stem if unit in _UNITS else key
        if name not in known:
            raise CatalogError(f"part_catalog/{where}, {key}", "is not a model parameter", ", ".join(sorted(known)))
        result[name] = float(value)
    return result


def diode_model(part: Part) -> Mapping[str, float]:
    """Model of a diode, light-emitting diode or zener: that of its type, else of the nearest case by its ratings."""
    models, defaults = _models()
    if part.kind == "zener":
        vz = part.value["zener_voltage"]
        return {**models["diode", defaults["diode", "zener"]], "breakdown_voltage": vz}
    found = models.get(("diode", part.type.upper()))
    if found is None:
        found = models["diode", defaults["diode", _diode_case(part)]]
        rated = part.ratings.get("voltage")
        if rated and part.kind != "led":
            found = {**found, "breakdown_voltage": 1.1 * rated}
    factor = part.value.get("saturation_factor", 1.0)
    return {**found, "saturation_current": found["saturation_current"] * factor}


def _diode_case(part: Part) -> str:
    """Which stand-in a diode of unknown type takes; a common-practice guess from role and ratings, no source."""
    volts, amperes = part.ratings.get("voltage", 1000.0), part.ratings.get("current", 1.0)
    if part.kind in ("led", "bridge"):
        return part.kind
    if part.role.startswith("output rectifier") and volts <= 150.0:
        if amperes >= 4.0:
            return "schottky_5A" if volts <= 60.0 else "schottky_10A"
        return "schottky_60" if volts <= 60.0 else "schottky_100"
    if part.role in ("free-wheeling diode", "feedback diode"):
        return "ultrafast"
    if amperes <= 0.3:
        return "small_signal"
    return "rectifier" if part.role.startswith("mains") else "fast"


def bipolar_model(part: Part) -> Mapping[str, float]:
    """Model of a bipolar transistor with the gain of the part: that of its type, else by its rated voltage."""
    models, defaults = _models()
    found = models.get(("bipolar", part.type.upper()))
    if found is None:
        case = "mains_switch" if part.ratings.get("voltage", 0.0) >= 250.0 else "small_signal"
        found = models["bipolar", defaults["bipolar", case]]
    return {**found, "gain": part.value["gain"]}
