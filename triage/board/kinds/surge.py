"""Varistors: two breakdowns back to back, soft as those of zinc oxide are.

Current = 1 mA x (voltage / varistor voltage) ^ exponent; near the varistor voltage that is an exponential whose slope is the
varistor voltage over the exponent, which is the form a junction in breakdown has. Source: varistor makers' application
notes, law of the characteristic, from memory; exponent about 30 for zinc oxide.
"""

from triage.board.kinds import SHORT, PartKind, State, cut, leak_resistance
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, THERMAL_VOLTAGE, Netlist

_EXPONENT = 30.0
_MEASURING_CURRENT = 1e-3
"""Current at which the varistor voltage is stated [A]."""
_CAPACITANCE = 2.5e-10
"""Disc of 7 to 10 mm for 275 V [F]; makers' sheets, from memory."""


def _model(part: Part, cold: bool) -> dict[str, float]:
    """One half of the varistor as a junction that breaks down softly."""
    level = part.value["varistor_voltage"]
    slope = level / part.value.get("exponent", _EXPONENT) / THERMAL_VOLTAGE
    return {"saturation_current": 1e-9, "emission": 1.5, "series_resistance": 0.2,
            "zero_bias_capacitance": 2.0 * _CAPACITANCE, "grading": 0.01,
            "breakdown_voltage": 0.0 if cold else level, "breakdown_current": _MEASURING_CURRENT, "breakdown_emission": slope}


def _place(net: Netlist, part: Part, state: State) -> None:
    ref, far = part.ref, part.pins["b"]
    near, middle = cut(net, part, state, "open", "a"), f"{part.ref}:middle"
    model = _model(part, state.cold)
    net.diode(ref, near, middle, model)
    net.diode(f"{ref}:other", far, middle, model)
    if "short" in state.modes:
        net.resistor(f"{ref}:short", near, far, SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{ref}:leak", near, far, state.size("leaky", leak_resistance(part)))
    net.port(ref, "", part.pins["a"], far, PORT_RESISTOR, ref)


KINDS = (PartKind("varistor", ("a", "b"), {"varistor_voltage": "V", "exponent": "-"}, ("varistor_voltage",),
                  ("short", "leaky", "open"), _place),)
