"""Plays a technician: asks for the next reading, looks it up in a table, enters it, asks again, and compares
the repair.

Pure: the diagnosis, the first entries and the answers are handed in, the seed fixes every error of the meter.
    Nothing here knows where the
answers come from.
"""

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from tests.reference.policies import Policy, own
from triage.board.evidence import Reading
from triage.board.probe import Probe
from triage.diagnosis.engine import Diagnosis, Entry, Job

Answer = Callable[[Probe], float | None]
"""Probe -> true reading [SI], ``inf`` for OL, None when it cannot be taken."""


@dataclass(frozen=True, slots=True)
class Play:
    """What came of one job."""

    name: str
    status: str
    repair: frozenset[str]
    needed: frozenset[str]
    """Parts that really have to be replaced; empty when the board is sound."""
    believed: float
    """Chance of a cure that the verdict stated [-]."""
    readings: int
    live: int
    minutes: float
    """Of readings, set-up included."""
    danger: float = 0.0
    """What the hazard of the readings is worth [min]."""
    job: Job = field(default_factory=Job)
    """All that was entered."""

    @property
    def right(self) -> bool:
        """The first repair replaces exactly what is needed."""
        return self.repair == self.needed

    def total(self, failed: float = 40.0) -> float:
        """Minutes of readings with hazard, and of a first repair that fails."""
        return self.minutes + self.danger + (0.0 if self.cured else failed)

    @property
    def cured(self) -> bool:
        """The first repair cures: it replaces at least what is needed."""
        return self.repair >= self.needed and bool(self.repair) == bool(self.needed)


@dataclass(frozen=True, slots=True)
class Meter:
    """The errors of the meter and of the hand that holds it."""

    error: float = 0.02
    """Standard error of a reading, relative [-]."""
    gross: float = 0.0
    """Share of the readings that are grossly wrong [-]."""
    others: Sequence[float] = field(default=(0.0, 1.0, 1e3, 1e5))
    """What a slipped probe may show instead [SI]."""

    def show(self, value: float, rng: np.random.Generator) -> float:
        """The reading that the display shows for a true one."""
        noise, slip, which = rng.normal(), rng.random(), rng.random()
        if slip < self.gross:
            wrong = (float("inf"), 0.0, value * 10, value / 10, float(rng.choice(list(self.others))))
            return wrong[int(which * len(wrong))]
        return value if not np.isfinite(value) else value * (1 + self.error * noise)


def play(
    diagnosis: Diagnosis,
    name: str,
    needed: Iterable[str],
    first: Sequence[Entry],
    answer: Answer,
    seed: int,
    meter: Meter | None = None,
    careful: bool = False,
    policy: Policy | None = None,
    most: int = 150,
) -> Play:
    """One job from its first entries to the verdict.

    The gate opens when no cold reading is suggested any more while the verdict is still open. Raises
    AssertionError when a live reading is suggested before that, or a reading twice without being called
    doubtful.
    """
    meter, choose = meter or Meter(), policy or own(careful)
    rng = np.random.default_rng(seed)
    job, gate_open, minutes, danger = Job(tuple(first)), False, 0.0, 0.0
    taken: list[Probe] = []
    while len(taken) < most:
        choice = choose(diagnosis, job, lambda probe, open_=gate_open: open_ or not probe.live)
        if choice is None:
            if gate_open or diagnosis.verdict(job, careful).status != "open":
                break
            gate_open = True
            continue
        probe = choice.probe
        assert gate_open or not probe.live, f"{name}: live reading {probe} before the cold ones were done"
        assert probe not in job.skipped, f"{name}: {probe} suggested although skipped"
        assert taken.count(probe) == int(choice.again), f"{name}: {probe} suggested too often"
        value = answer(probe)
        if value is None or np.isnan(value):
            job = replace(job, skipped=job.skipped | {probe})
            continue
        minutes, danger = minutes + choice.minutes, danger + choice.danger
        taken.append(probe)
        job = replace(job, entries=(*job.entries, Reading(probe, meter.show(value, rng))))
    verdict = diagnosis.verdict(job, careful)
    live = sum(probe.live for probe in taken)
    return Play(
        name,
        verdict.status,
        frozenset(verdict.repair),
        frozenset(needed),
        verdict.probability,
        len(taken),
        live,
        minutes,
        danger,
        job,
    )


def summary(plays: Sequence[Play]) -> dict[str, float]:
    """First-time-right, cured, means of readings, live readings, minutes, good parts replaced, share that
    does not fit.
    """
    return {
        "plays": len(plays),
        "right": float(np.mean([p.right for p in plays])),
        "cured": float(np.mean([p.cured for p in plays])),
        "readings": float(np.mean([p.readings for p in plays])),
        "live": float(np.mean([p.live for p in plays])),
        "minutes": float(np.mean([p.minutes for p in plays])),
        "minutes to cure": float(np.mean([p.total() for p in plays])),
        "good parts replaced": float(np.mean([len(p.repair - p.needed) for p in plays])),
        "does not fit": float(np.mean([p.status == "does not fit" for p in plays])),
    }


def reliability(plays: Sequence[Play], least: int = 30) -> list[tuple[float, float, int]]:
    """(mean believed, share cured, plays) for each tenth of believed chance that holds at least ``least``
    plays.
    """
    rows = []
    for tenth in range(10):
        group = [p for p in plays if min(9, int(p.believed * 10)) == tenth]
        if len(group) >= least:
            rows.append(
                (
                    float(np.mean([p.believed for p in group])),
                    float(np.mean([p.cured for p in group])),
                    len(group),
                )
            )
    return rows
