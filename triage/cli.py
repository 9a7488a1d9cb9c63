"""The command line: the app when called alone, each step of a job without a screen otherwise.

Only the parser lives here; what a sub-command does is imported when it is called, so that help and errors
come at once. Exit status: 0 done, 1 ``check`` found faults, 2 the call could not be carried out (one line on
standard error says why).
"""

import argparse
import importlib
import os
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

from triage.errors import TriageError

COMMANDS: dict[str, tuple[str, tuple[tuple[tuple[str, ...], dict[str, Any]], ...]]] = {
    "new": (
        "begin a job on a profile",
        (
            (("profile",), {"help": "name of a shipped profile or path of a .toml file"}),
            (("-o", "--output"), {"metavar": "JOB", "help": "job file to make (default: in the jobs folder)"}),
            (("--no-learning",), {"action": "store_true", "help": "leave the closed jobs of the folder out of the chances"}),
        ),
    ),
    "add": (
        "enter something: complaint, sign, look, reading, skip, undo, hunch, ack, power, fitted, repaired, retest, "
        "closed, returned, note",
        (
            (("job",), {}),
            (("kind",), {"help": "what is entered; a wrong call shows how it is typed"}),
            (("words",), {"nargs": argparse.REMAINDER}),
        ),
    ),
    "suspects": (
        "what may be wrong, likeliest first",
        ((("job",), {}), (("--explain",), {"action": "store_true", "help": "where each chance comes from"})),
    ),
    "next": ("the next reading to take, or the verdict", ((("job",), {}),)),
    "verdict": ("what the job has come to", ((("job",), {}),)),
    "worth": (
        "repair, replace or scrap, with what each costs",
        (
            (("job",), {}),
            (("--new-price",), {"metavar": "MONEY", "help": "price of a new adapter (default: usual for its power)"}),
        ),
    ),
    "show": ("the whole job: stage, log, cautions, looks, retest", ((("job",), {}),)),
    "stress": ("stress of each part against its rating", ((("profile",), {"help": "profile, or a job file"}),)),
    "expect": (
        "readings to expect, healthy or under a fault",
        (
            (("profile",), {"help": "profile, or a job file"}),
            (("--fault",), {"action": "append", "default": [], "metavar": "REF.mode", "help": "may be given again"}),
            (("--condition",), {"help": "cold, noload, half or full only"}),
        ),
    ),
    "demand": ("what the position of a part asks of a replacement", ((("job",), {}), (("ref",), {}))),
    "candidates": (
        "catalog parts for a position, best first",
        ((("job",), {}), (("ref",), {}), (("type",), {"nargs": "?", "help": "ask about this type only"})),
    ),
    "combine": (
        "several parts that together do for a position what one should, those in the drawers first",
        ((("job",), {}), (("ref",), {})),
    ),
    "drawers": (
        "what lies in the drawers (drawers.toml or drawers.csv in the data folder)",
        ((("words",), {"nargs": "*", "help": "type, class or drawer, in part"}),),
    ),
    "parts": ("catalog parts that a marking may mean", ((("marking",), {}),)),
    "report": (
        "the record of a job",
        (
            (("job",), {}),
            (("--format",), {"default": "text", "choices": ("text", "markdown", "html")}),
            (("-o", "--output"), {"metavar": "FILE", "help": "write there instead of to the terminal"}),
        ),
    ),
    "profile": (
        "make a profile of a board nobody has drawn: propose, estimate, set, turns, strike, add, move, roles, save",
        ((("words",), {"nargs": argparse.REMAINDER, "metavar": "ACTION ...", "help": "one of these, and -h for its arguments"}),),
    ),
    "check": (
        "check files: profiles, templates, kept answers, part catalogs, jobs, settings (all shipped ones and the shop's own "
        "settings when none is named)",
        ((("files",), {"nargs": "*"}),),
    ),
    "deck": (
        "the powered board as a SPICE deck, for a second opinion",
        (
            (("profile",), {"help": "profile, or a job file"}),
            (("--fault",), {"action": "append", "default": [], "metavar": "REF.mode"}),
        ),
    ),
    "solve": (
        "solve all that jobs on a profile ask for and keep it, so that they open at once; minutes to hours",
        (
            (("profile",), {"help": "profile, or a job file"}),
            (("--into",), {"metavar": "FOLDER", "help": "keep it there instead of in the cache folder"}),
        ),
    ),
    "jobs": (
        "find jobs of the jobs folder",
        (
            (("words",), {"nargs": "*", "help": "adapter, symptom or verdict, half remembered"}),
            (("--stage",), {"help": "open, closed or returned jobs only"}),
            (("--csv",), {"action": "store_true", "help": "all found jobs as CSV, for a spreadsheet or a data warehouse"}),
        ),
    ),
    "open": ("open a job in the app", ((("job",), {}),)),
    "demo": ("open a job on the shipped demo adapter in the app", ()),
}
"""Sub-command -> (help, its arguments)."""

PLACES = {
    **dict.fromkeys(("new", "add", "jobs"), "triage.commands.working"),
    "check": "triage.commands.checking",
    **dict.fromkeys(("combine", "drawers"), "triage.commands.stock"),
    "profile": "triage.commands.profile",
}
"""Sub-command -> module that carries it out, where that is not the one for asking."""

WITHOUT_JSON = ("report", "deck", "solve", "open", "demo")


def parser() -> argparse.ArgumentParser:
    """The parser of the whole command line."""
    top = argparse.ArgumentParser(
        prog="triage",
        description="Bench companion for failed mains adapters. Called alone it opens the app.",
        epilog="The figures are orientation for a trained person; local codes and licensed practice decide.",
    )
    top.add_argument("--jobs", metavar="FOLDER", help="jobs folder (default: $TRIAGE_JOBS, else the user's data folder)")
    subs = top.add_subparsers(dest="command", metavar="COMMAND")
    for name, (summary, arguments) in COMMANDS.items():
        sub = subs.add_parser(name, help=summary, description=summary)
        if name not in WITHOUT_JSON:
            sub.add_argument("--json", action="store_true", help="print one JSON document")
        for names, options in arguments:
            sub.add_argument(*names, **options)
    return top


def main(arguments: Sequence[str] | None = None) -> int:
    """Carry out a command line and return the exit status."""
    asked = parser().parse_args(arguments)
    try:
        return _run(asked)
    except TriageError as error:
        return _refused(str(error))
    except BrokenPipeError:
        # The reader of a pipe went away (``| head``); keep the interpreter from complaining about it on exit.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except KeyboardInterrupt:
        return 130


def _run(asked: argparse.Namespace) -> int:
    jobs = Path(asked.jobs) if asked.jobs else None
    if asked.command in (None, "open", "demo"):
        app: Callable[[Path | None, str | None, Path | None], int] = importlib.import_module("triage.app.app").run
        if asked.command == "open":
            return app(Path(asked.job), None, jobs)
        return app(None, "harbour-handset-charger" if asked.command else None, jobs)
    place = PLACES.get(asked.command, "triage.commands.asking")
    command: Callable[[argparse.Namespace], int] = getattr(importlib.import_module(place), f"run_{asked.command}")
    return command(asked)


def _refused(text: str) -> int:
    from triage.job.display import plain

    print(f"triage: {plain(text, 2000)}", file=sys.stderr)
    return 2


if __name__ == "__main__":
    sys.exit(main())
