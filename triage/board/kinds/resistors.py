"""Parts that are a resistance: resistors, fusible resistors, fuses, NTC inrush limiters."""

from triage.board.kinds import OPEN, SHORT, PartKind, State
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist


def resistance(part: Part, state: State) -> float:
    """Resistance in the given state [ohm]."""
    value = part.value["resistance"]
    if state.cold:
        value = part.value.get("cold_resistance", value)
    if "open" in state.modes:
        return OPEN
    if "short" in state.modes:
        return SHORT
    if "high" in state.modes:
        return value * state.size("high", 3.0)
    return value


def _place(net: Netlist, part: Part, state: State) -> None:
    a, b = part.pins["a"], part.pins["b"]
    net.resistor(part.ref, a, b, resistance(part, state))
    net.port(part.ref, "", a, b, PORT_RESISTOR, part.ref)


def _kind(key: str, modes: tuple[str, ...], values: dict[str, str] | None = None) -> PartKind:
    return PartKind(key, ("a", "b"), {"resistance": "ohm", **(values or {})}, ("resistance",), modes, _place)


KINDS = (
    _kind("resistor", ("open", "high", "short")),
    _kind("fusible_resistor", ("open", "high")),
    _kind("fuse", ("open",)),
    _kind("thermal_fuse", ("open",)),
    _kind("ntc", ("open", "high", "short"), {"cold_resistance": "ohm"}),
)
