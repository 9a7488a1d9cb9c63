"""What the bench's own closed jobs say about the next one: a factor on the weight of each fault.

Only a closed job whose confirmed fault was repaired and whose adapter works counts as found; one that came
back counts for the other faults of its profile, so it speaks against its verdict. Jobs on the same profile are
compared fault by fault, jobs on other profiles of the family by role and fault mode. The counts are written
into a job when it is begun: what is closed later changes the next job, never this one. The update itself is
``triage.diagnosis.learning``.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from triage.board.fault import Fault
from triage.board.part import Board
from triage.errors import JobError
from triage.job.summary import Summary

if TYPE_CHECKING:
    from triage.diagnosis.learning import Trust

MOST_JOBS = 200
"""Closed jobs that count at most, the latest first, for a profile and again for its family: older ones tell
of other boards."""


@dataclass(frozen=True, slots=True)
class Experience:
    """Closed jobs as counts."""

    family_jobs: int = 0
    """Closed jobs on adapters of the family, this profile included."""
    profile_jobs: int = 0
    """Those of them on this profile."""
    found: tuple[Fault, ...] = ()
    """Faults confirmed in the jobs of the family, as faults of this board."""
    found_here: tuple[Fault, ...] = ()
    """Faults confirmed in the jobs on this profile."""
    came_back: tuple[Fault, ...] = ()
    """Faults of jobs on this profile whose repair did not hold."""

    def factors(self, shares: Mapping[Fault, float], trust: "Trust | None" = None) -> dict[Fault, float]:
        """Factor on the weight of each fault [-].

        shares: chance of each root fault by the handbook, given that a part failed; adds up to 1 [-].
        trust: what the handbook is worth; by default that of ``triage.diagnosis.learning``.
        """
        from triage.diagnosis.learning import factors

        if not self.family_jobs:
            return {}
        known = ([fault for fault in some if fault in shares] for some in (self.found, self.found_here, self.came_back))
        found, found_here, came_back = known
        return factors(shares, self.family_jobs, found, self.profile_jobs, found_here, came_back, trust)

    def to_dict(self) -> dict[str, Any]:
        """The counts as a table of the job file."""
        return {
            "family_jobs": self.family_jobs,
            "profile_jobs": self.profile_jobs,
            "found": [str(fault) for fault in self.found],
            "found_here": [str(fault) for fault in self.found_here],
            "came_back": [str(fault) for fault in self.came_back],
        }


NONE = Experience()
"""No closed jobs, or learning switched off."""


def handbook_shares(weights: Mapping[Fault, float]) -> dict[Fault, float]:
    """Weights made to add up to 1: the chance of each fault, given that a part failed [-]."""
    total = sum(weights.values())
    return {fault: weight / total for fault, weight in weights.items()}


def experience_from_dict(found: object, where: str) -> Experience:
    """The counts of a job file; none where the file has none. Raises JobError naming the key that is
    wrong."""
    if found is None:
        return NONE
    if not isinstance(found, dict):
        raise JobError(f"{where}, job.closed_jobs", type(found).__name__, "a table")
    counts = [found.get(key, 0) for key in ("family_jobs", "profile_jobs")]
    for key, count in zip(("family_jobs", "profile_jobs"), counts, strict=True):
        if not isinstance(count, int) or isinstance(count, bool) or not 0 <= count <= MOST_JOBS:
            raise JobError(f"{where}, job.closed_jobs.{key}", repr(count)[:40], f"0 to {MOST_JOBS}")
    faults = [_faults(found.get(key, []), f"{where}, job.closed_jobs.{key}") for key in ("found", "found_here", "came_back")]
    return Experience(counts[0], counts[1], *faults)


def gather(jobs: Sequence[Summary], board: Board) -> Experience:
    """The counts that closed jobs give for a board. jobs: latest first."""
    family = [job for job in jobs if job.family == board.family and job.fault][:MOST_JOBS]
    here = [job for job in jobs if job.profile == board.id and job.family == board.family and job.fault][:MOST_JOBS]
    found = (_on_board(job, board) for job in family if job.cured)
    found_here = (_on_board(job, board) for job in here if job.cured)
    came_back = (_on_board(job, board) for job in here if not job.cured)
    return Experience(len(family), len(here), *(tuple(one for one in some if one) for some in (found, found_here, came_back)))


def experience_of(folder: Path, board: Board) -> Experience:
    """The counts of the closed jobs of a folder; none where it has no jobs."""
    from triage.job.index import Index

    if not any(folder.glob("*.toml")):
        return NONE
    with Index.of_folder(folder) as index:
        index.refresh()
        return gather(index.closed(board.family), board)


def _on_board(job: Summary, board: Board) -> Fault | None:
    """The fault of a job as a fault of this board: the same part of the same profile, else the part of the
    same role."""
    fault = _parsed(job.fault)
    if fault is None or job.profile == board.id:
        return fault
    part = board.by_role(job.role) if job.role else None
    return None if part is None else Fault(part.ref, fault.mode)


def _faults(found: object, where: str) -> tuple[Fault, ...]:
    if not isinstance(found, list) or len(found) > MOST_JOBS:
        raise JobError(where, type(found).__name__, f"a list of at most {MOST_JOBS} faults")
    faults = [_parsed(text) for text in found if isinstance(text, str)]
    if len(faults) != len(found) or None in faults:
        raise JobError(where, "an entry that is no fault", "REF.mode, for instance R1.open")
    return tuple(fault for fault in faults if fault)


def _parsed(text: str) -> Fault | None:
    try:
        return Fault.parse(text)
    except ValueError:
        return None
