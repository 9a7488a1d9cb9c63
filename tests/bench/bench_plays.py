"""Plays every fault of the reference circuits, and their perturbed units, from complaint to first repair.

    python -m tests.bench.bench_plays                        # all circuits whose operating points are solved
    python -m tests.bench.bench_plays rcc-zener linear-reg   # these
    python -m tests.bench.bench_plays rcc-opto own careful   # only these ways of choosing
    python -m tests.bench.bench_plays unlisted               # faults that are not on the list

The program's own expectations decide, independently simulated readings answer (2 % error of the meter). Beside it a fixed
checklist and information per minute, which both stop when their best repair is as likely to cure as the program's own stop asks.
Minutes are those of readings with set-up and hazard, and 40 for a first repair that does not cure. The perturbed units need the
reference data beside the checkout. Some ten minutes a circuit; nothing here is a test.
"""

import sys
from collections.abc import Collection, Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from tests.reference.failed_units import Unit, diagnosis_of, perturbed_units, single_faults
from tests.reference.playing import Meter, Play, play, reliability, summary
from tests.reference.policies import Policy, checklist, entropy_per_minute, own, usual_checklist
from tests.reference.reference_circuits import PROFILES, fault_of
from triage.board.evidence import Sign
from triage.board.fault import Fault
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.diagnosis.engine import Diagnosis
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.priors import Prior

SHARED = Path(__file__).resolve().parents[3] / "shared/reference/circuits"
SEED = 500
WAYS = ("own", "careful", "information", "checklist")
SHOWN = ("plays", "right", "cured", "minutes to cure", "readings", "live", "good parts replaced", "does not fit")


def policy_of(way: str, order: Sequence[Probe]) -> Policy:
    """A way of choosing the next reading by its name."""
    if way == "information":
        return entropy_per_minute()
    return checklist(order) if way == "checklist" else own(way == "careful")


def with_wrong_priors(diagnosis: Diagnosis, factor: float = 3.0, seed: int = 8) -> Diagnosis:
    """The same with the prior of every part wrong by ``factor`` one way or the other."""
    rng = np.random.default_rng(seed)
    off = {ref: factor ** rng.choice([-1, 1]) for ref in sorted(diagnosis.kinds)}
    hypotheses = diagnosis.expectations.hypotheses
    chance = diagnosis.prior * [np.prod([off[fault.ref] for fault in one.root]) if one.root else 1.0 for one in hypotheses]
    sound = [not one.root for one in hypotheses]
    chance[sound] = diagnosis.prior[sound] * chance.sum() / diagnosis.prior.sum()
    return with_prior(diagnosis, diagnosis.expectations, chance)


def with_prior(diagnosis: Diagnosis, expected: Expectations, chance: NDArray[np.float64]) -> Diagnosis:
    """The same board with other expectations and chances of their hypotheses."""
    axes = zip(diagnosis.expectations.probes, diagnosis.model.axes, strict=True)
    meters = {probe.function: axis.instrument for probe, axis in axes}
    prior = Prior(expected.hypotheses, chance / chance.sum(), diagnosis.why)
    kinds, sides = diagnosis.kinds, diagnosis.sides
    return Diagnosis(expected, prior, kinds, sides, diagnosis.settings, diagnosis.costs, diagnosis.pins, meters)


def play_units(diagnosis: Diagnosis, units: Sequence[Unit], way: str, order: Sequence[Probe], meter: Meter) -> list[Play]:
    """Every unit once; the seed of a unit is the same for every way."""
    return [
        play(
            diagnosis, unit.name, unit.needed, [unit.symptom, Sign("sound")], unit.readings.get, SEED + number, meter,
            way == "careful", policy_of(way, order), most=max(60, len(order)),
        )
        for number, unit in enumerate(units)
    ]  # fmt: skip


def row(words: str, way: str, plays: Sequence[Play]) -> None:
    """One line of the table."""
    got = summary(plays)
    print(f"  {words:12s} {way:12s} " + "  ".join(f"{key} {got[key]:.3g}" for key in SHOWN), flush=True)


def check_order(circuit: str, diagnosis: Diagnosis) -> list[Probe]:
    """The fixed checklist of a circuit."""
    parts = load_profile(PROFILES[circuit]).parts
    in_circuit = [probe for probe in diagnosis.expectations.probes if not probe.lifted]
    return usual_checklist(in_circuit, [(part.kind, part.role, tuple(part.pins.values())) for part in parts])


def bench(circuit: str, ways: Sequence[str]) -> tuple[dict[str, list[Play]], list[Play]]:
    """Plays a circuit and prints its table; the clean plays by way, and all plays of the program's own ways."""
    diagnosis, units = diagnosis_of(circuit), single_faults(circuit)
    units += perturbed_units(circuit, SHARED) if SHARED.is_dir() else []
    order = check_order(circuit, diagnosis)
    print(f"{circuit}: {len(units)} units, {len(diagnosis.prior)} hypotheses, {len(diagnosis.expectations.probes)} readings")
    clean: dict[str, list[Play]] = {}
    mine: list[Play] = []
    for words, judge, meter in (
        ("clean", diagnosis, Meter()),
        ("5 % gross", diagnosis, Meter(gross=0.05)),
        ("priors 3x off", with_wrong_priors(diagnosis), Meter()),
    ):
        for way in ways:
            plays = play_units(judge, units, way, order, meter)
            row(words, way, plays)
            if words == "clean":
                clean[way] = plays
            if way in ("own", "careful"):
                mine += plays
                wrong = [f"{p.name} {'+'.join(sorted(p.repair)) or 'none'}" for p in plays if not p.right]
                print("    wrong: " + "; ".join(wrong)) if wrong else None
    return clean, mine


def without(diagnosis: Diagnosis, faults: Collection[Fault]) -> Diagnosis:
    """The same with these faults not on the list, as roots or one of a pair."""
    expected = diagnosis.expectations
    keep = [i for i, one in enumerate(expected.hypotheses) if not set(one.root) & set(faults)]
    hypotheses = tuple(expected.hypotheses[i] for i in keep)
    fewer = Expectations(hypotheses, expected.probes, expected.samples[keep], expected.states[keep])
    return with_prior(diagnosis, fewer, diagnosis.prior[keep])


def unlisted(circuit: str) -> tuple[list[Play], list[Play]]:
    """Every tenth of the faults played while it is not on the list: the plays, and those of listed faults beside them."""
    diagnosis, units = diagnosis_of(circuit), single_faults(circuit)
    mixed = np.random.default_rng(4).permutation(len(units))
    blind: list[Play] = []
    for tenth in range(10):
        out = [units[i] for i in mixed[tenth::10]]
        judge = without(diagnosis, [fault_of(unit.name)[0] for unit in out])
        blind += play_units(judge, out, "own", (), Meter())
    listed = play_units(diagnosis, units, "own", (), Meter())
    got, beside = summary(blind), summary(listed)
    wrong = sum(p.status == "found" and not p.cured for p in blind) / len(blind)
    print(
        f"{circuit}, a tenth of the faults not on the list: flagged {got['does not fit']:.3f}, right part all the same "
        f"{got['cured']:.3f}, wrong part {wrong:.3f}; false alarms on listed faults {beside['does not fit']:.3f}",
        flush=True,
    )
    return blind, listed


def ratios(clean: dict[str, list[Play]]) -> None:
    """The program beside the checklist, on the same units."""
    if not {"own", "checklist"} <= clean.keys():
        return
    ours, theirs = summary(clean["own"]), summary(clean["checklist"])
    print(
        f"  beside the checklist: minutes {ours['minutes to cure'] / theirs['minutes to cure']:.2f}, "
        f"live readings {ours['live'] / max(theirs['live'], 1e-9):.2f}"
    )


def main(words: Sequence[str]) -> None:
    """Play the circuits and ways named, by default all."""
    circuits = [name for name in PROFILES if name in words] or list(PROFILES)
    if "unlisted" in words:
        for circuit in circuits:
            unlisted(circuit)
        return
    ways = [way for way in WAYS if way in words] or list(WAYS)
    everything: dict[str, list[Play]] = {way: [] for way in ways}
    mine: list[Play] = []
    for circuit in circuits:
        clean, own_plays = bench(circuit, ways)
        ratios(clean)
        mine += own_plays
        for way in ways:
            everything[way] += clean[way]
    print("all circuits, clean")
    for way in ways:
        row("", way, everything[way])
    ratios(everything)
    print("believed and real success by tenth of what was believed, of all plays of the program's own ways (at least 30 plays)")
    for believed, real, count in reliability(mine):
        print(f"  believed {believed:.3f}  real {real:.3f}  off {100 * (real - believed):+.1f} points  ({count} plays)")


if __name__ == "__main__":
    main(sys.argv[1:])
