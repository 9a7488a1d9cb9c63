"""The first power-up of an adapter: what limits its current, and what its load and feed must stand.

The input current is an estimate from the label: rated output power, an efficiency that errs low, and the
power factor of a capacitor-input rectifier. It serves to choose a lamp or a limit, not to judge the adapter.
"""

import math
from dataclasses import dataclass

from triage.board.part import Board
from triage.safety.limits import Source, source_of, table


@dataclass(frozen=True, slots=True)
class PowerUp:
    """What suits the first power-up of one adapter."""

    input_current: float
    """Estimated rms input current at full load and nominal mains [A]."""
    lamp_power: float
    """Rated power of the series filament lamp [W]."""
    lamp_current: float
    """Current the lamp lets through into a short [A]."""
    current_limit: float
    """Setting of an electronic limit, rms [A]."""
    transformer_va: float
    """Least rating of the isolation transformer [VA]."""
    load_resistance: float
    """Load for full rated current [ohm]."""
    load_power: float
    """What that load dissipates [W]."""
    source: Source


def rated_power(board: Board) -> float:
    """Rated output power of the label [W]."""
    return board.label.output_voltage * board.label.output_current


def input_current(board: Board) -> float:
    """Estimated rms input current at full load and nominal mains [A]."""
    feed = table("power_up")["input_estimate"]
    return rated_power(board) / (feed["efficiency"] * feed["power_factor"] * board.mains.nominal)


def first_power_up(board: Board) -> PowerUp:
    """Lamp, limit, transformer and load for this adapter.

    The lamp is the smallest of its power class that still lets the estimated current of a lightly loaded
    adapter through; above the last class the largest lamp is named. A lamp's current into a short is its
    rated power over the mains.
    """
    tables = table("power_up")
    current, power = input_current(board), rated_power(board)
    row = next((row for row in tables["lamp"] if power <= row["adapter_W_max"]), tables["lamp"][-1])
    light = current * tables["limit"]["light_load_share"]
    lamps = row["lamp_W"]
    lamp = next((w for w in lamps if w / board.mains.nominal >= light), lamps[-1])
    limit = tables["limit"]
    return PowerUp(
        input_current=current,
        lamp_power=lamp,
        lamp_current=lamp / board.mains.nominal,
        current_limit=max(limit["least_A"], _two_digits_up(limit["times_input_current"] * current)),
        transformer_va=max(limit["transformer_least_VA"], _two_digits_up(2.0 * current * board.mains.nominal)),
        load_resistance=board.full_load,
        load_power=power,
        source=source_of(row),
    )


def _two_digits_up(value: float) -> float:
    """Next number of two digits at or above a value."""
    step = 10.0 ** (math.floor(math.log10(value)) - 1)
    return math.ceil(value / step - 1e-9) * step
