"""Filter coils and chokes."""

from triage.board.kinds import OPEN, SHORT, PartKind, State
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist

_DAMPING = 200.0
"""Loss of a small coil as a resistance across it [ohm]."""


def _place(net: Netlist, part: Part, state: State) -> None:
    a, b = part.pins["a"], part.pins["b"]
    inner = f"{part.ref}:r"
    resistance = OPEN if "open" in state.modes else part.value.get("resistance", 0.03)
    net.resistor(part.ref, a, inner, resistance)
    net.coupled([(f"{part.ref}:l", inner, b, part.value["inductance"], 0.0)])
    net.resistor(f"{part.ref}:loss", inner, b, part.value.get("damping_resistance", _DAMPING))
    if "short" in state.modes:
        net.resistor(f"{part.ref}:short", a, b, SHORT)
    net.port(part.ref, "", a, b, PORT_RESISTOR, part.ref)


KINDS = (PartKind("inductor", ("a", "b"), {"inductance": "H", "resistance": "ohm", "damping_resistance": "ohm"},
                  ("inductance",), ("open", "short"), _place),)
