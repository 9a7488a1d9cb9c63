"""Transformers with any number of windings: flyback and mains.

A flyback transformer whose profile gives a ``coupling`` has its leakage in series with the primary, damped by the core loss, and
a winding capacitance; one without has the leakage in the coupling of every pair of windings, as a mains transformer always has.
A short between turns is a part of the primary turns closed on itself.
"""

import math

from triage.board.kinds import OPEN, PartKind, State
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, PORT_WINDING, Netlist

_OPEN_MODE = {"primary": "pri_open", "feedback": "fb_open", "secondary": "sec_open", "half": "half_open",
              "auxiliary": "aux_open"}
"""Winding -> mode in which it is open; ``half`` is the second half of a tapped secondary."""
_SHORTED_RESISTANCE = 0.6
"""Resistance of a tenth of the primary turns and of the short that closes them [ohm]; common practice, no source."""


def winding_names(part: Part) -> list[str]:
    """Short names of the windings, from the pins ``NAME_start`` and ``NAME_end``."""
    return [pin.removesuffix("_start") for pin in part.pins if pin.endswith("_start")]


def _place(net: Netlist, part: Part, state: State) -> None:
    ref, value = part.ref, part.value
    separate = "coupling" in value
    windings = []
    for name in winding_names(part):
        start, end = part.pins[f"{name}_start"], part.pins[f"{name}_end"]
        if _OPEN_MODE[name] in state.modes:
            inner = f"{ref}:{name}:open"
            net.resistor(inner, start, inner, OPEN)
            start = inner
        inductance = value["primary_inductance"] * (value[f"{name}_turns"] / value["primary_turns"]) ** 2
        resistance = value[f"{name}_resistance"]
        if name == "primary":
            start, resistance = (_leakage(net, part, start) if separate else _core(net, part, start)), 0.0
        windings.append((f"{ref}:{name}", start, end, inductance, resistance))
    if "shorted_turns" in state.modes:
        windings.append(_shorted(net, part, state))
    net.coupled(windings, _couplings(part, [w[0] for w in windings]))
    for name in winding_names(part):
        a, b = part.pins[f"{name}_start"], part.pins[f"{name}_end"]
        kind = PORT_RESISTOR if name == "primary" else PORT_WINDING
        net.port(ref, f"_{name}", a, b, kind, f"{ref}:{name}")


def _couplings(part: Part, keys: list[str]) -> dict[tuple[str, str], float]:
    """Coupling coefficient of each pair of windings."""
    value = part.value
    k = value.get("coupling", math.sqrt(max(1.0 - value["leakage_inductance"] / value["primary_inductance"], 0.0)))
    pairs = {(a, b): k for i, a in enumerate(keys) for b in keys[i + 1:]}
    outer = (f"{part.ref}:secondary", f"{part.ref}:auxiliary")
    if "secondary_auxiliary_coupling" in value and outer in pairs:
        pairs[outer] = value["secondary_auxiliary_coupling"]
    return pairs


def _leakage(net: Netlist, part: Part, start: str) -> str:
    """Copper resistance, leakage with its damping, winding capacitance of the primary; returns the node behind them."""
    ref, value = part.ref, part.value
    net.resistor(f"{ref}:primary", start, f"{ref}:r", value["primary_resistance"])
    net.coupled([(f"{ref}:leakage", f"{ref}:r", f"{ref}:l", value["leakage_inductance"], 0.0)])
    net.resistor(f"{ref}:core", f"{ref}:r", f"{ref}:l", value.get("damping_resistance", 2500.0))
    net.capacitor(f"{ref}:winding", part.pins["primary_start"], part.pins["primary_end"],
                  value.get("winding_capacitance", 25e-12), 1e-3)
    return f"{ref}:l"


def _core(net: Netlist, part: Part, start: str) -> str:
    """Copper resistance of the primary, and the core loss across the winding behind it; returns the node between."""
    ref, value = part.ref, part.value
    net.resistor(f"{ref}:primary", start, f"{ref}:r", value["primary_resistance"])
    if "core_resistance" in value:
        net.resistor(f"{ref}:core", f"{ref}:r", part.pins["primary_end"], value["core_resistance"])
    return f"{ref}:r"


def _shorted(net: Netlist, part: Part, state: State) -> tuple[str, str, str, float, float]:
    """The winding that stands for turns shorted to each other."""
    value, node = part.value, f"{part.ref}:f"
    share = value.get("shorted_share", 0.1) * min(max(state.severity.get("shorted_turns", 1.0), 0.1), 3.0)
    resistance = (_SHORTED_RESISTANCE if "coupling" in value else max(value["primary_resistance"] * share, 0.004))
    net.resistor(f"{part.ref}:fault", node, net.reference, 0.5 * resistance)
    return f"{part.ref}:fault", node, net.reference, value["primary_inductance"] * share**2, 0.5 * resistance


_VALUES = {"primary_turns": "-", "feedback_turns": "-", "secondary_turns": "-", "half_turns": "-", "auxiliary_turns": "-",
           "primary_inductance": "H", "leakage_inductance": "H", "primary_resistance": "ohm",
           "feedback_resistance": "ohm", "secondary_resistance": "ohm", "half_resistance": "ohm",
           "auxiliary_resistance": "ohm",
           "damping_resistance": "ohm", "core_resistance": "ohm", "winding_capacitance": "F", "coupling": "-",
           "secondary_auxiliary_coupling": "-", "shorted_share": "-"}

KINDS = (PartKind("transformer", ("primary_start", "primary_end", "secondary_start", "secondary_end"), _VALUES,
                  ("primary_turns", "primary_inductance", "leakage_inductance", "primary_resistance"),
                  ("pri_open", "fb_open", "sec_open", "half_open", "aux_open", "shorted_turns"), _place),)
