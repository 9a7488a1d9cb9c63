"""The log: what counts after takings-back, and what is refused."""

import pytest

from tests.job.samples import TIME, log, reading
from triage.board.evidence import Reading, Sign, Symptom
from triage.board.probe import Probe
from triage.errors import EntryError, JobError
from triage.job.entries import KINDS, entry_from_dict, entry_to_dict, last_standing, make_entry, replay

PROBE = Probe("ohms", "x", "y", "cold")


def test_an_entry_taken_back_is_no_evidence_but_stays_in_the_log() -> None:
    state = replay(tuple(log())[:-2])
    assert state.told == (Symptom("dead", "full"), Sign("sound", ""), Reading(PROBE, 0.1 + 0.2))
    assert state.told_numbers == (1, 3, 6)
    assert state.skips == (Probe("esr", "x", "y", "cold"),)
    assert state.undone == {5}


def test_a_repair_that_did_not_cure_stands_between_the_readings_of_the_old_and_the_new_board() -> None:
    trial = (*log()[:-1], reading(7.0))
    assert replay(trial).told == replay(tuple(log())[:-2]).told, "the trial is still open"
    state = replay((*trial, log()[-1], reading(8.0)))
    assert state.told[3:] == (frozenset({"R1"}), Reading(PROBE, 7.0), Reading(PROBE, 8.0))
    assert state.repaired == "still faulty" and state.skips == ()


def test_readings_after_a_cure_say_nothing_about_the_fault() -> None:
    cured = make_entry("repaired", TIME, result="works")
    assert replay((*log()[:-1], cured, reading(7.0))).told == replay(tuple(log())[:-2]).told


def test_an_adapter_that_comes_back_opens_the_job_again() -> None:
    entries = (
        *log()[:-1],
        make_entry("repaired", TIME, result="works"),
        make_entry("closed", TIME, verdict="repaired"),
    )
    assert replay(entries).closed == "repaired"
    state = replay((*entries, make_entry("returned", TIME, reason="dead again after a week")))
    assert state.closed == "" and state.returned == 1
    assert state.told[-1] == frozenset({"R1"})


def test_a_retest_counts_for_the_parts_fitted_before_it_only() -> None:
    line = make_entry("retest", TIME, check="output", result="pass", counts_as="pass")
    later = make_entry("fitted", TIME, ref="C2", type="22u 25V")
    assert replay((*log(), line)).retests == (("output", "pass"),)
    assert replay((*log(), line, later)).retests == ()
    assert replay((*log(), later)).fitted == (("R1", "metal film 4k7"), ("C2", "22u 25V"))


def test_undo_reaches_back_past_earlier_undos() -> None:
    entries = [reading(1.0), reading(2.0), reading(3.0)]
    for expected in (3, 2, 1):
        number = last_standing(tuple(entries))
        assert number == expected
        entries.append(make_entry("undo", TIME, entry=number))
    assert last_standing(tuple(entries)) is None
    assert replay(tuple(entries)).told == ()


def test_undo_of_a_later_or_absent_entry_changes_nothing() -> None:
    entries = (reading(1.0), make_entry("undo", TIME, entry=9), make_entry("undo", TIME, entry=0))
    assert len(replay(entries).told) == 1


@pytest.mark.parametrize("number", range(len(log())))
def test_an_entry_survives_the_way_through_a_table(number: int) -> None:
    entry = log()[number]
    assert entry_from_dict(entry_to_dict(entry), "job") == entry


SAID = {"kind": "reading", "function": "ohms", "plus": "x", "minus": "y", "condition": "cold", "value": 1.0}


@pytest.mark.parametrize(
    ("said", "key"),
    [
        ({**SAID, "value": None}, "value"),
        ({**SAID, "value": True}, "value"),
        ({**SAID, "condition": "hot"}, "condition"),
        ({**SAID, "function": 7}, "function"),
        ({"kind": "complaint", "state": "kaputt", "condition": "full"}, "state"),
        ({"kind": "undo", "entry": 1.5}, "entry"),
        ({"kind": "retest", "check": "output", "result": "yes", "counts_as": "pass"}, "result"),
        ({"kind": "power", "on": "yes"}, "on"),
        ({"kind": "note", "note": "x" * 2001}, "note"),
        ({"kind": "spell"}, "kind"),
        ({"kind": ["reading"]}, "kind"),
    ],
)
def test_a_wrong_entry_is_refused_by_the_key_that_is_wrong(said: dict[str, object], key: str) -> None:
    with pytest.raises(JobError) as caught:
        entry_from_dict({"time": TIME, **said}, "job.toml, entry 3")
    assert caught.value.where.startswith("job.toml, entry 3") and caught.value.where.endswith(key)
    assert "\n" not in str(caught.value)


def test_an_entry_made_here_is_refused_as_an_entry() -> None:
    with pytest.raises(EntryError, match="state"):
        make_entry("complaint", TIME, state="kaputt", condition="full")


def test_nan_is_no_reading() -> None:
    with pytest.raises(EntryError, match="value"):
        reading(float("nan"))


def test_every_kind_has_a_rule_for_each_of_its_keys() -> None:
    assert {"complaint", "sign", "reading", "skip", "undo", "hunch", "acknowledge", "fitted"} <= set(KINDS)
    assert all(rules for rules in KINDS.values())
