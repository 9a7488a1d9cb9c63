"""The way a charged capacitor empties through the parts of the unplugged board.

A linear network with ideal junctions: resistive parts as they are, windings and fuses as shorts, capacitors
and controllers as opens, a junction closed exactly when it is forward biased. Zener breakdown, transistor
gain and junction drops are left out; the first two only make the true discharge faster, the last is small
beside the 60 V asked for.
"""

import itertools
from collections.abc import Iterable, Iterator

import numpy as np

from triage.board.part import Board, Part

_SHORT = 1e-3
"""Resistance taken for a closed junction, a winding or a sound fuse [ohm]; nothing beside the kilohms of a
bleed path."""
_FLOOR = 1e-13
"""Conductance from every node to the negative terminal [S], so that a floating node has a potential: 10
Tohm."""

_JUNCTIONS = {
    "diode": (("anode", "cathode"),),
    "zener": (("anode", "cathode"),),
    "led": (("anode", "cathode"),),
    "bipolar_transistor": (("base", "emitter"), ("base", "collector")),
    "mosfet": (("source", "drain"),),
    "optocoupler": (("anode", "cathode"),),
    "bridge": (("ac1", "plus"), ("ac2", "plus"), ("minus", "ac1"), ("minus", "ac2")),
}
"""Part kind -> its junctions as (anode pin, cathode pin); npn and n-channel, the rule in adapters."""

JOINING_KINDS = ("fuse", "thermal_fuse", "inductor", "transformer", "common_mode_choke", "cable", "connector")
"""Part kinds that a direct current passes almost freely."""
_RESISTIVE = ("resistor", "fusible_resistor", "ntc")
_CAPACITIVE = ("capacitor", "electrolytic", "x_capacitor", "y_capacitor")

Branch = tuple[str, str, float]
"""Node, node, conductance [S]."""


def windings(part: Part) -> Iterator[tuple[str, str]]:
    """Node pairs of the windings of a transformer or inductor: pins that share the name before the last
    underscore."""
    by_winding: dict[str, list[str]] = {}
    for pin, node in part.pins.items():
        by_winding.setdefault(pin.rpartition("_")[0], []).append(node)
    for nodes in by_winding.values():
        yield from itertools.pairwise(nodes)


def conductances(parts: Iterable[Part]) -> tuple[Branch, ...]:
    """Linear branches of the parts for a slow discharge."""
    branches: list[Branch] = []
    for part in parts:
        nodes = tuple(part.pins.values())
        if part.kind in _RESISTIVE and part.value.get("resistance"):
            branches.append((nodes[0], nodes[1], 1.0 / part.value["resistance"]))
        elif part.kind in JOINING_KINDS:
            branches += [(a, b, 1.0 / _SHORT) for a, b in windings(part)]
        elif part.kind in _CAPACITIVE and part.value.get("leakage_resistance"):
            branches.append((nodes[0], nodes[1], 1.0 / part.value["leakage_resistance"]))
    return tuple(branches)


def junctions(parts: Iterable[Part]) -> tuple[tuple[str, str], ...]:
    """(anode node, cathode node) of every junction of the parts."""
    return tuple(
        (part.pins[anode], part.pins[cathode])
        for part in parts
        for anode, cathode in _JUNCTIONS.get(part.kind, ())
        if anode in part.pins and cathode in part.pins
    )


def resistance_seen(branches: Iterable[Branch], diodes: Iterable[tuple[str, str]], plus: str, minus: str) -> float:
    """Resistance between two nodes with ``plus`` driven positive.

    Parameters: branches (node, node, conductance [S]), diodes (anode node, cathode node), plus and minus
    (nodes). Result [ohm]; ``inf`` when nothing joins the nodes. Nodal analysis; junctions are closed and
    opened until none changes.
    """
    branches, diodes = list(branches), list(diodes)
    names = sorted({plus, minus, *(n for a, b, _ in branches for n in (a, b)), *(n for d in diodes for n in d)})
    place = {name: i for i, name in enumerate(names)}
    closed: frozenset[int] = frozenset()
    seen: set[frozenset[int]] = set()
    while closed not in seen:
        seen.add(closed)
        net = branches + [(*diodes[i], 1.0 / _SHORT) for i in closed]
        voltage, conductance = _solve(net, place, place[plus], place[minus])
        # A closed junction stays closed while it carries current forward, an open one closes above a
        # microvolt.
        closed = frozenset(
            i for i, (a, k) in enumerate(diodes) if voltage[place[a]] - voltage[place[k]] > (1e-15 if i in closed else 1e-6)
        )
    return 1.0 / conductance if conductance > 2 * _FLOOR * len(names) else float("inf")


def _solve(net: list[Branch], place: dict[str, int], plus: int, minus: int) -> tuple[np.ndarray, float]:
    """Node voltages for 1 V between the terminals, and the conductance between them [S]."""
    count = len(place)
    matrix = np.eye(count) * _FLOOR
    for a, b, g in net:
        i, j = place[a], place[b]
        matrix[i, i] += g
        matrix[j, j] += g
        matrix[i, j] -= g
        matrix[j, i] -= g
    voltage = np.zeros(count)
    voltage[plus] = 1.0
    free = [i for i in range(count) if i not in (plus, minus)]
    if free:
        voltage[free] = np.linalg.solve(matrix[np.ix_(free, free)], -matrix[free, plus])
    return voltage, float(matrix[plus] @ voltage)


def discharge_resistance(board: Board, plus: str, minus: str, without: str = "", junctions_too: bool = True) -> float:
    """Resistance through which a capacitor between two nodes of the unplugged board empties [ohm].

    ``without`` leaves one part out, as if it had failed open; ``junctions_too`` False counts linear parts
    alone, for a capacitor beside which another one keeps the junctions reverse biased. ``inf`` when there is
    no path.
    """
    parts = [part for part in board.parts if part.ref != without]
    return resistance_seen(conductances(parts), junctions(parts) if junctions_too else (), plus, minus)
