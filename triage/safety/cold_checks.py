"""The short circuits that must be looked for with the ohmmeter before an adapter may be powered.

One check for each pair of nodes across which a shorted part would take the mains or the stored energy: nodes
that a winding, a choke or a fuse joins count as one, so that the switch and the bulk capacitor share a
check.
"""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from triage.board.fault import Fault
from triage.board.part import Board, Part
from triage.board.probe import Probe
from triage.safety.leak_path import JOINING_KINDS, windings
from triage.safety.limits import table

STATUSES = ("open", "clear", "short", "refused", "ruled out")
"""Where a check stands: not done, read above its limit, read below it, not possible or declined, or its
faults unlikely."""

RULED_OUT_BELOW = 0.01
"""Probability below which the shorts of a check need no reading [-]; house rule, no source."""


@dataclass(frozen=True, slots=True)
class ShortCheck:
    """One resistance to read before power."""

    key: str
    """The node pair as shown: ``bulk to pgnd``."""
    probe: Probe
    faults: tuple[Fault, ...]
    """Shorts that it would show."""
    limit: float
    """A reading below this counts as a short [ohm]."""


def short_checks(board: Board) -> tuple[ShortCheck, ...]:
    """The checks of a board, in the order of its parts; checks across the same joined nodes are one."""
    joined = _joined_nodes(board)
    found: dict[frozenset[str], ShortCheck] = {}
    for part in board.parts:
        for plus, minus, mode, limit in _spans(part):
            pair = frozenset((joined(plus), joined(minus)))
            if len(pair) < 2:
                continue
            fault, before = Fault(part.ref, mode), found.get(pair)
            found[pair] = (
                ShortCheck(f"{plus} to {minus}", Probe("ohms", plus, minus), (fault,), limit)
                if before is None
                else ShortCheck(before.key, before.probe, (*before.faults, fault), max(limit, before.limit))
            )
    return tuple(found.values())


def status(
    check: ShortCheck,
    readings: Mapping[Probe, float],
    refused: frozenset[Probe],
    fault_probability: Mapping[Fault, float] | None = None,
) -> str:
    """Where one check stands, one of STATUSES.

    Parameters: readings (probe -> last value [ohm] since the last repair), refused probes, and the present
    probability of each fault [-]. A reading counts above a refusal, a refusal above an improbability. Leads
    may be either way round.
    """
    swapped = Probe("ohms", check.probe.minus, check.probe.plus)
    taken = [readings[probe] for probe in (check.probe, swapped) if probe in readings]
    if taken:
        return "short" if min(taken) < check.limit else "clear"
    if check.probe in refused or swapped in refused:
        return "refused"
    if fault_probability is not None:
        total = sum(fault_probability.get(fault, 0.0) for fault in check.faults)
        if total < RULED_OUT_BELOW:
            return "ruled out"
    return "open"


def _spans(part: Part) -> Iterator[tuple[str, str, str, float]]:
    """(node, node, fault mode, limit [ohm]) for each pair of pins of a part that must not be shorted."""
    row: Mapping[str, Any]
    for row in table("cold_checks")["check"]:
        if row["role"] in part.role and row["pins"][0] in part.pins and row["pins"][1] in part.pins:
            yield part.pins[row["pins"][0]], part.pins[row["pins"][1]], row["mode"], row["below_ohm"]


def _joined_nodes(board: Board) -> Callable[[str], str]:
    """A function node -> one name for all nodes that windings, chokes and fuses join."""
    parent: dict[str, str] = {}

    def root(node: str) -> str:
        while parent.get(node, node) != node:
            node = parent[node]
        return node

    for part in board.parts:
        if part.kind in JOINING_KINDS:
            for a, b in windings(part):
                parent[root(a)] = root(b)
    return root
