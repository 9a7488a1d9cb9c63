"""The diagnosis of one board: belief, suspects, next reading, verdict. Everything the rest of the program
asks for.

A ``Diagnosis`` holds what was computed once for a board and keeps nothing of a job; every answer is a pure
function of the entries given to it.
"""

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass

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
from triage.diagnosis.next_reading import Candidate, candidates, cold_first
from triage.diagnosis.priors import Prior
from triage.diagnosis.settings import Settings
from triage.diagnosis.verdict import Suspect, Verdict, best_repair, conclude, settled, suspects
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
    ) -> None:
        """Tabulate the expectations.

        Parameters
        ----------
        expectations: readings and states under every hypothesis.
        prior: chances of the hypotheses; those without expectations are left out.
        kinds: ref -> part kind.
        sides: node -> ``primary`` or ``secondary``.
        settings, costs: by default those of the shipped files.
        Raises EntryError when prior and expectations have no hypothesis in common.
        """
        self.settings = settings or Settings.load()
        self.costs = costs or Costs.load()
        self.expectations = expectations
        self.prior = prior.over(expectations.hypotheses)
        self.why = prior.why
        self.kinds, self.sides = kinds, sides
        self.actions = Actions.of_hypotheses(expectations.hypotheses)
        self.model = ReadingModel(expectations, self.settings)
        self._likelihoods = Likelihoods(expectations, self.model, kinds, self.settings)

    @classmethod
    def of_board(
        cls,
        board: Board,
        expectations: Expectations,
        prior: Prior,
        settings: Settings | None = None,
        costs: Costs | None = None,
    ) -> "Diagnosis":
        """The diagnosis of a board, kinds and sides taken from it."""
        sides = {node: side for side, nodes in board.sides.items() for node in nodes}
        return cls(expectations, prior, {part.ref: part.kind for part in board.parts}, sides, settings, costs)

    def belief(self, job: Job) -> NDArray[np.float64]:
        """Chance of each hypothesis about the present state of the board, shape (H,), adds up to 1 [-]."""
        start, since = self._phase(job)
        return posterior(start, self._likelihoods.log(since))

    def suspects(self, job: Job) -> tuple[Suspect, ...]:
        """What may be wrong, by root fault, the likeliest first; the probabilities add up to 1."""
        return suspects(self.belief(job), self.expectations.hypotheses)

    def suggest(self, job: Job, gate: Callable[[Probe], bool], careful: bool = False) -> Suggestion | None:
        """The next reading to take, or None when the verdict stands or nothing is left that is worth reading.

        Parameters
        ----------
        gate: says whether a reading may be suggested now; live ones must pass it too after the cold ones are
            exhausted.
        careful: two-step value of information and the careful stop, for boards where a wrong repair destroys
            parts.
        """
        belief = self.belief(job)
        ranked = self._ranked(job, belief, gate)
        worth = ranked[0].worth if ranked else 0.0
        enough, exhausted = settled(belief, self.actions, self.settings, careful, worth)
        if enough:
            doubt = next((c for c in self._doubtful(job, belief) if gate(c.probe)), None)
            return None if doubt is None else explain.measure_again(self.model, belief, self.actions, doubt)
        if exhausted or not ranked:
            return None
        choice = self._careful_choice(belief, ranked) if careful else ranked[0]
        return explain.suggestion(self.model, belief, self.actions, choice)

    def verdict(self, job: Job, careful: bool = False) -> Verdict:
        """What the job has come to; ``careful`` as in ``suggest``.

        It stays open while a doubtful reading can be measured again, and while a reading behind the gate is
        still worth its minutes: ``suggest`` then has nothing to offer, and the caller can say what the gate
        waits for.
        """
        belief = self.belief(job)
        ranked = self._ranked(job, belief, lambda probe: True)
        waits = bool(self._doubtful(job, belief))
        return conclude(
            belief,
            self.expectations.hypotheses,
            self.actions,
            self.settings,
            careful,
            ranked[0].worth if ranked else 0.0,
            self.fit(job, belief),
            waits,
        )

    def fit(self, job: Job, belief: NDArray[np.float64]) -> Fit | None:
        """How the readings since the last repair fit the best repair; None when there are none."""
        readings = [entry for entry in self._phase(job)[1] if isinstance(entry, Reading)]
        if not readings:
            return None
        action, _ = best_repair(belief, self.actions)
        return fit_of(self.model, readings, np.where(self.actions.of == action, belief, 0.0))

    def evidence(self, job: Job) -> tuple[Weighed, ...]:
        """What each entry since the last repair did to the odds of the leading suspect, in the order of
        entry.
        """
        start, since = self._phase(job)
        belief = posterior(start, self._likelihoods.log(since))
        lead = suspects(belief, self.expectations.hypotheses)[0]
        members = np.array([sorted(h.root) == sorted(lead.root) for h in self.expectations.hypotheses])
        name = suspect_name(self.expectations.hypotheses[lead.index])
        return evidence_ratios(since, self._likelihoods.log, start, members, name)

    def expected(self, job: Job, probe: Probe, count: int = 5) -> tuple[Expected, ...]:
        """What the meter should show under the leading suspects; empty for a probe nothing is known of."""
        column = self.expectations.column(probe)
        return () if column is None else expected_values(self.model, column, self.belief(job), count)

    def repair_plan(self, job: Job) -> tuple[RepairStep, ...]:
        """The repairs to try, in the order that costs least on average."""
        return repair_plan(self.actions, self.belief(job), self.costs, self.kinds)

    def what_is_left(self, job: Job) -> list[frozenset[str]]:
        """When nothing fits: the smallest sets of parts that could together explain the odd readings, listed
        fault or not.

        Empty when no reading is odd, or when the odd ones share no part.
        """
        readings = [entry for entry in self._phase(job)[1] if isinstance(entry, Reading)]
        conflicts = conflicts_of(self.model, readings, self.settings.misfit_tail)
        return hitting_sets(conflicts, largest=2)

    def _careful_choice(self, belief: NDArray[np.float64], ranked: tuple[Candidate, ...]) -> Candidate:
        """The choice of the two-step look ahead; the best by impurity where repairing now would be cheapest.
        """
        minutes = self.settings.failed_repair_minutes
        found = look_ahead.best(self.model, belief, self.actions, self.costs, self.kinds, minutes, ranked)
        return found or ranked[0]

    def _doubtful(self, job: Job, belief: NDArray[np.float64]) -> tuple[Candidate, ...]:
        """Readings taken once that the best repair explains only by a slip: worth measuring again, worst
        first.
        """
        fit = self.fit(job, belief)
        if fit is None:
            return ()
        taken = _taken(self._phase_entries(job))
        found = []
        for probe in fit.doubtful(self.settings.misfit_tail):
            column = self.expectations.column(probe)
            if column is not None and taken.count(probe) == 1 and probe not in job.skipped:
                minutes, danger = self.costs.minutes(probe, taken), self.costs.danger(probe, self.sides)
                found.append(Candidate(column, probe, minutes, danger, 0.0))
        return tuple(found)

    def _phase(self, job: Job) -> tuple[NDArray[np.float64], list[Evidence]]:
        """Belief at the last repair (or the prior), and the evidence since."""
        belief = with_hunches(self.prior, self.expectations.hypotheses, job.hunches, self.settings.hunch_factor)
        since: list[Evidence] = []
        for entry in job.entries:
            if isinstance(entry, Fitted):
                belief = carry_over(
                    posterior(belief, self._likelihoods.log(since)),
                    self.expectations.hypotheses,
                    entry.refs,
                    self.settings,
                )
                since = []
            else:
                since.append(entry)
        return belief, since

    def _ranked(self, job: Job, belief: NDArray[np.float64], gate: Callable[[Probe], bool]) -> tuple[Candidate, ...]:
        taken = _taken(self._phase_entries(job))
        ranked = candidates(
            self.model,
            belief,
            self.actions,
            self.settings.scored_mass,
            self.costs,
            self.sides,
            taken,
            job.skipped,
            gate,
        )
        sound = not self.actions.repairs[best_repair(belief, self.actions)[0]]
        least = self.settings.least_worth_when_sound_per_minute if sound else self.settings.least_worth_per_minute
        return cold_first(ranked, least)

    @staticmethod
    def _phase_entries(job: Job) -> Sequence[Entry]:
        last = max((i for i, entry in enumerate(job.entries) if isinstance(entry, Fitted)), default=-1)
        return job.entries[last + 1 :]


def _taken(entries: Iterable[Entry]) -> list[Probe]:
    return [entry.probe for entry in entries if isinstance(entry, Reading)]
