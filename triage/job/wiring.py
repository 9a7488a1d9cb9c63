"""Joins the computing rooms to a job: the one place that knows which room answers what, and what is kept in
the cache.

Answers are pure functions of the board. What takes seconds is kept under the fingerprint of the board,
rounded before it is used, so that a kept and a new answer are the same to the last digit.
"""

import contextlib
import math
from collections.abc import Callable, Iterator, Sequence
from functools import cached_property
from typing import TYPE_CHECKING

from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.stress import Stress
from triage.data import data_folder
from triage.diagnosis.costs import Costs
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.second_look import PROTECTIVE
from triage.errors import CatalogError
from triage.job import workshop
from triage.job.cache import Cache, Kept, Shipped
from triage.job.display import plain
from triage.job.learning import NONE, Experience, handbook_shares
from triage.job.meters import instruments_of, meter_of
from triage.job.progress import report
from triage.job.views import (
    CandidateView,
    ChartView,
    CombinationView,
    DemandView,
    MatchView,
    ReadingExpected,
    RequirementView,
    StockView,
    StressView,
)

if TYPE_CHECKING:
    from triage.families.points import OperatingPoints
    from triage.job.curves import Curves
    from triage.replacement.catalog import Catalog
    from triage.replacement.catalog_part import CatalogPart
    from triage.replacement.combinations import SwitchingRipple
    from triage.replacement.demand import Demand
    from triage.replacement.drawers import Drawers, StockItem
    from triage.replacement.ranking import Candidate

PAIR_FLOOR = 1e-5
"""Pairs of independent faults less likely than this are left out [-]: all of them together hold a thousandth of the belief and
would take thrice the memory."""


class Wiring:
    """The computing rooms, joined."""

    def __init__(self, cache: Kept | None = None) -> None:
        """cache: where slow answers are kept; by default the user's cache folder behind what ships with the
        program."""
        self._kept = cache if cache is not None else Shipped(data_folder("profiles") / "kept", Cache())
        self._curves: dict[str, Curves] = {}

    @cached_property
    def catalog(self) -> "Catalog":
        """The shipped part catalog."""
        from triage.replacement.catalog import Catalog

        return Catalog()

    def diagnosis(self, board: Board, experience: Experience) -> Diagnosis:
        """Expected readings, priors and costs of a board.

        experience: the bench's own closed jobs.
        """
        from triage.diagnosis.handbook import fault_weights
        from triage.diagnosis.priors import prior_of
        from triage.job.expecting import all_expectations, collateral_of

        points = self.points(board)
        weights = fault_weights(board, self.known_stresses(board))
        shares = handbook_shares({fault: weight.value for fault, weight in weights.items()})
        collateral, factors = collateral_of(points, tuple(weights)), experience.factors(shares)
        fuses = [Fault(part.ref, "open") for part in board.parts if part.kind in PROTECTIVE]
        blown = [fault for fault in fuses if board.part(fault.ref).kind == "fuse"]
        prior = prior_of(weights, collateral, factors, pair_floor=PAIR_FLOOR, fuses=fuses, blown=blown)
        own = workshop.own_instruments()
        meters = instruments_of(own)
        expected = all_expectations(board, prior.hypotheses, points, self._kept, meter_of(own), meters)
        return Diagnosis.of_board(board, expected, prior, costs=_costs_of_shop(), meters=meters)

    def points(self, board: Board) -> "OperatingPoints":
        """The operating points of a board as far as they have been solved: shipped with its profile, or kept
        here."""
        from triage.families.points import OperatingPoints, fingerprint

        with contextlib.suppress(TypeError, KeyError, ValueError, AttributeError):
            return OperatingPoints(board, self._kept.get(f"points-{fingerprint(board)}"))
        return OperatingPoints(board)

    def solve(self, board: Board, progress: Callable[[str], None]) -> None:
        """Solve everything that a job on this board asks for, and keep it: corners, operating points, cold
        readings.

        Minutes for a small board, hours for a large one; what was solved before an interruption stays.
        progress: hears what has been done.
        """
        from triage.job.corners import solve_all_corners

        for done, _, _ in self.work_out(board):
            progress(done)
        solve_all_corners(board, self._kept)
        progress("the sound board in nine corners")
        self.diagnosis(board, NONE)
        progress("the cold readings")

    def work_out(self, board: Board, leading: Callable[[], Sequence[Fault]] = tuple) -> Iterator[tuple[str, int, int]]:
        """Solve stresses and operating points step by step and keep them, the leading faults first.

        Yields what was done, how many steps are done and how many there are; nothing when all is known.
        leading: asked before each step for the faults that matter most now, first one first.
        """
        from triage.families.points import LOADS, fingerprint, point_key
        from triage.job.corners import solved_before

        points, key = self.points(board), f"points-{fingerprint(board)}"
        left = [fault for fault in faults_of(board) if any(point_key((fault,), load) not in points for load in LOADS)]
        wanted = len(left)
        if not solved_before(board, self._kept):
            wanted += 1
            self.stresses(board)
            yield "the stresses of the sound board", 1, wanted
        while left:
            fault = next((one for one in leading() if one in left), left[0])
            points.chains((fault,))
            left.remove(fault)
            self._kept.put(key, points.kept())
            yield str(fault), wanted - len(left), wanted

    def known_stresses(self, board: Board) -> tuple[Stress, ...]:
        """The stresses as far as they were solved before, at once."""
        from triage.job.corners import known_stresses

        return known_stresses(board, self._kept)

    def stresses(self, board: Board) -> tuple[Stress, ...]:
        """Every stress of every part at its worst condition; a minute for a circuit that was never solved."""
        from triage.job.corners import board_stresses

        return board_stresses(board, self._kept)

    def charts(self, board: Board, faults: tuple[Fault, ...], stresses: Sequence[StressView]) -> tuple[ChartView, ...]:
        """Waveforms and load line, sound and under these faults, with the limits of these stresses; seconds a fault that
        was not asked for before."""
        from triage.families.points import fingerprint
        from triage.job.curves import Curves

        key = fingerprint(board)
        if key not in self._curves:
            self._curves[key] = Curves(board, self.points(board))
        return self._curves[key].charts(faults, stresses)

    def expected(self, board: Board, faults: tuple[Fault, ...]) -> tuple[ReadingExpected, ...]:
        """What each reading should show under these faults: median and the middle 90 % of boards."""
        from triage.job.expecting import expected_readings

        return expected_readings(board, faults, self.points(board), self._kept, meter_of(workshop.own_instruments()))

    def fitted(self, board: Board, ref: str, type: str) -> Board:
        """The board with this part in this position. Raises CatalogError for a type the catalog does not
        know."""
        from triage.job.fitting import with_part

        part = self.catalog.find(type)
        if part is None:
            raise CatalogError(f"part for {ref}", f"{plain(type, 60)!r} is not in the catalog", advice="search its marking")
        return with_part(board, ref, part)

    def demand(self, board: Board, ref: str) -> DemandView:
        """What the position of a part asks of a replacement."""
        return _demand_view(self._demand(board, ref))

    def _demand(self, board: Board, ref: str) -> "Demand":
        from triage.replacement.demand import demand

        return demand(board, ref, self.stresses(board), self.catalog)

    def candidates(self, board: Board, ref: str) -> tuple[CandidateView, ...]:
        """Catalog parts for a position, best first; behind them those that only a look into the sheet stands
        against."""
        from triage.replacement.ranking import candidates, to_confirm

        demand, drawers, lists = self._demand(board, ref), workshop.own_drawers(), workshop.own_suppliers()
        found = (
            *candidates(self.catalog, demand, drawers, suppliers=lists),
            *to_confirm(self.catalog, demand, drawers, suppliers=lists),
        )
        return tuple(_candidate_view(one) for one in found)

    def ask(self, board: Board, ref: str, type: str) -> CandidateView:
        """One catalog part held against the demand, with every rule it fails."""
        from triage.replacement.ranking import ask

        demand, drawers, lists = self._demand(board, ref), workshop.own_drawers(), workshop.own_suppliers()
        return _candidate_view(ask(self.catalog, demand, type, drawers, lists))

    def combinations(self, board: Board, ref: str) -> tuple[CombinationView, ...]:
        """Several parts that together meet the demand, those in the drawers first; none for a safety part."""
        from triage.replacement.combinations import combinations

        demand = self._demand(board, ref)
        found = combinations(self.catalog, demand, workshop.own_drawers(), switching=self._switching(board, demand))
        return tuple(
            CombinationView(
                plain(one.text), tuple(plain(part.type) for part in one.parts), one.arrangement, one.value,
                tuple(map(plain, one.arithmetic)), one.in_stock,
            )
            for one in found
        )  # fmt: skip

    def _switching(self, board: Board, demand: "Demand") -> "SwitchingRipple | None":
        """What of the ripple a film capacitor beside an electrolytic could take; None where nothing switches."""
        from triage.families.points import fingerprint
        from triage.families.waveforms import ripple
        from triage.physics.transient import NoConvergence
        from triage.replacement.combinations import SwitchingRipple, lowest_resistance

        part = board.part(demand.ref)
        if part.kind != "electrolytic" or demand.safety:
            return None
        key = f"ripple-{demand.ref}-{fingerprint(board)}"
        kept = self._kept.get(key)
        if not isinstance(kept, list) or len(kept) != 3:
            report("the ripple current")
            try:
                found = ripple(board, demand.ref, mains=board.mains.low, load=board.full_load)
            except NoConvergence:
                return None
            kept = [float(f"{value:.7g}") for value in (found.slow, found.fast, found.frequency)]
            self._kept.put(key, kept)
        slow, fast, frequency = map(float, kept)
        if fast <= 0.0:
            return None
        return SwitchingRipple(fast / math.hypot(slow, fast), frequency, lowest_resistance(self.catalog, demand, part))

    def stock(self) -> tuple[StockView, ...]:
        """What lies in the drawers, with what the catalog knows of it."""
        drawers = workshop.own_drawers()
        return tuple(_stock_view(item, self.catalog.find(item.type), drawers) for item in drawers.items)

    def matches(self, marking: str) -> tuple[MatchView, ...]:
        """Catalog parts that a half-read marking may mean, best first."""
        from triage.replacement.search import search

        return tuple(
            MatchView(plain(one.type), one.part_class, round(100.0 * one.score, 1), one.band, plain(one.text))
            for one in search(self.catalog, marking)
        )


def faults_of(board: Board) -> tuple[Fault, ...]:
    """Every single fault of a board."""
    from triage.board.kinds import kinds

    return tuple(Fault(part.ref, mode) for part in board.parts
                 for mode in part.fault_modes or kinds()[part.kind].fault_modes)  # fmt: skip


def _demand_view(asked: "Demand") -> DemandView:
    requirements = tuple(
        RequirementView(
            one.key,
            plain(one.text),
            one.minimum,
            one.maximum,
            one.unit,
            plain(one.reason),
            plain(one.source),
            one.offered if isinstance(one.offered, float | int) else None,
        )
        for one in asked.requirements
    )
    notes = [asked.note, *asked.mistakes, *(f"never: {text}" for text in asked.never), *asked.together]
    return DemandView(
        plain(asked.ref), plain(asked.role), requirements, asked.safety, plain("; ".join(filter(None, notes)), 1000)
    )


def _candidate_view(one: "Candidate") -> CandidateView:
    notes = [*one.notes, *one.drawing.splitlines()]
    return CandidateView(
        plain(one.part.type),
        one.part.part_class,
        one.score,
        tuple(map(plain, one.margins)),
        tuple(map(plain, notes)),
        plain(one.part.source),
        one.part.confidence,
        one.accepted,
        tuple(plain(found.text) for found in one.refusals),
        one.stock.quantity if one.stock else 0,
        plain(one.stock.where) if one.stock else "",
        one.price,
    )


def _stock_view(item: "StockItem", part: "CatalogPart | None", drawers: "Drawers") -> StockView:
    word = drawers.as_read(part).confidence if part is not None else ""
    part_class = part.part_class if part is not None else ""
    return StockView(plain(item.type), item.quantity, plain(item.where), item.price, part_class, word)


def _costs_of_shop() -> Costs:
    """What readings cost in this shop; those that none of its own meters takes are never asked for."""
    own = workshop.own_instruments()
    return Costs.load() if own is None else Costs.load().for_functions(own.can_read())
