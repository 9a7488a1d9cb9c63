"""When it is enough, and what it has come to.

Stop when the best repair cures with the chance the setting asks for, or when no reading that may still be
taken is worth its minutes. A sound board is declared only when nothing cheap could still find a rare fault.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.actions import Actions
from triage.diagnosis.misfit import Fit
from triage.diagnosis.settings import Settings
from triage.diagnosis.words import NO_PART_FAULT

RIVAL = 0.05
"""A repair with at least this chance is named beside the best one [-]."""


@dataclass(frozen=True, slots=True)
class Suspect:
    """All hypotheses with the same root, taken together."""

    root: tuple[Fault, ...]
    probability: float
    """[-]"""
    collateral: tuple[Fault, ...]
    """Of its likeliest form, in order of destruction."""
    index: int
    """Its likeliest hypothesis."""

    @property
    def ref(self) -> str:
        """Ref of the root, ``R1+C2`` for two, empty for no part fault."""
        return "+".join(fault.ref for fault in self.root)

    @property
    def mode(self) -> str:
        """Fault mode of the root, ``open+leaky`` for two."""
        return "+".join(fault.mode for fault in self.root) or NO_PART_FAULT


@dataclass(frozen=True, slots=True)
class Verdict:
    """What the diagnosis has come to."""

    status: str
    """``open``, ``found``, ``does not fit`` or ``no part fault``."""
    suspect: Suspect | None
    """The leading suspect of the best repair."""
    repair: tuple[str, ...]
    """Refs to replace; empty for work on cord, plug and joints."""
    probability: float
    """Chance that this repair cures [-]."""
    exhausted: bool
    """True when no reading that may still be taken is worth its minutes."""
    rivals: tuple[tuple[tuple[str, ...], float], ...] = ()
    """Other repairs with at least RIVAL chance each, likeliest first: lift one leg of a part to tell it from
    these.
    """
    odd: tuple[str, ...] = ()
    """Readings that do not fit this repair, as texts of their probes, worst first."""


@dataclass(frozen=True, slots=True)
class Roots:
    """The different root faults of a list of hypotheses."""

    hypotheses: Sequence[Hypothesis]
    of: NDArray[np.int64]
    """Root of each hypothesis, shape (H,), in the order in which they first occur."""

    @classmethod
    def of_hypotheses(cls, hypotheses: Sequence[Hypothesis]) -> "Roots":
        """Group the hypotheses."""
        place: dict[tuple[Fault, ...], int] = {}
        of = [place.setdefault(tuple(sorted(hypothesis.root)), len(place)) for hypothesis in hypotheses]
        return cls(hypotheses, np.asarray(of, dtype=np.int64))

    def suspects(self, belief: NDArray[np.float64], at_least: float = 0.0) -> tuple[Suspect, ...]:
        """Suspects by root, the likeliest first; equal ones in the order of the list.

        at_least: those below this probability are left out [-].
        """
        lead, chances = self._leads(belief)
        return tuple(self._suspect(int(i), float(p)) for i, p in zip(lead, chances, strict=True) if p >= at_least)

    def leading(self, belief: NDArray[np.float64], members: NDArray[np.bool_]) -> Suspect:
        """The likeliest suspect of which the likeliest hypothesis is one of ``members``, shape (H,)."""
        lead, chances = self._leads(belief)
        place = int(np.argmax(members[lead]))
        return self._suspect(int(lead[place]), float(chances[place]))

    def _leads(self, belief: NDArray[np.float64]) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
        """Likeliest hypothesis and chance of each root, the likeliest root first."""
        chances = np.bincount(self.of, weights=belief).astype(np.float64)
        likeliest: NDArray[np.int64] = np.argsort(-belief, kind="stable").astype(np.int64)
        lead = likeliest[np.unique(self.of[likeliest], return_index=True)[1]]
        order = np.lexsort((lead, -chances))
        return lead[order], chances[order]

    def _suspect(self, index: int, chance: float) -> Suspect:
        hypothesis = self.hypotheses[index]
        return Suspect(hypothesis.root, chance, hypothesis.collateral, index)


def best_repair(belief: NDArray[np.float64], actions: Actions) -> tuple[int, float]:
    """The likeliest exact repair and the chance that it cures [-]."""
    action = int(np.argmax(actions.chances(belief)))
    return action, actions.cure_chance(belief, action)


def settled(
    belief: NDArray[np.float64], actions: Actions, settings: Settings, careful: bool, best_worth: float
) -> tuple[bool, bool]:
    """(it is enough, nothing is worth reading any more).

    Parameters
    ----------
    careful: take the careful stop, for repairs that destroy parts when they are wrong.
    best_worth: gain per minute of the best reading that may still be taken; 0 when there is none [1/min].
    """
    action, cure = best_repair(belief, actions)
    if not actions.repairs[action]:
        exhausted = best_worth < settings.least_worth_when_sound_per_minute
        return exhausted, exhausted
    exhausted = best_worth < settings.least_worth_per_minute
    return cure >= (settings.careful_target if careful else settings.stop_target) or exhausted, exhausted


def conclude(
    belief: NDArray[np.float64],
    roots: Roots,
    actions: Actions,
    settings: Settings,
    careful: bool,
    best_worth: float,
    fit: Fit | None,
    unexplained: Sequence[Probe] = (),
) -> Verdict:
    """The verdict on a belief.

    Parameters
    ----------
    fit: how the readings fit the leading repair; None when none was taken.
    unexplained: readings measured again that nothing on the list explains.
    Other parameters as in ``settled``.
    """
    action, cure = best_repair(belief, actions)
    lead = roots.leading(belief, actions.of == action)
    enough, exhausted = settled(belief, actions, settings, careful, best_worth)
    odd = tuple(map(str, unexplained or (fit.doubtful(settings.misfit_tail) if fit else ())))
    if unexplained:
        status = "does not fit"
    elif not enough:
        status = "open"
    elif fit is not None and fit.overall < settings.misfit_tail:
        status = "does not fit"
    else:
        status = "found" if lead.root else NO_PART_FAULT
    chances = actions.chances(belief)
    rivals = tuple(
        (tuple(sorted(actions.repairs[a])), float(chances[a]))
        for a in np.argsort(-chances, kind="stable")
        if a != action and chances[a] >= RIVAL
    )
    return Verdict(status, lead, tuple(sorted(actions.repairs[action])), cure, exhausted, rivals, odd)
