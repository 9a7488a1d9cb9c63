"""Condenses the table of outside checks for the reader, by subject area, and puts it into README.

    TRIAGE_OUTSIDE_TABLE=table.md python -m pytest tests/reference -m "long or not long"
    python -m tests.reference.write_table table.md

The areas are told by words in the subject; what matches none stands under "other". A source is a publication, a standard, a
library or a program, whatever the place in it; what was computed by another method without a publication, or is common practice,
is counted as a check but not as a source.
"""

import datetime
import re
import sys
from collections import Counter
from dataclasses import dataclass, field
from pathlib import Path

README = Path(__file__).resolve().parents[2] / "README.md"
BEGIN, END = "<!-- outside checks: begin -->", "<!-- outside checks: end -->"
AREAS = (
    ("real repairs", ("real repairs", "complaint phrases", "repair or not")),
    ("whole jobs on simulated faults", ("first repair right",)),
    ("simulated circuits, cold", ("cold readings", "leg lifted")),
    ("simulated circuits, powered", ("live readings", "state of", "collateral", "sound ", "in a whole adapter",
                                     "waveforms")),
    ("own decks run in ngspice", ("all parts", "output voltage", "switching frequency", "family decks")),
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
HEAD = ("Subject", "Against", "Checks", "Worst, share of its bound", "That bound")
NAMED = 3
"""Sources named in a line, those with most checks first; the others are counted."""
PLACE = re.compile(r"(?:;|: | \(|,? tables? |,? sections? |, figure |, chart | \d+\.\d+\.\d|, \d+\.\d|, [A-Z]\.\d|, numbers "
                   r"| root-sum).*")
"""What follows the name of a source: its title after the authors, the place in it, a remark."""
SAME = (("ngspice", "ngspice"), ("scipy", "scipy"), ("Open Repair Data", "Open Repair Data"), ("IEC 60062", "IEC 60062"),
        ("(EU) 2019/1782", "Regulation (EU) 2019/1782"))
"""Words of a source -> its name, where the rule above would make several of one."""
UNPUBLISHED = ("computed by an independent method", "own", "reference circuits of this project", "a % of reading", "u = limit",
               "bleed table", "usual practice", "typical ", "makers' ", "contaminated-normal model")
"""How a source begins that is none: numbers computed by another method or by hand, common practice."""


@dataclass(slots=True)
class Area:
    """One line of the condensed table."""

    sources: Counter[str] = field(default_factory=Counter)
    """Checks by source; "" stands for those without one."""
    failed: int = 0
    worst: float = -1.0
    """Share of the bound [%]."""
    bound: str = ""
    """The bound that the worst one came nearest to."""

    @property
    def checks(self) -> int:
        """All checks of the area."""
        return self.sources.total()

    @property
    def against(self) -> str:
        """The sources, those with most checks by name."""
        named = [name for name, _ in self.sources.most_common() if name]
        words = named[:NAMED] + ([f"{len(named) - NAMED} more"] if len(named) > NAMED else [])
        return "; ".join(words + ["independent computation or practice"] * bool(self.sources[""]))


def area_of(subject: str) -> str:
    """The area a subject belongs to."""
    return next((name for name, words in AREAS if any(word in subject for word in words)), "other")


def source_of(text: str) -> str:
    """The name of a source without the place in it; "" for what no publication, library or program stands behind."""
    if text.startswith(UNPUBLISHED):
        return ""
    return next((name for word, name in SAME if word in text), "") or PLACE.sub("", text)


def condense(table: str) -> dict[str, Area]:
    """Areas of a full table in Markdown. Raises ValueError when it holds no row."""
    found: dict[str, Area] = {}
    for line in table.splitlines():
        cells = [cell.strip() for cell in line.strip().strip("|").split("|")]
        if len(cells) != 5 or not (counted := re.match(r"(\d+)(?: \((\d+) failed\))?$", cells[2])):
            continue
        area = found.setdefault(area_of(cells[0]), Area())
        area.sources[source_of(cells[1])] += int(counted[1])
        area.failed += int(counted[2] or 0)
        if (share := float(cells[3].rstrip(" %"))) > area.worst:
            area.worst, area.bound = share, cells[4]
    if not found:
        raise ValueError("no row of outside checks in this file")
    return found


def markdown(found: dict[str, Area], day: datetime.date) -> str:
    """The condensed table with its date and totals."""
    order = [name for name, _ in AREAS if name in found] + (["other"] if "other" in found else [])
    lines = ["| " + " | ".join(HEAD) + " |", "| --- | --- | ---: | ---: | --- |"]
    for name in order:
        area = found[name]
        failed = f" ({area.failed} failed)" if area.failed else ""
        lines.append(f"| {name} | {area.against} | {area.checks}{failed} | {area.worst:.0f} % | {area.bound} |")
    total = sum((area.sources for area in found.values()), Counter())
    failures = sum(area.failed for area in found.values())
    lines += ["", f"{total.total()} checks against {len(set(total) - {''})} sources, {failures} failed; {total['']} of them hold "
              f"numbers computed by another method or common practice. Made on {day.isoformat()}."]
    return "\n".join(lines) + "\n"


def put(table: str, text: str) -> str:
    """A README with the table between its marks. Raises ValueError when it has no such marks."""
    if text.count(BEGIN) != 1 or text.count(END) != 1:
        raise ValueError(f"README.md needs one line {BEGIN} and one line {END}")
    before, after = text.split(BEGIN)[0], text.split(END)[1]
    return f"{before}{BEGIN}\n{table}{END}{after}"


if __name__ == "__main__":
    if len(sys.argv) != 2:
        raise SystemExit("usage: python -m tests.reference.write_table TABLE.md")
    made = markdown(condense(Path(sys.argv[1]).read_text("utf-8")), datetime.date.today())
    README.write_text(put(made, README.read_text("utf-8")), "utf-8")
    sys.stdout.write(made)
