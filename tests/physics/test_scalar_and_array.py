"""Reasoned: every formula gives for an array what it gives for each of its elements."""

import ast
import dataclasses
import doctest
import importlib
import inspect
from collections.abc import Iterator
from typing import Any

import numpy as np
import pytest

from tests.physics.test_docstrings import ROOMS

TABLE_LOOKUPS = {"mode_row", "mode_shares", "mode_source", "package_resistance", "derating", "environment_factor",
                 "quality_factor", "fuse_rate", "connection_rate", "melting_i2t_needed"}
"""Functions whose arguments are names: nothing to broadcast."""

REDUCING = {"mixed_life", "equivalent_ripple", "superposed_rise"}
"""Functions that sum over the last axis."""


def _calls() -> Iterator[Any]:
    """Each public function with the arguments of the example in its docstring."""
    for room in ROOMS:
        module = importlib.import_module(f"triage.physics.{room}")
        for name, function in inspect.getmembers(module, inspect.isfunction):
            if function.__module__ != module.__name__ or name.startswith("_") or name in TABLE_LOOKUPS | REDUCING:
                continue
            scope = dict(vars(module))
            for example in doctest.DocTestParser().get_examples(inspect.getdoc(function) or ""):
                nodes = list(ast.walk(ast.parse(example.source)))
                call = next((node for node in nodes if isinstance(node, ast.Call)
                             and isinstance(node.func, ast.Name) and node.func.id == name), None)
                if call is not None and not any(isinstance(node, ast.comprehension) for node in nodes):
                    args = [eval(compile(ast.Expression(a), room, "eval"), scope) for a in call.args]
                    words = {k.arg: eval(compile(ast.Expression(k.value), room, "eval"), scope) for k in call.keywords}
                    yield pytest.param(function, args, words, id=f"{room}.{name}")
                    break
                exec(compile(example.source, room, "exec"), scope)


def _numbers(result: Any) -> list[Any]:
    if dataclasses.is_dataclass(result):
        return [getattr(result, field.name) for field in dataclasses.fields(result)]
    return list(result) if isinstance(result, tuple) else [result]


def _spread(value: Any) -> Any:
    return value * np.ones((2, 3)) if isinstance(value, float) else value


@pytest.mark.parametrize("function, args, words", list(_calls()))
def test_array_result_repeats_the_scalar(function: Any, args: list[Any], words: dict[str, Any]) -> None:
    alone = _numbers(function(*args, **words))
    spread = _numbers(function(*map(_spread, args), **{key: _spread(value) for key, value in words.items()}))
    assert len(alone) == len(spread)
    for one, many in zip(alone, spread, strict=True):
        assert np.shape(many) == (2, 3)
        np.testing.assert_allclose(many, np.full((2, 3), float(one)), rtol=1e-9)


@pytest.mark.parametrize("function, args, words", list(_calls()))
def test_one_argument_may_be_an_array(function: Any, args: list[Any], words: dict[str, Any]) -> None:
    """A grid over one argument, the others held: element k equals the call with that element."""
    chosen = next((k for k, value in enumerate(args) if isinstance(value, float)), None)
    if chosen is None:
        name = next(key for key, value in words.items() if isinstance(value, float))
        start = words[name]
    else:
        start = args[chosen]

    def call(value: Any) -> list[Any]:
        if chosen is None:
            return _numbers(function(*args, **{**words, name: value}))
        return _numbers(function(*args[:chosen], value, *args[chosen + 1:], **words))

    grid = start * np.array([1.0, 1.02, 1.05])
    for k, value in enumerate(grid):
        for single, array in zip(call(float(value)), call(grid), strict=True):
            assert float(np.broadcast_to(array, (3,))[k]) == pytest.approx(float(single), rel=1e-9)
