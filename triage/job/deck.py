"""Writes the powered board as a SPICE deck, so that any circuit simulator can give a second opinion.

The deck holds the very elements the program itself solves (``triage.physics.netlist``), in the open SPICE 3
notation: R, C, L with K, D, Q and SIN sources, the models under their SPICE names. Times start at the crest
of the mains, as here. Source of the notation: T. Quarles et al., SPICE3 Version 3f3 User's Manual, University
of California, Berkeley, 1993.
"""

import math
import re
from collections.abc import Mapping, Sequence

from triage.board.circuit import circuit
from triage.board.fault import Fault
from triage.board.part import Board
from triage.families import family_of
from triage.job.deck_behaviour import behaviour_lines
from triage.job.display import plain
from triage.physics.netlist import OFF_TIME, Netlist

DIODE_NAMES = {
    "saturation_current": "IS", "emission": "N", "zero_bias_capacitance": "CJO", "junction_potential": "VJ",
    "grading": "M", "transit_time": "TT", "breakdown_voltage": "BV", "breakdown_current": "IBV", "breakdown_emission": "NBV",
}  # fmt: skip
BIPOLAR_NAMES = {
    "saturation_current": "IS", "gain": "BF", "reverse_gain": "BR", "early_voltage": "VAF", "knee_current": "IKF",
    "leakage_saturation_current": "ISE", "leakage_emission": "NE", "emitter_capacitance": "CJE",
    "emitter_potential": "VJE", "emitter_grading": "MJE", "collector_capacitance": "CJC", "collector_potential": "VJC",
    "collector_grading": "MJC", "forward_transit_time": "TF", "reverse_transit_time": "TR",
}  # fmt: skip
"""Our parameter -> SPICE model parameter."""

PERIODS = 4
"""Mains periods of the transient analysis."""
LARGEST_STEP = 2e-7
"""Largest time step asked of the simulator [s]: a hundredth of the shortest switching period of the reference
boards."""
SLOW_STEP = 2e-5
"""The same where nothing switches [s]."""
SLOW_OPTIONS = ".options method=gear reltol=0.003 abstol=1e-7 vntol=1e-4 chgtol=1e-10"
"""Where nothing switches the ring of a rectifier with the stray inductance is not worth following."""
FLOATING_OPTIONS = ".options reltol=1e-4"
"""A controller whose ground swings by the mains compares millivolts there: the usual tolerance is a tenth of a volt."""
LEAST_RESISTANCE = 1e-6
"""A resistance below this is written as this [ohm]: SPICE knows no zero."""


def deck(board: Board, faults: Sequence[Fault] = (), *, mains: float | None = None, load: float | None = None,
         start: Mapping[str, float] | None = None, periods: int = PERIODS, largest_step: float | None = None) -> str:
    """The deck of the powered board under these faults.

    mains [V rms], load [ohm]: default nominal mains and rated load. start: capacitor -> voltage to begin with [V], as a settled
    operating point gives them; others are empty. periods: mains periods of the analysis. largest_step [s]:
    by default what the family asks for.
    """
    net = circuit(board, faults, mains=mains, load=load)
    slow, floating = family_of(board.family).slow, any(kind == OFF_TIME for _, kind, *_ in net.behaviours)
    largest_step = largest_step or (SLOW_STEP if slow else LARGEST_STEP)
    charged = dict(start or {})
    net.capacitors = [(*one[:5], charged.get(one[0], one[5])) for one in net.capacitors]
    state = " + ".join(map(str, faults)) or "healthy"
    volts = mains or board.mains.nominal
    lines = [
        f"* {plain(board.title)}: {plain(state)}, {volts:g} V mains, load {load or board.full_load:g} ohm",
        "* nodes carry the names of the board; node 0 is " + plain(net.reference),
        *_elements(net, bool(charged)),
        ".temp 27",
        *([SLOW_OPTIONS] if slow else [FLOATING_OPTIONS] if floating else []),
        f".tran {largest_step:g} {periods / board.mains.frequency:g} 0 {largest_step:g} uic",
        ".end",
    ]
    return "\n".join(lines) + "\n"


def _elements(net: Netlist, awake: bool) -> list[str]:
    names = _Names(net.reference)
    lines = [
        f"R{names.element(name)} {names.node(a)} {names.node(b)} {max(value, LEAST_RESISTANCE):.9g}"
        for name, a, b, value in net.resistors
    ]
    for name, a, b, farad, esr, volts in net.capacitors:
        one = names.element(name)
        inner = names.node(f"{name}:esr")
        lines.append(f"C{one} {names.node(a)} {inner} {farad:.9g} ic={volts:.9g}")
        lines.append(f"RE{one} {inner} {names.node(b)} {max(esr, LEAST_RESISTANCE):.9g}")
    lines += _windings(net, names)
    for number, (name, anode, cathode, model) in enumerate(net.diodes):
        lines.append(f"D{names.element(name)} {names.node(anode)} {names.node(cathode)} DM{number}")
        used = {ours: theirs for ours, theirs in DIODE_NAMES.items() if _stated(ours, model[ours])}
        lines.append(f".model DM{number} D({_parameters(model, used)})")
    for number, (name, collector, base, emitter, model, polarity) in enumerate(net.bipolars):
        ends = " ".join(names.node(node) for node in (collector, base, emitter))
        lines.append(f"Q{names.element(name)} {ends} QM{number}")
        kind = "NPN" if polarity > 0 else "PNP"
        lines.append(f".model QM{number} {kind}({_parameters(model, BIPOLAR_NAMES)})")
    for name, a, b, plus, minus, siemens in net.transfers:
        ends = " ".join(names.node(node) for node in (a, b, plus, minus))
        lines.append(f"G{names.element(name)} {ends} {siemens:.9g}")
    lines += behaviour_lines(net, names.node, awake)
    for name, plus, minus, amplitude, frequency, phase, resistance in net.sources:
        one, inner = names.element(name), names.node(f"{name}:inner")
        degrees = math.degrees(phase)
        lines.append(f"V{one} {inner} {names.node(minus)} SIN(0 {amplitude:.9g} {frequency:.9g} 0 0 {degrees:.9g})")
        lines.append(f"RV{one} {names.node(plus)} {inner} {max(resistance, LEAST_RESISTANCE):.9g}")
    return lines


def _windings(net: Netlist, names: "_Names") -> list[str]:
    lines = []
    for name, a, b, _, henry, resistance in net.windings:
        one, inner = names.element(name), names.node(f"{name}:dc")
        lines.append(f"L{one} {names.node(a)} {inner} {henry:.9g} ic=0")
        lines.append(f"RL{one} {inner} {names.node(b)} {max(resistance, LEAST_RESISTANCE):.9g}")
    pairs = [(p, q, k) for group in net.groups for (p, q), k in group.items() if p != q]
    lines += [f"K{number} L{names.element(p)} L{names.element(q)} {k:.9g}" for number, (p, q, k) in enumerate(pairs, 1)]
    return lines


def _stated(key: str, value: float) -> bool:
    """A breakdown voltage of 0 means none, which SPICE says by leaving it out."""
    return key not in ("breakdown_voltage", "breakdown_current", "breakdown_emission") or value > 0


def _parameters(model: Mapping[str, float], names: Mapping[str, str]) -> str:
    return " ".join(f"{theirs}={model[ours]:.9g}" for ours, theirs in names.items())


class _Names:
    """SPICE names for nodes and elements: letters, digits and underscores, each of ours its own."""

    def __init__(self, reference: str) -> None:
        self._nodes = {reference: "0"}
        self._elements: dict[str, str] = {}

    def node(self, name: str) -> str:
        """Name of a node."""
        return self._unique(self._nodes, name)

    def element(self, name: str) -> str:
        """Name of an element without its type letter."""
        return self._unique(self._elements, name)

    @staticmethod
    def _unique(known: dict[str, str], name: str) -> str:
        if name not in known:
            # Case does not count in SPICE; neither may two names that differ in case become one.
            wish = re.sub(r"[^A-Za-z0-9]+", "_", name)[:40] or "n"
            taken = {used.lower() for used in known.values()}
            number = 1
            unique = f"n{wish}" if wish[0].isdigit() else wish
            while unique.lower() in taken:
                number += 1
                unique = f"{wish}_{number}"
            known[name] = unique
        return known[name]
