"""Time and memory of the part catalog: opening it, loading all of it, the search lists, one demand and its candidates.

Run: python -m tests.bench.bench_catalog      (each figure from a fresh interpreter)
"""

import subprocess
import sys

_START = "import time, tracemalloc, sys\nfrom triage.replacement.catalog import Catalog\n"
_TIMED = _START + "t = time.perf_counter()\n{work}\nprint((time.perf_counter() - t) * 1e3)"
_TRACED = _START + "tracemalloc.start()\n{work}\nprint(tracemalloc.get_traced_memory()[0] / 1e6)"

WORK = {
    "open the catalog": "c = Catalog(); c.classes",
    "load one class (zener)": "c = Catalog(); c.parts('zener')",
    "load all classes": "c = Catalog(); c.parts()",
    "load all, find a type number": "c = Catalog(); c.find('1N4007')",
    "load all, first search": "from triage.replacement.search import search\nc = Catalog(); search(c, '13003')",
}
"""What is done -> how."""


def run(code: str) -> float:
    """The figure that a piece of code prints, in an interpreter of its own."""
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    return float(done.stdout)


def main(repeats: int = 5) -> None:
    """Print the table."""
    imports = [
        run("import time\nt = time.perf_counter()\nimport triage.replacement.catalog\nprint((time.perf_counter() - t) * 1e3)")
        for _ in range(repeats)
    ]
    print(f"{'':<48} {'ms, median':>10} {'ms, best':>9} {'MB':>6}")
    print(f"{'import the catalog module':<48} {sorted(imports)[repeats // 2]:>10.1f} {min(imports):>9.1f}")
    for name, work in WORK.items():
        times = [run(_TIMED.format(work=work)) for _ in range(repeats)]
        print(f"{name:<48} {sorted(times)[repeats // 2]:>10.1f} {min(times):>9.1f} {run(_TRACED.format(work=work)):>6.2f}")


if __name__ == "__main__":
    main()
