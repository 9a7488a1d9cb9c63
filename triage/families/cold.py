"""Cold readings to expect: of every hypothesis, over specimens drawn within the tolerances.

Each specimen has all its part values drawn once, and the size of each fault once: a leak is seldom just the nominal one. The
same specimens are used for every hypothesis, so that hypotheses differ by their faults and not by the luck of the draw.
"""

import os
from collections.abc import Callable, Sequence
from concurrent.futures import ThreadPoolExecutor, as_completed
from dataclasses import replace
from itertools import combinations
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from triage.board.circuit import NOMINAL, Draw, circuit
from triage.board.fault import Fault, Hypothesis
from triage.board.kinds import kinds
from triage.board.part import Board, Part
from triage.board.probe import Probe
from triage.physics.netlist import compile_netlist, with_values
from triage.physics.network import HAND_METER, Meter, read_bridge, read_network

SEVERITY_SPREAD = {"leaky": 1.3, "vcc_leaky": 1.3, "high": 0.6, "high_esr": 0.5, "low_capacitance": 0.35, "low_gain": 0.35,
                   "low_voltage": 0.08, "shorted_turns": 0.3}
"""Standard deviation of the natural logarithm of a fault's size about its nominal departure [-]; common practice, no source.
A leak may be anything from some hundred ohm to some hundred kilohm."""
JUNCTIONS = ("diode", "zener", "led")
"""Two-legged kinds that are also read with the diode test, both ways, when a leg is lifted."""
NORMAL_90 = 1.645
"""Half-width of the middle 90 % of a normal distribution [standard deviations]."""


def cold_probes(board: Board) -> tuple[Probe, ...]:
    """Every reading a meter can take of the unpowered board: node pairs of one side, and the capacitors."""
    probes = []
    for nodes in board.sides.values():
        for a, b in combinations(nodes, 2):
            probes += [Probe("ohms", a, b), Probe("diode", a, b), Probe("diode", b, a)]
    known = {node for nodes in board.sides.values() for node in nodes}
    for part in board.parts:
        if "capacitance" in kinds()[part.kind].values:
            a, b = list(part.pins.values())[:2]
            if a in known and b in known:
                probes += [Probe("esr", a, b), Probe("capacitance", a, b)]
    return tuple(dict.fromkeys(probes))


def lifted_probes(board: Board) -> tuple[Probe, ...]:
    """Every reading across a part of two legs with one leg lifted, when nothing else on the board is in it."""
    probes = []
    for part in board.parts:
        if len(part.pins) != 2 or len(set(part.pins.values())) != 2:
            continue
        a, b = (f"{part.ref}.{pin}" for pin in part.pins)
        probes.append(Probe("ohms", a, b))
        if part.kind in JUNCTIONS:
            probes += [Probe("diode", a, b), Probe("diode", b, a)]
        if "capacitance" in kinds()[part.kind].values:
            probes += [Probe("esr", a, b), Probe("capacitance", a, b)]
    return tuple(probes)


def specimens(board: Board, count: int, seed: int = 1) -> tuple[Draw, ...]:
    """``count`` specimens: values uniform within their tolerance, estimated ones and fault sizes log-normal. The same for the
    same seed.

    Each quantity is drawn once from every ``count``-th of its distribution, so that few specimens reach its tails too.
    Source: M. McKay, R. Beckman and W. Conover, A comparison of three methods for selecting values of input variables,
    Technometrics 21, 1979 (Latin hypercube sampling).
    """
    rng = np.random.default_rng(seed)
    columns = [(part, key) for part in board.parts for key in part.tolerance if key in part.value]
    shares = 2.0 * _chances(rng, count, len(columns)) - 1.0
    faults = [(part.ref, mode) for part in board.parts for mode in (part.fault_modes or kinds()[part.kind].fault_modes)
              if mode in SEVERITY_SPREAD]
    sizes = np.exp(_normal(_chances(rng, count, len(faults))) * [SEVERITY_SPREAD[mode] for _, mode in faults])
    guesses = [(part, key) for part in board.parts for key in part.spread if key in part.value]
    factors = _spread_factors(rng, count, [part.spread[key] for part, key in guesses])
    return tuple(
        Draw({(part.ref, key): part.value[key] * (1.0 + part.tolerance[key] * shares[d, c])
              for c, (part, key) in enumerate(columns)}
             | {(part.ref, key): part.value[key] * float(factors[d, g]) for g, (part, key) in enumerate(guesses)},
             {fault: float(sizes[d, f]) for f, fault in enumerate(faults)})
        for d in range(count))


def _chances(rng: np.random.Generator, count: int, quantities: int) -> NDArray[np.float64]:
    """Uniform chances between 0 and 1, one in every ``count``-th for each quantity, shape (count, quantities)."""
    strata = rng.permuted(np.tile(np.arange(count)[:, None], (1, quantities)), axis=0)
    return (strata + rng.random((count, quantities))) / count


def _normal(chances: NDArray[np.float64]) -> NDArray[np.float64]:
    """Standard normal quantiles of chances between 0 and 1, same shape."""
    quantile = NormalDist().inv_cdf
    return np.array([quantile(min(max(float(c), 1e-9), 1.0 - 1e-9)) for c in chances.flat]).reshape(chances.shape)


def _spread_factors(rng: np.random.Generator, count: int, spreads: Sequence[float]) -> NDArray[np.float64]:
    """Factors on estimated values, 90 % of them between 1/spread and spread, none beyond the square of it."""
    departures = np.clip(_normal(_chances(rng, count, len(spreads))) / NORMAL_90, -2.0, 2.0)
    return np.asarray(spreads, float) ** departures


def read_cold(board: Board, faults: Sequence[Fault], probes: Sequence[Probe], draws: Sequence[Draw] = (NOMINAL,),
              meter: Meter = HAND_METER) -> NDArray[np.float64]:
    """Readings of cold probes of a board with these faults; inf is OL, nan no solution. Shape (len(probes), len(draws))."""
    triples = [(p.function, p.plus, p.minus) for p in probes]
    pairs = [(p.plus, p.minus) for p in probes]
    direct = [k for k, p in enumerate(probes) if p.function in ("ohms", "diode")]
    bridge = [k for k, p in enumerate(probes) if p.function in ("esr", "capacitance")]
    out = np.empty((len(probes), len(draws)))
    compiled = None
    for d, draw in enumerate(draws):
        net = circuit(board, faults, draw=draw, cold=True)
        compiled = compile_netlist(net, pairs) if compiled is None else with_values(compiled, net)
        if direct:
            out[direct, d] = read_network(compiled, [triples[k] for k in direct], meter)
        if bridge:
            out[bridge, d] = read_bridge(compiled, [triples[k] for k in bridge], meter)
    return out


def read_lifted(board: Board, part: Part, faults: Sequence[Fault], probes: Sequence[Probe], draws: Sequence[Draw] = (NOMINAL,),
                meter: Meter = HAND_METER) -> NDArray[np.float64]:
    """Readings of a part with one leg lifted: those of the part alone, faults of others count for nothing. As ``read_cold``."""
    nodes = tuple(part.pins.values())
    alone = replace(board, parts=(part,), sides={"primary": nodes}, ground={"primary": nodes[-1]})
    across = [Probe(p.function, part.pins[p.plus.partition(".")[2]], part.pins[p.minus.partition(".")[2]]) for p in probes]
    return read_cold(alone, [fault for fault in faults if fault.ref == part.ref], across, draws, meter)


def lifted_samples(board: Board, hypotheses: Sequence[Hypothesis], probes: Sequence[Probe], draws: Sequence[Draw],
                   meter: Meter = HAND_METER) -> NDArray[np.float32]:
    """Lifted readings over hypotheses, probes and specimens; shape (H, P, D). Each part is reckoned once for each of its
    faults."""
    out = np.empty((len(hypotheses), len(probes), len(draws)), dtype=np.float32)
    for ref in dict.fromkeys(probe.lifted for probe in probes):
        columns = [k for k, probe in enumerate(probes) if probe.lifted == ref]
        part, own = board.part(ref), [probes[k] for k in columns]
        found: dict[tuple[Fault, ...], NDArray[np.float64]] = {}
        for row, hypothesis in enumerate(hypotheses):
            faults = tuple(fault for fault in hypothesis.faults if fault.ref == ref)
            if faults not in found:
                found[faults] = read_lifted(board, part, faults, own, draws, meter)
            out[row, columns] = found[faults]
    return out


def cold_samples(board: Board, hypotheses: Sequence[Hypothesis], probes: Sequence[Probe], draws: Sequence[Draw],
                 progress: Callable[[int, int], None] | None = None, meter: Meter = HAND_METER) -> NDArray[np.float32]:
    """Readings over hypotheses, probes (lifted ones too) and specimens; shape (H, P, D). ``progress`` hears (done, wanted) and
    may raise to end it."""
    out = np.empty((len(hypotheses), len(probes), len(draws)), dtype=np.float32)
    alone = [k for k, probe in enumerate(probes) if probe.lifted]
    out[:, alone] = lifted_samples(board, hypotheses, [probes[k] for k in alone], draws, meter)
    board_as_it_is = [k for k, probe in enumerate(probes) if not probe.lifted]
    probes = [probes[k] for k in board_as_it_is]
    with ThreadPoolExecutor(max_workers=os.cpu_count() or 1) as pool:
        jobs = {pool.submit(read_cold, board, hypothesis.faults, probes, draws, meter): h
                for h, hypothesis in enumerate(hypotheses)}
        try:
            for done, job in enumerate(as_completed(jobs), 1):
                out[jobs[job], board_as_it_is] = job.result()
                if progress:
                    progress(done, len(hypotheses))
        except BaseException:
            pool.shutdown(wait=False, cancel_futures=True)
            raise
    return out
