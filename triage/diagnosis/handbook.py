"""Weights of the faults of a board from the published failure-rate models, mode shares and wear-out.

weight = (rate at the stress of the part x hours + chance of being worn out) x share of the mode: the expected
number of failures in the service of the adapter so far. The figures and models are in ``triage.physics``;
this module only finds the stress that each model asks for.
"""

import math
from collections.abc import Iterable, Mapping, Sequence

from triage.board.fault import Fault
from triage.board.kinds import kinds
from triage.board.part import Board, Part
from triage.board.stress import Stress
from triage.diagnosis.priors import Weight
from triage.physics.failure_modes import mode_row, mode_shares
from triage.physics.failure_rate import part_rate

USUAL_YEARS = 6.0
"""Median age of failed chargers and adapters in public repair records (Open Repair Data, data to July 2025,
CC BY-SA 4.0).
"""
USUAL_HOURS_PER_DAY = 12.0
"""Common practice, no source: between always plugged in and used in the evening."""
USUAL_TEMPERATURE = 60.0
"""Inside a closed adapter where nothing was computed [degC]. Common practice, no source."""
USUAL_STRESS = 0.5
"""Share of the rating where nothing was computed [-]."""
HIGHEST_STRESS = 1.5
"""The models hold up to the rating; beyond it they are continued up to here."""
WEAR_SHAPE = 3.0
"""Weibull shape of the wear-out of electrolytic capacitors; common practice, no source."""
WORN_MODES = ("low_capacitance", "high_esr")
"""What a worn-out electrolytic shows."""
VOLTAGES = ("peak_voltage", "reverse_voltage", "average_voltage", "rms_voltage")


def fault_weights(
    board: Board, stresses: Sequence[Stress], years: float | None = None, hours_per_day: float | None = None
) -> dict[Fault, Weight]:
    """Expected failures of every fault of the board, with the derivation of each.

    Parameters
    ----------
    board: parts with kinds, roles, values and ratings.
    stresses: worst-case stresses; parts or quantities that are missing take usual figures, and the text says
        so.
    years, hours_per_day: service so far; by default USUAL_YEARS and USUAL_HOURS_PER_DAY.
    """
    hours = (USUAL_YEARS if years is None else years) * 365.25 * (USUAL_HOURS_PER_DAY if hours_per_day is None else hours_per_day)
    found = {}
    for part in board.parts:
        modes = part.fault_modes or kinds()[part.kind].fault_modes
        own = {stress.quantity: stress for stress in stresses if stress.ref == part.ref}
        found.update(_part_weights(part, modes, own, hours))
    return found


def _part_weights(part: Part, modes: Iterable[str], stresses: Mapping[str, Stress], hours: float) -> dict[Fault, Weight]:
    shares = mode_shares(part.kind, part.role, modes)
    stress, known = _stress(part, stresses)
    temperature = stresses["temperature"].value if "temperature" in stresses else USUAL_TEMPERATURE
    rate = float(
        part_rate(
            part.kind,
            part.role,
            temperature=temperature,
            stress=min(stress, HIGHEST_STRESS),
            power_rating=part.ratings.get("power", 0.25),
            capacitance=part.value.get("capacitance", 1e-6),
        )
    )
    worn = _worn_out(stresses, hours)
    worn_share = sum(shares.get(mode, 0.0) for mode in WORN_MODES)
    row = mode_row(part.kind, part.role)
    source = row.source if row else "no row for this part: modes taken as equally likely"
    weights = {}
    for mode, share in shares.items():
        wear = worn * share / worn_share if mode in WORN_MODES and worn_share else 0.0
        text = (
            f"{rate:.3g} per 1e6 h at {temperature:.0f} degC and {stress:.2f} of the rating"
            f"{'' if known else ' (usual figure)'} (MIL-HDBK-217F Notice 2) x {hours:.0f} h x {share:.2g} ({source})"
        )
        if wear:
            text += f" + worn out {wear:.2g} (Weibull, median at the computed life)"
        weights[Fault(part.ref, mode)] = Weight(max(rate * hours * 1e-6 * share + wear, 1e-12), text)
    return weights


def _stress(part: Part, stresses: Mapping[str, Stress]) -> tuple[float, bool]:
    """(share of the rating that the model asks for, whether it was computed)."""
    quantities = ("power",) if "resistance" in part.value else VOLTAGES
    ratios = [stresses[q].ratio for q in quantities if q in stresses]
    known = [ratio for ratio in ratios if ratio is not None]
    return (max(known), True) if known else (USUAL_STRESS, False)


def _worn_out(stresses: Mapping[str, Stress], hours: float) -> float:
    """Chance that a part with a computed life is worn out after ``hours`` [-]."""
    life = stresses["life"].value if "life" in stresses else math.inf
    return 1.0 - math.exp(-math.log(2.0) * (hours / life) ** WEAR_SHAPE) if life > 0 else 1.0
