"""What the stress of a whole family costs, as a ratio to one ngspice run of the same circuit.

    python -m tests.bench.bench_family_stress [PROFILE [SAMPLES]]

The whole is: low, nominal and high mains x no, half and full load x 64 draws of the values x the sound board and all its single
faults. That is tens of thousands of steady states, so a random sample of them is solved and the mean is multiplied: the table
says how many were measured. One ngspice run is the program's own deck of the sound board at nominal mains and full load over as
many mains periods as the program followed for the same point. Both in processor time of one core, in turns.
"""

import resource
import shutil
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np

from triage.board.circuit import NOMINAL, Draw
from triage.board.fault import Fault
from triage.board.kinds import kinds
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.cold import specimens
from triage.families.steady import Settled, rated_start, settle
from triage.families.stresses import Condition, conditions, part_stresses
from triage.job.deck import deck
from triage.physics.transient import QUICK, NoConvergence

DRAWS = 64
PROFILES = ("choir-keyboard-supply", "harbour-handset-charger", "weather-display-adapter", "tide-gauge-brick")
SAMPLES = 12
SEED = 20240501


def every_fault(board: Board) -> list[tuple[Fault, ...]]:
    """The sound board and each of its single faults."""
    return [(), *((Fault(part.ref, mode),) for part in board.parts
                  for mode in part.fault_modes or kinds()[part.kind].fault_modes)]


def solve(board: Board, corner: Condition, draw: Draw, faults: tuple[Fault, ...]) -> Settled | None:
    """One steady state and the stresses of all parts in it; None where the solution breaks off."""
    family = family_of(board.family)
    try:
        at = settle(board, family, faults, mains=corner.mains, load=corner.load, quality=QUICK, draw=draw,
                    start=rated_start(board, family))
    except NoConvergence:
        return None
    for part in board.parts:
        part_stresses(part, at)
    return at


SWITCHING = ".options method=gear reltol=1e-3 abstol=1e-7 vntol=1e-4 chgtol=1e-14 itl4=100"
"""For the simulator where something switches: its trapezoidal rule breaks off on the edges, looser charges misplace them."""


def ngspice_seconds(board: Board, start: dict[str, float], periods: int) -> float:
    """Processor time of one run of the sound board's deck [s]; nan when there is no ngspice or it breaks off."""
    program = shutil.which("ngspice")
    if program is None:
        return float("nan")
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "board.cir"
        text = deck(board, start=start, periods=periods)
        path.write_text(text if family_of(board.family).slow else text.replace("\n.end\n", f"\n{SWITCHING}\n.end\n"), "utf-8")
        before = resource.getrusage(resource.RUSAGE_CHILDREN)
        ended = subprocess.run([program, "-b", "-r", str(path.with_suffix(".raw")), str(path)], capture_output=True, check=False)
        after = resource.getrusage(resource.RUSAGE_CHILDREN)
        done = ended.returncode == 0 and path.with_suffix(".raw").is_file()
    return after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime if done else float("nan")


def bench(name: str, samples: int) -> str:
    """One line of the table."""
    board = load_profile(name)
    corners, draws, faults = conditions(board), specimens(board, DRAWS), every_fault(board)
    whole = len(corners) * len(draws) * len(faults)
    nominal = next(one for one in corners if one.mains == board.mains.nominal and one.load == board.full_load)
    sound = solve(board, nominal, NOMINAL, ())
    assert sound is not None, f"{name}: the sound board does not settle"
    rng = np.random.default_rng(SEED)
    seconds, failed = [], 0
    reference = ngspice_seconds(board, dict(sound.capacitors), sound.periods)
    for index in rng.choice(whole, samples, replace=False):
        rest, fault = divmod(int(index), len(faults))
        corner, draw = divmod(rest, len(draws))
        begun = time.process_time()
        failed += solve(board, corners[corner], draws[draw], faults[fault]) is None
        seconds.append(time.process_time() - begun)
    mean = float(np.mean(seconds))
    error = float(np.std(seconds) / np.sqrt(samples))
    return (f"{board.family:22} {len(faults):4} x 9 x 64 = {whole:6} points; measured {samples} ({failed} broke off): "
            f"{mean / reference:.3f} +- {error / reference:.3f} of one ngspice run of {sound.periods} periods each; the whole "
            f"{whole * mean / reference:.3g} ngspice runs' time, by multiplication")


def main(arguments: list[str]) -> None:
    """Print one line a family."""
    names = arguments[:1] or PROFILES
    samples = int(arguments[1]) if len(arguments) > 1 else SAMPLES
    print("stress of a whole family: processor time of one core over that of one ngspice run of the same circuit")
    for name in names:
        print(bench(name, samples), flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
