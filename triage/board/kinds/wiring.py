"""Cables, connectors and common-mode chokes: two conductors from one end to the other.

``a`` is the conductor that carries the current out, ``b`` the one it comes back by. A joint that makes contact only when it is
moved is ``high``: its resistance is what it has while nobody moves it.
"""

from triage.board.kinds import OPEN, SHORT, PartKind, State
from triage.board.part import Part
from triage.physics.netlist import PORT_RESISTOR, Netlist

PINS = ("a_in", "a_out", "b_in", "b_out")
POOR_CONTACT = 20.0
"""Resistance of a burnt, corroded or half-broken joint [ohm]; common practice, no source."""
_CONTACT_SHORT = 10.0 * SHORT
"""Strands that touch each other [ohm]."""
_CORE_LOSS = 3e3
"""Loss of a ferrite ring with some turns, across each winding [ohm]; common practice, no source."""


def conductors(net: Netlist, part: Part, state: State) -> tuple[float, float]:
    """Resistances of the two conductors in the given state [ohm]; the short between them is placed at the far end."""
    own = part.value["resistance"]
    there = OPEN if "open" in state.modes else own
    if "high" in state.modes:
        there += state.size("high", POOR_CONTACT)
    if "short" in state.modes:
        net.resistor(f"{part.ref}:short", part.pins["a_out"], part.pins["b_out"], _CONTACT_SHORT)
    return there, OPEN if "return_open" in state.modes else own


def _place(net: Netlist, part: Part, state: State) -> None:
    there, back = conductors(net, part, state)
    pins = part.pins
    net.resistor(part.ref, pins["a_in"], pins["a_out"], there)
    net.resistor(f"{part.ref}:b", pins["b_in"], pins["b_out"], back)
    net.port(part.ref, "", pins["a_in"], pins["a_out"], PORT_RESISTOR, part.ref)
    net.port(part.ref, "_b", pins["b_in"], pins["b_out"], PORT_RESISTOR, f"{part.ref}:b")


def _place_choke(net: Netlist, part: Part, state: State) -> None:
    """Two equal windings whose fluxes cancel for the current that goes out and comes back; what is left is the leakage."""
    ref, pins, value = part.ref, part.pins, part.value
    there, back = conductors(net, part, state)
    inductance = value["inductance"]
    coupling = max(1.0 - 0.5 * value.get("leakage_inductance", 0.01 * inductance) / inductance, 0.5)
    net.resistor(ref, pins["a_in"], f"{ref}:ra", there)
    net.resistor(f"{ref}:b", pins["b_in"], f"{ref}:rb", back)
    net.coupled([(f"{ref}:la", f"{ref}:ra", pins["a_out"], inductance, 0.0),
                 (f"{ref}:lb", f"{ref}:rb", pins["b_out"], inductance, 0.0)], {(f"{ref}:la", f"{ref}:lb"): coupling})
    net.resistor(f"{ref}:core_a", f"{ref}:ra", pins["a_out"], _CORE_LOSS)
    net.resistor(f"{ref}:core_b", f"{ref}:rb", pins["b_out"], _CORE_LOSS)
    net.port(ref, "", pins["a_in"], pins["a_out"], PORT_RESISTOR, ref)
    net.port(ref, "_b", pins["b_in"], pins["b_out"], PORT_RESISTOR, f"{ref}:b")


KINDS = (
    PartKind("cable", PINS, {"resistance": "ohm"}, ("resistance",), ("open", "return_open", "high", "short"), _place),
    PartKind("connector", PINS, {"resistance": "ohm"}, ("resistance",), ("open", "high", "short"), _place),
    PartKind("common_mode_choke", PINS, {"inductance": "H", "leakage_inductance": "H", "resistance": "ohm"},
             ("inductance", "resistance"), ("open", "return_open", "short"), _place_choke),
)
