"""Real repairs: what owners said and volunteers saw is entered, what they found must be among the first suspects.

Source: Open Repair Data, published by the Open Repair Alliance (openrepair.org), Open Repair Data Standard v0.3, to July 2025,
CC BY-SA 4.0; the cases, the complaints and their attribution lie in data/real_repairs.toml and data/complaint_gists.toml. 60 % of
the collection; nothing of the program was set by the hit rates below.
"""

import tomllib
from collections import Counter
from collections.abc import Callable
from functools import cache
from itertools import product
from pathlib import Path
from typing import Any

import pytest

from triage.board.evidence import STATES, Evidence, Reading, Sign, Symptom
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.board.stress import Stress
from triage.data import data_folder
from triage.diagnosis.engine import Diagnosis, Job
from triage.families.cold import cold_probes
from triage.families.points import fingerprint
from triage.job import expecting
from triage.job.cache import Cache, Kept, Shipped
from triage.job.complaint_words import state_of
from triage.job.learning import NONE
from triage.job.wiring import Wiring
from triage.quantities import parse_reading

SOURCE = "Open Repair Data, Open Repair Alliance, data to July 2025"
REPAIRS = tomllib.loads((Path(__file__).parent / "data/real_repairs.toml").read_text("utf-8"))
GISTS = tomllib.loads((Path(__file__).parent / "data/complaint_gists.toml").read_text("utf-8"))
CASES: list[dict[str, Any]] = REPAIRS["case"]
PROFILES = sorted({case["profile"] for case in CASES})
KINDS = {
    "fuse": ("fuse", "fusible_resistor"), "thermal_fuse": ("thermal_fuse",), "electrolytic": ("electrolytic",),
    "film_capacitor": ("x_capacitor", "y_capacitor", "capacitor"), "diode": ("diode", "bridge", "zener"),
    "capacitor_unspecified": ("electrolytic", "capacitor", "x_capacitor", "y_capacitor"),
    "transistor": ("bipolar_transistor", "mosfet"), "controller": ("pwm_controller",), "optocoupler": ("optocoupler",),
    "regulator": ("regulator",), "transformer": ("transformer",), "inductor": ("inductor",), "varistor": ("varistor",),
    "resistor": ("resistor", "fusible_resistor"),
}  # fmt: skip
"""Class of a found part -> part kinds of the boards; every other class lies outside the board."""
OUTSIDE = {"cable": "cable", "output_connector": "connector"}
"""Classes outside the board that some boards carry as a part."""
AT_THE_PART, OUTSIDE_THE_BOARD = 0.9, 0.9
"""Share of cases in which the class must be among the first three, where something was measured or seen at a part, and where the
fault lay outside the board. Cases that tell a complaint alone have no bound: three names out of sixty faults."""


class _Quick(Wiring):
    """The program's own rooms; corners that do not ship with a profile are left to the usual figures, to save minutes."""

    def stresses(self, board: Board) -> tuple[Stress, ...]:
        shipped = Cache(data_folder("profiles") / "kept").has(f"points-{fingerprint(board)}")
        return super().stresses(board) if shipped else ()


def _readings_of(case: dict[str, Any], board: Board) -> set[tuple[str, frozenset[str]]]:
    """What the readings of a case are taken between."""
    entered = [one for placed in placements(case, board) for one in placed if isinstance(one, Reading)]
    return {(one.probe.function, frozenset((one.probe.plus, one.probe.minus))) for one in entered}


def narrowed(name: str, kept: Kept) -> Diagnosis:
    """The diagnosis of a profile with only those cold readings that occur in a case."""
    board = load_profile(name)
    used = set().union(*(_readings_of(case, board) for case in CASES if case["profile"] == name))

    def taken(asked: Board) -> tuple[Probe, ...]:
        return tuple(one for one in cold_probes(asked) if (one.function, frozenset((one.plus, one.minus))) in used)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(expecting, "cold_probes", taken)
        return _Quick(kept).diagnosis(board, NONE)


@pytest.fixture(scope="module")
def kept(tmp_path_factory: pytest.TempPathFactory) -> Kept:
    """What ships with the program, and an empty cache."""
    return Shipped(data_folder("profiles") / "kept", Cache(tmp_path_factory.mktemp("answers")))


@pytest.fixture(scope="module")
def diagnosis_of(kept: Kept) -> Callable[[str], Diagnosis]:
    """Profile -> its diagnosis; whole where its cold readings ship, narrowed elsewhere."""

    @cache
    def found(name: str) -> Diagnosis:
        board = load_profile(name)
        ships = kept.has(expecting.kept_key(board))
        return _Quick(kept).diagnosis(board, NONE) if ships else narrowed(name, kept)

    return found


def placements(case: dict[str, Any], board: Board) -> list[tuple[Evidence, ...]]:
    """The evidence of a case, once for each part that the record may mean."""
    return [tuple(one) for one in product(*(_choices(text, board) for text in case["entered"]))]


def _choices(text: str, board: Board) -> list[Evidence]:
    what, _, where = text.partition(" at ")
    refs = [part.ref for part in board.parts if part.kind == where or part.ref in where.split(", ")]
    if what in STATES:
        return [Symptom(what)]
    if what.startswith("sign "):
        return [Sign(what.removeprefix("sign "), ref) for ref in (refs if where else [""])]
    if what == "esr ten times":
        parts = [board.part(ref) for ref in refs]
        return [Reading(Probe("esr", part.pins["plus"], part.pins["minus"]), 10.0 * part.value["esr"]) for part in parts]
    function, plus, minus, value, *condition = what.split()
    probe = Probe(function, plus, minus, *condition)
    return [Reading(probe, parse_reading(value, probe.unit))]


def share_found(case: dict[str, Any], diagnosis: Diagnosis, board: Board) -> float:
    """Share of the placements of a case in which a found class is among the roots of the first three suspects."""
    kinds = {part.ref: part.kind for part in board.parts}
    wanted = {kind for one in case["found"] for kind in KINDS.get(one, (OUTSIDE.get(one, ""), "outside"))}
    hits = []
    for entries in placements(case, board):
        first = diagnosis.suspects(Job(entries))[:3]
        named = {kinds[fault.ref] for one in first for fault in one.root}
        named |= {"outside" for one in first if not one.root}
        hits.append(bool(named & wanted))
    return sum(hits) / len(hits)


def group(case: dict[str, Any]) -> str:
    """What a case tells: ``outside`` the board, seen or measured ``at a part``, or a ``complaint alone``."""
    if not set(case["found"]) & set(KINDS):
        return "outside"
    return "at a part" if any(one not in STATES for one in case["entered"]) else "complaint alone"


@pytest.mark.long
def test_the_part_found_is_among_the_first_three_suspects(diagnosis_of: Callable[[str], Diagnosis], outside_check: Any) -> None:
    """Played through the program's own diagnosis; the rates and the coverage stand after the table of outside checks."""
    left_out = {reason: len(ids) for reason, ids in REPAIRS["left_out"].items()}
    total = len(CASES) + sum(left_out.values())
    shares: dict[str, list[float]] = {}
    for name in PROFILES:
        board, diagnosis = load_profile(name), diagnosis_of(name)
        for case in (one for one in CASES if one["profile"] == name):
            share = share_found(case, diagnosis, board)
            shares.setdefault(group(case), []).append(share)
            if share < 1.0:
                print(f"  {case['id']} ({name}, {group(case)}): {case['entered']} found {case['found']}, {share:.2f}")
    everything = [share for rows in shares.values() for share in rows]
    rates = {key: sum(rows) / len(rows) for key, rows in shares.items()}
    outside_check.told += [
        f"real repairs: {len(CASES)} of {total} cases can be expressed ({len(CASES) / total:.0%}); found class among the first "
        f"three in {sum(everything) / len(everything):.1%} of them: "
        + "; ".join(f"{key} {rates[key]:.1%} of {len(shares[key])}" for key in rates),
        "real repairs left out: " + "; ".join(f"{reason} {count}" for reason, count in left_out.items()),
    ]
    outside_check.at_least("real repairs, seen or measured at a part", SOURCE, rates["at a part"], AT_THE_PART)
    outside_check.at_least("real repairs, fault outside the board", SOURCE, rates["outside"], OUTSIDE_THE_BOARD)


def test_leaving_readings_out_that_nobody_took_changes_no_suspect(kept: Kept) -> None:
    """Holds the short cut of this file against the whole diagnosis, on the board whose readings all ship."""
    name = "harbour-handset-charger"
    board, whole, short = load_profile(name), Wiring(kept).diagnosis(load_profile(name), NONE), narrowed(name, kept)
    for case in (one for one in CASES if one["profile"] == name):
        for entries in placements(case, board):
            one, other = (found.suspects(Job(entries))[:3] for found in (whole, short))
            assert [(s.root, round(s.probability, 9)) for s in one] == [(s.root, round(s.probability, 9)) for s in other]


def test_every_case_of_the_collection_is_played_or_left_out_with_a_reason(shared: Path) -> None:
    cases = tomllib.loads((shared / "reference/real_repairs/cases.toml").read_text("utf-8"))["case"]
    here = [case["id"] for case in CASES] + [one for ids in REPAIRS["left_out"].values() for one in ids]
    assert Counter(here) == Counter(case["id"] for case in cases)
    facts = {case["id"]: case for case in cases}
    for case in CASES:
        assert case["observations"] == facts[case["id"]]["observations"]
        assert set(case["found"]) <= {found["class"] for found in facts[case["id"]]["found"]}


def test_complaints_of_owners_mean_the_state_of_their_class(outside_check: Any) -> None:
    """60 gists. The phrase table was written with the classes known, so this shows its coverage more than its foresight."""
    missed = [gist for gist, row in GISTS["gist"].items() if state_of(gist) != GISTS["state"][row["class"]]]
    weight = sum(GISTS["gist"][gist]["count"] for gist in missed) / sum(row["count"] for row in GISTS["gist"].values())
    rate = 1.0 - len(missed) / len(GISTS["gist"])
    outside_check.told.append(f"complaint phrases, English gists: {rate:.1%} of {len(GISTS['gist'])} understood; "
                              f"missed, with {weight:.1%} of the records: {missed or 'none'}")
    outside_check.at_least("complaint phrases, English gists", SOURCE, rate, 0.9)


def test_complaints_in_other_languages_mean_the_same(outside_check: Any) -> None:
    """German, French, Spanish and Dutch sentences of our own; common practice, no source."""
    said = [(words, state) for state, rows in GISTS["said"].items() for words in rows]
    missed = [(words, state, state_of(words)) for words, state in said if state_of(words) != state]
    outside_check.told.append(f"complaint phrases, German, French, Spanish, Dutch (own sentences): {len(said) - len(missed)} of "
                              f"{len(said)} understood; missed: {missed or 'none'}")
    assert len(missed) <= 0.15 * len(said)


def test_complaints_of_the_played_cases_mean_the_state_that_was_entered(outside_check: Any) -> None:
    """The complaints of the cases, whose wording the phrase table does not know; not counted are those that tell none
    and those whose state was seen at the bench."""
    told = [(case["complaint"], case["entered"][0]) for case in CASES
            if case["entered"][0] in STATES and case["complaint"] != "not stated" and "state_from" not in case]
    understood = [(words, state, state_of(words)) for words, state in told if state_of(words)]
    wrong = [row for row in understood if row[1] != row[2]]
    outside_check.told.append(f"complaints of the played cases: {len(understood)} of {len(told)} tell a state, {len(wrong)} of "
                              f"them another one than was entered: {wrong or 'none'}")
    assert len(understood) >= 0.6 * len(told) and len(wrong) <= 0.15 * len(understood)
