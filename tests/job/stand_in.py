"""A stand-in for the computing rooms: the shipped charger with a handful of faults whose readings are set by
hand.

It answers through the real diagnosis, so that gates, suggestions and verdicts of a job are the real ones;
only the physics is left out. The readings are invented.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace
from datetime import UTC, datetime, timedelta

import numpy as np

from triage.board.evidence import STATES
from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.stress import Stress
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.priors import Weight, prior_of
from triage.job.learning import Experience
from triage.job.views import (
    CandidateView,
    ChartView,
    CombinationView,
    CurveView,
    DemandView,
    LevelView,
    MatchView,
    RequirementView,
    StressView,
)

PROFILE = "harbour-handset-charger"

PROBES = (
    Probe("ohms", "mains_l", "rect"),
    Probe("diode", "rect", "bulk"),
    Probe("ohms", "bulk", "pgnd"),
    Probe("ohms", "coll", "pgnd"),
    Probe("volts_dc", "out", "sgnd", "noload"),
)
INF = float("inf")
TABLE: dict[str, tuple[str, tuple[float, ...]]] = {
    "": ("normal", (10.0, 0.55, 1.2e6, 1.2e6, 5.2)),
    "RF1.open": ("dead", (INF, 0.55, 1.2e6, 1.2e6, 0.0)),
    "D1.short": ("dead", (10.0, 0.01, 1.2e6, 1.2e6, 0.0)),
    "D1.open": ("dead", (10.0, INF, 1.2e6, 1.2e6, 0.0)),
    "C1.short": ("fuse gone", (10.0, 0.55, 0.1, 40.0, 0.0)),
    "Q1.ce_short": ("fuse gone", (10.0, 0.55, 40.0, 0.1, 0.0)),
    "R1.open": ("dead", (10.0, 0.55, 1.2e6, 1.2e6, 0.0)),
    "C5.low_capacitance": ("hum or ripple", (10.0, 0.55, 1.2e6, 1.2e6, 4.6)),
}
DRAWS = 20


class Clock:
    """A clock that only moves when it is asked, a second at a time."""

    def __init__(self, start: str = "2026-01-31T08:00:00") -> None:
        self.now = datetime.fromisoformat(start).replace(tzinfo=UTC)

    def __call__(self) -> datetime:
        self.now += timedelta(seconds=1)
        return self.now


class StandIn:
    """Answers like the computing rooms."""

    def diagnosis(self, board: Board, experience: Experience) -> Diagnosis:
        faults = {Fault.parse(text): Weight(1.0) for text in TABLE if text}
        shares = {fault: 1.0 / len(faults) for fault in faults}
        prior = prior_of(faults, {}, experience.factors(shares), pair_share=0.0)
        chance = np.random.default_rng(5)
        samples = np.empty((len(prior.hypotheses), len(PROBES), DRAWS))
        states = np.zeros((len(prior.hypotheses), 3, 1), dtype=int)
        for row, hypothesis in enumerate(prior.hypotheses):
            state, values = TABLE[str(hypothesis.root[0]) if hypothesis.root else ""]
            states[row] = STATES.index(state)
            spread = 1.0 + 0.02 * chance.standard_normal((len(PROBES), DRAWS))
            samples[row] = np.array(values)[:, None] * spread
        return Diagnosis.of_board(board, Expectations(prior.hypotheses, PROBES, samples, states), prior)

    def known_stresses(self, board: Board) -> tuple[Stress, ...]:
        return self.stresses(board)

    def work_out(self, board: Board, leading: Callable[[], Sequence[Fault]]) -> Iterator[tuple[str, int, int]]:
        return iter(())

    def stresses(self, board: Board) -> tuple[Stress, ...]:
        rated = 500.0 if "500 V" in board.part("R1").type else 250.0
        return (
            Stress("R1", "peak_voltage", 358.0, rated, 0.8, "house table", "253 V, no load"),
            Stress("D1", "reverse_voltage", 716.0, 1000.0, 0.7, "house table", "253 V, full load"),
            Stress("C1", "temperature", 71.0),
        )

    def charts(self, board: Board, faults: tuple[Fault, ...], stresses: Sequence[StressView]) -> tuple[ChartView, ...]:
        names = ("healthy", *(str(fault) for fault in faults))
        curves = tuple(CurveView(name, ((0.0, 0.0), (1e-5, 400.0 + 50.0 * n))) for n, name in enumerate(names))
        return (ChartView("switch", "Q1", "s", "V", curves, (LevelView("rating", 600.0),)),)

    def demand(self, board: Board, ref: str) -> DemandView:
        need = RequirementView("v_lim_V", "limiting voltage", 447.0, None, "V", "358 V / 0.8", "house table", 250.0)
        return DemandView(ref, board.part(ref).role, (need,))

    def candidates(self, board: Board, ref: str) -> tuple[CandidateView, ...]:
        return (self.ask(board, ref, "high-voltage film 500 V"),)

    def ask(self, board: Board, ref: str, type: str) -> CandidateView:
        good = "500 V" in type
        refusals = () if good else ("limiting voltage 250 V is below 447 V",)
        return CandidateView(type, "resistor", 1.0 if good else 0.0, accepted=good, refusals=refusals)

    def combinations(self, board: Board, ref: str) -> tuple[CombinationView, ...]:
        half = "high-voltage film 250 V"
        return (CombinationView(f"2 x {half} in series", (half, half), "series", 1.0, ("voltage at most 52.5 %",), True),)

    def matches(self, marking: str) -> tuple[MatchView, ...]:
        return (MatchView("1N4007", "rectifier", 90.0, "sure", "1000 V 1 A"),)

    def fitted(self, board: Board, ref: str, type: str) -> Board:
        parts = tuple(
            replace(part, type=type, ratings={**part.ratings, "voltage": 500.0}) if part.ref == ref else part
            for part in board.parts
        )
        return replace(board, parts=parts)
