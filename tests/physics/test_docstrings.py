"""What the formula rooms say of themselves is true: examples run, parameters and units are documented, sources are named."""

import doctest
import importlib
import inspect
import pkgutil
import re
from collections.abc import Callable, Iterator
from types import ModuleType
from typing import Any

import pytest

import triage.physics

UNITS = {
    "-", "key", "SI", "V", "A", "W", "ohm", "F", "H", "Hz", "s", "h", "y", "J", "K", "degC", "K/W", "eV", "rad", "T", "m", "m2",
    "A2s", "Vs", "V/s", "ohm/V", "1e-6/h",
}
"""Every bracket of a docstring: a unit, ``-`` for a plain number, ``key`` for a name out of a table, ``SI`` for a record."""

ROOMS = [
    "capacitor_discharge", "capacitor_dropper", "clamp", "derating", "divider", "electrolytic_life",
    "failure_factors", "failure_modes", "failure_rate", "flyback", "fuse_inrush", "linear_regulator",
    "magnetics", "rectifier", "rectifier_estimates", "ringing_choke", "shunt_reference", "thermal",
    "y_capacitor", "zener",
]
"""The formula rooms; the solvers of the netlist beside them have their own tests."""


def _modules() -> list[ModuleType]:
    return [importlib.import_module(f"triage.physics.{name}") for name in ROOMS]


def _functions() -> Iterator[Any]:
    for module in _modules():
        for name, item in inspect.getmembers(module, inspect.isfunction):
            if item.__module__ == module.__name__ and not name.startswith("_"):
                yield pytest.param(item, id=f"{module.__name__.rpartition('.')[2]}.{name}")


def test_list_of_rooms_has_no_stranger() -> None:
    assert set(ROOMS) <= {module.name for module in pkgutil.iter_modules(triage.physics.__path__)}


@pytest.mark.parametrize("module", _modules(), ids=lambda module: module.__name__)
def test_examples_run(module: ModuleType) -> None:
    result = doctest.testmod(module)
    assert result.attempted > 0 and result.failed == 0


@pytest.mark.parametrize("function", list(_functions()))
def test_parameters_and_units_are_documented(function: Callable[..., Any]) -> None:
    text = inspect.getdoc(function) or ""
    documented = re.findall(r"^([a-z]\w*) \[([^\]]+)\]:", text, re.MULTILINE)
    real = [name for name in inspect.signature(function).parameters]
    assert [name for name, _ in documented] == real
    answer = re.search(r"^Returns \[([^\]]+)\]:", text, re.MULTILINE)
    assert answer, "no line 'Returns [unit]: ...'"
    assert {unit for _, unit in documented} | {answer.group(1)} <= UNITS


@pytest.mark.parametrize("function", list(_functions()))
def test_first_line_example_and_source(function: Callable[..., Any]) -> None:
    text = inspect.getdoc(function) or ""
    assert re.match(r"[A-Z].*[.;]", text), "the first line is a sentence"
    assert ">>> " in text, "no example"
    if function.__name__ not in {"mode_row", "mode_source", "package_resistance"}:  # look-ups: the record holds the source
        assert re.search(r"^Source: \S", text, re.MULTILINE), "no source"
