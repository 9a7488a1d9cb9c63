"""Solves a shipped board at nominal mains under faults, for the tests of this folder."""

from triage.board.fault import Fault
from triage.board.part import Board
from triage.families import family_of
from triage.families.live import live_probes, live_readings, state_class, summary
from triage.families.points import load_resistance
from triage.families.steady import Settled, rated_start, settle
from triage.physics.transient import QUICK


def settled(board: Board, load: str = "full", *faults: str, mains: float | None = None) -> Settled:
    """Steady state under a load and faults written ``C1.open``; mains [V rms], nominal by default."""
    family = family_of(board.family)
    return settle(board, family, tuple(map(Fault.parse, faults)), mains=mains or board.mains.nominal,
                  load=load_resistance(board, load), quality=QUICK, start=rated_start(board, family))


_KNOWN: dict[tuple[object, ...], dict[str, float]] = {}


def shown(board: Board, load: str = "full", *faults: str, mains: float | None = None) -> dict[str, float]:
    """Output [V], ripple [V], input power [W] and current [A], frequency [Hz] as ``triage.families.live.summary`` gives them."""
    key = (board.id, load, faults, mains)
    if key not in _KNOWN:
        _KNOWN[key] = _solved(board, load, *faults, mains=mains)
    return _KNOWN[key]


def _solved(board: Board, load: str, *faults: str, mains: float | None) -> dict[str, float]:
    probes = live_probes(board, family_of(board.family), load)
    return summary(board, live_readings(board, settled(board, load, *faults, mains=mains), probes), load)


def state(board: Board, load: str, *faults: str) -> str:
    """State class of a unit with these faults, looked at under ``load``."""
    loads = ("noload", load)
    return state_class(board, load, {one: shown(board, one, *faults) for one in loads}, {one: shown(board, one) for one in loads})
