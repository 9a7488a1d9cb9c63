"""Condenses the table of outside checks for the reader, by subject area.

    TRIAGE_OUTSIDE_TABLE=table.md python -m pytest tests/reference
    python -m tests.reference.write_table table.md > condensed.md

The areas are told by words in the subject; what matches none stands under "other".
"""

import datetime
import re
import sys
from dataclasses import dataclass, field
from pathlib import Path

AREAS = (
    ("real repairs", ("real repairs", "complaint phrases", "repair or not")),
    ("whole jobs on simulated faults", ("first repair right",)),
    ("simulated circuits, cold", ("cold readings",)),
    ("simulated circuits, powered", ("live readings", "state of", "collateral", "sound ", "in a whole adapter")),
    ("own decks run in ngspice", ("all parts", "output voltage", "switching frequency")),
    ("boards estimated from a label", ("parts of ", "bulk microfarads", "estimated")),
    ("inference and choice of readings", ("belief", "inference", "best next", "information", "diagnosis from", "fault dictionary",
                                          "test sequencing", "repair order", "learning", "likelihood", "network",
                                          "scale of a reading", "smearing", "reading at a place")),
    ("failure rates, modes, derating", ("failure", "derating", "environment")),
    ("electrolytic life", ("electrolytic", "ripple multiplier", "loss tangent")),
    ("converters and magnetics", ("flyback", "ringing choke", "magnetics", "clamp")),
    ("rectifiers, regulators, references", ("rectifier", "regulator", "zener", "tl431", "dividers")),
    ("heat", ("thermal", "temperature", "heat")),
    ("fuses, inrush, insulation, touch current", ("inrush", "opens not", "breaking", "clearance", "creepage", "insulation",
                                                  "impulse", "altitude", "touch", "y capacitor")),
    ("discharge and stored energy", ("discharge", "bleed", "stored energy", "time to", "time constant", "time of", "first ")),
    ("output limits and efficiency", ("output high", "output low", "efficiency", "no-load")),
    ("measurement uncertainty", ("uncertainty", "coverage", "contribution", "degrees of freedom", "t factor", "conformity",
                                 "u of", "limit of error", "power [W]")),
    ("markings and catalog", ("marking", "code", "colour", "preferred", "symbol", "catalog", "series")),
)  # fmt: skip
"""Area -> words that a subject of it contains; the first that matches counts."""
HEAD = ("Subject", "Sources", "Checks", "Worst, share of its bound")


@dataclass(slots=True)
class Area:
    """One line of the condensed table."""

    sources: set[str] = field(default_factory=set)
    checks: int = 0
    failed: int = 0
    worst: float = 0.0
    """Share of the bound [%]."""


def area_of(subject: str) -> str:
    """The area a subject belongs to."""
    return next((name for name, words in AREAS if any(word in subject for word in words)), "other")


def condense(table: str) -> dict[str, Area]:
    """Areas of a full table in Markdown. Raises ValueError when it holds no row."""
    found: dict[str, Area] = {}
    for line in table.splitlines():
        cells = [cell.strip() for cell in line.strip().strip("|").split("|")]
        if len(cells) != 5 or not (counted := re.match(r"(\d+)(?: \((\d+) failed\))?$", cells[2])):
            continue
        area = found.setdefault(area_of(cells[0]), Area())
        area.sources.add(cells[1])
        area.checks += int(counted[1])
        area.failed += int(counted[2] or 0)
        area.worst = max(area.worst, float(cells[3].rstrip(" %")))
    if not found:
        raise ValueError("no row of outside checks in this file")
    return found


def markdown(found: dict[str, Area], day: datetime.date) -> str:
    """The condensed table with its date and totals."""
    order = [name for name, _ in AREAS if name in found] + (["other"] if "other" in found else [])
    lines = ["| " + " | ".join(HEAD) + " |", "| --- | ---: | ---: | ---: |"]
    for name in order:
        area = found[name]
        failed = f" ({area.failed} failed)" if area.failed else ""
        lines.append(f"| {name} | {len(area.sources)} | {area.checks}{failed} | {area.worst:.0f} % |")
    sources = set().union(*(area.sources for area in found.values()))
    checks, failures = sum(area.checks for area in found.values()), sum(area.failed for area in found.values())
    lines += ["", f"{checks} checks against {len(sources)} named sources, {failures} failed; "
              f"made by `python -m pytest tests/reference` on {day.isoformat()}."]
    return "\n".join(lines) + "\n"


if __name__ == "__main__":
    if len(sys.argv) != 2:
        raise SystemExit("usage: python -m tests.reference.write_table TABLE.md")
    sys.stdout.write(markdown(condense(Path(sys.argv[1]).read_text("utf-8")), datetime.date.today()))
