"""Records every check against something outside the project and prints one table of them after the run.

How to use it in a test::

    def test_something(outside_check): outside_check("thermal", "Sedra/Smith, Microelectronic Circuits",
    got=62.5, expected=62.5, tolerance=0.001)

``outside_check`` fails the test when ``got`` is further from ``expected`` than the tolerance, and notes the
check either way. Arrays count one check an element; nan and infinity must stand in the same places. See
OutsideChecks for the other
forms: ``absolute=True``, ``same`` for texts, ``at_least`` for rates. ``subject`` is a few words, ``source``
    names the publication (author, title) the same way in every test, so that its rows come together. With the
    environment variable TRIAGE_OUTSIDE_TABLE set to a file name the table is also written there as Markdown,
    for the README.
"""

import os
import shutil
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest

from tests.reference.simulator import Waveforms, run


@dataclass
class Row:
    """One line of the table: all checks of one subject against one source."""

    checks: int = 0
    failed: int = 0
    worst: float = 0.0
    """Largest deviation as a share of its bound."""
    bound: str = ""
    """The bound that belongs to the worst deviation."""


class OutsideChecks:
    """Asserts and records; one instance for the whole session."""

    def __init__(self) -> None:
        self.rows: dict[tuple[str, str], Row] = {}
        self.told: list[str] = []
        """Rates that have no bound of their own, and what was left out: printed after the table."""

    def __call__(self, subject: str, source: str, got: object, expected: object, tolerance: float,
                 absolute: bool = False, what: str = "") -> None:
        """Compare numbers.

        tolerance is relative to the expected value, or in its unit with ``absolute=True``; state its reason
        beside the call (usually: rounding of the printed digits). ``what`` names the quantity in the message
        of a failure.
        """
        mine, outside = np.broadcast_arrays(np.asarray(got, float), np.asarray(expected, float))
        allowed = np.full(outside.shape, tolerance) if absolute else tolerance * np.abs(outside)
        with np.errstate(invalid="ignore", divide="ignore"):
            off = np.abs(mine - outside)
            share = np.where(off == 0.0, 0.0, off / allowed)
        alike = (mine == outside) | (np.isnan(mine) & np.isnan(outside))
        share = np.where(alike, 0.0, np.where(np.isfinite(share), share, np.inf))
        bound = f"{tolerance:g} absolute" if absolute else f"{100 * tolerance:g} %"
        self._note(subject, source, share.ravel(), bound)
        worst = float(share.max(initial=0.0))
        assert worst <= 1.0, (f"{what or subject}: got {got!r}, {source} has {expected!r}; "
                              f"off by {worst:.2f} of the bound {bound}")

    def same(self, subject: str, source: str, got: object, expected: object, what: str = "") -> None:
        """Compare things that are equal or not: texts, names, classes."""
        self._note(subject, source, np.array([0.0 if got == expected else np.inf]), "equal")
        assert got == expected, f"{what or subject}: got {got!r}, {source} has {expected!r}"

    def at_least(self, subject: str, source: str, got: float, bound: float, what: str = "") -> None:
        """Check that a rate, such as a share of hits, reaches a bound; what is missing to 1 counts as
        deviation."""
        missing, allowed = 1.0 - got, 1.0 - bound
        share = 0.0 if missing <= 0.0 else missing / allowed if allowed > 0.0 else np.inf
        self._note(subject, source, np.array([share]), f"at least {bound:g}")
        assert got >= bound, f"{what or subject}: {got:.3f} against {source} is below {bound:g}"

    def _note(self, subject: str, source: str, shares: np.ndarray, bound: str) -> None:
        row = self.rows.setdefault((subject, source), Row())
        row.checks += shares.size
        row.failed += int((shares > 1.0).sum())
        worst = float(shares.max(initial=0.0))
        if worst >= row.worst:
            row.worst, row.bound = worst, bound

    def lines(self) -> list[tuple[str, str, str, str, str]]:
        """The table: subject, source, checks, worst deviation as share of its bound, that bound."""
        return [(subject, source, f"{row.checks}" + (f" ({row.failed} failed)" if row.failed else ""),
                 f"{100 * row.worst:.0f} %", row.bound)
                for (subject, source), row in sorted(self.rows.items())]

    @property
    def summary(self) -> str:
        """One line of totals."""
        checks = sum(row.checks for row in self.rows.values())
        failed = sum(row.failed for row in self.rows.values())
        sources = len({source for _, source in self.rows})
        return f"{checks} checks against {sources} sources, {failed} failed"


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """What README tells of the checks is looked at after all of them."""
    items.sort(key=lambda item: item.path.name == "test_table_in_readme.py")


HEAD = ("subject", "source", "checks", "worst, share of bound", "bound")
_CHECKS = OutsideChecks()


WIDEST = 60
"""Most characters of a cell in the terminal; the Markdown table has them all."""


def cut(text: str) -> str:
    """A cell of the terminal table."""
    return text if len(text) <= WIDEST else text[: WIDEST - 1] + "…"


@pytest.fixture(scope="session")
def outside_check() -> Iterator[OutsideChecks]:
    """The recorder; see the head of this file."""
    yield _CHECKS


@pytest.fixture(scope="session")
def simulator() -> str:
    """The program ngspice; where there is none the checks that need it are skipped."""
    found = shutil.which("ngspice")
    if found is None:
        pytest.skip("ngspice is not installed")
    return found


@pytest.fixture(scope="session")
def ngspice(simulator: str, tmp_path_factory: pytest.TempPathFactory) -> Callable[[str, float, str, str], Waveforms]:
    """Simulates a deck: (deck, begin of the window [s], reference node, options) -> waveforms."""
    folder = tmp_path_factory.mktemp("ngspice")
    return lambda deck, begin, reference, options: run(simulator, deck, folder, begin, reference, options)


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Print the table, and write it where TRIAGE_OUTSIDE_TABLE says."""
    if not _CHECKS.rows:
        return
    lines = _CHECKS.lines()
    shown = [tuple(cut(cell) for cell in line) for line in [HEAD, *lines]]
    widths = [max(len(line[k]) for line in shown) for k in range(len(HEAD))]
    terminalreporter.section("checks against the outside")
    for line in shown:
        cells = (cell.ljust(width) for cell, width in zip(line, widths, strict=True))
        terminalreporter.write_line("  ".join(cells).rstrip())
    for line in (*_CHECKS.told, _CHECKS.summary):
        terminalreporter.write_line(line)
    path = os.environ.get("TRIAGE_OUTSIDE_TABLE")
    if path:
        rows = ["| " + " | ".join(line) + " |" for line in [HEAD, ("---",) * len(HEAD), *lines]]
        Path(path).write_text("\n".join([*rows, "", _CHECKS.summary, ""]), "utf-8")
