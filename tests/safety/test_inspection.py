"""The guided look: every answer has a verdict, a source and the sign the diagnosis takes."""

import pytest

from tests.safety.boards import brick, charger, iron
from triage.board.evidence import SIGNS, Sign
from triage.safety import inspection
from triage.safety.gate import LOOKS
from triage.safety.limits import table


def keys(board, dismantled=False):
    return {item.key for item in inspection.items(board, dismantled)}


def test_only_what_the_board_has_is_asked() -> None:
    assert {"varistor", "safety capacitors", "under optocoupler"} <= keys(brick())
    assert not {"varistor", "safety capacitors", "under optocoupler"} & keys(charger())
    assert "fuse" not in keys(iron())


def test_a_dismantled_transformer_asks_for_its_windings() -> None:
    assert {"tape layers", "winding margin", "winding order", "lead sleeves"} == keys(brick(), True) - keys(brick())


def test_looks_come_before_the_meter_and_distances_need_a_discharged_board() -> None:
    needed = inspection.looks_needed(brick())
    for item in inspection.items(brick()):
        assert (item.key in needed) is not item.touch
        assert bool(item.answers) is not bool(item.unit)


def test_every_answer_leads_to_a_finding_of_known_verdict_and_sign() -> None:
    for item in inspection.items(brick(), True):
        for answer in item.answers:
            found = inspection.judge(brick(), item.key, answer, item.refs[0] if item.refs else "")
            assert found.verdict in inspection.VERDICTS
            assert found.verdict in LOOKS
            assert found.source.document
            assert all(sign.sign in SIGNS for sign in found.signs)


def test_every_question_has_a_sound_answer_and_all_verdicts_occur() -> None:
    rows = [row for row in table("inspection")["item"] if "answers" in row]
    assert all(row["answers"][0]["key"] == "sound" for row in rows)
    assert {a["verdict"] for row in rows for a in row["answers"]} == set(inspection.VERDICTS)


def test_a_bulged_capacitor_is_a_sign_at_that_part() -> None:
    found = inspection.judge(charger(), "capacitors", "bulging", "C5")
    assert found.signs == (Sign("bulging", "C5"),)
    assert found.verdict == "doubtful"


def test_sound_capacitors_are_told_one_by_one() -> None:
    assert inspection.judge(charger(), "capacitors", "sound").signs == (Sign("sound", "C1"), Sign("sound", "C5"))


@pytest.mark.parametrize(
    ("item", "millimetres", "verdict"),
    [
        ("barrier creepage", 3.0, "veto"),
        ("barrier creepage", 5.05, "doubtful"),
        ("barrier creepage", 4.95, "doubtful"),
        ("barrier creepage", 5.5, "sound"),
        ("barrier creepage", 8.0, "sound"),
        ("barrier clearance", 3.5, "veto"),
        ("barrier clearance", 4.5, "sound"),
        ("poles", 2.0, "veto"),
        ("poles", 3.0, "sound"),
        ("lead sleeves", 0.1, "veto"),
    ],
)
def test_distances_against_the_barrier_with_the_callipers_uncertainty(item, millimetres, verdict) -> None:
    """Marked 2014: IEC 60950-1, 4.0 mm and 5.0 mm reinforced, 2.5 mm functional (tables 2K, 2N)."""
    assert inspection.judge(charger(2014), item, millimetres * 1e-3).verdict == verdict


def test_sound_but_short_distance_names_what_to_keep_after_rework() -> None:
    assert "after rework keep 6 mm" in inspection.judge(charger(2014), "barrier creepage", 5.5e-3).text
    assert "rework" not in inspection.judge(charger(2014), "barrier creepage", 8e-3).text


@pytest.mark.parametrize(("layers", "verdict"), [(0, "veto"), (1, "veto"), (2, "doubtful"), (3, "sound")])
def test_tape_layers(layers, verdict) -> None:
    assert inspection.judge(brick(), "tape layers", layers).verdict == verdict


@pytest.mark.parametrize(
    ("key", "answer", "ref"),
    [
        ("capacitors", "sad", ""),
        ("nothing", "sound", ""),
        ("capacitors", "bulging", "C99"),
        ("barrier creepage", "wide", ""),
        ("barrier creepage", -1.0, ""),
        ("barrier creepage", float("nan"), ""),
    ],
)
def test_answers_that_do_not_belong_are_refused_with_the_choices(key, answer, ref) -> None:
    with pytest.raises(inspection.InspectionError, match="expected"):
        inspection.judge(charger(), key, answer, ref)


def test_a_wrong_fuse_forbids_power_and_says_why() -> None:
    assert inspection.judge_fuse("T2AH250V", "T2AH250V").verdict == "sound"
    wrong = inspection.judge_fuse("F2AL250V", "T2AH250V")
    assert wrong.verdict == "restorable"
    assert wrong.text == "speed F is not T; breaks 35 A, not 1500 A"


def test_a_capacitor_of_lesser_class_forbids_power() -> None:
    assert inspection.judge_capacitor_class("Y1", "Y2").verdict == "sound"
    wrong = inspection.judge_capacitor_class("X2", "Y1")
    assert (wrong.verdict, wrong.text) == ("restorable", "X2 must not stand in for Y1")
    assert "60384-14" in str(wrong.source)
