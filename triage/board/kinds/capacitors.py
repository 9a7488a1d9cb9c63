"""Capacitors: film and ceramic, electrolytic, and the safety capacitors."""

from triage.board.kinds import OPEN, SHORT, PartKind, State, leak_resistance
from triage.board.part import Part
from triage.physics.netlist import PORT_CAPACITOR, Netlist

REVERSE_OXIDE = {"saturation_current": 1e-9, "emission": 3.0, "series_resistance": 0.5}
"""An electrolytic driven backwards conducts like a poor junction."""


def _place(net: Netlist, part: Part, state: State) -> None:
    plus, minus = (part.pins[name] for name in list(part.pins)[:2])
    inner = plus
    if "open" in state.modes:
        inner = f"{part.ref}:open"
        net.resistor(f"{part.ref}:open", plus, inner, OPEN)
    farad, esr = part.value["capacitance"], part.value.get("esr", 0.3)
    if "low_capacitance" in state.modes:
        farad *= min(state.size("low_capacitance", 0.3), 0.9)
    if "high_esr" in state.modes:
        esr *= state.size("high_esr", 20.0)
    if "dry" in state.modes:
        farad *= min(state.size("dry", 0.08), 0.5)
        esr *= 20.0
    net.capacitor(part.ref, inner, minus, farad, max(esr, 1e-4))
    if "short" in state.modes:
        net.resistor(f"{part.ref}:short", inner, minus, SHORT)
    if "leaky" in state.modes:
        net.resistor(f"{part.ref}:leak", inner, minus, state.size("leaky", leak_resistance(part)))
    if part.kind == "electrolytic":
        net.resistor(f"{part.ref}:lk", inner, minus, part.value.get("leakage_resistance", 1e7))
        if not state.cold:
            net.diode(f"{part.ref}:rev", minus, inner, REVERSE_OXIDE)
    net.port(part.ref, "", plus, minus, PORT_CAPACITOR, part.ref)


def _kind(key: str, pins: tuple[str, str], modes: tuple[str, ...]) -> PartKind:
    values = {"capacitance": "F", "esr": "ohm", "leakage_resistance": "ohm"}
    return PartKind(key, pins, values, ("capacitance",), modes, _place)


KINDS = (
    _kind("capacitor", ("a", "b"), ("open", "short", "low_capacitance")),
    _kind("electrolytic", ("plus", "minus"), ("open", "short", "low_capacitance", "high_esr", "leaky", "dry")),
    _kind("y_capacitor", ("a", "b"), ("open", "short")),
    _kind("x_capacitor", ("a", "b"), ("open", "short", "low_capacitance")),
)
