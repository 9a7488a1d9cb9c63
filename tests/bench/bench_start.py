"""What starting costs on the command line, and the slowest answers to hostile input, as ratios measured in the same run.

    python -m tests.bench.bench_start

The start is compared with an empty Python; reading a hostile TOML file with the standard library's parser on the same bytes.
"""

import subprocess
import sys
import tempfile
import time
import tomllib
from collections.abc import Callable
from pathlib import Path

from tests.test_hostile_data import LOADERS, NASTY
from triage.errors import TriageError

RUNS = 7


def best(action: Callable[[], object], runs: int = RUNS) -> float:
    """Shortest of several runs [s]."""
    times = []
    for _ in range(runs):
        begin = time.perf_counter()
        action()
        times.append(time.perf_counter() - begin)
    return min(times)


def process(*words: str) -> Callable[[], object]:
    return lambda: subprocess.run([sys.executable, *words], capture_output=True, check=True)


def reading(kind: str, content: bytes, folder: Path) -> Callable[[], object]:
    name, loader, _ = LOADERS[kind]
    path = folder / name
    path.write_bytes(content)

    def read() -> None:
        try:
            loader(path)
        except TriageError:
            return

    return read


def plain_parser(content: bytes) -> Callable[[], object]:
    def parse() -> None:
        try:
            tomllib.loads(content.decode("utf-8"))
        except (ValueError, RecursionError):
            return

    return parse


def main() -> None:
    empty = best(process("-c", "pass"))
    for words in (["--help"], ["parts", "1N4007"], ["check"]):
        took = best(process("-m", "triage.cli", *words))
        print(f"triage {' '.join(words):<14} {took * 1e3:7.0f} ms, {took / empty:5.1f} times an empty Python")
    with tempfile.TemporaryDirectory() as folder:
        slowest = []
        for name, content in NASTY.items():
            took, kind = max((best(reading(kind, content, Path(folder)), 3), kind) for kind in LOADERS)
            slowest.append((took, took / max(best(plain_parser(content), 1), 1e-6), name, kind))
        for took, ratio, name, kind in sorted(slowest, reverse=True)[:6]:
            print(f"{name:<24} as {kind:<12} {took * 1e3:7.0f} ms, {ratio:7.2f} times the bare parser on the same bytes")


if __name__ == "__main__":
    main()
