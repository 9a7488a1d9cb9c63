"""A board from its label, step by step: proposed, estimated, overwritten, kept on the disk with every change."""

import pytest

from triage.board.profile import load_profile
from triage.errors import EntryError, ProfileError, QuantityError
from triage.job.bench import Bench
from triage.job.draft import Draft, profiles_folder

SEEN = ("1 transistor", "no optocoupler", "no regulator")
LABEL = ("ringing_choke_zener", "220-240 V~ 50 Hz", "5 V", "0.6 A", "II", SEEN, "harbour radio cube")


@pytest.fixture
def draft(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path))
    made = Draft()
    made.estimate(*LABEL)
    return made


def value_of(view, ref, key):
    part = next(one for one in view.parts if one.ref == ref)
    return next(one for one in part.values if one.key == key)


def test_one_transistor_and_no_optocoupler_is_the_zener_regulated_cube():
    """Common practice, no source: such a cube of 3 W is a self-oscillating flyback regulated on the primary side."""
    found = Draft().families("5", "0.6", SEEN)
    assert found[0].family == "ringing_choke_zener" and found[0].chance > 0.5
    assert sum(one.chance for one in found) == pytest.approx(1.0)


def test_families_are_told_without_a_label():
    assert Draft().families("", "", ("iron transformer", "regulator"))[0].family == "linear_regulated"


@pytest.mark.parametrize(
    ("at", "text", "error"),
    [
        (1, "mains", QuantityError),
        (2, "5 ohm", QuantityError),
        (3, "500 A", ProfileError),
        (4, "III", EntryError),
        (5, ("fuse box",), EntryError),
    ],
)
def test_slips_on_the_label_are_named(at, text, error):
    label = list(LABEL)
    label[at] = text
    with pytest.raises(error) as found:
        Draft().estimate(*label)
    assert len(str(found.value).splitlines()) == 1


def test_each_estimate_has_a_range_and_a_reason(draft):
    view = draft.view()
    estimated = [one for part in view.parts for one in part.values if one.known == "estimated"]
    assert len(estimated) > 30 and view.known == 0
    assert all(one.low < one.value < one.high and one.reason for one in estimated)


def test_marking_takes_the_place_of_the_estimate(draft):
    """MJE13003: 700 V collector-base, 400 V collector-emitter, as its data sheet says (part_catalog)."""
    view = draft.mark("Q1", "MJE13003")
    part = next(one for one in view.parts if one.ref == "Q1")
    assert part.type == "MJE13003" and part.origin == "marking" and view.known == 1
    assert value_of(view, "Q1", "voltage").value == 700.0


def test_half_read_marking_names_the_nearest(draft):
    with pytest.raises(EntryError, match="13003"):
        draft.mark("Q1", "E1300")


def test_value_code_is_read(draft):
    """IEC 60062: 104 stands for 10 and four noughts of picofarads."""
    view = draft.mark("C3", "103K")
    assert value_of(view, "C3", "capacitance").value == pytest.approx(10e-9)


def test_main_value_in_full_is_as_good_as_a_code(draft):
    view = draft.mark("RF1", "10R")
    assert value_of(view, "RF1", "resistance").known == "marking" and value_of(view, "RF1", "resistance").value == 10.0
    assert value_of(draft.mark("DZ1", "5V1"), "DZ1", "zener_voltage").value == pytest.approx(5.1)
    with pytest.raises(EntryError, match="marking of Q1"):
        draft.mark("Q1", "99")


def test_printed_and_measured_values_narrow_the_range(draft):
    wide = value_of(draft.view(), "C1", "capacitance")
    printed = value_of(draft.set("C1", "capacitance", "10u"), "C1", "capacitance")
    assert (printed.known, printed.value) == ("marking", pytest.approx(10e-6))
    assert printed.high / printed.low < wide.high / wide.low
    measured = value_of(draft.set("R3", "resistance", "2k2", measured=True), "R3", "resistance")
    assert measured.known == "measured" and measured.high / measured.value == pytest.approx(1.03)
    assert value_of(draft.set("C1", "voltage", "350V"), "C1", "voltage").value == 350.0


def test_turns_are_held_against_the_rest(draft):
    view = draft.turns("T1", {"primary": "120", "secondary": "8"})
    assert value_of(view, "T1", "primary_turns").value == 120.0
    assert any(not one.fits for one in view.checks), "120 turns on the usual core of 3 W saturate it"
    better = draft.turns("T1", {}, "40")
    assert sum(one.fits for one in better.checks) > sum(one.fits for one in view.checks)


def test_parts_are_struck_out_and_added_and_that_is_taken_back(draft):
    before = draft.view()
    draft.strike("LED1")
    view = draft.add("varistor", {"a": "mains_l", "b": "pgnd"})
    assert "RV1" in {one.ref for one in view.parts} and "LED1" not in {one.ref for one in view.parts}
    draft.undo()
    assert draft.undo().parts == before.parts
    with pytest.raises(EntryError):
        draft.undo()


def test_every_change_is_on_the_disk_before_it_is_shown(draft):
    path = draft.keep()
    assert path.parent == profiles_folder() and path.stem == "harbour-radio-cube"
    draft.mark("Q1", "MJE13003")
    assert load_profile(str(path)).part("Q1").type == "MJE13003"
    draft.undo()
    assert load_profile(str(path)).part("Q1").type == ""
    again = Draft.open(path)
    again.strike("LED1")
    assert [part.ref for part in load_profile(str(path)).parts] == [part.ref for part in again.board.parts]


def test_change_that_cannot_be_written_is_not_made(draft, monkeypatch):
    path = draft.keep()
    monkeypatch.setattr("os.replace", lambda *_: (_ for _ in ()).throw(OSError(28, "No space left on device")))
    with pytest.raises(ProfileError, match="No space left"):
        draft.strike("LED1")
    monkeypatch.undo()
    assert "LED1" in {one.ref for one in draft.view().parts}
    assert "LED1" in {part.ref for part in load_profile(str(path)).parts}


def test_two_boards_of_one_name_get_two_files(draft):
    other = Draft()
    other.estimate(*LABEL)
    assert draft.keep() != other.keep()


def test_job_begins_on_the_profile(draft, tmp_path):
    path = draft.keep()
    with Bench.create(path, tmp_path / "job.toml") as bench:
        assert bench.view().title == "harbour radio cube"
        assert bench.view().drawing
