"""How long a technician waits after a reading: from Enter to new suspects and the next reading on the screen.

    python -m tests.bench.bench_reading

The real job of ``tests/app/test_real_job.py`` in a real terminal at 80x24. Beside it the time of one bare
``numpy.linalg.solve`` of as many networks of 28 nodes as the board has hypotheses: what no program could do without
that solved every hypothesis once a reading. Both are measured in turn in the same run, so that the ratio hardly
follows the load of the machine.
"""

import statistics
import tempfile
import time
from pathlib import Path

import numpy as np

from tests.app.test_real_job import CONDITIONS, ENTER, FUNCTIONS, NEXT, PROFILE, Meter, Technician, to_bench
from triage.job.bench import Bench

NODES = 28
ROUNDS = 3


def hypotheses(folder: Path) -> int:
    """How many hypotheses the board of the job has."""
    with Bench.create(PROFILE, folder / "count.toml") as bench:
        bench.prepare()
        assert bench.answers is not None
        return len(bench.answers.diagnosis.expectations.hypotheses)


def bare_solve(matrices: np.ndarray, rights: np.ndarray) -> float:
    """Seconds of one batch."""
    begin = time.perf_counter()
    np.linalg.solve(matrices, rights)
    return time.perf_counter() - begin


def one_reading(person: Technician, meter: Meter) -> float | None:
    """Seconds from Enter to the finished frame of the suggested reading; None when there is none any more."""
    term = person.term
    asked = NEXT.search(term.text)
    if asked is None:
        return None
    probe = FUNCTIONS[asked[1]], asked[2], asked[3], CONDITIONS[asked[4]]
    term.send(meter.reads(*probe))
    term.read(quiet=0.3)
    noted, last = f"{asked[2]} to {asked[3]}, cold:", time.perf_counter()
    begin = last
    term.send(ENTER)
    while time.perf_counter() - last < 0.3 or noted not in term.text:
        before = len(term.received)
        term.read(quiet=0.001, limit=0.002)
        if len(term.received) > before:
            last = time.perf_counter()
        if time.perf_counter() - begin > 60:
            raise AssertionError(term.text)
    return last - begin


def main() -> None:
    """Print both medians and their ratio."""
    meter, ours, theirs = Meter(), [], []
    folder = Path(tempfile.mkdtemp())
    count = hypotheses(folder)
    rng = np.random.default_rng(0)
    matrices = rng.normal(size=(count, NODES, NODES)) + NODES * np.eye(NODES)
    rights = rng.normal(size=(count, NODES, 1))
    bare_solve(matrices, rights)
    for number in range(ROUNDS):
        (folder / str(number)).mkdir()
        person = Technician(folder / str(number))
        to_bench(person)
        while (seconds := one_reading(person, meter)) is not None:
            ours.append(seconds)
            theirs.append(bare_solve(matrices, rights))
        person.term.kill()
    mine, bare = statistics.median(ours), statistics.median(theirs)
    print(
        f"a reading to new suspects and suggestion on screen, {PROFILE}, median of {len(ours)}: {1e3 * mine:.0f} ms; one "
        f"numpy.linalg.solve of {count} networks of {NODES} nodes: {1e3 * bare:.1f} ms; ratio {mine / bare:.1f}"
    )


if __name__ == "__main__":
    main()
