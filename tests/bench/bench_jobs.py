"""What jobs cost: one entry made safe on the disk, and finding a job among many.

    python -m tests.bench.bench_jobs [JOBS ...]

Prints ratios beside seconds: an entry against one bare write and fsync of the same bytes, the building of the
index against plainly parsing the files, a search against reading all files. JOBS are sizes of synthetic
folders, by default 1000 and 10000; 100000 takes some minutes and 1.2 GB.
"""

import os
import random
import statistics
import sys
import tempfile
import time
import tomllib
from collections.abc import Callable
from pathlib import Path

import tomli_w

from triage.board.profile import board_to_dict, load_profile
from triage.job import store
from triage.job.entries import make_entry
from triage.job.index import Index

TIME = "2026-01-31T08:15:00Z"
WORDS = [
    "charger",
    "brick",
    "cube",
    "router",
    "laptop",
    "printer",
    "phone",
    "lamp",
    "radio",
    "toy",
    "camera",
    "shaver",
    "drill",
    "modem",
    "hub",
    "tablet",
]
SEARCHES = ("laptop", "laptpo drll", "camera shaver 19 V", "job-77", "")
ENTRIES = 200


def seconds(call: Callable[[], object], times: int = 5) -> float:
    """Median of some runs [s]."""
    taken = []
    for _ in range(times):
        begin = time.perf_counter()
        call()
        taken.append(time.perf_counter() - begin)
    return statistics.median(taken)


def one_entry(folder: Path) -> None:
    """An entry into a job that has many already, against a bare write of as many bytes."""
    board = board_to_dict(load_profile("harbour-handset-charger"))
    job = store.create(folder / "job.toml", board, TIME, "x")
    entry = make_entry(
        "reading", TIME, function="ohms", plus="bulk", minus="pgnd", condition="cold", value=4700.0, unit="ohm", typed="4k7"
    )
    for _ in range(ENTRIES):
        job.append(entry)
    content = job.path.read_bytes()

    def bare() -> None:
        with (folder / "bare").open("wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())

    safe, plain = seconds(lambda: job.append(entry), 21), seconds(bare, 21)
    print(f"entry {ENTRIES} of a job of {len(content):,} bytes: {1e3 * safe:.1f} ms, {safe / plain:.1f} x a bare write and fsync")


def make_jobs(folder: Path, count: int) -> None:
    """Synthetic jobs of twelve readings; the board is written once and its title changed."""
    chance = random.Random(1)
    board = board_to_dict(load_profile("harbour-handset-charger"))
    board["title"] = "TITLE"
    reading = {
        "time": TIME, "kind": "reading", "function": "ohms", "plus": "bulk", "minus": "pgnd", "condition": "cold",
        "value": 4700.0, "unit": "ohm", "typed": "4k7",
    }  # fmt: skip
    complaint = {"time": TIME, "kind": "complaint", "state": "dead", "condition": "full", "typed": "COMPLAINT"}
    document = {"job": {"format": 1, "opened": TIME, "profile": "x"}, "board": board, "entry": [complaint] + [reading] * 12}
    text = tomli_w.dumps(document, multiline_strings=True)
    for number in range(count):
        title = (
            f"{chance.choice((5, 9, 12, 19))} V {chance.choice(WORDS)} {chance.choice(WORDS)} adapter {chance.randrange(1000)}"
        )
        words = f"{chance.choice(WORDS)} does {chance.choice(('nothing', 'buzz', 'smell', 'blink'))}"
        (folder / f"job-{number}.toml").write_text(text.replace("TITLE", title).replace("COMPLAINT", words))


def finding(folder: Path, count: int) -> None:
    """Index of so many jobs: building, bringing up to date, searching."""
    jobs = folder / f"jobs-{count}"
    jobs.mkdir()
    make_jobs(jobs, count)
    files = sorted(jobs.iterdir())
    sample = files[:200]
    parsing = seconds(lambda: [tomllib.loads(path.read_text()) for path in sample], 3) / len(sample) * count
    place = folder / f"index-{count}.sqlite"
    index = Index(jobs, place)
    begin = time.perf_counter()
    index.refresh()
    building = time.perf_counter() - begin
    again = seconds(lambda: index.refresh(force=True), 3)
    quiet = seconds(index.refresh, 3)
    reading = seconds(lambda: [path.read_bytes() for path in files], 1)
    search = {words: seconds(lambda words=words: index.find(words)) for words in SEARCHES}  # type: ignore[misc]
    worst = max(search, key=lambda words: search[words])
    size = sum(path.stat().st_size for path in folder.glob(f"index-{count}.sqlite*"))
    print(
        f"{count} jobs: built at {count / building:.0f} jobs/s, {building / parsing:.2f} x parsing them; "
        f"{size / count:.0f} bytes a job; looked through again {1e3 * again:.0f} ms, quiet {1e3 * quiet:.2f} ms; "
        f"slowest search {worst!r} {1e3 * search[worst]:.0f} ms, {search[worst] / reading:.4f} x reading the files"
    )


def main(sizes: list[int]) -> None:
    """Run all."""
    with tempfile.TemporaryDirectory() as folder:
        one_entry(Path(folder))
        for count in sizes:
            finding(Path(folder), count)


if __name__ == "__main__":
    main([int(word) for word in sys.argv[1:]] or [1000, 10000])
