"""Diodes, zeners and light-emitting diodes."""

from triage.board.kinds import SHORT, PartKind, State, cut, leak_resistance
from triage.board.models import diode_model
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist

METER_REACH = 6.9
"""A breakdown at or above this voltage is out of reach of a meter on the unpowered board [V]."""


def _place(net: Netlist, part: Part, state: State) -> None:
    anode, cathode = cut(net, part, state, "open", "anode"), part.pins["cathode"]
    model = dict(diode_model(part))
    if "low_voltage" in state.modes:
        model["breakdown_voltage"] *= min(state.size("low_voltage", 0.8), 0.97)
    if state.cold and model.get("breakdown_voltage", 0.0) >= METER_REACH:
        model["breakdown_voltage"] = 0.0
    net.diode(part.ref, anode, cathode, model)
    if "short" in state.modes:
        net.resistor(f"{part.ref}:short", anode, cathode, SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{part.ref}:leak", anode, cathode, state.size("leaky", leak_resistance(part)))
    net.port(part.ref, "", part.pins["anode"], cathode, PORT_RESISTOR, part.ref)


def _kind(key: str, values: dict[str, str], required: tuple[str, ...], modes: tuple[str, ...]) -> PartKind:
    return PartKind(key, ("anode", "cathode"), values, required, modes, _place)


KINDS = (
    _kind("diode", {"saturation_factor": "-"}, (), ("open", "short", "leaky")),
    _kind("led", {"saturation_factor": "-"}, (), ("open", "short")),
    _kind("zener", {"zener_voltage": "V"}, ("zener_voltage",), ("open", "short", "leaky", "low_voltage")),
)
