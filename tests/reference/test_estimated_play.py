"""Boards known from their label alone, with every fault of the reference circuit that has such a label.

No marking is entered: every value is the program's estimate, with its spread. What the estimated board does with mains on is
solved beforehand (``estimated_points``), as the program does beside the work. Source of the answers: the reference circuits
(ngspice 39), as in ``test_circuits_play``.
"""

from collections.abc import Mapping
from dataclasses import replace
from unittest.mock import patch

import pytest

from tests.reference.estimated_points import keep
from tests.reference.failed_units import Unit, single_faults
from tests.reference.playing import Answer, Play, play, summary
from tests.reference.reference_circuits import SOURCE, own_meters
from tests.reference.test_estimated_boards import both, pairs
from triage.board.evidence import Sign
from triage.board.part import Board
from triage.board.probe import Probe
from triage.job import workshop
from triage.job.cache import Cache
from triage.job.learning import NONE
from triage.job.wiring import Wiring

RIGHT = 0.80
"""Share of the faults found at the first repair: the owner's bound."""
SEED = 700
MOST = 150
"""Readings after which a play ends: with unread values a silent fault among 45 parts is sought part by part."""
PLAYED = ("rcc-zener", "linear-reg", "rcc-opto", "pwm-opto")


def true_refs(truth: Board, guess: Board) -> dict[str, str]:
    """Ref on the estimated board -> ref of the part at the same nodes of the true one, else of the part of the same role."""
    found = {match.ref: part.ref for part, match in pairs(truth, guess) if match is not None}
    at = {(part.kind, tuple(sorted(part.pins.items()))): part.ref for part in truth.parts}
    return found | {part.ref: ref for part in guess.parts if (ref := at.get((part.kind, tuple(sorted(part.pins.items())))))}


def answers(unit: Unit, refs: Mapping[str, str]) -> Answer:
    """What the meter shows on the true board where the estimated one asks."""

    def true_name(node: str) -> str:
        ref, dot, pin = node.partition(".")
        return f"{refs.get(ref, ref)}{dot}{pin}"

    def answer(probe: Probe) -> float | None:
        return unit.readings.get(probe._replace(plus=true_name(probe.plus), minus=true_name(probe.minus)))

    return answer


def plays_of(circuit: str, cache: Cache) -> list[Play]:
    truth, guess = both(circuit)
    refs = true_refs(truth, guess)
    with patch.object(workshop, "own_instruments", lambda: own_meters(circuit)):
        diagnosis = Wiring(cache).diagnosis(guess, NONE)
    plays = []
    for number, unit in enumerate(single_faults(circuit)):
        entries = [unit.symptom, Sign("sound")]
        played = play(diagnosis, unit.name, unit.needed, entries, answers(unit, refs), SEED + number, most=MOST)
        plays.append(replace(played, repair=frozenset(refs.get(ref, ref) for ref in played.repair)))
    return plays


@pytest.mark.long
@pytest.mark.parametrize("circuit", PLAYED)
def test_faults_of_a_board_known_by_its_label_are_found(circuit, tmp_path, outside_check):
    cache = Cache(tmp_path)
    keep(circuit, cache)
    plays = plays_of(circuit, cache)
    got = summary(plays)
    print(f"\n{circuit} from its label: " + ", ".join(f"{key} {value:.3g}" for key, value in got.items()))
    print("wrong: " + "; ".join(f"{p.name} ({p.status}: {','.join(sorted(p.repair))})" for p in plays if not p.right))
    outside_check.at_least(f"first repair right on {circuit} known by its label", SOURCE, got["right"], RIGHT)
