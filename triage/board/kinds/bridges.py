"""Bridge rectifiers: four diodes in one body. ``d_open`` and ``d_short`` hit the diode from the first ac pin to plus."""

from triage.board.kinds import OPEN, SHORT, PartKind, State
from triage.board.models import diode_model
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist


def _place(net: Netlist, part: Part, state: State) -> None:
    pins = part.pins
    model = dict(diode_model(part))
    if state.cold:
        model["breakdown_voltage"] = 0.0
    legs = (("a", "ac1", "plus"), ("b", "ac2", "plus"), ("c", "minus", "ac1"), ("d", "minus", "ac2"))
    for leg, anode, cathode in legs:
        name = f"{part.ref}:{leg}"
        if leg == "a" and "d_short" in state.modes:
            net.resistor(name, pins[anode], pins[cathode], SHORT)
        elif "open" in state.modes or (leg == "a" and "d_open" in state.modes):
            net.resistor(name, pins[anode], pins[cathode], OPEN)
        else:
            net.diode(name, pins[anode], pins[cathode], model)
        net.port(part.ref, f"_{leg}", pins[anode], pins[cathode], PORT_RESISTOR, name)


KINDS = (PartKind("bridge", ("ac1", "ac2", "plus", "minus"), {"saturation_factor": "-"}, (), ("open", "d_open", "d_short"),
                  _place),)
