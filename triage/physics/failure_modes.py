"""Which way a part fails: the shares of its fault modes.

Times the failure rate of the part (``failure_rate``) they give the prior of each fault. The table beside this
module maps the published modes to ours and puts this project's judgement for mains adapters before the
published rows where there is one. Only the modes that the part on the board really has are counted; their
shares sum to 1.
"""

import tomllib
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

_TABLE: dict[str, Any] = tomllib.loads(Path(__file__).with_name("failure_modes.toml").read_text("utf-8"))

UNLISTED: float = _TABLE["unlisted"]
"""Weight of a mode that the row of the part does not name (judgement): rare, but never excluded."""


@dataclass(frozen=True, slots=True)
class ModeRow:
    """Shares of the fault modes of one part class, with their source."""

    kinds: tuple[str, ...]
    """Part kinds the row holds for."""
    roles: tuple[str, ...]
    """Words, one of which must stand in the role; empty: any role."""
    modes: dict[str, float]
    """Fault mode -> share of all failures [-]."""
    source: str
    confidence: str
    """``verified``, ``from memory`` or ``judgement``."""
    passes_to: dict[str, str]
    """Mode that a part may lack -> mode that takes its share then."""


ROWS: tuple[ModeRow, ...] = tuple(
    ModeRow(tuple(row["kinds"]), tuple(row.get("roles", ())), dict(row["modes"]),
            row["source"], row["confidence"], dict(row.get("passes_to", {})))
    for row in _TABLE["shares"])
"""All rows in the order in which they are tried."""


def mode_row(kind: str, role: str = "") -> ModeRow | None:
    """The row that holds for a part, or None where the table has none.

    kind [key]: part kind of the board.
    role [key]: what the part does in the circuit.

    Returns [key]: the first row of the kind whose role words fit.

    >>> mode_row("electrolytic", "bulk capacitor").modes["low_capacitance"]
    0.35
    """
    return next((row for row in ROWS if kind in row.kinds
                 and (not row.roles or any(word in role for word in row.roles))), None)


def mode_shares(kind: str, role: str, modes: Iterable[str]) -> dict[str, float]:
    """Share of each fault mode in the failures of a part.

    kind [key]: part kind of the board.
    role [key]: what the part does in the circuit.
    modes [key]: the fault modes that the part has.

    Returns [-]: mode -> share, in the order of ``modes``, summing to 1. Published modes that the part does
        not have pass their share to a neighbour or fall away, and the rest is scaled up; a mode without a
        published share gets a small one; a kind without a row gets equal shares. Empty when there are no modes.
    Source: the ``source`` of the row, see mode_source.

    >>> shares = mode_shares("resistor", "LED resistor", ["open", "high"])
    >>> {mode: round(share, 2) for mode, share in shares.items()}
    {'open': 0.62, 'high': 0.38}
    """
    row = mode_row(kind, role)
    had = list(modes)
    if row is None:
        return {mode: 1.0 / len(had) for mode in had}
    weights = {mode: row.modes.get(mode, UNLISTED) for mode in had}
    for lacking, taker in row.passes_to.items():
        if lacking not in weights and taker in weights:
            weights[taker] += row.modes[lacking]
    total = sum(weights.values())
    return {mode: weight / total for mode, weight in weights.items()}


def mode_source(kind: str, role: str = "") -> str:
    """Where the shares of a part come from, with how sure they are.

    kind [key]: part kind of the board.
    role [key]: what the part does in the circuit.

    Returns [key]: one line for the screen.

    >>> mode_source("led")
    'MIL-HDBK-338B section 7.8 / FMD-91, light-emitting diode (from memory)'
    """
    row = mode_row(kind, role)
    if row is None:
        return "no published shares: equal for every mode (judgement)"
    return f"{row.source} ({row.confidence})"
