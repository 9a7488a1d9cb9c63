"""The diagnosis of one board: belief, suspects, next reading, verdict. Everything the rest of the program
asks for.

A ``Diagnosis`` holds what was computed once for a board and keeps nothing of a job; every answer is a pure
function of the entries given to it.
"""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import Evidence, Reading
from triage.board.part import Board
from triage.board.probe import Probe
from triage.diagnosis import explain, look_ahead
from triage.diagnosis.actions import Actions
from triage.diagnosis.after_repair import Fitted, carry_over
from triage.diagnosis.ahead import Expected, RepairStep, expected_values, repair_plan
from triage.diagnosis.belief import Likelihoods, posterior, with_hunches
from triage.diagnosis.conflicts import conflicts_of, hitting_sets
from triage.diagnosis.costs import Costs
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.explain import Suggestion
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.misfit import Fit, fit_of
from triage.diagnosis.next_reading import Candidate, Offers, Ranking, Scorer
from triage.diagnosis.priors import Prior
from triage.diagnosis.second_look import (
    RIVAL,
    RIVAL_CAREFUL,
    hinges,
    nothing_fits,
    odd_readings,
    open_rivals,
    reading_against,
    reading_at_part,
)
from triage.diagnosis.settings import Instrument, Settings
from triage.diagnosis.verdict import Roots, Suspect, Verdict, best_repair, conclude, settled
from triage.diagnosis.weigh import Weighed, evidence_ratios
from triage.diagnosis.words import suspect_name

Entry = Evidence | Fitted
"""What the diagnosis takes from a job, in the order of entry."""


@dataclass(frozen=True, slots=True)
class Job:
    """What a job has told so far."""

    entries: tuple[Entry, ...] = ()
    """In the order of entry; the order matters only around repairs."""
    hunches: frozenset[str] = frozenset()
    """Refs the technician suspects."""
    skipped: frozenset[Probe] = frozenset()
    """Readings the technician did not want to take."""


class Diagnosis:
    """What is known of one board, ready to answer for any job on it."""

    def __init__(
        self,
        expectations: Expectations,
        prior: Prior,
        kinds: Mapping[str, str],
        sides: Mapping[str, str],
        settings: Settings | None = None,
        costs: Costs | None = None,
        pins: Mapping[str, frozenset[str]] | None = None,
        meters: Mapping[str, Instrument] | None = None,
    ) -> None:
        """Tabulate the expectations.

        Parameters
        ----------
        expectations: readings and states under every hypothesis.
        prior: chances of the hypotheses; those without expectations are left out.
        kinds: ref -> part kind.
        sides: node -> ``primary`` or ``secondary``.
        settings, costs: by default those of the shipped files.
        pins: ref -> nodes of the part; with them a verdict is confirmed by a reading at the part itself.
        meters: function -> instrument; by default those of instruments.toml.
        Raises EntryError when prior and expectations have no hypothesis in common.
        """
        self.settings = settings or Settings.load()
        self.costs = costs or Costs.load()
        self.expectations = expectations
        self.prior = prior.over(expectations.hypotheses)
        self.why = prior.why
        self.kinds, self.sides, self.pins = kinds, sides, pins or {}
        self.actions = Actions.of_hypotheses(expectations.hypotheses)
        self.model = ReadingModel(expectations, self.settings, meters)
        self._likelihoods = Likelihoods(expectations, self.model, kinds, self.settings, self.prior)
        self._scorer = Scorer.of_model(self.model, self.actions)
        self._offers = Offers.of_model(self.model, self.costs, sides)
        self._roots = Roots.of_hypotheses(expectations.hypotheses)
        self._last: tuple[Job, Standing] | None = None

    @classmethod
    def of_board(
        cls,
        board: Board,
        expectations: Expectations,
        prior: Prior,
        settings: Settings | None = None,
        costs: Costs | None = None,
        meters: Mapping[str, Instrument] | None = None,
    ) -> "Diagnosis":
        """The diagnosis of a board, kinds and sides taken from it."""
        sides = {node: side for side, nodes in board.sides.items() for node in nodes}
        kinds = {part.ref: part.kind for part in board.parts}
        pins = {part.ref: frozenset(part.pins.values()) for part in board.parts}
        return cls(expectations, prior, kinds, sides, settings, costs, pins, meters)

    def belief(self, job: Job) -> NDArray[np.float64]:
        """Chance of each hypothesis about the present state of the board, shape (H,), adds up to 1 [-]."""
        return self._standing(job).belief

    def suspects(self, job: Job) -> tuple[Suspect, ...]:
        """What may be wrong, by root fault, the likeliest first; the probabilities add up to 1."""
        return self._roots.suspects(self.belief(job))

    def suggest(self, job: Job, gate: Callable[[Probe], bool], careful: bool = False) -> Suggestion | None:
        """The next reading to take, or None when the verdict stands or nothing is left that is worth reading.

        Parameters
        ----------
        gate: says whether a reading may be suggested now; live ones must pass it too after the cold ones are
            exhausted.
        careful: two-step value of information and the careful stop, for boards where a wrong repair destroys
            parts.
        """
        standing = self._standing(job)
        belief = standing.belief
        if nothing_fits(self.model, standing.readings, belief, self.settings.misfit_tail):
            return None
        ranked = self._ranked(job, standing, gate)
        worth = ranked[0].worth if ranked else 0.0
        enough, exhausted = settled(belief, self.actions, self.settings, careful, worth)
        if enough:
            return self._second_look(job, standing, gate, careful)
        if exhausted:
            return None
        choice = self._careful_choice(belief, ranked) if careful else ranked[0]
        return explain.suggestion(self.model, belief, self.actions, choice)

    def verdict(self, job: Job, careful: bool = False) -> Verdict:
        """What the job has come to; ``careful`` as in ``suggest``.

        It stays open while a doubtful reading can be measured again or the part itself be read, and while a
        reading behind the gate is
        still worth its minutes: ``suggest`` then has nothing to offer, and the caller can say what the gate
            waits for.
        """
        standing = self._standing(job)
        ranked = self._ranked(job, standing, _everything)
        odd = nothing_fits(self.model, standing.readings, standing.belief, self.settings.misfit_tail)
        verdict = conclude(
            standing.belief,
            self._roots,
            self.actions,
            self.settings,
            careful,
            ranked[0].worth if ranked else 0.0,
            self._fit(standing),
            odd,
        )
        if odd or verdict.status == "open":
            return verdict
        return replace(verdict, status="open") if self._second_look(job, standing, _everything, careful) else verdict

    def settled(self, job: Job, careful: bool = False) -> bool:
        """True when the belief alone would stop: the best repair is likely enough to cure, or nothing is worth reading any more.
        ``suggest`` still has a second look then."""
        standing = self._standing(job)
        ranked = self._ranked(job, standing, _everything)
        return settled(standing.belief, self.actions, self.settings, careful, ranked[0].worth if ranked else 0.0)[0]

    def evidence(self, job: Job) -> tuple[Weighed, ...]:
        """What each entry since the last repair did to the odds of the leading suspect, in the order of
        entry.
        """
        standing = self._standing(job)
        belief, start, since = standing.belief, standing.start, standing.since
        lead = self._roots.suspects(belief)[0]
        members = self._roots.of == self._roots.of[lead.index]
        name = suspect_name(self.expectations.hypotheses[lead.index])
        return evidence_ratios(since, self._likelihoods.log, start, members, name)

    def expected(self, job: Job, probe: Probe, count: int = 5) -> tuple[Expected, ...]:
        """What the meter should show under the leading suspects; empty for a probe nothing is known of."""
        column = self.expectations.column(probe)
        return () if column is None else expected_values(self.model, column, self.belief(job), self._roots, count)

    def repair_plan(self, job: Job) -> tuple[RepairStep, ...]:
        """The repairs to try, in the order that costs least on average."""
        return repair_plan(self.actions, self.belief(job), self.costs, self.kinds)

    def what_is_left(self, job: Job) -> list[frozenset[str]]:
        """When nothing fits: the smallest sets of parts that could together explain the odd readings, listed
        fault or not.

        Empty when no reading is odd, or when the odd ones share no part.
        """
        readings = self._standing(job).readings
        conflicts = conflicts_of(self.model, readings, self.settings.misfit_tail)
        return hitting_sets(conflicts, largest=2)

    def _careful_choice(self, belief: NDArray[np.float64], ranked: tuple[Candidate, ...]) -> Candidate:
        """The choice of the two-step look ahead; the best by impurity where repairing now would be cheapest.
        """
        minutes = self.settings.failed_repair_minutes
        found = look_ahead.best(self.model, belief, self.actions, self.costs, self.kinds, minutes, ranked)
        return found or ranked[0]

    def _second_look(
        self, job: Job, standing: "Standing", gate: Callable[[Probe], bool], careful: bool = False
    ) -> Suggestion | None:
        """Before a verdict: the odd reading once more, then the suspected part itself."""

        def allowed(probe: Probe) -> bool:
            return probe not in job.skipped and self.costs.can_take(probe) and gate(probe)

        taken, belief = standing.taken, standing.belief
        odd = odd_readings(self._fit(standing), taken, self.settings.misfit_tail)
        again = next((probe for probe in odd if allowed(probe)), None)
        if again is not None:
            return explain.measure_again(self.model, belief, self.actions, self._candidate(again, taken))
        action, _ = best_repair(belief, self.actions)
        lead = int(np.argmax(np.where(self.actions.of == action, belief, -1.0)))
        terms = self._likelihoods.terms(standing.since)
        alone = hinges(lead, self.expectations.hypotheses, standing.start, terms, self.actions, taken)
        again = next((probe for probe in alone if allowed(probe)), None)
        if again is not None:
            return explain.measure_again(self.model, belief, self.actions, self._candidate(again, taken), alone=True)
        at_part = reading_at_part(self.model, lead, self.pins, taken, allowed)
        if at_part is not None:
            return explain.confirmation(self.model, belief, self.actions, self._candidate(at_part, taken), lead)
        if not self.pins:
            return None
        rivals = self._open_rivals(standing, lead, RIVAL_CAREFUL if careful else RIVAL)

        def untaken(probe: Probe) -> bool:
            return probe not in taken and allowed(probe)

        against = reading_against(
            self.model, lead, rivals, belief, lambda probe: self.costs.minutes(probe, taken), untaken
        ) if rivals.size else None
        if against is None:
            return None
        return explain.against(self.model, belief, self.actions, self._candidate(against, taken), lead, rivals)

    def _open_rivals(self, standing: "Standing", lead: int, least: float) -> NDArray[np.int64]:
        """What else would explain the readings; see ``second_look.open_rivals``."""
        terms = self._likelihoods.terms(standing.since)
        ratios, before = np.ones(len(self.prior)), standing.start.copy()
        for entry, log in terms.items():
            if isinstance(entry, Probe):
                ratios = np.maximum(ratios, np.exp(np.minimum(log[lead] - log, 50.0)))
            else:
                before *= np.exp(log)
        return open_rivals(lead, standing.belief, before, ratios, self.actions, self.kinds, least)

    def _candidate(self, probe: Probe, taken: Sequence[Probe]) -> Candidate:
        column = self.expectations.column(probe) or 0
        return Candidate(column, probe, self.costs.minutes(probe, taken), self.costs.danger(probe, self.sides), 0.0)

    def _fit(self, standing: "Standing") -> Fit | None:
        """How the readings since the last repair fit the best repair; None when there are none."""
        if not standing.readings:
            return None
        action, _ = best_repair(standing.belief, self.actions)
        weights = np.where(self.actions.of == action, standing.belief, 0.0)
        return fit_of(self.model, standing.readings, weights)

    def _standing(self, job: Job) -> "Standing":
        """Belief and evidence since the last repair; the last answer is kept, as a screen asks for several
        things at once.
        """
        if self._last is None or self._last[0] != job:
            self._last = (job, self._computed_standing(job))
        return self._last[1]

    def _computed_standing(self, job: Job) -> "Standing":
        start = with_hunches(self.prior, self.expectations.hypotheses, job.hunches, self.settings.hunch_factor)
        since: list[Evidence] = []
        for entry in job.entries:
            if not isinstance(entry, Fitted):
                since.append(entry)
                continue
            belief = posterior(start, self._likelihoods.log(since))
            start, since = carry_over(belief, self.expectations.hypotheses, entry.refs, self.settings), []
        belief = posterior(start, self._likelihoods.log(since))
        taken = [entry.probe for entry in since if isinstance(entry, Reading)]
        return Standing(belief, start, tuple(since), Ranking.of_belief(self._scorer, self._offers, belief, taken))

    def _ranked(self, job: Job, standing: "Standing", gate: Callable[[Probe], bool]) -> tuple[Candidate, ...]:
        """The best readings that may be suggested now; live ones only when no cold one is worth taking."""
        sound = not self.actions.repairs[best_repair(standing.belief, self.actions)[0]]
        least = self.settings.least_worth_when_sound_per_minute if sound else self.settings.least_worth_per_minute
        return standing.ranking.best(lambda probe: probe not in job.skipped and gate(probe), least)


@dataclass(frozen=True, slots=True)
class Standing:
    """Where a job stands."""

    belief: NDArray[np.float64]
    """Chance of each hypothesis now, shape (H,) [-]."""
    start: NDArray[np.float64]
    """The same at the last repair, or before anything was seen."""
    since: tuple[Evidence, ...]
    """Evidence since then, in the order of entry."""
    ranking: Ranking
    """Readings not taken yet that the shop can take, most gain per minute first."""

    @property
    def readings(self) -> list[Reading]:
        """Readings since the last repair."""
        return [entry for entry in self.since if isinstance(entry, Reading)]

    @property
    def taken(self) -> list[Probe]:
        """Their probes."""
        return [reading.probe for reading in self.readings]


def _everything(probe: Probe) -> bool:
    return True
