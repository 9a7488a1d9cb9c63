"""Other ways to choose the next reading, to compare the program's own with.

All stop by the same rule, ``Diagnosis.settled``; what the program checks beyond it before its own verdict is part of its way.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from triage.board.probe import Probe
from triage.diagnosis.engine import Diagnosis, Job
from triage.diagnosis.information import entropy

Gate = Callable[[Probe], bool]


@dataclass(frozen=True, slots=True)
class Choice:
    """A reading to take."""

    probe: Probe
    minutes: float
    danger: float
    again: bool = False


Policy = Callable[[Diagnosis, Job, Gate], Choice | None]


def own(careful: bool = False) -> Policy:
    """The program's own choice."""

    def choose(diagnosis: Diagnosis, job: Job, gate: Gate) -> Choice | None:
        found = diagnosis.suggest(job, gate, careful)
        if found is None:
            return None
        danger = diagnosis.costs.danger(found.probe, diagnosis.sides)
        return Choice(found.probe, found.minutes, danger, found.again)

    return choose


def checklist(order: Sequence[Probe]) -> Policy:
    """A fixed list of readings, cold ones first, until the common stop."""

    def choose(diagnosis: Diagnosis, job: Job, gate: Gate) -> Choice | None:
        taken = [entry.probe for entry in job.entries if hasattr(entry, "probe")]
        left = [p for p in order if p not in taken and p not in job.skipped and gate(p) and diagnosis.costs.can_take(p)]
        return _choice(diagnosis, left[0], taken) if left and not diagnosis.settled(job) else None

    return choose


def entropy_per_minute(least: float = 0.01) -> Policy:
    """Most expected information about the hypotheses per minute, at least ``least`` bit a minute."""

    def choose(diagnosis: Diagnosis, job: Job, gate: Gate) -> Choice | None:
        if diagnosis.settled(job):
            return None
        belief, model = diagnosis.belief(job), diagnosis.model
        taken = [entry.probe for entry in job.entries if hasattr(entry, "probe")]
        now, best, choice = entropy(belief), least, None
        for column, probe in enumerate(model.expectations.probes):
            if probe in taken or probe in job.skipped or not gate(probe) or not diagnosis.costs.can_take(probe):
                continue
            if not model.known(column):
                continue
            joint = model.bins[model.owner == column] * belief
            chance = joint.sum(axis=1, keepdims=True)
            split = joint / np.maximum(chance, 1e-30)
            left = -(joint * np.log2(np.maximum(split, 1e-30))).sum()
            offer = _choice(diagnosis, probe, taken)
            worth = (now - left) / (offer.minutes + offer.danger)
            if worth > best:
                best, choice = worth, offer
        return choice

    return choose


def _choice(diagnosis: Diagnosis, probe: Probe, taken: Sequence[Probe]) -> Choice:
    return Choice(probe, diagnosis.costs.minutes(probe, taken), diagnosis.costs.danger(probe, diagnosis.sides))


ROLE_ORDER = (
    "fusible",
    "fuse",
    "varistor",
    "mains",
    "bulk",
    "main switch",
    "sense",
    "output rectifier",
    "output capacitor",
    "startup",
    "start",
    "gate",
    "drive",
    "zener",
    "optocoupler",
    "reference",
    "controller",
    "auxiliary",
    "clamp",
    "transformer",
    "regulator",
    "reservoir",
    "led",
)
"""Words of roles in the order in which a repair course checks them: the path of the mains, the switch, the
output, the rest.
"""
KIND_READINGS = {
    "electrolytic": ("ohms", "esr", "capacitance"),
    "capacitor": ("ohms", "capacitance"),
    "diode": ("diode",),
    "zener": ("diode",),
    "led": ("diode",),
    "bipolar_transistor": ("diode", "ohms"),
    "mosfet": ("ohms", "diode"),
}
"""What is measured at a part of a kind; ohms at all others."""


def usual_checklist(probes: Sequence[Probe], parts: Sequence[tuple[str, str, Sequence[str]]]) -> list[Probe]:
    """Readings across every part in the order of ROLE_ORDER, then the usual live voltages.

    Parameters
    ----------
    probes: all readings there are.
    parts: (kind, role, nodes) of each part.
    """

    def rank(role: str) -> int:
        return next((i for i, word in enumerate(ROLE_ORDER) if word in role.lower()), len(ROLE_ORDER))

    found: list[Probe] = []
    for kind, _, nodes in sorted(parts, key=lambda part: rank(part[1])):
        across = [p for p in probes if not p.live and p.plus in nodes and p.minus in nodes]
        for function in KIND_READINGS.get(kind, ("ohms",)):
            found += [p for p in across if p.function == function]
    live = [p for p in probes if p.live and p.function == "volts_dc"]
    live.sort(key=lambda p: (("full", "half", "noload").index(p.condition), p.plus not in ("out", "bulk"), p.plus))
    return list(dict.fromkeys(found + live))
