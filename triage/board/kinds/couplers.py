"""Optocouplers: a light-emitting diode whose current becomes the base current of a transistor."""

from triage.board.kinds import SILICON_SHORT, PartKind, State, cut
from triage.board.part import Part
from triage.physics.netlist import PORT_NONE, PORT_RESISTOR, Netlist

LED = {"saturation_current": 1e-14, "emission": 1.75, "series_resistance": 2.0, "zero_bias_capacitance": 30e-12,
       "breakdown_voltage": 8.0}
TRANSISTOR = {"saturation_current": 1e-14, "gain": 400.0, "reverse_gain": 4.0, "early_voltage": 100.0, "knee_current": 0.05,
              "base_resistance": 50.0, "collector_resistance": 20.0, "emitter_capacitance": 20e-12,
              "collector_capacitance": 10e-12, "forward_transit_time": 5e-9, "reverse_transit_time": 1e-7}
_BASE_LEAK = 20e6


def _place(net: Netlist, part: Part, state: State) -> None:
    ref = part.ref
    anode, cathode = cut(net, part, state, "led_open", "anode"), part.pins["cathode"]
    collector, emitter = cut(net, part, state, "ce_open", "collector"), part.pins["emitter"]
    led = {**LED, "breakdown_voltage": 0.0} if state.cold else LED
    net.diode(f"{ref}:led", anode, cathode, led)
    if "led_short" in state.modes:
        net.resistor(f"{ref}:led_short", anode, cathode, SILICON_SHORT)
    if "ce_short" in state.modes:
        net.resistor(f"{ref}:ce", collector, emitter, SILICON_SHORT)
    ratio = part.value["transfer_ratio"]
    if "low_ctr" in state.modes:
        ratio *= min(state.size("low_ctr", 0.3), 0.9)
    base = f"{ref}:base"
    light = ratio / TRANSISTOR["gain"] / LED["series_resistance"]
    net.transfer(f"{ref}:light", collector, base, anode, f"{ref}:led:j", light)
    net.resistor(f"{ref}:leak", base, emitter, _BASE_LEAK)
    net.bipolar(ref, collector, base, emitter, TRANSISTOR)
    net.port(ref, "_led", part.pins["anode"], cathode, PORT_RESISTOR, f"{ref}:led")
    net.port(ref, "", part.pins["collector"], emitter, PORT_NONE)


KINDS = (PartKind("optocoupler", ("anode", "cathode", "collector", "emitter"), {"transfer_ratio": "-"}, ("transfer_ratio",),
                  ("led_open", "led_short", "ce_open", "ce_short", "low_ctr"), _place),)
