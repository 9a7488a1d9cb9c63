"""Sub-commands that work on files: begin a job, add an entry, check files, find jobs."""

import argparse
from collections.abc import Iterator
from dataclasses import asdict
from pathlib import Path
from typing import Any

from triage.commands.output import columns, print_csv, print_json, print_lines
from triage.errors import JobError, TriageError

MOST_SHOWN = 50
"""Jobs listed."""
MOST_ROWS = 10_000_000
"""Jobs exported: all of them."""


def run_new(asked: argparse.Namespace) -> int:
    """Begin a job on a profile."""
    from triage.job.bench import Bench
    from triage.job.folder import free_name, jobs_folder, make_folder

    if asked.output:
        path = Path(asked.output)
    else:
        path = free_name(make_folder(jobs_folder(asked.jobs)), Path(asked.profile).stem)
    with Bench.create(asked.profile, path, learn=not asked.no_learning) as bench:
        if asked.json:
            print_json({"job": str(bench.path), "id": bench.job.id, "title": bench.view().title})
        else:
            print_lines([str(bench.path)])
    return 0


def run_add(asked: argparse.Namespace) -> int:
    """Enter one thing into a job and show what it led to."""
    from triage.commands.adding import parse_entry, take_entry
    from triage.job.bench import Bench

    words = list(asked.words)
    as_json = asked.json or "--json" in words
    words = [word for word in words if word != "--json"]
    parse_entry(asked.kind, words)
    with Bench.open(Path(asked.job)) as bench:
        if bench.read_only:
            raise JobError(asked.job, bench.read_only, advice="wait until it is free")
        view = take_entry(bench, asked.kind, words)
        number, text = view.entries[-1].number, view.entries[-1].text
    if as_json:
        print_json({"entry": number, "text": text, "stage": view.stage, "message": view.message})
    else:
        print_lines([f"entry {number}: {text}"])
    return 0


def run_check(asked: argparse.Namespace) -> int:
    """Check files and say what is wrong with each; status 1 when anything is."""
    found = list(_checked([Path(name) for name in asked.files]))
    if asked.json:
        print_json([{"file": file, "kind": kind, "faults": faults} for file, kind, faults in found])
    else:
        for file, kind, faults in found:
            print_lines([f"{file}: {kind}: {fault}" for fault in faults] or [f"{file}: {kind} in order"])
    return 1 if any(faults for _, _, faults in found) else 0


def _checked(files: list[Path]) -> Iterator[tuple[str, str, list[str]]]:
    """(file, what it is, its faults) for each file; every shipped one when none is named."""
    from triage.data import data_folder
    from triage.job.display import plain
    from triage.job.toml_guard import read_toml

    profiles = data_folder("profiles")
    shipped = [*sorted(profiles.glob("*.toml")), *sorted((profiles / "templates").glob("*.toml"))]
    shipped += sorted(data_folder("part_catalog").glob("*.toml"))
    for path in files or shipped:
        kind = "file"
        try:
            document, _ = read_toml(path)
            kind = _kind_of(document)
            faults = _faults(path, document, kind)
        except TriageError as error:
            faults = [str(error)]
        yield plain(path if files else path.name), kind, [plain(fault, 2000) for fault in faults]


def _kind_of(document: dict[str, Any]) -> str:
    if "job" in document:
        return "job"
    if document.get("template") is True:
        return "template"
    if "family" in document or "mains" in document:
        return "profile"
    return "catalog" if "class" in document else "table"


def _faults(path: Path, document: dict[str, Any], kind: str) -> list[str]:
    """What is wrong with a file that could be read as TOML."""
    if kind == "job":
        from triage.board.profile import board_from_dict
        from triage.job.store import load

        job = load(path)
        board_from_dict(job.board, f"{path}, board")
        return [f"a sync program left another version: {copy.name}" for copy in job.conflicts]
    if kind == "profile":
        from triage.board.profile import board_from_dict

        board_from_dict(document, str(path))
    if kind == "template":
        from triage.board.estimate.template import template_from_dict
        from triage.families import family_of

        family_of(template_from_dict(document, str(path)).family)
    if kind == "catalog":
        from triage.replacement.catalog_file import read_catalog_file

        read_catalog_file(path)
    return []


def run_jobs(asked: argparse.Namespace) -> int:
    """Find jobs of the folder by half-remembered words."""
    from triage.job.folder import jobs_folder
    from triage.job.index import Index

    with Index.of_folder(jobs_folder(asked.jobs)) as index:
        index.refresh()
        limit = MOST_ROWS if asked.csv else MOST_SHOWN
        found = index.find(" ".join(asked.words), stage=asked.stage or "", limit=limit)
        problems = index.problems()
    if asked.csv:
        print_csv([asdict(one) for one in found])
        return 0
    if asked.json:
        print_json({"jobs": found, "problems": problems})
        return 0
    rows = [(one.id, one.changed[:10], one.stage, one.adapter, one.complaint, one.verdict) for one in found]
    print_lines(columns(("job", "changed", "stage", "adapter", "complaint", "verdict"), rows))
    print_lines(f"unreadable: {problem}" for problem in problems)
    return 0
