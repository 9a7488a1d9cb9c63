"""Turns counted on a dismantled transformer: taken into the board, and held against what the rest of it says."""

from collections.abc import Mapping
from dataclasses import dataclass
from math import sqrt

import numpy as np

from triage.board.estimate.design import Design
from triage.board.estimate.revise import part_called, with_value
from triage.board.kinds.magnetics import winding_names
from triage.board.part import Board, Part
from triage.errors import EntryError
from triage.physics.flyback import continuous_duty, diode_reverse, peak_from_duty, reflected_voltage, switch_plateau
from triage.physics.magnetics import sine_flux_density, storage_flux_density, transformed_voltage

DIODE_DROP = 0.5
"""Drop of the output rectifier [V]; common practice, no source."""
REFLECTED = (40.0, 150.0)
"""Reflected voltages met in mains adapters [V]; common practice, no source."""
FERRITE_LIMIT, IRON_LIMIT = 0.35, 1.6
"""Flux density at which hot power ferrite and transformer iron saturate [T]; makers' sheets and handbooks, from memory."""
RATING_SHARE = 0.9
"""Share of a voltage rating up to which a part may be used here, before spikes [-]; common practice, no source."""


@dataclass(frozen=True, slots=True)
class TurnCheck:
    """One figure that follows from the turns, and the bounds it should keep."""

    text: str
    value: float
    """[SI]"""
    unit: str
    low: float
    high: float
    note: str = ""

    @property
    def fits(self) -> bool:
        """Whether the figure is within its bounds."""
        return self.low <= self.value <= self.high


def with_turns(board: Board, ref: str, counts: Mapping[str, float]) -> Board:
    """The board with counted turns of a transformer, each right to about a turn.

    counts: winding -> turns. Raises EntryError for a part that is no transformer, a winding it lacks, or turns below 1.
    """
    part = _transformer(board, ref)
    for winding, turns in counts.items():
        if winding not in winding_names(part):
            raise EntryError(f"{part.ref} winding", repr(winding)[:40], "one of " + ", ".join(winding_names(part)))
        if not 1.0 <= turns <= 20_000.0:
            raise EntryError(f"{part.ref} {winding} turns", f"{turns:g}", "1 to 20000")
        board = with_value(board, part.ref, f"{winding}_turns", float(turns), "measured", min(1.0 / turns, 0.1))
    return board


def turn_checks(board: Board, ref: str, core_area: float | None = None) -> tuple[TurnCheck, ...]:
    """What the turns of a transformer say, held against the rest of the board.

    core_area: cross-section of the middle leg [m2]; the usual one for the power where it was not measured. Raises EntryError
    for a part that is no transformer.
    """
    part = _transformer(board, ref)
    estimated = core_area is None
    area = float(np.median(Design(board.family, board.label, board.mains)["core_area"])) if core_area is None else core_area
    note = f"core area {area * 1e6:.3g} mm2" + (", estimated: measure the middle leg" if estimated else "")
    return _iron(board, part, area, note) if board.by_role("bulk capacitor") is None else _flyback(board, part, area, note)


def _transformer(board: Board, ref: str) -> Part:
    part = part_called(board, ref)
    if part.kind != "transformer":
        raise EntryError(part.ref, f"a {part.kind}", "a transformer")
    return part


def _flyback(board: Board, part: Part, area: float, note: str) -> tuple[TurnCheck, ...]:
    """Ratio, reflected voltage, switch and rectifier voltage, voltage of the small windings, flux at the peak current."""
    value, output = part.value, board.label.output_voltage
    ratio = value["primary_turns"] / value["secondary_turns"]
    reflected = float(reflected_voltage(output, DIODE_DROP, ratio))
    crest = sqrt(2.0) * board.mains.high
    lowest = 0.9 * sqrt(2.0) * board.mains.low
    watts = output * board.label.output_current / 0.75
    peak = float(peak_from_duty(watts, lowest, continuous_duty(lowest, reflected)))
    flux = float(storage_flux_density(value["primary_inductance"], peak, value["primary_turns"], area))
    found = [TurnCheck("turns ratio, primary to secondary", ratio, "1", REFLECTED[0] / (output + DIODE_DROP),
                       REFLECTED[1] / (output + DIODE_DROP)),
             TurnCheck("reflected voltage", reflected, "V", *REFLECTED)]
    switch = board.by_role("main switch") or board.by_role("power switch")
    if switch is not None and "voltage" in switch.ratings:
        found.append(TurnCheck(f"{switch.ref} after turn-off, without spike", float(switch_plateau(crest, reflected)), "V", 0.0,
                               RATING_SHARE * switch.ratings["voltage"]))
    rectifier = board.by_role("output rectifier")
    if rectifier is not None and "voltage" in rectifier.ratings:
        reverse = float(diode_reverse(output, crest, ratio))
        found.append(TurnCheck(f"{rectifier.ref} reverse voltage, without ringing", reverse, "V", 0.0,
                               RATING_SHARE * rectifier.ratings["voltage"]))
    for winding in winding_names(part):
        if winding not in ("primary", "secondary"):
            volts = float(transformed_voltage(output + DIODE_DROP, value["secondary_turns"], value[f"{winding}_turns"]))
            found.append(TurnCheck(f"{winding} winding during the flyback", volts, "V", 3.0, 30.0))
    found.append(TurnCheck("flux density at the peak current, full load, lowest mains", flux, "T", 0.05, FERRITE_LIMIT, note))
    return tuple(found)


def _iron(board: Board, part: Part, area: float, note: str) -> tuple[TurnCheck, ...]:
    """Winding voltage without load, what it leaves the regulator at the lowest mains, flux in the iron."""
    value, mains = part.value, board.mains
    open_volts = float(transformed_voltage(mains.nominal, value["primary_turns"], value["secondary_turns"]))
    regulator = next((one for one in board.parts if one.kind == "regulator"), None)
    needed = board.label.output_voltage + (regulator.value.get("dropout_voltage", 2.0) if regulator else 0.0)
    crest = sqrt(2.0) * open_volts * mains.low / mains.nominal - 2.0 * 0.8
    flux = float(sine_flux_density(mains.high, mains.frequency, value["primary_turns"], area))
    return (TurnCheck("secondary voltage without load, nominal mains", open_volts, "V", 0.75 * needed, 2.5 * needed),
            TurnCheck("crest behind the rectifier without load, lowest mains", crest, "V", needed, 3.0 * needed),
            TurnCheck("flux density at the highest mains", flux, "T", 0.5, IRON_LIMIT, note))
