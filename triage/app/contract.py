"""What the app asks of an open job: the part of ``triage.job.bench.Bench`` that it uses, written down as a
protocol.

The tests' stand-in keeps to the same protocol, so that the screens are tested without computing anything.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Protocol

if TYPE_CHECKING:
    from triage.board.part import Board
    from triage.job.draft_views import DraftView, FamilyView
    from triage.job.progress import Listener
    from triage.job.views import CandidateView, ChartView, CombinationView, DemandView, JobView, MatchView, MoveView, StressView


class OpenJob(Protocol):
    """One open job. Methods that accept something save it and return what there is to show."""

    @property
    def board(self) -> Board:
        """The board of the job."""

    @property
    def path(self) -> Path:
        """The job file."""

    def view(self) -> JobView:
        """What there is to show now."""

    def prepare(self, listener: Listener | None = None) -> object:
        """Compute what readings to expect; takes seconds. What the listener raises ends it."""

    def acknowledge(self, key: str) -> JobView:
        """A caution was read."""

    def complain(self, text: str, state: str, condition: str) -> JobView:
        """What is wrong with the adapter and under which load it was seen."""

    def see(self, sign: str, ref: str) -> JobView:
        """Something seen, heard, smelt or felt."""

    def look(self, item: str, answer: str, ref: str = "") -> JobView:
        """What one look of the inspection found."""

    def power(self, on: bool) -> JobView:
        """The adapter was powered up through the current limit, or unplugged."""

    def read(self, function: str, plus: str, minus: str, condition: str, text: str) -> JobView:
        """A reading as typed."""

    def skip(self, function: str, plus: str, minus: str, condition: str, reason: str) -> JobView:
        """A reading that cannot be taken."""

    def undo(self) -> JobView:
        """Take the last entry back."""

    def note(self, text: str) -> JobView:
        """A remark for the next reader."""

    def suspect(self, ref: str) -> JobView:
        """The technician's own hunch."""

    def moves(self) -> tuple[MoveView, ...]:
        """How the suspects moved over the entries."""

    def stresses(self) -> tuple[StressView, ...]:
        """The stresses of every part at their worst conditions."""

    def charts(self) -> tuple[ChartView, ...]:
        """Waveforms and load line, sound and under the leading suspect."""

    def demand(self, ref: str) -> DemandView:
        """What the position of a part demands."""

    def candidates(self, ref: str) -> tuple[CandidateView, ...]:
        """Catalog parts for a position, best first."""

    def combinations(self, ref: str) -> tuple[CombinationView, ...]:
        """Several parts that together do for a position what one should."""

    def ask(self, ref: str, type: str) -> CandidateView:
        """One catalog part held against a position, with what it fails."""

    def matches(self, marking: str) -> tuple[MatchView, ...]:
        """Catalog parts that a half-read marking may mean."""

    def what_if(self, ref: str, type: str) -> tuple[StressView, ...]:
        """The stresses with a part fitted, nothing recorded."""

    def fit(self, ref: str, type: str) -> JobView:
        """A part was fitted."""

    def repaired(self, result: str) -> JobView:
        """What the repair led to."""

    def retest(self, line: str, text: str) -> JobView:
        """What a line of the retest came out as: a reading as typed, ``yes`` or ``no`` for a look."""

    def close(self, verdict: str) -> JobView:
        """Close the job."""

    def report(self, format: str) -> str:
        """The report as ``text`` or ``markdown``."""

    def work_out(self, listener: Listener | None = None) -> bool:
        """Solve what the powered board does under every fault; minutes, or at once when that was done before."""

    def take_up(self) -> JobView:
        """What there is to show, with all that was worked out."""

    def release(self) -> None:
        """Give the job free for other sessions."""


class OpenDraft(Protocol):
    """A board being made from its label: the part of ``triage.job.draft.Draft`` that the app uses."""

    def families(self, volts: str, amperes: str, seen: Sequence[str]) -> tuple[FamilyView, ...]:
        """The families it may be, likeliest first."""

    def estimate(
        self, family: str, input_line: str, volts: str, amperes: str, insulation_class: str, seen: Sequence[str], title: str = ""
    ) -> DraftView:
        """Begin with the board of a family, every value estimated."""

    def keep(self) -> Path:
        """From now on write every change into a profile of the shop's own."""

    def set(self, ref: str, key: str, text: str, measured: bool = False) -> DraftView:
        """One value or rating as read off the part, or measured."""

    def mark(self, ref: str, marking: str) -> DraftView:
        """What is printed on a part."""

    def strike(self, ref: str) -> DraftView:
        """A part that the board lacks."""

    def add(self, role: str, pins: Mapping[str, str], ref: str = "") -> DraftView:
        """A part more."""

    def turns(self, ref: str, counts: Mapping[str, str], core_area: str = "") -> DraftView:
        """Counted turns, held against the rest of the board."""

    def undo(self) -> DraftView:
        """Take the last change back."""

    def role_pins(self) -> Mapping[str, tuple[str, ...]]:
        """Roles in which a part can be added, with its pins."""

    def view(self, message: str = "") -> DraftView:
        """The board as it stands."""
