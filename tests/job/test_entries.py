"""The log: what counts after takings-back, and what is refused."""

import pytest

from tests.job.samples import TIME, log, reading
from triage.board.evidence import Reading, Sign, Symptom
from triage.board.probe import Probe
from triage.errors import EntryError, JobError
from triage.job.entries import KINDS, entry_from_dict, entry_to_dict, last_standing, make_entry, replay


def test_an_entry_taken_back_is_no_evidence_but_stays_in_the_log() -> None:
    entries = tuple(log())
    state = replay(entries)
    probe = Probe("ohms", "x", "y", "cold")
    assert state.evidence == (Symptom("dead", "full"), Sign("sound", ""), Reading(probe, 0.1 + 0.2))
    assert state.evidence_numbers == (1, 3, 6)
    assert state.undone == {5}
    assert len(entries) == len(log())


def test_what_was_fitted_when_it_was_still_faulty_is_remembered() -> None:
    later = make_entry("fitted", TIME, ref="C2", type="22u 25V")
    state = replay((*log(), later))
    assert state.failed_repairs == (frozenset({"R1"}),)
    assert state.fitted == (("R1", "metal film 4k7"), ("C2", "22u 25V"))


def test_undo_reaches_back_past_earlier_undos() -> None:
    entries = [reading(1.0), reading(2.0), reading(3.0)]
    for expected in (3, 2, 1):
        number = last_standing(tuple(entries))
        assert number == expected
        entries.append(make_entry("undo", TIME, entry=number))
    assert last_standing(tuple(entries)) is None
    assert replay(tuple(entries)).evidence == ()


def test_undo_of_a_later_or_absent_entry_changes_nothing() -> None:
    entries = (reading(1.0), make_entry("undo", TIME, entry=9), make_entry("undo", TIME, entry=0))
    assert len(replay(entries).evidence) == 1


@pytest.mark.parametrize("number", range(len(log())))
def test_an_entry_survives_the_way_through_a_table(number: int) -> None:
    entry = log()[number]
    assert entry_from_dict(entry_to_dict(entry), "job") == entry


PROBE = {"kind": "reading", "function": "ohms", "plus": "x", "minus": "y", "condition": "cold", "value": 1.0}


@pytest.mark.parametrize(
    ("said", "key"),
    [
        ({**PROBE, "value": None}, "value"),
        ({**PROBE, "value": True}, "value"),
        ({**PROBE, "condition": "hot"}, "condition"),
        ({**PROBE, "function": 7}, "function"),
        ({"kind": "complaint", "state": "kaputt", "condition": "full"}, "state"),
        ({"kind": "undo", "entry": 1.5}, "entry"),
        ({"kind": "retest", "check": "output", "result": "yes"}, "result"),
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
