"""What a person points at on a board, as typed: a part, a node, a reading between two nodes."""

from triage.board.part import Board
from triage.board.probe import COLD_FUNCTIONS, CONDITIONS, LIVE_FUNCTIONS, UNITS, Probe
from triage.errors import EntryError
from triage.job.gates import Rules


def ref_on(board: Board, ref: str) -> str:
    """The ref as the board spells it. Raises EntryError that names the parts there are."""
    for part in board.parts:
        if part.ref.lower() == ref.strip().lower():
            return part.ref
    refs = ", ".join(part.ref for part in board.parts)
    raise EntryError("part", f"{ref[:40]!r}", f"one of {refs}")


def probe_on(board: Board, rules: Rules, function: str, plus: str, minus: str, condition: str) -> Probe:
    """The reading that was asked for. Raises EntryError for one that cannot be taken on this board.

    rules: of the board; of what is read in volts, only the bulk capacitor is read unpowered.
    """
    if function not in UNITS:
        raise EntryError("function", f"{function[:40]!r}", "one of " + ", ".join(COLD_FUNCTIONS + LIVE_FUNCTIONS))
    if condition not in CONDITIONS:
        raise EntryError("condition", f"{condition[:40]!r}", "one of " + ", ".join(CONDITIONS))
    probe = Probe(function, node_on(board, plus), node_on(board, minus), condition)
    if function in COLD_FUNCTIONS and probe.live:
        raise EntryError(str(probe), f"{function} is read on the unpowered board only", "the condition cold")
    if function in LIVE_FUNCTIONS and not probe.live and not rules.is_bulk(probe):
        raise EntryError(
            str(probe),
            "nothing drives that on the unpowered board",
            "noload, half or full",
            "only the bulk capacitor is read in volts while cold",
        )
    on_board = board.side_of(probe.plus) and board.side_of(probe.minus)
    if not on_board and (probe.live or not probe.lifted):
        raise EntryError(str(probe), "the pin of a part", "two nodes, or both pins of one lifted part")
    if probe.plus == probe.minus:
        raise EntryError(str(probe), "both leads on one node", "two different nodes")
    return probe


def node_on(board: Board, node: str) -> str:
    """A node, or ``REF.PIN`` of a part with one leg lifted, as the board spells it. Raises EntryError that names the nodes."""
    nodes = [name for side in board.sides.values() for name in side]
    for name in nodes:
        if name.lower() == node.strip().lower():
            return name
    for part in board.parts:
        for pin in part.pins:
            if f"{part.ref}.{pin}".lower() == node.strip().lower():
                return f"{part.ref}.{pin}"
    raise EntryError("node", f"{node[:40]!r}", "one of " + ", ".join(nodes) + ", or REF.PIN of a part with one leg lifted")
