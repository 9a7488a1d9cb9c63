"""Expectations of two faults at once, put together from those of each.

Solving thousands of pairs takes minutes. Most pairs sit in different corners of the board: a reading that
only one of the two faults moves reads as with that fault alone. Where both move it, it is left unknown and
says nothing.
"""

from collections.abc import Iterable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import STATES
from triage.board.fault import Fault, Hypothesis
from triage.diagnosis.expectations import UNKNOWN_STATE, Expectations
from triage.diagnosis.settings import Instrument, instruments

MOVED = 1.0
"""A fault moves a reading in a specimen when it changes by more than this many standard errors of the
reading.
"""
NORMAL = STATES.index("normal")
STOPPED = (STATES.index("fuse gone"), STATES.index("dead"))
"""States that hide every other, the stronger first."""


def with_pairs(
    expectations: Expectations, pairs: Iterable[Hypothesis], meters: Mapping[str, Instrument] | None = None
) -> Expectations:
    """The expectations with those pairs added that can be composed: both halves listed, with the collateral
    of the pair.

    The draws of all hypotheses must be the same specimens in the same order. Pairs already listed are left as
    they are. meters: function -> instrument; by default those of instruments.toml.
    """
    place = {hypothesis: i for i, hypothesis in enumerate(expectations.hypotheses)}
    sound = place.get(Hypothesis(()))
    if sound is None:
        return expectations
    by_root: dict[Fault, list[Hypothesis]] = {}
    for hypothesis in expectations.hypotheses:
        if len(hypothesis.root) == 1:
            by_root.setdefault(hypothesis.root[0], []).append(hypothesis)
    known, halves = [], []
    for pair in pairs:
        parts = [_half(pair, by_root.get(root, ()), place) for root in pair.root]
        if pair not in place and len(parts) == 2 and None not in parts:
            known.append(pair)
            halves.append(parts)
    if not known:
        return expectations
    first, second = np.array(halves, dtype=np.int64).T
    samples = _composed_samples(expectations, sound, first, second, meters or instruments())
    states = _composed_states(expectations.states[first], expectations.states[second])
    return expectations.joined(Expectations(tuple(known), expectations.probes, samples, states))


def _half(pair: Hypothesis, of_root: Sequence[Hypothesis], place: dict[Hypothesis, int]) -> int | None:
    """The listed hypothesis of one root with as much of the pair's collateral as it has, or None."""
    options = [h for h in of_root if set(h.collateral) <= set(pair.collateral)]
    return place[max(options, key=lambda h: len(h.collateral))] if options else None


def _composed_samples(
    expectations: Expectations, sound: int, first: NDArray[np.int64], second: NDArray[np.int64], meters: Mapping[str, Instrument]
) -> NDArray[np.floating]:
    out = np.empty((len(first), *expectations.samples.shape[1:]), dtype=expectations.samples.dtype)
    for column, probe in enumerate(expectations.probes):
        values = expectations.samples[:, column, :].astype(float)
        meter = meters[probe.function]
        with np.errstate(invalid="ignore"):
            error = np.hypot(meter.absolute, meter.relative * np.where(np.isfinite(values[sound]), values[sound], 0.0))
            same = (np.abs(values - values[sound]) <= MOVED * error) | (values == values[sound])
        one, other = same[first], same[second]
        out[:, column, :] = np.where(one, values[second], np.where(other, values[first], np.nan))
    return out


def _composed_states(one: NDArray[np.integer], other: NDArray[np.integer]) -> NDArray[np.int64]:
    """State of two faults: a stopped adapter hides the rest, a normal one adds nothing; two different
    troubles are unknown.
    """
    one, other = np.broadcast_arrays(one, other)
    state = np.full(one.shape, UNKNOWN_STATE, dtype=np.int64)
    state = np.where(one == other, one, state)
    state = np.where(one == NORMAL, other, state)
    state = np.where(other == NORMAL, one, state)
    for stopped in reversed(STOPPED):
        state = np.where((one == stopped) | (other == stopped), stopped, state)
    return state
