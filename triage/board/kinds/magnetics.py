"""Flyback transformers with any number of windings.

The leakage inductance stands in series with the primary, damped by the core loss resistance; the winding capacitance lies
across the primary. A short between turns is a tenth of the primary turns closed on itself.
"""

from triage.board.kinds import OPEN, PartKind, State
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, PORT_WINDING, Netlist

_SHORTED_RESISTANCE = 0.3
"""Resistance of the shorted turns, and of the short, each [ohm]."""


_OPEN_MODE = {"primary": "pri_open", "feedback": "fb_open", "secondary": "sec_open", "auxiliary": "aux_open"}


def winding_names(part: Part) -> list[str]:
    """Short names of the windings, from the pins ``NAME_start`` and ``NAME_end``."""
    return [pin.removesuffix("_start") for pin in part.pins if pin.endswith("_start")]


def _place(net: Netlist, part: Part, state: State) -> None:
    ref, value = part.ref, part.value
    turns_primary = value["primary_turns"]
    windings, names = [], winding_names(part)
    for name in names:
        start, end = part.pins[f"{name}_start"], part.pins[f"{name}_end"]
        if _OPEN_MODE[name] in state.modes:
            inner = f"{ref}:{name}:open"
            net.resistor(inner, start, inner, OPEN)
            start = inner
        turns = value[f"{name}_turns"]
        inductance = value["primary_inductance"] * (turns / turns_primary) ** 2
        if name == "primary":
            start = _leakage(net, part, start)
            windings.append((f"{ref}:{name}", start, end, inductance, 0.0))
        else:
            windings.append((f"{ref}:{name}", start, end, inductance, value[f"{name}_resistance"]))
    if "shorted_turns" in state.modes:
        ratio = 0.1 * min(max(state.severity.get("shorted_turns", 1.0), 0.1), 3.0)
        node = f"{ref}:f"
        windings.append((f"{ref}:fault", node, net.reference, value["primary_inductance"] * ratio**2, _SHORTED_RESISTANCE))
        net.resistor(f"{ref}:fault", node, net.reference, _SHORTED_RESISTANCE)
    keys = [w[0] for w in windings]
    k = value.get("coupling", 0.998)
    net.coupled(windings, {(a, b): k for i, a in enumerate(keys) for b in keys[i + 1:]})
    for name in names:
        a, b = part.pins[f"{name}_start"], part.pins[f"{name}_end"]
        if name == "primary":
            net.port(ref, "_primary", a, b, PORT_RESISTOR, f"{ref}:primary")
        else:
            net.port(ref, f"_{name}", a, b, PORT_WINDING, f"{ref}:{name}")


def _leakage(net: Netlist, part: Part, start: str) -> str:
    """Copper resistance, leakage with its damping and winding capacitance of the primary; returns the node behind them."""
    ref, value = part.ref, part.value
    net.resistor(f"{ref}:primary", start, f"{ref}:r", value["primary_resistance"])
    net.coupled([(f"{ref}:leakage", f"{ref}:r", f"{ref}:l", value["leakage_inductance"], 0.0)])
    net.resistor(f"{ref}:core", f"{ref}:r", f"{ref}:l", value.get("damping_resistance", 2500.0))
    net.capacitor(f"{ref}:winding", part.pins["primary_start"], part.pins["primary_end"],
                  value.get("winding_capacitance", 25e-12), 1e-3)
    return f"{ref}:l"


_VALUES = {"primary_turns": "-", "feedback_turns": "-", "secondary_turns": "-", "auxiliary_turns": "-",
           "primary_inductance": "H", "leakage_inductance": "H", "primary_resistance": "ohm",
           "feedback_resistance": "ohm", "secondary_resistance": "ohm", "auxiliary_resistance": "ohm",
           "damping_resistance": "ohm", "winding_capacitance": "F", "coupling": "-"}

KINDS = (PartKind("transformer", ("primary_start", "primary_end", "secondary_start", "secondary_end"), _VALUES,
                  ("primary_turns", "primary_inductance", "leakage_inductance", "primary_resistance"),
                  ("pri_open", "fb_open", "sec_open", "aux_open", "shorted_turns"), _place),)
