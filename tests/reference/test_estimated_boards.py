"""Boards estimated from the label alone, held against the reference circuits that have such a label.

Source: the reference circuits, adapters designed for this project without the rules of the estimate. Whoever wrote the rules had
seen them, so this shows that usual practice covers them, not how often it covers an adapter nobody has seen.
"""

import math

import numpy as np
import pytest

from tests.reference.reference_circuits import PROFILES
from triage.board.circuit import circuit
from triage.board.estimate.assemble import estimate
from triage.board.estimate.seen import parse_seen
from triage.board.estimate.template import template_of
from triage.board.fault import Hypothesis
from triage.board.kinds import kinds
from triage.board.part import Board, Label, Part
from triage.board.profile import board_from_dict, board_to_dict, load_profile
from triage.families.cold import cold_probes, cold_samples, specimens
from triage.physics.netlist import compile_netlist

DESIGNED = "reference circuits of this project, values as designed"
INSIDE = 0.85
"""Share of the parts whose true values must all lie inside the stated 90 % spread: the owner's bound."""


def both(circuit_name: str) -> tuple[Board, Board]:
    """The reference circuit, and the board estimated from its label."""
    truth = load_profile(PROFILES[circuit_name])
    return truth, estimate(template_of(truth.family), truth.label)


def pairs(truth: Board, guess: Board) -> list[tuple[Part, Part | None]]:
    """True parts with the estimated part of the same role and kind, each taken once; None where the template lacks it."""
    left = list(guess.parts)
    found: list[tuple[Part, Part | None]] = []
    for part in truth.parts:
        match = next((one for one in left if (one.role, one.kind) == (part.role, part.kind)), None)
        if match is not None:
            left.remove(match)
        found.append((part, match))
    return found


def misses(part: Part, match: Part | None) -> list[str]:
    """True values outside the stated spread, or not estimated at all."""
    if match is None:
        return ["no such part"]
    found = []
    for key, true in part.value.items():
        if key not in match.value:
            found.append(f"{key}: not estimated")
        elif abs(math.log(true / match.value[key])) > math.log(match.spread[key]) + 1e-9:
            found.append(f"{key}: {true:.4g}, estimated {match.value[key]:.4g} times or over {match.spread[key]:.3g}")
    return found


@pytest.mark.parametrize("name", PROFILES)
def test_true_values_lie_inside_the_stated_spread(name, outside_check):
    truth, guess = both(name)
    matched = pairs(truth, guess)
    outside = {part.ref: found for part, match in matched if (found := misses(part, match))}
    inside = 1.0 - len(outside) / len(matched)
    logs = [(math.log(part.value[key] / match.value[key]), math.log(match.spread[key])) for part, match in matched if match
            for key in part.value if key in match.spread and key != "saturation_factor"]
    score = math.sqrt(np.mean([(off / width) ** 2 for off, width in logs])) * 1.645
    middle = math.exp(np.mean([width for _, width in logs]))
    print(f"\n{truth.family} from its label alone: {len(matched) - len(outside)} of {len(matched)} parts inside the 90 % spread "
          f"({inside:.3f}); middle spread factor {middle:.2f}; departures {score:.2f} of what the spreads promise; "
          f"outside: {outside}")
    outside_check.at_least(f"parts of {truth.family} inside the 90 % spread, label alone", DESIGNED, inside, INSIDE)


@pytest.mark.parametrize("name", PROFILES)
def test_spreads_say_something(name):
    """A spread of a decade either way would hold anything; the main values of a board are known to a factor of three."""
    _, guess = both(name)
    for part in guess.parts:
        for key in kinds()[part.kind].required:
            if part.kind != "transformer":
                assert part.spread[key] < 10.0, (part.ref, key)
    mains = [part.spread[key] for part in guess.parts for key in kinds()[part.kind].required]
    assert math.exp(np.mean(np.log(mains))) < 3.0


@pytest.mark.parametrize("name", PROFILES)
def test_an_estimated_board_works_like_a_profile(name):
    truth, guess = both(name)
    assert board_from_dict(board_to_dict(guess), "estimated") == guess
    assert compile_netlist(circuit(guess)).names
    assert {side: set(nodes) for side, nodes in guess.sides.items()} == {side: set(nodes) for side, nodes in truth.sides.items()}
    ends = [node for node in ("mains_l", "mains_n") if guess.side_of(node)]
    probes = [probe for probe in cold_probes(guess) if probe.plus in (*ends, "out", "bulk", "raw")][:40]
    samples = cold_samples(guess, (Hypothesis(()),), probes, specimens(guess, 3))
    assert samples.shape == (1, len(probes), 3)
    assert not np.isnan(samples).any()
    assert len({float(value) for value in samples[0, -1]}) > 1, "specimens differ"


@pytest.mark.parametrize("name", PROFILES)
def test_fault_modes_are_complete(name):
    """Every mode of the shipped profile is considered on the estimated board, and no mode of a winding that is not there."""
    truth, guess = both(name)
    for part, match in pairs(truth, guess):
        assert match is not None
        assert set(part.fault_modes) <= set(match.fault_modes or kinds()[match.kind].fault_modes), part.ref
    windings = [pin.removesuffix("_start") for pin in guess.part("T1").pins if pin.endswith("_start")]
    assert len(guess.part("T1").fault_modes) == len(windings) + 1


@pytest.mark.parametrize("family", ("ringing_choke_zener", "ringing_choke_opto", "pwm_flyback_opto"))
@pytest.mark.parametrize(("line", "watts", "low", "high"), [
    ("220-240 V~ 50 Hz", 5.0, 0.5, 2.0), ("100-240 V~ 50/60 Hz", 24.0, 1.5, 4.0), ("100-240 V~ 50/60 Hz", 60.0, 1.5, 4.0),
])  # fmt: skip
def test_bulk_capacitor_by_the_rule_of_thumb(family, line, watts, low, high, outside_check):
    """1 uF a watt of output for 230 V, 2 to 3 for 100 to 240 V behind a bridge."""
    board = estimate(template_of(family), Label(line, 12.0, watts / 12.0), parse_seen(["bridge"]))
    share = board.by_role("bulk capacitor").value["capacitance"] * 1e6 / watts
    source = "makers' application notes on flyback design (rule of thumb, from memory)"
    off, bound = math.log(share / math.sqrt(low * high)), math.log(math.sqrt(high / low))
    outside_check("bulk microfarads a watt", source, off, 0.0, bound, absolute=True)
