"""Operating points of boards estimated from their label, solved by the program and kept for the plays; minutes a board.

    python -m tests.reference.estimated_points rcc-zener linear-reg

They are the program's own expectations, not answers: those come from the reference circuits.
"""

import json
import sys

from tests.reference.reference_circuits import DATA
from tests.reference.test_estimated_boards import both
from triage.families.points import OperatingPoints, fingerprint
from triage.job.cache import Cache
from triage.job.wiring import faults_of


def _path(circuit: str):
    return DATA / f"{circuit.replace('-', '_')}_estimated_points.json"


def keep(circuit: str, cache: Cache) -> None:
    """Put the kept points of the board estimated from the label of a circuit where a diagnosis finds them.

    Raises AssertionError where the estimate or the physics has changed since: solve them anew.
    """
    _, guess = both(circuit)
    content = json.loads(_path(circuit).read_text(encoding="utf-8"))
    assert content["fingerprint"] == fingerprint(guess), f"stale: python -m tests.reference.estimated_points {circuit}"
    cache.put(f"points-{fingerprint(guess)}", content)


def main() -> None:
    for circuit in sys.argv[1:]:
        _, guess = both(circuit)
        points = OperatingPoints(guess, progress=lambda done, wanted: print(f"{done} of {wanted}", end="\r"))
        points.chains(faults_of(guess))
        _path(circuit).write_text(json.dumps(points.kept(), separators=(",", ":")) + "\n", encoding="utf-8")
        print(f"{circuit}: {len(points.kept()['points'])} points kept")


if __name__ == "__main__":
    main()
