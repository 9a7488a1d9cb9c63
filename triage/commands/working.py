"""Sub-commands that work on files: begin a job, add an entry, find jobs."""

import argparse
from dataclasses import asdict
from pathlib import Path

from triage.commands.output import columns, print_csv, print_json, print_lines
from triage.errors import JobError

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
