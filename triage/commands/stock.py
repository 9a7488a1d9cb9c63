"""Sub-commands about the technician's own stock: what lies in the drawers, and what can be put together from it."""

import argparse
from pathlib import Path

from triage.commands import words
from triage.commands.output import print_json, print_lines


def run_drawers(asked: argparse.Namespace) -> int:
    """What lies in the drawers, as far as it is like all the words."""
    from triage.job.folder import data_directory
    from triage.job.wiring import Wiring

    wanted = [word.casefold() for word in asked.words]
    stock = Wiring().stock()
    found = [
        one for one in stock
        if all(word in f"{one.type} {one.part_class} {one.where}".casefold() for word in wanted)
    ]  # fmt: skip
    if asked.json:
        print_json(found)
    elif not stock:
        print_lines([f"no stock is listed: write drawers.toml or drawers.csv in {data_directory()}"])
    else:
        print_lines(words.stock_lines(found))
    return 0


def run_combine(asked: argparse.Namespace) -> int:
    """Several parts that together do for a position what one should."""
    from triage.job.bench import Bench

    found = Bench.open(Path(asked.job), write=False).combinations(asked.ref)
    if asked.json:
        print_json(found)
    else:
        print_lines(words.combination_lines(found))
    return 0
