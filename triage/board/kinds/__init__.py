"""Part kinds: pins, values, fault modes, and how a part in a given state enters a circuit.

Each module of this folder defines ``KINDS``; they are found by themselves, so a new kind is one new file.
"""

import importlib
import pkgutil
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cache

from triage.board.part import Part
from triage.physics.netlist import Netlist

OPEN = 1e10
"""Resistance left where a part is open [ohm]."""
SHORT = 0.02
"""Resistance of a shorted two-lead part [ohm]."""
SILICON_SHORT = 0.1
"""Resistance of a shorted pair of transistor pins [ohm]."""
LEAK_MAINS, LEAK_LOW = 47e3, 2.2e3
"""Leakage put across a leaky part that is rated for the mains side, and across any other [ohm]; common practice, no source."""


@dataclass(frozen=True, slots=True)
class State:
    """What is wrong with a part, and how much: the modes present and a factor on the size of each departure."""

    modes: tuple[str, ...] = ()
    severity: Mapping[str, float] = field(default_factory=dict)
    cold: bool = False
    """True for the unpowered board, which a meter never drives into breakdown above 3 V."""

    def size(self, mode: str, nominal: float) -> float:
        """The nominal departure of a mode times its severity factor."""
        return nominal * self.severity.get(mode, 1.0)


Place = Callable[[Netlist, Part, State], None]


@dataclass(frozen=True, slots=True)
class PartKind:
    """One kind of part."""

    key: str
    pins: tuple[str, ...]
    values: Mapping[str, str]
    """Value key -> unit."""
    required: tuple[str, ...]
    fault_modes: tuple[str, ...]
    place: Place
    """Adds the part in a given state to a netlist."""


def leak_resistance(part: Part) -> float:
    """Resistance of a leaky part [ohm], by the side of the barrier its voltage rating belongs to."""
    return LEAK_MAINS if part.ratings.get("voltage", 0.0) >= 250.0 else LEAK_LOW


def cut(net: Netlist, part: Part, state: State, mode: str, pin: str) -> str:
    """The node a pin really reaches: its own, or one behind an open joint when the mode is present."""
    node = part.pins[pin]
    if mode not in state.modes:
        return node
    inner = f"{part.ref}:open"
    net.resistor(f"{part.ref}:{mode}", node, inner, OPEN)
    return inner


@cache
def kinds() -> Mapping[str, PartKind]:
    """All part kinds by key."""
    found: dict[str, PartKind] = {}
    for module in pkgutil.iter_modules(__path__):
        for kind in importlib.import_module(f"{__name__}.{module.name}").KINDS:
            found[kind.key] = kind
    return found
