"""Readings that a technician can take: which meter function, between which nodes, under which condition."""

from typing import NamedTuple

COLD_FUNCTIONS = ("ohms", "diode", "esr", "capacitance")
"""Meter functions of the unpowered board. ``diode`` is the forward-voltage test at 1 mA; OL when it does not conduct."""
LIVE_FUNCTIONS = ("volts_dc", "volts_ac", "volts_pp", "watts", "amps_ac", "hertz")
"""Meter functions of the powered board: dc and ac volts, peak-to-peak volts of a scope, input power, input current, frequency."""
CONDITIONS = ("cold", "noload", "half", "full")
"""Unpowered, or powered at nominal mains with no load, half and full rated load."""
UNITS = {
    "ohms": "ohm", "diode": "V", "esr": "ohm", "capacitance": "F",
    "volts_dc": "V", "volts_ac": "V", "volts_pp": "V", "watts": "W", "amps_ac": "A", "hertz": "Hz",
}
"""Meter function -> SI unit of its reading."""


class Probe(NamedTuple):
    """One possible reading. A reading of ``inf`` means OL: above the meter's range."""

    function: str
    """One of COLD_FUNCTIONS or LIVE_FUNCTIONS."""
    plus: str
    """Node of the red lead; ``C1.plus``, the pin of a part, where one leg of the part is lifted for the reading."""
    minus: str
    """Node of the black lead."""
    condition: str = "cold"
    """One of CONDITIONS."""

    @property
    def live(self) -> bool:
        """True when the board is powered for this reading."""
        return self.condition != "cold"

    @property
    def lifted(self) -> str:
        """Ref of the part that is read alone, with one leg lifted; empty for a reading of the board as it is."""
        (one, dot, _), (other, _, pin) = self.plus.partition("."), self.minus.partition(".")
        return one if dot and pin and one == other else ""

    @property
    def unit(self) -> str:
        """SI unit of the reading."""
        return UNITS[self.function]

    def __str__(self) -> str:
        return f"{self.function} {self.plus} {self.minus} {self.condition}"
