"""A board in a given state as a circuit: which parts are at fault, which values they have, how it is fed and loaded.

Conventions of node names: ``mains_l`` and ``mains_n`` are the mains terminals (a board without ``mains_n`` has its neutral on the
primary ground), ``out`` is the positive output terminal. It is read against ``out_minus``, the negative terminal at the end of
the output cable, where a board names one, else against the ground of its side.
"""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

from triage.board.fault import Fault
from triage.board.kinds import State, kinds
from triage.board.part import Board, Part
from triage.physics.netlist import PORT_NONE, PORT_SOURCE, Netlist

LINE, NEUTRAL, OUTPUT, OUTPUT_RETURN = "mains_l", "mains_n", "out", "out_minus"


@dataclass(frozen=True, slots=True)
class Draw:
    """One specimen of a board: values that differ from the nominal ones, and how far a fault has gone."""

    values: Mapping[tuple[str, str], float] = field(default_factory=dict)
    """(ref, value key) -> value in SI."""
    severity: Mapping[tuple[str, str], float] = field(default_factory=dict)
    """(ref, fault mode) -> factor on the size of the departure."""


NOMINAL = Draw()


def neutral(board: Board) -> str:
    """Node of the mains neutral."""
    return NEUTRAL if any(NEUTRAL in nodes for nodes in board.sides.values()) else board.ground["primary"]


def output_ground(board: Board) -> str:
    """Node the output voltage is read against."""
    if any(OUTPUT_RETURN in nodes for nodes in board.sides.values()):
        return OUTPUT_RETURN
    return board.ground.get(board.side_of(OUTPUT) or "secondary", board.ground["primary"])


def live_ground(board: Board, side: str, node: str) -> str:
    """Node that a live voltage of ``node`` is read against: the output at its terminals, the others on the board."""
    return output_ground(board) if node == OUTPUT else board.ground[side]


def specimen(part: Part, draw: Draw) -> Part:
    """The part with the values of one specimen."""
    changed = {key: draw.values[part.ref, key] for key in part.value if (part.ref, key) in draw.values}
    return replace(part, value={**part.value, **changed}) if changed else part


def circuit(board: Board, faults: Sequence[Fault] = (), *, draw: Draw = NOMINAL, cold: bool = False,
            mains: float | None = None, load: float | None = None) -> Netlist:
    """Netlist of the board with the given faults; powered and loaded unless ``cold``.

    ``mains`` [V rms] and ``load`` [ohm] default to the nominal mains and the rated load.
    """
    net = Netlist(reference=board.ground["primary"])
    modes: dict[str, list[str]] = {}
    for fault in faults:
        modes.setdefault(fault.ref, []).append(fault.mode)
    for part in board.parts:
        present = tuple(modes.get(part.ref, ()))
        severity = {mode: draw.severity[part.ref, mode] for mode in present if (part.ref, mode) in draw.severity}
        kinds()[part.kind].place(net, specimen(part, draw), State(present, severity, cold))
    ground = output_ground(board)
    if ground != net.reference:
        net.resistor("isolation", ground, net.reference, board.isolation_resistance)
    if not cold:
        _feed(net, board, mains or board.mains.nominal, load or board.full_load)
    return net


def _feed(net: Netlist, board: Board, mains: float, load: float) -> None:
    """Add mains, load and a port at every node a probe reaches. The mains starts at its crest."""
    amplitude = mains * math.sqrt(2.0)
    net.sine("mains", LINE, neutral(board), amplitude, board.mains.frequency, math.pi / 2.0, board.mains.source_resistance)
    net.resistor("load", OUTPUT, output_ground(board), load)
    net.port("ADAPTER", "", LINE, neutral(board), PORT_SOURCE, "mains")
    for side, nodes in board.sides.items():
        for node in nodes:
            if node != board.ground[side]:
                net.port(node, "node", node, live_ground(board, side, node), PORT_NONE)
    back = neutral(board)
    for node in board.sides["primary"]:
        if node != back:
            net.port(node, "mains", node, back, PORT_NONE)
