"""Bipolar transistors."""

from triage.board.kinds import SILICON_SHORT, PartKind, State, cut, leak_resistance
from triage.board.models import bipolar_model
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist


def _place(net: Netlist, part: Part, state: State) -> None:
    collector = cut(net, part, state, "open", "collector")
    base = cut(net, part, state, "be_open", "base")
    emitter = part.pins["emitter"]
    model = dict(bipolar_model(part))
    if "low_gain" in state.modes:
        model["gain"] *= min(state.size("low_gain", 0.3), 0.9)
    net.bipolar(part.ref, collector, base, emitter, model)
    if "ce_short" in state.modes:
        net.resistor(f"{part.ref}:ce", collector, emitter, SILICON_SHORT)
    if "be_short" in state.modes:
        net.resistor(f"{part.ref}:be", base, emitter, SILICON_SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{part.ref}:leak", collector, emitter, state.size("leaky", leak_resistance(part)))
    rated = part.ratings.get("collector_emitter_voltage", 0.0)
    if not state.cold and 0.0 < rated < 250.0:
        soft = {"saturation_current": 1e-18, "series_resistance": 10.0, "breakdown_voltage": 1.3 * rated,
                "breakdown_current": 1e-5}
        net.diode(f"{part.ref}:bv", emitter, collector, soft)
    net.port(part.ref, "", part.pins["collector"], emitter, PORT_RESISTOR, f"{part.ref}:c")
    net.port(part.ref, "_be", part.pins["base"], emitter, PORT_RESISTOR, f"{part.ref}:b")


KINDS = (PartKind("bipolar_transistor", ("collector", "base", "emitter"), {"gain": "-"}, ("gain",),
                  ("open", "ce_short", "be_short", "be_open", "leaky", "low_gain"), _place),)
