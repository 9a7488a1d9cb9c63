"""N-channel field-effect transistors: channel, capacitances, body diode."""

from triage.board.kinds import OPEN, PartKind, State, cut
from triage.board.part import Part
from triage.physics.netlist import MOSFET, PORT_RESISTOR, Netlist

_SHORT, _GATE_SHORT, _LEAK, _FLOATING_GATE = 0.05, 1.0, 10e3, 1e7
_MODULATION = 0.002
"""Channel-length modulation [1/V]."""
BODY = {"saturation_current": 1e-11, "emission": 1.3, "series_resistance": 0.05, "junction_potential": 0.7, "grading": 0.5,
        "breakdown_current": 1e-4}


def _place(net: Netlist, part: Part, state: State) -> None:
    ref, value = part.ref, part.value
    drain, source = cut(net, part, state, "open", "drain"), part.pins["source"]
    gate = part.pins["gate"]
    if "gate_open" in state.modes:
        gate = f"{ref}:gate"
        net.resistor(f"{ref}:gate_open", part.pins["gate"], gate, OPEN)
        net.resistor(f"{ref}:gate_leak", gate, source, _FLOATING_GATE)
    if "short" in state.modes or "short_dgs" in state.modes:
        net.resistor(f"{ref}:ds", drain, source, _SHORT)
    if "gs_short" in state.modes or "short_dgs" in state.modes:
        net.resistor(f"{ref}:gs", gate, source, _GATE_SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{ref}:leak", drain, source, state.size("leaky", _LEAK))
    net.resistor(f"{ref}:d", drain, f"{ref}:di", value.get("on_resistance", 1.0))
    if not state.cold:
        net.behaviour(ref, MOSFET, (f"{ref}:di", gate, source),
                      (value.get("transconductance", 6.0), value.get("threshold_voltage", 3.6), _MODULATION))
    net.capacitor(f"{ref}:cgs", gate, source, value.get("gate_source_capacitance", 8e-10), 1e-3)
    net.capacitor(f"{ref}:cgd", drain, gate, value.get("gate_drain_capacitance", 1.2e-11), 1e-3)
    breakdown = 0.0 if state.cold else value.get("breakdown_voltage", 1.15 * part.ratings.get("voltage", 600.0))
    net.diode(f"{ref}:body", source, drain, {**BODY, "zero_bias_capacitance": value.get("body_capacitance", 5e-10),
                                             "breakdown_voltage": breakdown})
    net.port(ref, "", part.pins["drain"], source, PORT_RESISTOR, f"{ref}:d")
    net.port(ref, "_gate", part.pins["gate"], source, PORT_RESISTOR, f"{ref}:d")


_VALUES = {"threshold_voltage": "V", "transconductance": "-", "on_resistance": "ohm", "gate_source_capacitance": "F",
           "gate_drain_capacitance": "F", "body_capacitance": "F", "breakdown_voltage": "V"}

KINDS = (PartKind("mosfet", ("drain", "gate", "source"), _VALUES, (),
                  ("open", "short", "short_dgs", "gate_open", "gs_short", "leaky"), _place),)
