"""The owner's words at intake: states in, states out; odd input."""

import pytest

from triage.board.evidence import STATES
from triage.errors import EntryError
from triage.job.complaint_words import meanings, phrases, state_of


@pytest.mark.parametrize("state", STATES)
def test_every_state_but_the_bare_ones_can_be_said(state: str) -> None:
    assert any(said == state for _, said in phrases())
    for phrase, said in phrases():
        if said == state:
            assert meanings(phrase)[0].likeness > 95 and state_of(phrase) == state, phrase


@pytest.mark.parametrize("words", ["", "   ", "???", "\x1b[31m", "xyzzy plugh", "q" * 100_000, "[bold]"])
def test_what_is_no_complaint_means_nothing(words: str) -> None:
    assert state_of(words) == ""


def test_broken_alone_tells_no_state() -> None:
    assert state_of("it is broken") == "" and meanings("it is broken")[0].state == ""


def test_other_possible_states_follow_the_likeliest() -> None:
    found = meanings("lamp blinks and hums")
    assert {one.state for one in found} >= {"pulsing", "hum or ripple"}
    assert [one.likeness for one in found] == sorted((one.likeness for one in found), reverse=True)


def test_a_table_with_an_unknown_state_is_refused(tmp_path) -> None:
    path = tmp_path / "words.toml"
    path.write_text('[says]\n"sad" = ["weeps"]\n', "utf-8")
    with pytest.raises(EntryError, match="sad"):
        phrases(path)
