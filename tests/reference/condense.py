"""Condenses the tables of a reference circuit so that they can live beside the tests.

    python -m tests.reference.condense rcc-zener

Cold readings that equal the sound board's are left out; live readings stand one line per fault and load, in a fixed order of
observations. Figures are those of the reference circuits (adapters designed for this project, simulated with ngspice 39).
"""

import csv
import sys
from collections.abc import Iterator
from pathlib import Path

DATA = Path(__file__).parent / "data"
SHARED = Path(__file__).resolve().parents[3] / "shared" / "reference" / "circuits"
COLD_ORDER = ("ohms", "diode", "esr", "cap")


def _rows(path: Path) -> Iterator[dict[str, str]]:
    with path.open(newline="", encoding="utf-8") as file:
        yield from csv.DictReader(file)


def cold_lines(circuit: str, shared: Path = SHARED) -> list[str]:
    """Lines ``fault,plus,minus,function,value``: all of the sound board, of a fault only those that differ."""
    sound: dict[tuple[str, str, str], str] = {}
    lines = ["fault,plus,minus,function,value"]
    for row in _rows(shared / circuit / "cold.csv"):
        key = (row["probe_plus"], row["probe_minus"], row["mode"])
        if row["fault"] == "healthy":
            sound[key] = row["value"]
        elif sound.get(key) == row["value"]:
            continue
        lines.append(",".join((row["fault"], *key, row["value"])))
    return lines


def live_lines(circuit: str, shared: Path = SHARED) -> list[str]:
    """Lines ``fault,condition,collateral,values...`` with the observations named in the first line."""
    names: list[str] = []
    table: dict[tuple[str, str], dict[str, str]] = {}
    chains: dict[tuple[str, str], list[str]] = {}
    for row in _rows(shared / circuit / "faults.csv"):
        key = (row["fault"], row["condition"])
        if row["observation"] == "collateral":
            chains.setdefault(key, []).append(row["value"])
            continue
        if row["observation"] not in names:
            names.append(row["observation"])
        table.setdefault(key, {})[row["observation"]] = row["value"]
    lines = ["fault,condition,collateral," + ",".join(names)]
    for (fault, condition), values in table.items():
        chain = "+".join(chains.get((fault, condition.removesuffix("_after")), []))
        lines.append(",".join((fault, condition, chain, *(values.get(name, "") for name in names))))
    return lines


def healthy_lines(circuit: str, shared: Path = SHARED) -> list[str]:
    """Lines of healthy.csv without the unit, which follows from the quantity."""
    return ["condition,ref,quantity,value"] + [
        ",".join((row["condition"], row["ref"], row["quantity"], row["value"]))
        for row in _rows(shared / circuit / "healthy.csv")]


TABLES = {"cold": cold_lines, "live": live_lines, "healthy": healthy_lines}


def main(circuit: str) -> None:
    """Write the condensed tables of one circuit."""
    for name, lines in TABLES.items():
        path = DATA / f"{circuit.replace('-', '_')}_{name}.csv"
        path.write_text("\n".join(lines(circuit)) + "\n", encoding="utf-8")
        print(path.name, path.stat().st_size)


if __name__ == "__main__":
    main(sys.argv[1])
