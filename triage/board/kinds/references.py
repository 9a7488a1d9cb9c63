"""Shunt references and three-terminal regulators."""

from triage.board.kinds import OPEN, PartKind, State, cut
from triage.board.part import Part
from triage.physics.netlist import PORT_NONE, PORT_RESISTOR, REGULATOR, SHUNT_REFERENCE, Netlist

_SHUNT_SHORT, _SHUNT_LEAK, _REFERENCE_INPUT = 2.0, 4700.0, 1.2e6
_SUBSTRATE = {"saturation_current": 1e-13, "emission": 1.1}
_GAIN, _MOST, _BIAS, _KNEE, _KNEE_WIDTH = 2.0, 0.12, 0.25e-3, 2.0, 0.2
"""Sink of a shunt reference: slope [A/V], most [A], bias [A], knee [V] and its width [V]; class of 431, from memory."""
_PASS_SHORT, _OUTPUT_SHORT, _PASS_LEAK = 0.05, 0.1, 100.0
_COLD_PASS = {"saturation_current": 1e-12, "emission": 2.4, "series_resistance": 5.0}
_COLD_BIAS = 150e3
_TIME = 0.02
"""Time constant of the regulator's heat [s]: shorter than a real one, averages agree once settled."""


def _place_reference(net: Netlist, part: Part, state: State) -> None:
    ref, value = part.ref, part.value
    cathode, anode, sense = cut(net, part, state, "open", "cathode"), part.pins["anode"], part.pins["reference"]
    net.resistor(f"{ref}:input", sense, anode, _REFERENCE_INPUT)
    net.diode(f"{ref}:substrate", anode, cathode, {**_SUBSTRATE, "series_resistance": 5.0, "zero_bias_capacitance": 5e-12})
    if "short" in state.modes:
        net.resistor(f"{ref}:short", cathode, anode, _SHUNT_SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{ref}:leak", cathode, anode, state.size("leaky", _SHUNT_LEAK))
    if not state.cold:
        level = value["reference_voltage"] * (1.1 if "vref_high" in state.modes else 1.0)
        net.behaviour(ref, SHUNT_REFERENCE, (cathode, anode, sense), (level, _GAIN, _MOST, _BIAS, _KNEE, _KNEE_WIDTH))
    net.port(ref, "", part.pins["cathode"], anode, PORT_NONE)


def _place_regulator(net: Netlist, part: Part, state: State) -> None:
    ref, value = part.ref, part.value
    entry, output, ground = part.pins["in"], part.pins["out"], part.pins["ground"]
    if "gnd_open" in state.modes:
        inner = f"{ref}:ground"
        net.resistor(f"{ref}:gnd_open", ground, inner, OPEN)
        ground = inner
    if "short" in state.modes:
        net.resistor(f"{ref}:short", entry, output, _PASS_SHORT)
    if "out_short" in state.modes:
        net.resistor(f"{ref}:out_short", output, ground, _OUTPUT_SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{ref}:leak", entry, output, state.size("leaky", _PASS_LEAK))
    if state.cold and "open" not in state.modes:
        net.diode(f"{ref}:pass", entry, output, _COLD_PASS)
        net.resistor(f"{ref}:bias", entry, ground, _COLD_BIAS)
    elif "open" not in state.modes:
        net.behaviour(ref, REGULATOR, (entry, output, ground), (
            value["output_voltage"], 10.0, value.get("current_limit", 1.5), value.get("dropout_voltage", 1.9), 0.005, 150.0,
            value.get("thermal_resistance", 14.0), _TIME), (25.0,))
    net.resistor(f"{ref}:divider", output, ground, value.get("divider_resistance", 8100.0))
    for name, a, k in (("a", ground, entry), ("b", ground, output), ("c", output, entry)):
        net.diode(f"{ref}:{name}", a, k, {**_SUBSTRATE, "series_resistance": 0.3})
    net.port(ref, "", part.pins["in"], part.pins["out"], PORT_NONE)
    net.port(ref, "_divider", part.pins["out"], part.pins["ground"], PORT_RESISTOR, f"{ref}:divider")


KINDS = (
    PartKind("shunt_reference", ("reference", "anode", "cathode"), {"reference_voltage": "V"}, ("reference_voltage",),
             ("open", "short", "vref_high", "leaky"), _place_reference),
    PartKind("regulator", ("in", "out", "ground"),
             {"output_voltage": "V", "current_limit": "A", "dropout_voltage": "V", "thermal_resistance": "-",
              "divider_resistance": "ohm"}, ("output_voltage",),
             ("open", "short", "gnd_open", "out_short", "leaky"), _place_regulator),
)
