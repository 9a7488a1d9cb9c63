"""Times and answers of the marking search, as ratios to the exhaustive ways over the same list in the same run.

Run: python -m tests.bench.bench_search [--long]     (--long adds the list of 1,000,000 entries: about two minutes)

Three ways over the same folded keys: one exhaustive rapidfuzz ``extract`` (ratio scorer), our scorer over every key, and
the search as the program runs it. Queries: the damage model of tests/replacement/damage.py, fixed seeds.
"""

import random
import sys
import time
from collections.abc import Callable, Sequence

from rapidfuzz import fuzz, process

from tests.replacement.damage import damaged_queries
from tests.replacement.numbers import type_numbers
from triage.replacement.alignment import folded_marking
from triage.replacement.catalog import Catalog
from triage.replacement.search import MarkingList

SIZES = (1_000, 10_000, 100_000)


def _median(times: list[float]) -> float:
    return sorted(times)[len(times) // 2]


def _time(call: Callable[[], object]) -> float:
    start = time.perf_counter()
    call()
    return time.perf_counter() - start


def measure(entries: Sequence[Sequence[str]], queries: int, exhaustive: int, seed: int) -> dict[str, float]:
    """Median seconds a query of the three ways, interleaved, with hits and recall."""
    start = time.perf_counter()
    listed = MarkingList(entries)
    built = time.perf_counter() - start
    names = [markings[0] for markings in entries]
    asked = damaged_queries(names, max(1, queries // 11), seed)
    random.Random(seed).shuffle(asked)
    ours, plain, full, hits, recalls = [], [], [], 0, []
    for number, (query, name, _) in enumerate(asked):
        folded = folded_marking(query).replace("?", "")
        plain.append(
            _time(lambda f=folded: process.extract(f, listed.keys, scorer=fuzz.ratio, processor=None, limit=10))
        )
        ours.append(_time(lambda q=query: listed.nearest(q)))
        found = listed.nearest(query)
        hits += name in [names[entry] for entry, _, _ in found]
        if number < exhaustive:
            full.append(_time(lambda q=query: listed.nearest_of_all(q)))
            best = listed.nearest_of_all(query)
            if best:
                reached = sum(1 for _, score, _ in found if score >= best[-1][1] - 1e-9)
                recalls.append(reached / len(best))
    return {
        "keys": len(listed.keys), "build": built, "ours": _median(ours), "extract": _median(plain), "full": _median(full),
        "p95": sorted(ours)[int(0.95 * len(ours))], "hit": hits / len(asked), "recall": sum(recalls) / len(recalls),
    }


def main(long: bool) -> None:
    """Print the table."""
    parts = Catalog().parts()
    lists: list[tuple[str, list[tuple[str, ...]], int]] = [
        ("shipped", [(part.type, *part.markings) for part in parts], 220)
    ]
    for size in SIZES + ((1_000_000,) if long else ()):
        lists.append((f"{size:,}", [(name,) for name in type_numbers(size, seed=5)], 220 if size < 50_000 else 44))
    print(f"{'entries':>10} {'keys':>9} {'build s':>8} {'ours ms':>8} {'p95 ms':>8} "
          f"{'extract/ours':>12} {'full/ours':>10} {'hit@10':>7} {'recall@10':>9}")
    for name, entries, exhaustive in lists:
        found = measure(entries, 440, exhaustive, seed=3)
        print(
            f"{name:>10} {found['keys']:>9,.0f} {found['build']:>8.2f} {found['ours'] * 1e3:>8.3f} "
            f"{found['p95'] * 1e3:>8.3f} {found['extract'] / found['ours']:>12.2f} "
            f"{found['full'] / found['ours']:>10.1f} {found['hit']:>7.3f} {found['recall']:>9.3f}",
            flush=True,
        )


if __name__ == "__main__":
    main("--long" in sys.argv[1:])
