"""What a job needs from the rooms that compute, in one narrow list.

``Workings`` says what is asked; ``triage.job.wiring`` joins the real rooms to it, tests bring a stand-in.
Everything here is a pure function of the board, so that a job gives the same answers wherever it is opened.
"""

from collections.abc import Callable, Iterator, Sequence
from typing import Protocol

from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.stress import Stress
from triage.diagnosis.engine import Diagnosis
from triage.job.learning import Experience
from triage.job.views import CandidateView, ChartView, CombinationView, DemandView, MatchView, StressView


class Workings(Protocol):
    """The computing rooms as a job sees them."""

    def diagnosis(self, board: Board, experience: Experience) -> Diagnosis:
        """Expected readings, priors and costs of a board; slow at first, kept afterwards.

        experience: the bench's own closed jobs.
        """

    def stresses(self, board: Board) -> tuple[Stress, ...]:
        """Every stress of every part at its worst condition."""

    def known_stresses(self, board: Board) -> tuple[Stress, ...]:
        """The same as far as they were solved before, at once."""

    def work_out(self, board: Board, leading: Callable[[], Sequence[Fault]]) -> Iterator[tuple[str, int, int]]:
        """Solve the powered board step by step and keep it, the leading faults first; minutes. Yields what was done, how many
        steps are done and how many there are; nothing when all is known.

        leading: asked before each step for the faults that matter most now, first one first.
        """

    def charts(self, board: Board, faults: tuple[Fault, ...], stresses: Sequence[StressView]) -> tuple[ChartView, ...]:
        """Waveforms and load line, sound and under these faults, with the limits of these stresses; seconds a fault."""

    def demand(self, board: Board, ref: str) -> DemandView:
        """What the position of a part asks of a replacement."""

    def candidates(self, board: Board, ref: str) -> tuple[CandidateView, ...]:
        """Catalog parts that meet the demand, best first."""

    def ask(self, board: Board, ref: str, type: str) -> CandidateView:
        """One catalog part held against the demand, with every rule it fails."""

    def combinations(self, board: Board, ref: str) -> tuple[CombinationView, ...]:
        """Several parts that together meet the demand, those in the drawers first; none for a safety part."""

    def matches(self, marking: str) -> tuple[MatchView, ...]:
        """Catalog parts that a half-read marking may mean, best first."""

    def fitted(self, board: Board, ref: str, type: str) -> Board:
        """The board with this part in this position."""
