"""Current-mode controllers with lockout, latch, clock, slope compensation and a feedback pin pulled up inside."""

from triage.board.kinds import PartKind, State
from triage.board.part import Part
from triage.physics.netlist import CONTROLLER, PORT_NONE, Netlist

_SHORT, _LEAK = 2.0, 4700.0
_SUBSTRATE = {"saturation_current": 1e-13, "emission": 1.1, "series_resistance": 3.0}
_SUPPLY_ZENER = {"saturation_current": 1e-14, "emission": 1.0, "series_resistance": 5.0, "breakdown_voltage": 34.0,
                 "zero_bias_capacitance": 20e-12}
_STANDBY = 120e3
_REFERENCE = 5.0
_DRIVER_HIGH, _DRIVER_LOW, _BLANKING, _EDGE = 14.0, 7.0, 0.01625, 20e-9
"""Output stage [ohm], blanking as a share of the period [-], time constant of an edge of the drive [s]; class of 384x, from
memory."""


def _place(net: Netlist, part: Part, state: State) -> None:
    ref, value, pins = part.ref, part.value, part.pins
    supply, drive, feedback, sense, ground = (pins[k] for k in ("supply", "drive", "feedback", "sense", "ground"))
    net.resistor(f"{ref}:pull_down", drive, ground, 20e3)
    net.resistor(f"{ref}:sense", sense, ground, 2e6)
    if "vcc_short" in state.modes:
        net.resistor(f"{ref}:vcc_short", supply, ground, _SHORT)
    if "vcc_leaky" in state.modes:
        net.resistor(f"{ref}:vcc_leak", supply, ground, state.size("vcc_leaky", _LEAK))
    if "drv_low" in state.modes:
        net.resistor(f"{ref}:drv_low", drive, ground, _SHORT)
    if "drv_high" in state.modes:
        net.resistor(f"{ref}:drv_high", drive, supply, _SHORT)
    if state.cold:
        _place_cold(net, part)
    elif "open" in state.modes:
        net.diode(f"{ref}:zener", ground, supply, _SUPPLY_ZENER)
        net.resistor(f"{ref}:standby", supply, ground, 220e3)
        net.resistor(f"{ref}:feedback", feedback, ground, 1e6)
    else:
        net.diode(f"{ref}:zener", ground, supply, _SUPPLY_ZENER)
        net.behaviour(ref, CONTROLLER, (supply, drive, feedback, sense, ground), (
            value["start_voltage"], value["stop_voltage"], value.get("latch_voltage", 27.0),
            value.get("feedback_offset", 1.2), value["sense_voltage"], value.get("slope_voltage", 0.15),
            1.0 / value["frequency"], value.get("feedback_resistance", 4700.0), value.get("supply_current", 1.5e-3) - 1e-4,
            _DRIVER_HIGH, _DRIVER_LOW, _STANDBY, _REFERENCE, value.get("duty_limit", 0.78), _BLANKING, _EDGE))
    net.port(ref, "", supply, ground, PORT_NONE)


def _place_cold(net: Netlist, part: Part) -> None:
    """Substrate junctions and bias network of the unpowered chip."""
    ref, pins = part.ref, part.pins
    supply, ground, feedback = pins["supply"], pins["ground"], pins["feedback"]
    for pin in ("supply", "drive", "feedback", "sense"):
        net.diode(f"{ref}:{pin}", ground, pins[pin], _SUBSTRATE)
    net.diode(f"{ref}:up", pins["drive"], supply, _SUBSTRATE)
    net.resistor(f"{ref}:bias", supply, ground, 220e3)
    net.diode(f"{ref}:reference", f"{ref}:v5", f"{ref}:v5d", _SUBSTRATE)
    net.resistor(f"{ref}:v5", f"{ref}:v5", ground, 10e3)
    net.resistor(f"{ref}:pull_up", f"{ref}:v5d", feedback, part.value.get("feedback_resistance", 4700.0))


_VALUES = {"frequency": "Hz", "start_voltage": "V", "stop_voltage": "V", "latch_voltage": "V", "sense_voltage": "V",
           "feedback_offset": "V", "slope_voltage": "V", "feedback_resistance": "ohm", "supply_current": "A", "duty_limit": "-"}

KINDS = (PartKind("pwm_controller", ("supply", "ground", "drive", "sense", "feedback"), _VALUES,
                  ("frequency", "start_voltage", "stop_voltage", "sense_voltage"),
                  ("open", "vcc_short", "vcc_leaky", "drv_low", "drv_high"), _place),)
