"""Every fault of every part kind is a changed element: no fault is listed that changes nothing."""

from dataclasses import fields
from pathlib import Path

import numpy as np
import pytest

from triage.board.circuit import circuit
from triage.board.fault import Fault
from triage.board.kinds import kinds
from triage.board.part import Board
from triage.board.profile import load_profile
from triage.data import data_folder
from triage.physics.netlist import Netlist, compile_netlist

BOARDS = sorted(Path(path).stem for path in data_folder("profiles").glob("*.toml"))


def elements(net: Netlist) -> str:
    """All elements of a netlist; where something is measured does not count."""
    return repr([getattr(net, field.name) for field in fields(net) if field.name != "ports"])


def faults(board: Board) -> list[Fault]:
    return [Fault(part.ref, mode) for part in board.parts for mode in part.fault_modes or kinds()[part.kind].fault_modes]


@pytest.mark.parametrize("name", BOARDS)
def test_every_fault_changes_the_powered_or_the_unpowered_circuit(name: str) -> None:
    board = load_profile(name)
    sound = [elements(circuit(board, cold=cold, load=board.full_load)) for cold in (True, False)]
    listed = faults(board)
    assert len(listed) > len(board.parts)
    for fault in listed:
        hurt = [elements(circuit(board, (fault,), cold=cold, load=board.full_load)) for cold in (True, False)]
        assert hurt != sound, fault


@pytest.mark.parametrize("name", BOARDS)
def test_a_faulty_board_still_makes_a_circuit(name: str) -> None:
    """Finite values and an order of elimination, whatever is broken."""
    board = load_profile(name)
    for fault in faults(board)[::3]:
        compiled = compile_netlist(circuit(board, (fault,), load=board.full_load))
        assert compiled.size > 0 and np.isfinite(compiled.resistor[2]).all() and (compiled.resistor[2] > 0.0).all(), fault


def test_all_kinds_with_faults_occur_on_some_shipped_board() -> None:
    """What no board has would not be tested above."""
    used = {part.kind for name in BOARDS for part in load_profile(name).parts}
    assert {key for key, kind in kinds().items() if kind.fault_modes} == used
