"""What every instrument would show on a board under every hypothesis, put together from the families'
answers.

Cold readings come from specimens drawn within the tolerances. Readings and states of the powered board come
from operating points solved beforehand (minutes to hours for a board, see ``Points``); a hypothesis whose
point is not known yet has no expectation there, which the diagnosis takes as saying nothing. Independent
pairs of faults are put together from what each of the two does alone.
"""

import hashlib
import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import astuple
from typing import Any

import numpy as np
from numpy.typing import NDArray

from triage.board.circuit import Draw
from triage.board.evidence import STATES
from triage.board.fault import Fault, Hypothesis
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.profile import board_to_dict
from triage.diagnosis.composed import with_pairs
from triage.diagnosis.expectations import LOADS, UNKNOWN_STATE, Expectations
from triage.diagnosis.hypotheses import Collateral, CollateralMap
from triage.diagnosis.settings import Instrument
from triage.families import family_of
from triage.families.cold import cold_probes, cold_samples, lifted_probes, specimens
from triage.families.live import live_probes, state_class, summary
from triage.families.points import OperatingPoints, Point, point_key
from triage.job.cache import Kept
from triage.job.progress import report
from triage.job.views import ReadingExpected
from triage.physics.network import HAND_METER, Meter
from triage.quantities import engineering

DRAWS = 24
"""Specimens. On a synthetic adapter a prototype needed 37.6 / 32.5 / 31.8 / 30.3 minutes a job with 5 / 10 / 30 / 100 of them."""
SEED = 1
UNPOWERED = 3
"""Raised whenever the unpowered solution changes, so that kept cold readings of an older one are not used."""
HEALTHY: tuple[Fault, ...] = ()
LEAKS = ("leaky", "vcc_leaky")
"""Modes that are a resistance across the part."""
RETRIES = 0.7
"""Swing of a controller's supply, over that between its lockout and its waking, from which it tries again and again [-]."""
RUN_ITS_COURSE = 0.85
"""Chance that a destruction ran its course before the adapter was switched off [-]. Common practice, no
source."""


def all_expectations(
    board: Board,
    hypotheses: Sequence[Hypothesis],
    points: OperatingPoints,
    kept: Kept,
    meter: Meter = HAND_METER,
    meters: Mapping[str, Instrument] | None = None,
) -> Expectations:
    """Readings and states under every hypothesis of a diagnosis: single faults with what they take along are solved, pairs of
    independent faults composed from them.

    meter, meters: what the cold readings are taken with, and how truly each function shows.
    """
    solved = tuple(one for one in hypotheses if len(one.root) < 2)
    found = expectations(board, solved, points, kept, meter)
    return with_pairs(found, (one for one in hypotheses if len(one.root) > 1), meters)


def expectations(
    board: Board, hypotheses: Sequence[Hypothesis], points: OperatingPoints, kept: Kept, meter: Meter = HAND_METER
) -> Expectations:
    """Readings and states under every hypothesis, all of them solved; shape of the samples (hypotheses, probes, DRAWS).

    meter: what the cold readings are taken with.
    """
    family = family_of(board.family)
    cold = unpowered_probes(board)
    live = tuple(probe for load in LOADS for probe in live_probes(board, family, load))
    samples = np.full((len(hypotheses), len(cold) + len(live), DRAWS), np.nan, dtype=np.float32)
    samples[:, : len(cold)] = _cold(board, hypotheses, cold, kept, meter)
    states = np.full((len(hypotheses), len(LOADS), 2), UNKNOWN_STATE, dtype=np.int64)
    healthy = _known(points, HEALTHY)
    sound, draws = _values(healthy, live), specimens(board, DRAWS, SEED)
    for row, hypothesis in enumerate(hypotheses):
        found = _known(points, hypothesis.faults)
        samples[row, len(cold) :] = graded(hypothesis, _values(found, live), sound, draws)
        states[row, :, 0] = _states(board, found, healthy)
        states[row, :, 1] = _heard(board, found, states[row, :, 0])
    return Expectations(tuple(hypotheses), (*cold, *live), samples, states)


def _values(found: Mapping[str, Point], live: Sequence[Probe]) -> NDArray[np.float64]:
    """The readings of some points in the order of the probes, nan where there is none."""
    values = {probe: value for point in found.values() for probe, value in point.readings.items()}
    return np.array([values.get(probe, math.nan) for probe in live])


def graded(
    hypothesis: Hypothesis, shown: NDArray[np.float64], sound: NDArray[np.float64], draws: Sequence[Draw]
) -> NDArray[np.float64]:
    """Live readings over the specimens, shape (probes, DRAWS), from those under a fault of the usual size.

    Points are solved for one size of a fault only, and leaks differ by decades. Another leak departs from the sound board in
    proportion to its conductance; never to the other side of zero.
    """
    leaks = [(fault.ref, fault.mode) for fault in hypothesis.root if fault.mode in LEAKS]
    if not leaks:
        return np.repeat(shown[:, None], len(draws), axis=1)
    size = np.array([math.prod(1.0 / draw.severity.get(leak, 1.0) for leak in leaks) for draw in draws])
    apart = shown - sound
    spread = sound[:, None] + apart[:, None] * size[None, :]
    low, high = np.minimum(shown, 0.0)[:, None], np.maximum(shown, 0.0)[:, None]
    within = np.where(sound[:, None] >= 0.0, np.maximum(spread, low), np.minimum(spread, high))
    return np.where(np.isnan(apart)[:, None], shown[:, None], within)


def unpowered_probes(board: Board) -> tuple[Probe, ...]:
    """Every reading of the unpowered board: as it is, and with a leg lifted."""
    return (*cold_probes(board), *lifted_probes(board))


def expected_readings(
    board: Board, faults: tuple[Fault, ...], points: OperatingPoints, kept: Kept, meter: Meter = HAND_METER
) -> tuple[ReadingExpected, ...]:
    """What each reading should show with these faults present: median and the middle 90 % over the
    specimens."""
    found = expectations(board, (Hypothesis(faults),), points, kept, meter)
    shown = []
    for probe, draws in zip(found.probes, found.samples[0], strict=True):
        known = np.sort(draws[~np.isnan(draws)].astype(float))
        if known.size:
            # Order statistics, not interpolation: between a value and OL there is nothing.
            low, median, high = (float(known[round(share * (known.size - 1))]) for share in (0.05, 0.5, 0.95))
            text = engineering(median, probe.unit)
            shown.append(ReadingExpected(*probe, probe.unit, low, median, high, text))
    return tuple(shown)


def collateral_of(points: OperatingPoints, roots: Sequence[Fault]) -> CollateralMap:
    """What each root fault takes along, from the points known; the loads are equally likely."""
    ways: dict[Fault, tuple[Collateral, ...]] = {}
    for root in roots:
        chains = [chain for load in LOADS if (chain := _chain(points, root, load))]
        counted = {chain: chains.count(chain) for chain in dict.fromkeys(chains)}
        ways[root] = tuple(Collateral(chain, RUN_ITS_COURSE * count / len(LOADS)) for chain, count in counted.items())
    return {root: found for root, found in ways.items() if found}


def _chain(points: OperatingPoints, root: Fault, load: str) -> tuple[Fault, ...]:
    """The parts that go along, as far as the points are known."""
    chain: tuple[Fault, ...] = ()
    while point_key((root, *chain), load) in points:
        broken = points.at((root, *chain), load).breaks
        if not broken or set(broken) & set(chain):
            break
        chain = (*chain, *broken)
    return chain


def _known(points: OperatingPoints, faults: tuple[Fault, ...]) -> dict[str, Point]:
    """The points of these faults by load, as far as they have been solved."""
    return {load: points.at(faults, load) for load in LOADS if point_key(faults, load) in points}


def _states(board: Board, found: Mapping[str, Point], healthy: Mapping[str, Point]) -> list[int]:
    """State of the adapter under each load, as places in STATES; unknown where there is no solution."""
    solved = {
        load: point
        for load, point in found.items()
        if load in healthy and not any(math.isnan(value) for value in point.readings.values())
    }
    here = {load: summary(board, point.readings, load) for load, point in solved.items()}
    sound = {load: summary(board, healthy[load].readings, load) for load in solved}
    return [
        STATES.index(state_class(board, load, here, sound, _is_hot(board, solved[load]))) if load in solved else UNKNOWN_STATE
        for load in LOADS
    ]


def _heard(board: Board, found: Mapping[str, Point], states: NDArray[np.int64]) -> list[int]:
    """What an owner may say as well: an adapter without output whose controller tries again and again ticks."""
    controller = next((part for part in board.parts if "start_voltage" in part.value), None)
    supply = board.by_role(family_of(board.family).supply_role)
    if controller is None or supply is None:
        return [int(state) for state in states]
    swing = RETRIES * (controller.value["start_voltage"] - controller.value["stop_voltage"])
    node, ground = supply.pins["plus"], board.ground["primary"]
    return [
        STATES.index("pulsing") if state == STATES.index("dead") and load in found
        and found[load].readings.get(Probe("volts_pp", node, ground, load), 0.0) > swing else int(state)
        for load, state in zip(LOADS, states, strict=True)
    ]  # fmt: skip


def _is_hot(board: Board, point: Point) -> bool:
    """True when a part gives off more than it is rated for."""
    return any(point.powers.get(part.ref, 0.0) > part.ratings["power"] for part in board.parts if "power" in part.ratings)


def _cold(
    board: Board, hypotheses: Sequence[Hypothesis], probes: tuple[Probe, ...], kept: Kept, meter: Meter
) -> NDArray[np.float32]:
    """Cold readings: those of hypotheses met before are kept by their faults, the others are computed and
    added."""
    key = f"cold-{_key(board, probes, meter)}"
    names, rows = _kept_rows(kept, key, len(probes))
    place = {name: row for row, name in enumerate(names)}
    missing = [one for one in dict.fromkeys(hypotheses) if str(one) not in place]
    if missing:
        found = cold_samples(board, missing, probes, specimens(board, DRAWS, SEED), _told, meter)
        rows = np.concatenate([rows, found])
        names += [str(one) for one in missing]
        kept.put_array(key, rows)
        kept.put(key, names)
        place = {name: row for row, name in enumerate(names)}
    return rows[[place[str(one)] for one in hypotheses]]


def _told(done: int, wanted: int) -> None:
    report("cold readings", done, wanted)


def _kept_rows(kept: Kept, key: str, probes: int) -> tuple[list[str], NDArray[np.float32]]:
    """Names of the hypotheses kept and their readings, shape (names, probes, DRAWS)."""
    names, rows = kept.get(key), kept.get_array(key)
    if not isinstance(names, list) or rows is None or rows.shape != (len(names), probes, DRAWS):
        names, rows = [], None
    if rows is not None and rows.dtype == np.float32 and all(isinstance(name, str) for name in names):
        return list(names), rows
    return [], np.empty((0, probes, DRAWS), dtype=np.float32)


def _key(board: Board, probes: tuple[Probe, ...], meter: Meter = HAND_METER) -> str:
    """Text that changes with anything that cold readings depend on."""
    content: dict[str, Any] = board_to_dict(board)
    for name in ("id", "title", "note", "drawing", "label", "mains"):
        content.pop(name)
    content["probes"] = [str(probe) for probe in probes]
    content["solution"] = [UNPOWERED, DRAWS, SEED]
    if meter != HAND_METER:
        content["meter"] = astuple(meter)
    return hashlib.sha256(json.dumps(content, sort_keys=True).encode()).hexdigest()[:20]


def kept_key(board: Board) -> str:
    """Key under which the cold readings of a board are kept."""
    return f"cold-{_key(board, unpowered_probes(board))}"
