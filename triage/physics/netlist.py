"""A circuit as primitive elements, and its compilation into arrays for the solvers.

Every board, healthy or faulty, becomes a list of resistors, capacitors with their series resistance, coupled windings with
theirs, junctions and transistors. One node is the reference. The compiled form holds the order of elimination and the slots
of the sparse matrix, so that a Newton step is a fixed list of multiplications (nodal analysis; no pivoting is needed because
every node has a conductance of its own).

Sources: L. Nagel, SPICE2: A Computer Program to Simulate Semiconductor Circuits, 1975 (stamps, junction limiting);
W. Tinney and J. Walker, Direct solutions of sparse network equations by optimally ordered triangular factorization, 1967
(order of elimination, scheme 2).
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np

THERMAL_VOLTAGE = 0.0258649
"""kT/q at 27 degC [V]."""
TURN_ON = 3.0
"""Junctions are limited from this many thermal voltages below the critical voltage of the source on [-]."""

DIODE_PARAMETERS = ("saturation_current", "emission", "zero_bias_capacitance", "junction_potential", "grading",
                    "transit_time", "breakdown_voltage", "breakdown_current", "breakdown_emission")
DIODE_DEFAULTS = {"saturation_current": 1e-14, "emission": 1.0, "series_resistance": 1e-3, "zero_bias_capacitance": 0.0,
                  "junction_potential": 1.0, "grading": 0.5, "transit_time": 0.0, "breakdown_voltage": 0.0,
                  "breakdown_current": 1e-3, "breakdown_emission": 0.0}
BIPOLAR_PARAMETERS = ("saturation_current", "gain", "reverse_gain", "early_voltage", "knee_current",
                      "leakage_saturation_current", "leakage_emission", "emitter_capacitance", "emitter_potential",
                      "emitter_grading", "collector_capacitance", "collector_potential", "collector_grading",
                      "forward_transit_time", "reverse_transit_time")
BIPOLAR_DEFAULTS = {"saturation_current": 1e-14, "gain": 100.0, "reverse_gain": 1.0, "early_voltage": 1e9,
                    "knee_current": 1e9, "leakage_saturation_current": 0.0, "leakage_emission": 1.5,
                    "base_resistance": 1e-2, "collector_resistance": 1e-2, "emitter_resistance": 1e-3,
                    "emitter_capacitance": 0.0, "emitter_potential": 0.75, "emitter_grading": 0.33,
                    "collector_capacitance": 0.0, "collector_potential": 0.75, "collector_grading": 0.33,
                    "forward_transit_time": 0.0, "reverse_transit_time": 0.0}

TERMINALS = 5
"""Most terminals of a part that is more than a junction."""
MOSFET, SHUNT_REFERENCE, REGULATOR, CONTROLLER, PLATEAU, OFF_TIME = 1, 2, 3, 4, 5, 6
"""Kinds of parts that are more than a junction."""
CLOCK = 3
"""Place of the start of the running period [s] in the state of a controller."""
PORT_RESISTOR, PORT_CAPACITOR, PORT_WINDING, PORT_SOURCE, PORT_NONE = range(5)


@dataclass(frozen=True, slots=True)
class Port:
    """A pair of nodes of a part, and the element whose current flows into the first of them."""

    ref: str
    suffix: str
    plus: str
    minus: str
    kind: int
    element: str


@dataclass(slots=True)
class Netlist:
    """Elements by kind, in the order they were added; node names are free text."""

    reference: str
    resistors: list[tuple[str, str, str, float]] = field(default_factory=list)
    capacitors: list[tuple[str, str, str, float, float, float]] = field(default_factory=list)
    windings: list[tuple[str, str, str, int, float, float]] = field(default_factory=list)
    groups: list[dict[tuple[str, str], float]] = field(default_factory=list)
    diodes: list[tuple[str, str, str, Mapping[str, float]]] = field(default_factory=list)
    bipolars: list[tuple[str, str, str, str, Mapping[str, float], float]] = field(default_factory=list)
    sources: list[tuple[str, str, str, float, float, float, float]] = field(default_factory=list)
    transfers: list[tuple[str, str, str, str, str, float]] = field(default_factory=list)
    behaviours: list[tuple[str, int, tuple[str, ...], Sequence[float], Sequence[float]]] = field(default_factory=list)
    ports: list[Port] = field(default_factory=list)

    def resistor(self, name: str, a: str, b: str, resistance: float) -> None:
        """Add a resistor [ohm]."""
        self.resistors.append((name, a, b, resistance))

    def capacitor(self, name: str, a: str, b: str, capacitance: float, esr: float = 0.0, voltage: float = 0.0) -> None:
        """Add a capacitor [F] with its series resistance [ohm] and the voltage it starts at [V]."""
        self.capacitors.append((name, a, b, capacitance, esr, voltage))

    def coupled(self, windings: Sequence[tuple[str, str, str, float, float]],
                coupling: Mapping[tuple[str, str], float] | None = None) -> None:
        """Add windings (name, dotted end, other end, inductance [H], series resistance [ohm]) on one core.

        ``coupling`` gives the coefficient for pairs of names; absent pairs are not coupled.
        """
        group = len(self.groups)
        self.groups.append(dict(coupling or {}))
        for name, a, b, inductance, resistance in windings:
            self.windings.append((name, a, b, group, inductance, resistance))

    def diode(self, name: str, anode: str, cathode: str, model: Mapping[str, float]) -> None:
        """Add a junction; its series resistance becomes the resistor ``name`` and an inner node."""
        full = {**DIODE_DEFAULTS, **model}
        inner = f"{name}:j"
        self.resistor(name, anode, inner, max(full["series_resistance"], 1e-3))
        self.diodes.append((name, inner, cathode, full))

    def bipolar(self, name: str, collector: str, base: str, emitter: str, model: Mapping[str, float],
                polarity: float = 1.0) -> None:
        """Add a transistor; ``name:c`` and ``name:b`` are the resistors in its collector and base leads."""
        full = {**BIPOLAR_DEFAULTS, **model}
        self.resistor(f"{name}:c", collector, f"{name}:ci", full["collector_resistance"])
        self.resistor(f"{name}:b", base, f"{name}:bi", full["base_resistance"])
        self.resistor(f"{name}:e", emitter, f"{name}:ei", full["emitter_resistance"])
        self.bipolars.append((name, f"{name}:ci", f"{name}:bi", f"{name}:ei", full, polarity))

    def transfer(self, name: str, a: str, b: str, plus: str, minus: str, conductance: float) -> None:
        """Let conductance [S] x (v(plus) - v(minus)) flow from ``a`` through the element into ``b``."""
        self.transfers.append((name, a, b, plus, minus, conductance))

    def behaviour(self, name: str, kind: int, nodes: Sequence[str], parameters: Sequence[float],
                  state: Sequence[float] = ()) -> None:
        """Add a part that is more than a junction; ``kind`` and the orders are those of transient_behaviour."""
        self.behaviours.append((name, kind, tuple(nodes), parameters, state))

    def sine(self, name: str, plus: str, minus: str, amplitude: float, frequency: float, phase: float,
             resistance: float) -> None:
        """Add a sine source [V, Hz, rad] behind its resistance [ohm]."""
        self.sources.append((name, plus, minus, amplitude, frequency, phase, resistance))

    def port(self, ref: str, suffix: str, plus: str, minus: str, kind: int, element: str = "") -> None:
        """Measure the voltage between two nodes and the current of an element in the solvers' statistics."""
        self.ports.append(Port(ref, suffix, plus, minus, kind, element))


@dataclass(frozen=True, slots=True)
class Compiled:
    """Arrays of a netlist: node indices are positions in the order of elimination, -1 is the reference."""

    nodes: dict[str, int]
    size: int
    nonzeros: int
    program: tuple[Any, ...]
    resistor: tuple[Any, ...]
    capacitor: tuple[Any, ...]
    winding: tuple[Any, ...]
    diode: tuple[Any, ...]
    bipolar: tuple[Any, ...]
    source: tuple[Any, ...]
    transfer: tuple[Any, ...]
    behaviour: tuple[Any, ...]
    port: tuple[Any, ...]
    names: dict[str, list[str]]

    def index(self, node: str) -> int:
        """Index of a node, -1 for the reference."""
        return self.nodes[node]


def compile_netlist(net: Netlist, extra_pairs: Sequence[tuple[str, str]] = ()) -> Compiled:
    """Order the nodes, lay out the sparse matrix and turn the elements into arrays.

    ``extra_pairs`` reserves room for conductances that a solver adds between two nodes, such as a meter's.
    """
    pairs = _couplings(net) + list(extra_pairs)
    names = sorted({node for pair in pairs for node in pair} - {net.reference})
    order = _elimination_order(names, pairs, net.reference)
    nodes = {name: position for position, name in enumerate(order)}
    nodes[net.reference] = -1
    slots, program = _factor_program(nodes, pairs)
    width = len(slots)

    def stamp(a: str, b: str) -> list[int]:
        i, j = nodes[a], nodes[b]
        return [slots.get((r, c), width) if r >= 0 and c >= 0 else width for r, c in ((i, i), (j, j), (i, j), (j, i))]

    return Compiled(
        nodes=nodes, size=len(order), nonzeros=width, program=program,
        resistor=(_ints([[nodes[a], nodes[b]] for _, a, b, _ in net.resistors], 2),
                  _ints([stamp(a, b) for _, a, b, _ in net.resistors], 4),
                  np.array([1.0 / r for *_, r in net.resistors])),
        capacitor=(_ints([[nodes[a], nodes[b]] for _, a, b, *_ in net.capacitors], 2),
                   _ints([stamp(a, b) for _, a, b, *_ in net.capacitors], 4),
                   np.array([c for *_, c, _, _ in net.capacitors]), np.array([r for *_, r, _ in net.capacitors]),
                   np.array([v for *_, v in net.capacitors])),
        winding=_winding_arrays(net, nodes, slots, width),
        diode=(_ints([[nodes[a], nodes[k]] for _, a, k, _ in net.diodes], 2),
               _ints([stamp(a, k) for _, a, k, _ in net.diodes], 4),
               _diode_rows(net)),
        bipolar=_bipolar_arrays(net, nodes, slots, width),
        source=(_ints([[nodes[a], nodes[b]] for _, a, b, *_ in net.sources], 2),
                _ints([stamp(a, b) for _, a, b, *_ in net.sources], 4),
                _floats([[v, f, p, 1.0 / r] for *_, v, f, p, r in net.sources], 4)),
        transfer=_transfer_arrays(net, nodes, slots, width),
        behaviour=_behaviour_arrays(net, nodes, slots, width),
        port=_port_arrays(net, nodes),
        names={"resistor": [e[0] for e in net.resistors], "capacitor": [e[0] for e in net.capacitors],
               "winding": [e[0] for e in net.windings], "diode": [e[0] for e in net.diodes],
               "bipolar": [e[0] for e in net.bipolars], "source": [e[0] for e in net.sources]},
    )


def with_values(compiled: Compiled, net: Netlist) -> Compiled:
    """The compiled form of a netlist of the same topology with other element values; no ordering is done again."""
    matrix = compiled.winding[2].copy()
    for p, (name_p, *_, group_p, l_p, _) in enumerate(net.windings):
        for q, (name_q, *_, group_q, l_q, _) in enumerate(net.windings):
            if group_p == group_q:
                matrix[p, q] = _coupling(net, group_p, name_p, name_q) * np.sqrt(l_p * l_q)
    ends, starts, _, _, stamps = compiled.winding
    return replace(
        compiled,
        resistor=(*compiled.resistor[:2], np.array([1.0 / r for *_, r in net.resistors])),
        capacitor=(*compiled.capacitor[:2], np.array([c for *_, c, _, _ in net.capacitors]),
                   np.array([r for *_, r, _ in net.capacitors]), compiled.capacitor[4]),
        winding=(ends, starts, matrix, np.array([w[5] for w in net.windings]), stamps),
        diode=(*compiled.diode[:2], _diode_rows(net)),
        bipolar=(*compiled.bipolar[:2], _bipolar_rows(net), compiled.bipolar[3]),
        transfer=(compiled.transfer[0], np.array([t[5] for t in net.transfers], dtype=float)),
        behaviour=(*compiled.behaviour[:3], *_behaviour_arrays(net, compiled.nodes, {}, 0)[3:]),
    )


def _coupling(net: Netlist, group: int, p: str, q: str) -> float:
    """Coupling coefficient of two windings of a group, 1 for a winding with itself."""
    if p == q:
        return 1.0
    k = net.groups[group]
    return k.get((p, q), k.get((q, p), 0.0))


def _ints(rows: Sequence[Sequence[int]], width: int) -> np.ndarray:
    return np.array(rows, dtype=np.int64).reshape(-1, width)


def _floats(rows: Sequence[Sequence[float]], width: int) -> np.ndarray:
    return np.array(rows, dtype=float).reshape(-1, width)


def _couplings(net: Netlist) -> list[tuple[str, str]]:
    """Pairs of nodes that share a matrix entry."""
    pairs = [(a, b) for _, a, b, _ in net.resistors]
    pairs += [(a, b) for _, a, b, *_ in net.capacitors]
    pairs += [(a, b) for _, a, b, _ in net.diodes]
    pairs += [(a, b) for _, a, b, *_ in net.sources]
    for _, c, b, e, *_ in net.bipolars:
        pairs += [(c, b), (b, e), (c, e)]
    for _, a, b, plus, minus, _ in net.transfers:
        pairs += [(a, plus), (a, minus), (b, plus), (b, minus)]
    for _, _, terminals, *_ in net.behaviours:
        pairs += [(a, b) for i, a in enumerate(terminals) for b in terminals[i + 1:]]
    for group in range(len(net.groups)):
        ends = [node for _, a, b, g, *_ in net.windings if g == group for node in (a, b)]
        pairs += [(a, b) for i, a in enumerate(ends) for b in ends[i + 1:]]
    return pairs


def _elimination_order(names: Sequence[str], pairs: Sequence[tuple[str, str]], reference: str) -> list[str]:
    """Minimum-degree order: the node with the fewest neighbours left goes first."""
    near: dict[str, set[str]] = {name: set() for name in names}
    for a, b in pairs:
        if a != b and reference not in (a, b):
            near[a].add(b)
            near[b].add(a)
    order = []
    while near:
        name = min(near, key=lambda n: (len(near[n]), n))
        neighbours = near.pop(name)
        for other in neighbours:
            near[other] |= neighbours - {other}
            near[other].discard(name)
        order.append(name)
    return order


def _factor_program(nodes: Mapping[str, int], pairs: Sequence[tuple[str, str]]
                    ) -> tuple[dict[tuple[int, int], int], tuple[Any, ...]]:
    """Slots of the filled matrix, and the factorisation as index lists.

    The program is (pivot slots, start of each lower column, its rows, its slots, start of each upper row, its columns,
    its slots, start of each update list, its target slots).
    """
    n = len(nodes) - 1
    rows: list[set[int]] = [set() for _ in range(n)]
    for a, b in pairs:
        i, j = nodes[a], nodes[b]
        if i >= 0 and j >= 0 and i != j:
            rows[i].add(j)
            rows[j].add(i)
    for k in range(n):
        later = {j for j in rows[k] if j > k}
        for i in later:
            rows[i] |= later - {i}
    slots: dict[tuple[int, int], int] = {}
    for i in range(n):
        for j in sorted(rows[i] | {i}):
            slots[i, j] = len(slots)
    pivot, lower_start, upper_start, update_start = [slots[k, k] for k in range(n)], [0], [0], [0]
    lower_row: list[int] = []
    lower_slot: list[int] = []
    upper_col: list[int] = []
    upper_slot: list[int] = []
    update: list[int] = []
    for k in range(n):
        columns = sorted(j for j in rows[k] if j > k)
        upper_col += columns
        upper_slot += [slots[k, j] for j in columns]
        for i in columns:
            lower_row.append(i)
            lower_slot.append(slots[i, k])
            update += [slots[i, j] for j in columns]
            update_start.append(len(update))
        lower_start.append(len(lower_row))
        upper_start.append(len(upper_col))
    program = (pivot, lower_start, lower_row, lower_slot, upper_start, upper_col, upper_slot, update_start, update)
    return slots, tuple(np.array(x, dtype=np.uint32) for x in program)


def _diode_rows(net: Netlist) -> np.ndarray:
    """Parameters of the diodes in the order of DIODE_PARAMETERS, then the constants that the limiting needs.

    Columns 9 to 12: emission x kT/q, the same of the breakdown, and the voltage above which a step is limited, forward and
    in breakdown (Nagel, SPICE2, 1975, section 4.2.2).
    """
    rows = _floats([[m[key] for key in DIODE_PARAMETERS] for *_, m in net.diodes], len(DIODE_PARAMETERS))
    forward = rows[:, 1] * THERMAL_VOLTAGE
    breakdown = np.where(rows[:, 8] > 0.0, rows[:, 8], rows[:, 1]) * THERMAL_VOLTAGE
    critical = forward * (np.log(forward / (np.sqrt(2.0) * rows[:, 0])) - TURN_ON)
    critical_breakdown = breakdown * (np.log(breakdown / (np.sqrt(2.0) * rows[:, 7])) - TURN_ON)
    return np.column_stack([rows, forward, breakdown, critical, critical_breakdown])


def _bipolar_rows(net: Netlist) -> np.ndarray:
    """Parameters of the transistors in the order of BIPOLAR_PARAMETERS, then the voltage above which a step is limited."""
    rows = _floats([[m[key] for key in BIPOLAR_PARAMETERS] for *_, m, _ in net.bipolars], len(BIPOLAR_PARAMETERS))
    critical = THERMAL_VOLTAGE * (np.log(THERMAL_VOLTAGE / (np.sqrt(2.0) * rows[:, 0])) - TURN_ON)
    return np.column_stack([rows, critical])


def _winding_arrays(net: Netlist, nodes: Mapping[str, int], slots: Mapping[tuple[int, int], int], width: int
                    ) -> tuple[Any, ...]:
    """(ends, start of each group, inductance matrix, resistances, stamps of each pair of windings)."""
    count = len(net.windings)
    ends = _ints([[nodes[a], nodes[b]] for _, a, b, *_ in net.windings], 2)
    matrix = np.zeros((count, count))
    stamps = np.full((count, count, 4), width, dtype=np.int64)
    for p, (name_p, *_, group_p, l_p, _) in enumerate(net.windings):
        for q, (name_q, *_, group_q, l_q, _) in enumerate(net.windings):
            if group_p != group_q:
                continue
            matrix[p, q] = _coupling(net, group_p, name_p, name_q) * np.sqrt(l_p * l_q)
            for s, (i, j) in enumerate(((ends[p, 0], ends[q, 0]), (ends[p, 1], ends[q, 1]),
                                        (ends[p, 0], ends[q, 1]), (ends[p, 1], ends[q, 0]))):
                stamps[p, q, s] = slots.get((i, j), width) if i >= 0 and j >= 0 else width
    starts = [0]
    for group in range(len(net.groups)):
        starts.append(starts[-1] + sum(1 for w in net.windings if w[3] == group))
    return ends, np.array(starts, dtype=np.int64), matrix, np.array([w[5] for w in net.windings]), stamps


def _bipolar_arrays(net: Netlist, nodes: Mapping[str, int], slots: Mapping[tuple[int, int], int], width: int
                    ) -> tuple[Any, ...]:
    """(collector, base, emitter nodes; the nine slots row by row; parameters; polarity)."""
    ends = _ints([[nodes[c], nodes[b], nodes[e]] for _, c, b, e, *_ in net.bipolars], 3)
    stamps = np.full((len(net.bipolars), 9), width, dtype=np.int64)
    for q, three in enumerate(ends):
        for s, (i, j) in enumerate((i, j) for i in three for j in three):
            stamps[q, s] = slots.get((i, j), width) if i >= 0 and j >= 0 else width
    return ends, stamps, _bipolar_rows(net), np.array([e[5] for e in net.bipolars], dtype=float)


def _transfer_arrays(net: Netlist, nodes: Mapping[str, int], slots: Mapping[tuple[int, int], int], width: int
                     ) -> tuple[Any, ...]:
    """(four slots: a-plus, b-minus, a-minus, b-plus; conductances)."""
    rows = []
    for _, a, b, plus, minus, _ in net.transfers:
        i, j, p, q = nodes[a], nodes[b], nodes[plus], nodes[minus]
        rows.append([slots.get(pair, width) if min(pair) >= 0 else width for pair in ((i, p), (j, q), (i, q), (j, p))])
    return _ints(rows, 4), np.array([t[5] for t in net.transfers], dtype=float)


def _behaviour_arrays(net: Netlist, nodes: Mapping[str, int], slots: Mapping[tuple[int, int], int], width: int
                      ) -> tuple[Any, ...]:
    """(terminal nodes, padded with the reference; slots row by row; kinds; parameters; states to begin with)."""
    count = len(net.behaviours)
    ends = np.full((count, TERMINALS), -1, dtype=np.int64)
    stamps = np.full((count, TERMINALS * TERMINALS), width, dtype=np.int64)
    parameters, states = np.zeros((count, 16)), np.zeros((count, 8))
    for b, (_, _, terminals, values, state) in enumerate(net.behaviours):
        ends[b, :len(terminals)] = [nodes[name] for name in terminals]
        for s, (i, j) in enumerate((i, j) for i in ends[b] for j in ends[b]):
            stamps[b, s] = slots.get((i, j), width) if i >= 0 and j >= 0 else width
        parameters[b, :len(values)] = values
        states[b, :len(state)] = state
    return ends, stamps, np.array([e[1] for e in net.behaviours], dtype=np.int64), parameters, states


def _port_arrays(net: Netlist, nodes: Mapping[str, int]) -> tuple[Any, ...]:
    """(nodes, kind of current, index of the element)."""
    lists = {PORT_RESISTOR: [e[0] for e in net.resistors], PORT_CAPACITOR: [e[0] for e in net.capacitors],
             PORT_WINDING: [e[0] for e in net.windings], PORT_SOURCE: [e[0] for e in net.sources]}
    index = [lists[p.kind].index(p.element) if p.kind != PORT_NONE else 0 for p in net.ports]
    return (_ints([[nodes[p.plus], nodes[p.minus]] for p in net.ports], 2),
            np.array([p.kind for p in net.ports], dtype=np.int64), np.array(index, dtype=np.int64))
