"""The deck of each of these families, run by ngspice, against the program's own operating point.

Both solve the same elements from the same start; what differs is the method and, for controllers, the way their memory is written
(behavioural sources there, a state machine here). Bounds: voltages 5 %, currents 10 %, powers 15 %, frequency 15 %.
"""

import re
import subprocess
from pathlib import Path

import numpy as np
import pytest

from triage.board.circuit import LINE, neutral, output_ground
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.points import load_resistance
from triage.families.steady import Settled, rated_start, settle
from triage.job.deck import deck
from triage.physics.transient import FINE, I_RMS, POWER, V_MAX, V_MEAN

SOURCE = "ngspice, run of the deck written for the board"


def _own(board: Board, load: str) -> Settled:
    family = family_of(board.family)
    return settle(board, family, (), mains=board.mains.nominal, load=load_resistance(board, load), quality=FINE,
                  start=rated_start(board, family))


def _run(program: str, folder: Path, board: Board, load: str, start: dict[str, float], periods: int,
         peak: tuple[str, str]) -> np.ndarray:
    """Columns over the last period: time [s], output [V], mains voltage [V], mains current [A], voltage of ``peak`` [V]."""
    text = deck(board, load=load_resistance(board, load), start=start, periods=periods)
    named = {node: re.sub(r"[^A-Za-z0-9]+", "_", node) for node in (LINE, neutral(board), output_ground(board), *peak)}
    named[board.ground["primary"]] = "0"
    back, minus = named[neutral(board)], named[output_ground(board)]
    pairs = (("out", minus), ("mains_inner", back), (named[peak[0]], named[peak[1]]))
    volts = [f"let v{k} = v({plus})" + ("" if away == "0" else f"-v({away})") for k, (plus, away) in enumerate(pairs)]
    last = ["let amps = -i(vmains)", "wrdata out.txt v0 v1 amps v2", "quit", ".endc", ".end\n"]
    control = "\n".join([".control", "run", *volts, *last])
    text = text.replace(".end\n", control)
    (folder / "board.cir").write_text(text)
    subprocess.run([program, "-b", "board.cir"], cwd=folder, capture_output=True, text=True, timeout=600, check=False)
    rows = np.loadtxt(folder / "out.txt")
    rows = rows[:, [0, 1, 3, 5, 7]]
    assert rows[-1, 0] > 0.999 * periods / board.mains.frequency, "the simulator broke off"
    return rows[rows[:, 0] >= max((periods - 1) / board.mains.frequency, 1e-4)]


def _mean(time: np.ndarray, values: np.ndarray) -> float:
    return float(np.trapezoid(values, time) / (time[-1] - time[0]))


def _excursions(board: Board, swing: np.ndarray) -> int:
    """How often the voltage rises above the upper level of the family and then falls below the lower, as our own count."""
    family, crest = family_of(board.family), board.mains.nominal * 2.0**0.5
    marks = np.where(swing > family.swing_high * crest, 1, np.where(swing < family.swing_low * crest, -1, 0))
    marks = marks[marks != 0]
    return int(np.sum((marks[1:] < 0) & (marks[:-1] > 0)))


CASES = [
    ("mast-lamp-adapter", "full", 3, ("raw", "sgnd"), "raw"), ("mast-lamp-adapter", "noload", 3, ("raw", "sgnd"), "raw"),
    ("harbour-gate-timer", "full", 3, ("dropped", "gnd"), "dropped"),
    ("harbour-gate-timer", "half", 3, ("dropped", "gnd"), "dropped"),
    ("choir-keyboard-supply", "full", 3, ("raw", "sgnd"), "raw"),
    pytest.param("pilot-boat-handset-charger", "full", 1, ("sw", "pgnd"), "sw", marks=pytest.mark.long),
    pytest.param("fish-dock-ice-controller", "full", 1, ("sw", "gnd"), "sw", marks=pytest.mark.long),
]
"""Profile, load, mains periods to run, node pair whose peak is compared, node of our statistics."""


@pytest.mark.parametrize(("name", "load", "periods", "peak", "node"), CASES)
def test_deck_agrees_with_the_operating_point(simulator, tmp_path, outside_check, name, load, periods, peak, node):
    board = load_profile(name)
    own = _own(board, load)
    rows = _run(simulator, tmp_path, board, load, dict(own.capacitors), periods, peak)
    time, out, volts, amps, swing = rows.T
    source, where = own.row("ADAPTER"), f"{name}, {load}"
    for what, subject, got, expected, bound in (
        ("output", "voltages", own.row("out", "node")[V_MEAN], _mean(time, out), 0.05),
        (node, "voltages", own.row(node, "node")[V_MAX], swing.max(), 0.05),
        ("mains", "currents", source[I_RMS], _mean(time, amps**2) ** 0.5, 0.10),
        ("input", "powers", source[POWER], _mean(time, volts * amps), 0.15),
    ):
        print(f"{where}: {what} {float(got):.5g} here, {float(expected):.5g} there")
        outside_check(f"family decks, {subject}", SOURCE, float(got), float(expected), bound, what=f"{where}: {what}")
    if own.stretch.frequency:
        hertz = _excursions(board, swing) / (time[-1] - time[0])
        print(f"{where}: {own.stretch.frequency:.0f} Hz here, {hertz:.0f} Hz there")
        outside_check("family decks, frequency", SOURCE, own.stretch.frequency, hertz, 0.15, what=f"{where}: frequency")
