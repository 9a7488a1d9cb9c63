"""What the general solution needs to know of a family."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Family:
    """One way of building an adapter."""

    key: str
    title: str
    switch_role: str
    """Role of the part whose swings are the switching frequency; empty in a mains-frequency family."""
    start_roles: tuple[str, ...]
    """Roles whose faults may keep the adapter from starting: these are also solved from rest."""
    bulk_role: str = "bulk capacitor"
    """Role of the capacitor behind the mains rectifier."""
    output_roles: tuple[str, ...] = ("output capacitor",)
    """Roles of the capacitors that hold the output voltage."""
    supply_role: str = ""
    """Role of the capacitor a controller lives on; empty where there is none."""
    largest_step: float = 0.0
    """Largest time step [s]; 0 leaves it to the solution."""
    step_relative: float = 0.0
    """Truncation error of a step that may not be exceeded, as a share of the size of each state [-]; 0 leaves it to the solution.
    What rings after a swing starts the next one of a self-oscillating converter: looser steps damp it, and swings are lost."""
    slow: bool = False
    """True where nothing switches: many periods cost little there, and the settling is slow."""
    starts_empty: bool = False
    """True where every solution begins with empty capacitors: nothing would empty a reservoir that a fault no longer feeds."""
    swing_low: float = 0.78
    """Share of the bulk voltage below which a swing of the switch ends [-]; what rings about the bulk voltage must not count."""
    swing_high: float = 1.03
    """Share of the bulk voltage above which a swing begins [-]."""
    swing_pin: str = ""
    """Pin of the switch that swings; empty: its collector or drain."""
    solution: int = 0
    """Raised when the solution of this family changes and that of the others does not."""
    look: tuple[str, ...] = ()
    """What can be seen on a board of this family, for telling it apart."""
