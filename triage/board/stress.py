"""How hard a part is driven, next to what it is rated for."""

from dataclasses import dataclass

QUANTITIES = {
    "peak_voltage": "V", "reverse_voltage": "V", "average_voltage": "V", "rms_voltage": "V",
    "average_current": "A", "rms_current": "A", "peak_current": "A", "ripple_current": "A",
    "power": "W", "temperature": "degC", "i2t": "A2s", "life": "h",
}
"""Stress quantity -> unit. ``temperature`` is the junction or hot-spot temperature, ``life`` the expected life."""


@dataclass(frozen=True, slots=True)
class Stress:
    """One stress of one part at its worst condition."""

    ref: str
    quantity: str
    """One of QUANTITIES."""
    value: float
    """[SI, degC, h]"""
    rating: float | None = None
    """What the part is rated for, where known, same unit."""
    factor: float | None = None
    """Derating factor: highest recommended share of the rating [-]."""
    source: str = ""
    """Source of the derating factor."""
    condition: str = ""
    """Where the worst value was found: ``253 V, full load``."""

    @property
    def limit(self) -> float | None:
        """Derated limit: rating times factor, or None where one is unknown."""
        return None if self.rating is None or self.factor is None else self.rating * self.factor

    @property
    def ratio(self) -> float | None:
        """Value over rating [-], None where the rating is unknown. For ``life`` a low value is the bad one."""
        return None if not self.rating else self.value / self.rating

    @property
    def unit(self) -> str:
        """Unit of value and rating."""
        return QUANTITIES[self.quantity]

    @property
    def verdict(self) -> str:
        """``over rating``, ``over derated limit``, ``ok`` or ``rating unknown``."""
        if self.rating is None:
            return "rating unknown"
        if self.value > self.rating:
            return "over rating"
        if self.limit is not None and self.value > self.limit:
            return "over derated limit"
        return "ok"
