"""Switchers with their own transistor: a primary-side regulator for a flyback cell, and a step-down switcher on the high side.

The step-down switcher stands with its ground on the swinging node and feeds itself from its drain, through a depletion transistor
that stops when the supply capacitor is full.
"""

from triage.board.kinds import OPEN, PartKind, State
from triage.board.kinds.field_effect import BODY
from triage.board.part import Part
from triage.physics.netlist import MOSFET, OFF_TIME, PLATEAU, PORT_NONE, PORT_RESISTOR, Netlist

_SHORT, _SUPPLY_SHORT, _LEAK = 0.1, 2.0, 4700.0
_SENSE_VOLTAGE = 0.5
"""Drop of the inner sense resistor at the peak current [V]."""
_SUBSTRATE = {"saturation_current": 1e-13, "emission": 1.1, "series_resistance": 3.0}
_DRIVER_HIGH, _DRIVER_LOW, _PULL_DOWN, _STANDBY = 60.0, 20.0, 50e3, 2e6
_GATE_CAPACITANCE, _DRAIN_CAPACITANCE = 1.5e-10, 2.5e-11
_SATURATION = 2.5
"""Current at which the transistor saturates over the peak current [-]: it bounds the spike at turn-on."""
_PIN_CAPACITANCE = 4.7e-10
"""What the chip itself holds at its supply pin [F]."""
_LOW_PEAK = 0.4
"""Share of the peak current that is left at the lowest frequency [-]."""
_SPAN = 0.06
"""Band of the plateau over which the frequency goes from highest to lowest, share of the reference [-]."""
_LONGEST_ON, _PLATEAU_BLANKING = 2.5e-5, 2.2e-6
_SUPPLY_LEVEL, _SUPPLY_SLOPE, _SUPPLY_PATH = 5.9, 4e-3, 20e3
"""Depletion transistor: voltage at which it stops [V], slope [A/V2], resistance in front of it [ohm]."""
_NO_FEEDBACK, _REST = 0.02, 0.08
"""Time without feedback after which a step-down switcher rests, and how long [s]."""


def _switch(net: Netlist, part: Part, state: State, ground: str, threshold: float, drive: float) -> str:
    """The transistor with its sense resistor; returns the node of the sense voltage.

    ``drive``: gate voltage above the ``threshold`` [V], at which the transistor saturates at a multiple of the peak current.
    """
    slope = 2.0 * _SATURATION * part.value["peak_current"] / drive**2
    ref, drain, source = part.ref, part.pins["drain"], f"{part.ref}:source"
    inner = drain
    if "open" in state.modes:
        inner = f"{ref}:open"
        net.resistor(f"{ref}:open", drain, inner, OPEN)
    net.resistor(f"{ref}:sense", source, ground, _SENSE_VOLTAGE / part.value["peak_current"])
    net.resistor(f"{ref}:d", inner, f"{ref}:di", part.value.get("on_resistance", 10.0))
    net.resistor(f"{ref}:pull_down", f"{ref}:gate", ground, _PULL_DOWN)
    net.capacitor(f"{ref}:cgs", f"{ref}:gate", source, _GATE_CAPACITANCE, 1e-3)
    net.capacitor(f"{ref}:cds", inner, source, _DRAIN_CAPACITANCE, 1.0)
    breakdown = 0.0 if state.cold else 1.15 * part.ratings.get("voltage", 700.0)
    net.diode(f"{ref}:body", source, inner, {**BODY, "breakdown_voltage": breakdown})
    if not state.cold:
        net.behaviour(f"{ref}:m", MOSFET, (f"{ref}:di", f"{ref}:gate", source), (slope, threshold, 0.002))
    if "short" in state.modes:
        net.resistor(f"{ref}:short", drain, ground, _SHORT)
    net.port(ref, "", drain, ground, PORT_RESISTOR, f"{ref}:d")
    return source


def _supply(net: Netlist, part: Part, state: State, ground: str) -> None:
    """Faults of the supply pin, and what a meter finds of the unpowered chip."""
    ref, supply, feedback = part.ref, part.pins["supply"], part.pins["feedback"]
    if "vcc_short" in state.modes:
        net.resistor(f"{ref}:vcc_short", supply, ground, _SUPPLY_SHORT)
    if "vcc_leaky" in state.modes:
        net.resistor(f"{ref}:vcc_leak", supply, ground, state.size("vcc_leaky", _LEAK))
    net.capacitor(f"{ref}:pin", supply, ground, _PIN_CAPACITANCE, 10.0)
    net.resistor(f"{ref}:feedback", feedback, ground, 2e6)
    net.diode(f"{ref}:esd", ground, feedback, _SUBSTRATE)
    net.diode(f"{ref}:substrate", ground, supply, _SUBSTRATE)
    if state.cold:
        net.resistor(f"{ref}:bias", supply, ground, 220e3)
    net.port(ref, "_supply", supply, ground, PORT_NONE)


def _place_primary(net: Netlist, part: Part, state: State) -> None:
    ref, value, ground = part.ref, part.value, part.pins["ground"]
    sense = _switch(net, part, state, ground, 3.0, 9.0)
    _supply(net, part, state, ground)
    if state.cold or "open" in state.modes:
        return
    reference = value["reference_voltage"]
    net.behaviour(ref, PLATEAU, (part.pins["supply"], f"{ref}:gate", part.pins["feedback"], sense, ground), (
        value["start_voltage"], value["stop_voltage"], value.get("latch_voltage", 26.0), reference, _SENSE_VOLTAGE, _LOW_PEAK,
        1.0 / value["frequency"], 1.0 / value.get("lowest_frequency", 1000.0), value.get("supply_current", 6e-4), _DRIVER_HIGH,
        _DRIVER_LOW, _STANDBY, value.get("regulation_span", _SPAN) * reference, _LONGEST_ON, _PLATEAU_BLANKING,
        value.get("secondary_share", 0.4)), (0.0, 0.0, 0.0, 1.0, 1.0, -1.0))


def _place_buck(net: Netlist, part: Part, state: State) -> None:
    ref, value, pins = part.ref, part.value, part.pins
    source = pins["source"]
    sense = _switch(net, part, state, source, 1.5, 4.0)
    _supply(net, part, state, source)
    if state.cold or "open" in state.modes:
        return
    net.resistor(f"{ref}:hv", pins["drain"], f"{ref}:hv", _SUPPLY_PATH)
    net.behaviour(f"{ref}:feed", MOSFET, (f"{ref}:hv", source, pins["supply"]), (_SUPPLY_SLOPE, -_SUPPLY_LEVEL, 0.0))
    net.behaviour(ref, OFF_TIME, (pins["supply"], f"{ref}:gate", pins["feedback"], sense, source), (
        value["start_voltage"], value["stop_voltage"], 0.0, value["reference_voltage"], _SENSE_VOLTAGE, 1.0, value["off_time"],
        0.0, value.get("supply_current", 2.5e-4), _DRIVER_HIGH, _DRIVER_LOW, _STANDBY, _NO_FEEDBACK, _LONGEST_ON, 0.0, _REST),
        (0.0, 0.0, 0.0, 1.0, 1.0))


_COMMON = {"start_voltage": "V", "stop_voltage": "V", "reference_voltage": "V", "peak_current": "A", "on_resistance": "ohm",
           "supply_current": "A"}
_MODES = ("open", "short", "vcc_short", "vcc_leaky")

KINDS = (
    PartKind("primary_side_switcher", ("drain", "supply", "feedback", "ground"),
             {**_COMMON, "frequency": "Hz", "lowest_frequency": "Hz", "latch_voltage": "V", "regulation_span": "-",
              "secondary_share": "-"},
             ("start_voltage", "stop_voltage", "reference_voltage", "peak_current", "frequency"), _MODES, _place_primary),
    PartKind("buck_switcher", ("drain", "source", "supply", "feedback"), {**_COMMON, "off_time": "s"},
             ("start_voltage", "stop_voltage", "reference_voltage", "peak_current", "off_time"), _MODES, _place_buck),
)
