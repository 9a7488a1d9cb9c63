"""What a reading costs in minutes of work and hazard, and which instruments it needs; the figures are in
costs.toml.
"""

from collections.abc import Collection, Mapping
from dataclasses import dataclass, replace
from pathlib import Path

from triage.board.probe import COLD_FUNCTIONS, LIVE_FUNCTIONS, Probe
from triage.diagnosis.settings import HERE, instruments, load_table, number
from triage.errors import EntryError

PLUG_FUNCTIONS = ("watts", "amps_ac")
"""Read between plug and socket: no probe goes into the adapter."""


@dataclass(frozen=True, slots=True)
class Costs:
    """Minutes of readings and repairs, and the instruments of the shop."""

    owned: frozenset[str]
    """Instruments the shop has."""
    reading: Mapping[str, float]
    """Meter function -> minutes."""
    setup: Mapping[str, float]
    hazard: Mapping[str, float]
    repair: Mapping[str, float]
    unread: frozenset[str] = frozenset()
    """Meter functions that nothing in the shop reads, whichever instruments it owns."""

    @classmethod
    def load(cls, path: Path = HERE / "costs.toml") -> "Costs":
        """Costs from a file. Raises EntryError that names the key that is missing or out of range."""
        file = load_table(path)

        def group(name: str, keys: Collection[str]) -> dict[str, float]:
            return {key: number(f"{path.name}, {name}", file.get(name, {}), key, 0.0, 1e4) for key in keys}

        meters = file.get("meters", {})
        needed = {instrument.meter for instrument in instruments().values()}
        if not isinstance(meters, dict) or not needed <= set(meters):
            raise EntryError(
                f"{path.name}, meters",
                ", ".join(meters) or "nothing",
                f"the keys {', '.join(sorted(needed))}",
            )
        owned = frozenset(key for key, row in meters.items() if isinstance(row, dict) and row.get("owned") is True)
        return cls(
            owned,
            group("reading", COLD_FUNCTIONS + LIVE_FUNCTIONS),
            group("setup", ("open_case", "lift_leg", "power_up", "change_load")),
            group("hazard", ("primary", "secondary", "plug")),
            group("repair", ("once", "part", "transformer", "outside")),
        )

    def can_take(self, probe: Probe) -> bool:
        """True when the shop owns the instrument for this reading."""
        return probe.function not in self.unread and instruments()[probe.function].meter in self.owned

    def for_functions(self, can_read: Collection[str]) -> "Costs":
        """The costs of a shop whose meters read these functions and no others."""
        meters = instruments()
        owned = frozenset(meter.meter for meter in meters.values())
        return replace(self, owned=owned, unread=frozenset(meters) - frozenset(can_read))

    def minutes(self, probe: Probe, taken: Collection[Probe]) -> float:
        """Minutes to take one reading after those already ``taken``, set-up included, hazard left out [min].
        """
        work = self.reading[probe.function]
        if (
            not any(t.condition == "cold" or t.function not in PLUG_FUNCTIONS for t in taken)
            and probe.function not in PLUG_FUNCTIONS
        ):
            work += self.setup["open_case"]
        if probe.lifted and probe.lifted not in [t.lifted for t in taken][-1:]:
            work += self.setup["lift_leg"]
        if probe.live:
            loads = [t.condition for t in taken if t.live]
            if not loads:
                work += self.setup["power_up"]
            elif loads[-1] != probe.condition:
                work += self.setup["change_load"]
        return work

    def danger(self, probe: Probe, sides: Mapping[str, str]) -> float:
        """What the hazard of a reading is worth [min]; ``sides``: node -> ``primary`` or ``secondary``."""
        if not probe.live:
            return 0.0
        if probe.function in PLUG_FUNCTIONS:
            return self.hazard["plug"]
        both = {sides.get(node, "primary") for node in (probe.plus, probe.minus)}
        return self.hazard["secondary" if both == {"secondary"} else "primary"]

    def repair_minutes(self, refs: Collection[str], kinds: Mapping[str, str]) -> float:
        """Minutes to replace these parts; none at all means work on cord, plug and joints [min]."""
        if not refs:
            return self.repair["outside"]
        return self.repair["once"] + sum(
            self.repair["transformer" if kinds.get(ref) == "transformer" else "part"] for ref in refs
        )
