"""The SPICE deck: complete, well-formed, and the same circuit that the program solves."""

import re
import shutil
import subprocess
from dataclasses import replace
from pathlib import Path

import pytest

from triage.board.circuit import circuit
from triage.board.fault import Fault
from triage.board.profile import load_profile
from triage.data import data_folder
from triage.job.deck import deck

BOARD = load_profile("harbour-handset-charger")


def element_lines(text: str) -> list[str]:
    return [line for line in text.splitlines() if line and line[0] in "RCLKDQV"]


def test_every_element_of_the_circuit_is_in_the_deck_once() -> None:
    net = circuit(BOARD)
    lines = element_lines(deck(BOARD))
    names = [line.split()[0].lower() for line in lines]
    assert len(names) == len(set(names))
    count = {letter: sum(line.startswith(letter) for line in lines) for letter in "CLDQV"}
    assert count == {
        "C": len(net.capacitors), "L": len(net.windings), "D": len(net.diodes), "Q": len(net.bipolars),
        "V": len(net.sources),
    }  # fmt: skip
    added = len(net.capacitors) + len(net.windings) + len(net.sources)
    assert sum(line.startswith("R") for line in lines) == len(net.resistors) + added


def test_no_node_hangs_on_a_single_element() -> None:
    ends: dict[str, int] = {}
    for line in element_lines(deck(BOARD)):
        words = line.split()
        if line[0] == "K":
            continue
        for node in words[1 : 4 if line[0] == "Q" else 3]:
            ends[node] = ends.get(node, 0) + 1
    assert "0" in ends
    assert [node for node, count in ends.items() if count < 2] == []


@pytest.mark.parametrize("name", sorted(path.stem for path in data_folder("profiles").glob("*.toml")))
def test_every_part_of_every_shipped_board_is_in_its_deck(name: str) -> None:
    """Controllers, references and regulators as behaviours of their pins; parameters are numbers."""
    board = load_profile(name)
    text = deck(board)
    for part in board.parts:
        assert re.search(rf"(?m)^[A-Z]{{1,2}}{part.ref}(?=[_\s])", text), part.ref
    assert not re.search(r"(?i)\bnan\b|\binf\b", text)
    count = len(circuit(board).behaviours)
    assert sum(line[:1] in "BX" for line in text.splitlines() if line) >= count


def test_the_deck_reads_a_plateau_as_the_solver_does() -> None:
    from triage.job import deck_behaviour
    from triage.physics import transient_switchers

    for name in ("LEADING_EDGE", "PLATEAU_FILTER", "SLOW_FILTER", "BEND", "KNEE", "NO_PLATEAU"):
        assert getattr(deck_behaviour, name) == getattr(transient_switchers, name)


def test_a_fault_changes_the_deck_and_is_named_in_its_head() -> None:
    faulty = deck(BOARD, (Fault("D1", "short"),))
    assert "D1.short" in faulty.splitlines()[0]
    assert element_lines(faulty) != element_lines(deck(BOARD))


def test_values_are_those_of_the_profile() -> None:
    text = deck(BOARD, mains=240.0, load=5.0)
    assert re.search(r"^CC1 bulk \S+ 4\.7e-06 ", text, re.MULTILINE)
    assert re.search(r"^Rload out sgnd 5$", text, re.MULTILINE)
    assert re.search(r"SIN\(0 339\.411255 50 0 0 90\)", text)


def test_a_title_from_a_file_cannot_add_lines_to_the_deck() -> None:
    text = deck(replace(BOARD, title="x\n.shell rm\n* y"))
    assert ".shell" not in [line.split()[0] for line in text.splitlines() if line]


def test_the_simulator_of_the_trade_reads_it_where_there_is_one(tmp_path: Path) -> None:
    """A syntax check by ngspice (2 us of simulated time); without ngspice the text is checked above only."""
    program = shutil.which("ngspice")
    text = re.sub(r"\.tran .*", ".tran 1e-7 2e-6 0 1e-7 uic\n.print tran v(out)", deck(BOARD))
    assert ".print" in text
    if program is not None:
        (tmp_path / "board.cir").write_text(text)
        done = subprocess.run([program, "-b", "board.cir"], cwd=tmp_path, capture_output=True, text=True, timeout=60)
        assert done.returncode == 0, done.stderr
        assert "v(out)" in done.stdout
