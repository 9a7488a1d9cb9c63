"""Changes the program's formulas one place at a time and asks whether the tests notice.

    python -m tests.bench.bench_mutation [COUNT] [SEED] [ROOM ...]

Each mutant is one changed operator, comparison, number, sign or boolean word in a module of ROOM (default: the formula rooms of
``triage/physics`` and ``triage/diagnosis``). It lives in a copy of the package in a temporary folder; the test files that import
its module run there first, then those of the room, until one fails. A run that takes too long counts as killed and is told.
Compiled kernels are left out: they are held by the simulated circuits, which take minutes.

On 2026-12-01, seeds said before the run: physics 92 % of 120 (seed 20261201), diagnosis 85 % of 100 (seed 777) killed.
What survives and does not matter: numbers that only bound a search, a cache or an error message, that keep a division from zero
or stand for minus anything (``prepend=-1``, ``-1.0`` under a maximum); defaults of fields and of counts shown; how outcomes are
gathered into bins, which moves the worth of a reading a little and no belief; figures of the shop from common practice moved by a
tenth, where a test would only repeat them. What survives elsewhere is a test that is missing.
"""

import ast
import os
import random
import resource
import shutil
import signal
import sys
import tempfile
import time
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import NoReturn

import hypothesis
import numpy
import pytest
import scipy.integrate
import scipy.optimize
import scipy.stats

LOADED = (hypothesis, numpy, pytest, scipy)
"""Libraries of the tests, loaded once for all mutants."""
ROOT = Path(__file__).resolve().parents[2]
ROOMS = ("physics", "diagnosis")
COMPILED = ("transient", "network_solver", "compiled_code", "netlist", "network.py")
TESTS = {
    "physics": ("tests/physics", "tests/reference/test_worked_rectifier.py", "tests/reference/test_worked_regulation.py",
                "tests/reference/test_worked_protection.py", "tests/reference/test_worked_converter.py",
                "tests/reference/test_handbook_life.py", "tests/reference/test_handbook_failure_rate.py",
                "tests/reference/test_handbook_derating.py"),
    "diagnosis": ("tests/diagnosis", "tests/reference/test_diagnosis_published.py", "tests/reference/test_libraries.py",
                  "tests/reference/test_learning_from_jobs.py", "tests/reference/test_diagnosis_playing.py"),
}
LEAVE_OUT = ("tests/physics/test_transient.py", "tests/physics/test_invariants.py", "tests/physics/test_docstrings.py",
             "tests/physics/test_compiled.py")
LONGEST = 40
"""A run beyond this counts as killed [s of processor time]."""
TOO_LONG = -signal.SIGXCPU

BINARY: dict[type[ast.operator], type[ast.operator]] = {
    ast.Add: ast.Sub, ast.Sub: ast.Add, ast.Mult: ast.Div, ast.Div: ast.Mult, ast.Pow: ast.Mult, ast.FloorDiv: ast.Div,
}
COMPARE: dict[type[ast.cmpop], type[ast.cmpop]] = {
    ast.Lt: ast.GtE, ast.LtE: ast.Gt, ast.Gt: ast.LtE, ast.GtE: ast.Lt, ast.Eq: ast.NotEq, ast.NotEq: ast.Eq,
    ast.In: ast.NotIn, ast.NotIn: ast.In, ast.Is: ast.IsNot, ast.IsNot: ast.Is,
}
WORDS = {"min": "max", "max": "min", "minimum": "maximum", "maximum": "minimum", "any": "all", "all": "any", "exp": "log1p",
         "sin": "cos", "cos": "sin"}


@dataclass(frozen=True, slots=True)
class Mutant:
    """One change at one place."""

    path: Path
    place: int
    """Number of the changeable node in the module, in the order of the walk."""
    line: int
    what: str


def changed(node: ast.AST) -> str:
    """Change a node in place and say how; empty when nothing of it can be changed."""
    if isinstance(node, ast.BinOp) and type(node.op) in BINARY:
        old, node.op = type(node.op), BINARY[type(node.op)]()
        return f"{old.__name__} -> {type(node.op).__name__}"
    if isinstance(node, ast.Compare) and type(node.ops[0]) in COMPARE:
        old_compare, node.ops[0] = type(node.ops[0]), COMPARE[type(node.ops[0])]()
        return f"{old_compare.__name__} -> {type(node.ops[0]).__name__}"
    if isinstance(node, ast.BoolOp):
        node.op = ast.Or() if isinstance(node.op, ast.And) else ast.And()
        return "and <-> or"
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub | ast.Not):
        old_unary, node.op = type(node.op).__name__, ast.UAdd() if isinstance(node.op, ast.USub) else ast.Not()
        if old_unary == "Not":
            node.operand = ast.UnaryOp(ast.Not(), node.operand)
        return f"{old_unary} dropped"
    if isinstance(node, ast.Constant) and type(node.value) in (int, float):
        node.value = node.value * 1.1 if isinstance(node.value, float) and node.value else node.value + 1
        return f"number -> {node.value:.6g}"
    if isinstance(node, ast.Call):
        name = node.func.id if isinstance(node.func, ast.Name) else node.func.attr if isinstance(node.func, ast.Attribute) else ""
        if name in WORDS:
            if isinstance(node.func, ast.Name):
                node.func.id = WORDS[name]
            elif isinstance(node.func, ast.Attribute):
                node.func.attr = WORDS[name]
            return f"{name} -> {WORDS[name]}"
    return ""


def places(tree: ast.Module) -> Iterator[ast.AST]:
    """Nodes of functions and of module constants, annotations left out."""
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef):
            node.returns = None
            for argument in (*node.args.args, *node.args.kwonlyargs):
                argument.annotation = None
        elif isinstance(node, ast.AnnAssign):
            node.annotation = ast.Name("object", ast.Load())
    yield from ast.walk(tree)


def mutants(path: Path) -> list[Mutant]:
    """Every change that a module allows; a change of one node leaves it to the others to be changed."""
    nodes = list(places(ast.parse(path.read_text("utf-8"))))
    told = ((place, node, changed(node)) for place, node in enumerate(nodes))
    return [Mutant(path, place, getattr(node, "lineno", 0), what) for place, node, what in told if what]


def write(mutant: Mutant, target: Path) -> None:
    """The changed module."""
    tree = ast.parse(mutant.path.read_text("utf-8"))
    changed(next(one for k, one in enumerate(places(tree)) if k == mutant.place))
    target.write_text(ast.unparse(ast.fix_missing_locations(tree)), "utf-8")


def matching(mutant: Mutant, room: str, folder: Path) -> list[str]:
    """Test files that import the module of a mutant."""
    name = f"triage.{room}.{mutant.path.stem}"
    folders = ("tests/physics", "tests/diagnosis", "tests/safety", "tests/replacement", "tests/reference")
    found = [path.relative_to(folder).as_posix() for one in folders for path in sorted((folder / one).glob("test_*.py"))
             if f"{name} import" in (text := path.read_text("utf-8")) or f"from triage.{room} import {mutant.path.stem}" in text]
    return [one for one in found if one not in LEAVE_OUT and "circuits" not in one and "simulator" not in one]


def tried(mutant: Mutant, room: str, folder: Path) -> str:
    """``killed`` when a test fails in the copy, ``too long``, or ``SURVIVED``."""
    target = folder / mutant.path.relative_to(ROOT)
    kept, times = target.read_text("utf-8"), target.stat()
    write(mutant, target)
    try:
        code = ended([*matching(mutant, room, folder), *TESTS[room]], folder)
        return "SURVIVED" if code == 0 else "too long" if code == TOO_LONG else "killed"
    finally:
        target.write_text(kept, "utf-8")
        os.utime(target, ns=(times.st_atime_ns, times.st_mtime_ns))


def ended(files: list[str], folder: Path, sound: bool = False) -> int:
    """Exit code of the tests of these files, in this order: 0 when all pass. A run that a signal ended from outside says nothing:
    it is repeated. Only the ``sound`` copy leaves compiled code behind."""
    code = -1
    while code not in (TOO_LONG, *range(128)):
        child = os.fork()
        if not child:
            run_tests(files, folder, sound)
        code = os.waitstatus_to_exitcode(os.waitpid(child, 0)[1])
    return code


def run_tests(files: list[str], folder: Path, sound: bool) -> NoReturn:
    """In a process of its own, which has the libraries loaded already, and nothing of the program."""
    resource.setrlimit(resource.RLIMIT_CPU, (LONGEST, LONGEST + 10))
    os.chdir(folder)
    os.environ["PYTHONPATH"] = str(folder)
    sys.path.insert(0, str(folder))
    sys.dont_write_bytecode = not sound
    for name in [name for name in sys.modules if name.partition(".")[0] in ("tests", "triage")]:
        del sys.modules[name]
    quiet = os.open(os.devnull, os.O_WRONLY)
    os.dup2(quiet, 1)
    os.dup2(quiet, 2)
    ignored = [f"--ignore={one}" for one in LEAVE_OUT]
    os._exit(int(pytest.main(["-x", "-q", "-p", "no:cacheprovider", *ignored, *files])))


def main(count: int, seed: int, rooms: tuple[str, ...]) -> None:
    """A sample of the mutants, one line each, and the shares."""
    every = [(room, one) for room in rooms for path in sorted((ROOT / "triage" / room).glob("*.py"))
             if not path.name.startswith(COMPILED) and path.name != "__init__.py" for one in mutants(path)]
    sample = random.Random(seed).sample(every, min(count, len(every)))
    begun, survived = time.monotonic(), 0
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        for part in ("triage", "tests", "profiles", "part_catalog", "pyproject.toml"):
            copy = shutil.copytree if (ROOT / part).is_dir() else shutil.copy
            copy(ROOT / part, folder / part)
        for room in rooms:
            if ended(list(TESTS[room]), folder, sound=True):
                raise SystemExit(f"the tests of {room} fail without any change")
        for number, (room, one) in enumerate(sample, 1):
            fate = tried(one, room, folder)
            survived += fate == "SURVIVED"
            place = f"{one.path.relative_to(ROOT)}:{one.line}"
            print(f"{number:4} {fate} {place} {one.what}", flush=True)
    share = 1.0 - survived / len(sample)
    print(f"{len(sample)} of {len(every)} mutants, {share:.0%} killed, {survived} survived, {time.monotonic() - begun:.0f} s")


if __name__ == "__main__":
    given = sys.argv[1:]
    main(int(given[0]) if given else 40, int(given[1]) if len(given) > 1 else 1, tuple(given[2:]) or ROOMS)
