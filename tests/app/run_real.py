"""Runs the app on real job files whose computing rooms are the stand-in of the job's tests: gates, log, file and lock are the
real ones. ``python -m tests.app.run_real FOLDER``"""

import sys
from collections.abc import Callable
from pathlib import Path

from tests.job.stand_in import StandIn
from triage.app import app
from triage.app.contract import OpenJob
from triage.app.shelf import Shelf
from triage.job.bench import Bench
from triage.job.folder import free_name, jobs_folder, make_folder


class StandInShelf(Shelf):
    """Opens real jobs on the stand-in rooms."""

    def opener(self, path: Path) -> Callable[[], OpenJob]:
        return lambda: Bench.open(path, StandIn())

    def beginner(self, profile: str) -> Callable[[], OpenJob]:
        path = free_name(make_folder(jobs_folder(self.folder)), Path(profile).stem)
        return lambda: Bench.create(profile, path, StandIn())


if __name__ == "__main__":
    app.Shelf = StandInShelf  # type: ignore[misc]
    raise SystemExit(app.run(None, None, Path(sys.argv[1])))
