"""Operating points under faults that a reference circuit was simulated with in another size than the program's own; kept.

    python -m tests.reference.sized_points pwm-opto

A leaky part there has 4.7 kohm across it (README of the generator); the program takes 47 kohm on the mains side, else 2.2 kohm.
"""

import json
import sys
from functools import cache

from tests.reference.reference_circuits import DATA, PROFILES, draw_of
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.families.points import LOADS, OperatingPoints, fingerprint, point_key, solve_point
from triage.job.wiring import Wiring


def _path(circuit: str):
    return DATA / f"{circuit.replace('-', '_')}_sized_points.json"


@cache
def sized_points(circuit: str) -> OperatingPoints:
    """The kept points; none for a circuit whose faults have the program's own size.

    Raises AssertionError where the physics has changed since: solve them anew.
    """
    board = load_profile(PROFILES[circuit])
    if not _path(circuit).is_file():
        return OperatingPoints(board)
    content = json.loads(_path(circuit).read_text(encoding="utf-8"))
    assert content["fingerprint"] == fingerprint(board), f"stale: python -m tests.reference.sized_points {circuit}"
    return OperatingPoints(board, content)


def main(circuit: str) -> None:
    board = load_profile(PROFILES[circuit])
    draw, sound, found = draw_of(circuit, board), Wiring().points(board), OperatingPoints(board)
    for ref, mode in draw.severity:
        for load in LOADS:
            faults, start = (Fault(ref, mode),), sound.at((), load).capacitors
            found._points[point_key(faults, load)] = solve_point(board, faults, load, start, draw=draw)
            print(ref, mode, load, found.at(faults, load).breaks, flush=True)
    _path(circuit).write_text(json.dumps(found.kept(), separators=(",", ":")) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main(sys.argv[1])
