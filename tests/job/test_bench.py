"""One job from the complaint to the closed file, on the stand-in for the computing rooms."""

import subprocess
import sys
from pathlib import Path

import pytest

from tests.job.stand_in import PROFILE, Clock, StandIn
from triage.board.fault import Fault
from triage.errors import EntryError, GateError, JobError, ProfileError, QuantityError
from triage.job.bench import Bench
from triage.job.views import JobView
from triage.safety.inspection import InspectionError

RETEST = {"insulation": "200 Mohm", "output no load": "5.1 V", "output half load": "5.0 V", "output full load": "5.0 V"}


@pytest.fixture
def bench(tmp_path: Path) -> Bench:
    return new_bench(tmp_path / "cube.toml")


def new_bench(path: Path, clock: Clock | None = None) -> Bench:
    bench = Bench.create(PROFILE, path, StandIn(), clock or Clock())
    bench.prepare()
    return bench


def discharge(bench: Bench) -> JobView:
    return bench.read("volts_dc", "bulk", "pgnd", "cold", "0.3")


def through_cautions(bench: Bench) -> JobView:
    bench.acknowledge("all")
    bench.see("sound")
    return discharge(bench)


def answer(bench: Bench, view: JobView, truth: dict[str, str], limit: int = 20) -> JobView:
    """Play the technician: answer each suggested reading until there is none."""
    while view.suggestion is not None and limit:
        one = view.suggestion
        text = truth.get(f"{one.function} {one.plus} {one.minus}", "1.2M" if one.function == "ohms" else "0.55")
        view = bench.read(one.function, one.plus, one.minus, one.condition, text)
        limit -= 1
    return view


def test_before_anything_is_computed_the_cautions_and_then_the_bulk_reading_are_there(tmp_path: Path) -> None:
    bench = Bench.create(PROFILE, tmp_path / "cube.toml", StandIn(), Clock())
    view = bench.view()
    assert view.computing and view.stage == "cautions" and view.cautions
    assert view.suggestion is None and view.waits_for[0].startswith("acknowledge")
    view = bench.acknowledge("all")
    assert view.computing and view.suggestion is not None
    assert (view.suggestion.function, view.suggestion.condition) == ("volts_dc", "cold")
    assert view.suspects == ()


def test_one_fault_is_found_by_the_suggested_readings(bench: Bench) -> None:
    bench.complain("Does nothing at all", "dead", "full")
    through_cautions(bench)
    view = answer(bench, bench.view(), {"ohms mains_l rect": "OL"})
    assert view.verdict.status == "found"
    assert (view.verdict.ref, view.verdict.mode, view.verdict.repair) == ("RF1", "open", ("RF1",))
    assert view.verdict.evidence and view.stage == "repair"
    assert abs(sum(suspect.probability for suspect in view.suspects) - 1.0) < 1e-9


def test_the_verdict_names_the_stress_that_explains_it(bench: Bench) -> None:
    bench.complain("dead", "dead", "full")
    through_cautions(bench)
    view = bench.suspect("r1")
    worst = next(suspect for suspect in view.suspects if suspect.ref == "R1")
    assert "peak voltage 358 V" in worst.stress and "over rating" in worst.stress
    assert next(suspect for suspect in view.suspects if suspect.ref == "RF1").stress == ""


def test_reopened_it_believes_the_same_to_the_last_digit(bench: Bench) -> None:
    bench.complain("dead", "dead", "full")
    through_cautions(bench)
    bench.skip("ohms", "bulk", "pgnd", "cold", "cannot reach")
    bench.read("ohms", "mains_l", "rect", "cold", "10R4")
    before = bench.undo()
    bench.release()
    again = Bench.open(bench.path, StandIn(), Clock("2026-01-31T20:00:00"))
    again.prepare()
    after = again.view()
    assert after.suspects == before.suspects
    assert after.suggestion == before.suggestion
    assert after.verdict == before.verdict
    assert after.entries == before.entries and after.stage == before.stage


def test_no_live_reading_is_suggested_or_taken_before_everything_that_power_asks_for(bench: Bench) -> None:
    bench.complain("hums", "hum or ripple", "full")
    view = discharge(bench)
    assert view.suggestion is None, "the cautions are not acknowledged"
    assert view.waits_for and "acknowledge" in view.waits_for[0]
    assert bench.view().message.startswith("readings wait: first acknowledge")
    for key in sorted(bench.rules.start.cautions_cold):
        view = bench.acknowledge(key)
    while view.suggestion is not None:
        one = view.suggestion
        assert one.condition == "cold", "the cautions before power are not acknowledged"
        view = bench.skip(one.function, one.plus, one.minus, one.condition, "no clip")
    assert "live readings wait" in bench.view().message
    with pytest.raises(GateError, match="acknowledge"):
        bench.read("volts_dc", "out", "sgnd", "noload", "4.6")
    with pytest.raises(GateError):
        bench.power(True)
    bench.acknowledge("all")
    view = bench.see("sound")
    while view.suggestion is not None and view.suggestion.condition == "cold":
        one = view.suggestion
        view = bench.read(one.function, one.plus, one.minus, one.condition, "1M")
    assert view.suggestion is not None and view.suggestion.condition == "noload"
    view = bench.read("volts_dc", "out", "sgnd", "noload", "4.6")
    assert view.suspects[0].ref == "C5"
    assert "NOT safe" in view.safe_to_touch


def test_a_look_says_what_it_means_and_becomes_evidence(bench: Bench) -> None:
    bench.acknowledge("all")
    view = bench.look("capacitors", "bulging", "c5")
    assert next(one for one in view.looks if one.key == "capacitors").said == "doubtful"
    assert view.entries[-1].text == "bulging at C5"
    assert view.suspects[0].ref == "C5"
    with pytest.raises(InspectionError, match="leaking"):
        bench.look("capacitors", "sad")


def test_carbon_across_the_barrier_forbids_the_repair(bench: Bench) -> None:
    through_cautions(bench)
    bench.look("board", "charred across barrier")
    with pytest.raises(GateError, match="veto on board"):
        bench.fit("R1", "high-voltage film 500 V")
    assert bench.close("scrapped").stage == "closed"


def test_a_charged_bulk_capacitor_is_asked_for_again(bench: Bench) -> None:
    bench.acknowledge("all")
    view = bench.read("volts_dc", "pgnd", "bulk", "cold", "-310")
    assert view.suggestion is not None and view.suggestion.function == "volts_dc"
    assert "discharge" in view.safe_to_touch
    with pytest.raises(GateError, match="cannot be skipped"):
        bench.skip("volts_dc", "bulk", "pgnd", "cold", "in a hurry")
    assert discharge(bench).safe_to_touch.startswith("safe")


def test_a_reading_entered_before_its_time_is_recorded_and_the_caution_shown(bench: Bench) -> None:
    view = bench.read("ohms", "rect", "mains_l", "cold", "10R")
    assert view.entries[-1].text.startswith("resistance rect to mains_l")
    assert "CAUTION" in view.message and "acknowledge" in view.message
    view = bench.read("volts_dc", "bulk", "pgnd", "cold", "0.1")
    assert "CAUTION" in view.message, "the bulk capacitor too is read with the cautions known"
    bench.acknowledge("all")
    assert "CAUTION" not in bench.read("ohms", "rect", "mains_l", "cold", "10R").message
    bench.read("volts_dc", "bulk", "pgnd", "cold", "310")
    assert "discharge the bulk" in bench.read("ohms", "rect", "mains_l", "cold", "10R").message


POWERING = {
    "power": lambda bench: bench.power(True),
    "live reading": lambda bench: bench.read("volts_dc", "out", "sgnd", "noload", "4.6"),
    "live retest": lambda bench: bench.retest("output no load", "5.1 V"),
}


@pytest.mark.parametrize("entered", POWERING)
def test_taking_back_what_powered_the_board_does_not_make_it_unpowered(bench: Bench, entered: str) -> None:
    through_cautions(bench)
    if entered == "live retest":
        bench.fit("R1", "high-voltage film 500 V")
        for key in sorted(bench.rules.start.before_power):
            bench.retest(key, "yes" if key == "visual" else RETEST[key])
    for check in bench.rules.checks:
        bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "1M")
    assert bench.view().safe_to_touch.startswith("safe")
    POWERING[entered](bench)
    view = bench.undo()
    assert view.entries[-2].undone
    assert view.safe_to_touch.startswith("NOT safe to touch: unplug and read the bulk voltage")
    with pytest.raises(GateError, match="bulk voltage"):
        bench.power(True)
    view = discharge(bench)
    assert view.safe_to_touch.startswith("safe")
    view = bench.undo()
    assert view.safe_to_touch.startswith("NOT safe"), "without that reading it is unknown again"


def test_an_empty_capacitor_read_before_a_charged_one_does_not_count_once_that_is_taken_back(bench: Bench) -> None:
    through_cautions(bench)
    bench.read("volts_dc", "bulk", "pgnd", "cold", "310")
    view = bench.undo()
    assert view.safe_to_touch.startswith("NOT safe to touch: unplug and read")


@pytest.mark.parametrize("verdict", ["repaired", "Repaired, burnt in over night", " REPAIRED ", "works again", "fixed"])
def test_no_wording_closes_it_as_repaired_without_the_retest(bench: Bench, verdict: str) -> None:
    through_cautions(bench)
    bench.fit("R1", "high-voltage film 500 V")
    with pytest.raises(GateError, match="close as repaired"):
        bench.close(verdict)


def test_a_repair_that_did_not_cure_is_powered_only_after_the_lines_before_power(bench: Bench) -> None:
    """The first power-up of a board with a new part in it, whatever the repair led to."""
    through_cautions(bench)
    bench.fit("R1", "high-voltage film 500 V")
    bench.repaired("still faulty")
    for check in bench.rules.checks:
        bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "1M")
    with pytest.raises(GateError, match="retest insulation, visual"):
        bench.power(True)
    bench.retest("visual", "yes")
    bench.retest("insulation", "200 Mohm")
    assert "NOT safe" in bench.power(True).safe_to_touch


def test_an_adapter_that_comes_back_is_looked_at_and_measured_anew(bench: Bench) -> None:
    through_cautions(bench)
    bench.close("no fault found")
    view = bench.returned("dead on the same evening")
    assert view.stage == "cautions" and view.safe_to_touch.startswith("NOT safe")
    assert not any(look.said for look in view.looks)


def test_what_is_measured_at_the_board_waits_for_the_discharge(bench: Bench) -> None:
    bench.acknowledge("all")
    touched = next(look for look in bench.view().looks if not look.needed)
    with pytest.raises(GateError, match="bulk voltage"):
        bench.look(touched.key, touched.answers[0] if touched.answers else "7 mm" if touched.unit == "m" else "3")


def test_acknowledgements_and_discharge_expire_with_the_day(tmp_path: Path) -> None:
    bench = new_bench(tmp_path / "cube.toml")
    view = through_cautions(bench)
    assert all(caution.acknowledged for caution in view.cautions)
    bench.release()
    next_day = Bench.open(bench.path, StandIn(), Clock("2026-02-01T08:00:00"))
    view = next_day.view()
    assert not any(caution.acknowledged for caution in view.cautions)
    assert view.safe_to_touch.startswith("NOT")


def test_a_short_is_looked_for_before_power(bench: Bench) -> None:
    bench.complain("hums", "hum or ripple", "full")
    through_cautions(bench)
    check = next(check for check in bench.rules.checks if Fault("Q1", "ce_short") in check.faults)
    view = bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "0.1")
    assert any("repair the short" in text for text in view.waits_for)
    with pytest.raises(GateError, match="short"):
        bench.read("volts_dc", "out", "sgnd", "noload", "4.6")


def test_fitting_asks_the_hard_rules_and_changes_the_stresses(bench: Bench) -> None:
    through_cautions(bench)
    with pytest.raises(EntryError, match="250 V is below 447 V"):
        bench.fit("R1", "carbon film 250 V")
    before = bench.stresses()[0]
    assert bench.what_if("R1", "high-voltage film 500 V")[0].rating == 500.0
    assert bench.stresses()[0] == before, "what-if records nothing"
    bench.fit("R1", "high-voltage film 500 V")
    assert bench.stresses()[0].rating == 500.0 and bench.stresses_before()[0] == before


def test_a_repair_that_did_not_cure_turns_the_suspicion_away_from_the_new_part(bench: Bench) -> None:
    bench.complain("dead", "dead", "full")
    through_cautions(bench)
    bench.suspect("R1")
    was = {one.ref: one.probability for one in bench.view().suspects}
    bench.fit("R1", "high-voltage film 500 V")
    view = bench.repaired("still faulty")
    now = {one.ref: one.probability for one in view.suspects}
    assert now["R1"] < 0.2 * was["R1"] and view.stage in ("cold", "live")


def test_a_job_is_closed_as_repaired_only_after_its_retest(bench: Bench) -> None:
    through_cautions(bench)
    bench.fit("R1", "high-voltage film 500 V")
    bench.repaired("works")
    with pytest.raises(GateError, match="retest"):
        bench.close("repaired")
    for check in bench.rules.checks:
        bench.read("ohms", check.probe.plus, check.probe.minus, "cold", "1M")
    view = bench.view()
    for line in view.retest:
        if line.required and line.condition == "cold":
            discharge(bench)
        if line.required:
            view = bench.retest(line.key, "yes" if line.function == "look" else RETEST[line.key])
    assert {line.result for line in view.retest if line.required} == {"pass"}
    bench.power(False)
    view = bench.close("repaired")
    assert view.stage == "closed" and view.suggestion is None
    with pytest.raises(GateError, match="closed"):
        bench.complain("again", "dead", "full")
    assert bench.returned("dead after a week").stage != "closed"


def test_a_retest_that_fails_keeps_the_job_from_being_closed_as_repaired(bench: Bench) -> None:
    through_cautions(bench)
    bench.fit("R1", "high-voltage film 500 V")
    view = bench.retest("insulation", "0.1 Mohm")
    assert next(line for line in view.retest if line.key == "insulation").result == "fail"
    with pytest.raises(GateError, match="insulation"):
        bench.close("repaired")


def test_it_can_always_be_closed_without_repair(bench: Bench) -> None:
    assert bench.close("scrapped").stage == "closed"


def test_a_second_session_sees_the_job_but_cannot_enter(bench: Bench) -> None:
    second = Bench.open(bench.path, StandIn(), Clock())
    assert "in use by" in second.view().read_only
    with pytest.raises(JobError, match="nothing can be entered"):
        second.note("mine")
    bench.release()
    third = Bench.open(bench.path, StandIn(), Clock())
    assert third.read_only == ""


CUT_OFF = """
import os, pathlib, sys
from tests.job.stand_in import PROFILE, StandIn
from triage.job.bench import Bench
bench = Bench.create(PROFILE, pathlib.Path(sys.argv[1]), StandIn())
bench.note("the last thing accepted")
os.kill(os.getpid(), 9)
"""


def test_after_a_session_was_cut_off_the_job_says_so_and_goes_on(tmp_path: Path) -> None:
    path = tmp_path / "cube.toml"
    root = Path(__file__).parents[2]
    done = subprocess.run([sys.executable, "-c", CUT_OFF, str(path)], cwd=root, timeout=60)
    assert done.returncode == -9
    view = Bench.open(path, StandIn(), Clock()).view()
    assert view.read_only == "" and "was cut off" in view.message
    assert view.entries[-1].text == "note: the last thing accepted"


def test_a_session_that_is_put_away_gives_the_job_free(tmp_path: Path) -> None:
    bench = new_bench(tmp_path / "cube.toml")
    del bench
    assert Bench.open(tmp_path / "cube.toml", StandIn(), Clock()).read_only == ""


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("ohm", "bulk", "pgnd", "cold", "1"), "function"),
        (("ohms", "bulk", "pgnd", "warm", "1"), "condition"),
        (("ohms", "x9", "pgnd", "cold", "1"), "node.*mains_l"),
        (("ohms", "bulk", "bulk", "cold", "1"), "two different nodes"),
        (("ohms", "bulk", "pgnd", "full", "1"), "unpowered board only"),
        (("volts_dc", "out", "sgnd", "cold", "1"), "noload, half or full"),
    ],
)
def test_a_reading_that_makes_no_sense_is_refused_by_name(bench: Bench, arguments: tuple[str, ...], message: str) -> None:
    with pytest.raises(EntryError, match=message):
        bench.read(*arguments)  # type: ignore[misc]
    assert bench.job.entries == ()


def test_refused_input_leaves_nothing_in_the_file(bench: Bench) -> None:
    before = bench.path.read_bytes()
    with pytest.raises(QuantityError):
        bench.read("ohms", "bulk", "pgnd", "cold", "4 V")
    with pytest.raises(EntryError, match="R1"):
        bench.suspect("R99")
    with pytest.raises(EntryError, match="take back"):
        bench.undo()
    with pytest.raises(EntryError, match="state"):
        bench.complain("x", "kaputt", "full")
    with pytest.raises(EntryError, match="one of visual"):
        bench.retest("smoke", "yes")
    with pytest.raises(EntryError, match="one of cord"):
        bench.look("smell", "sound")
    with pytest.raises(EntryError, match="caution"):
        bench.acknowledge("nothing")
    with pytest.raises(EntryError, match="fitted"):
        bench.repaired("still faulty")
    assert bench.path.read_bytes() == before


def test_refs_and_nodes_may_be_typed_in_any_case(bench: Bench) -> None:
    view = bench.read("ohms", "MAINS_L", "Rect", "cold", "10")
    assert "mains_l to rect" in view.entries[-1].text


def test_a_profile_that_is_not_there_makes_no_file(tmp_path: Path) -> None:
    with pytest.raises(ProfileError):
        Bench.create("no-such-adapter", tmp_path / "cube.toml", StandIn())
    assert list(tmp_path.iterdir()) == []


def test_the_report_tells_the_job(bench: Bench) -> None:
    bench.complain("Does nothing", "dead", "full")
    through_cautions(bench)
    answer(bench, bench.view(), {"ohms mains_l rect": "OL"})
    bench.fit("R1", "high-voltage film 500 V")
    text = bench.report("text")
    for expected in (
        "Does nothing",
        "RF1 open",
        "high-voltage film 500 V",
        "358 V",
        "not done",
        "4.75 V to 5.25 V",
    ):
        assert expected in text, expected


def test_the_repair_is_weighed_against_a_new_adapter_and_a_veto_bars_it(bench: Bench) -> None:
    bench.complain("Does nothing", "dead", "full")
    through_cautions(bench)
    answer(bench, bench.view(), {"ohms mains_l rect": "OL"})
    design = bench.worth(new_price=500.0)
    assert any("R1 peak voltage" in text for text in design.upgrades)
    assert design.choice == "replace", "a repair that leaves R1 over its rating seldom holds"
    bench.fit("R1", "high-voltage film 500 V")
    assert bench.worth(new_price=500.0).choice == "repair"
    assert bench.worth(new_price=0.5).choice != "repair"
    bench.look("board", "charred across barrier")
    barred = bench.worth(new_price=500.0)
    assert barred.choice == "replace" and barred.vetoes


def test_hostile_words_are_shown_as_text(bench: Bench) -> None:
    view = bench.note("\x1b[2J\u202eevil {0.__class__}")
    assert view.entries[-1].text == "note: <U+001B>[2J<U+202E>evil {0.__class__}"


def test_a_reading_with_one_leg_lifted_is_named_by_the_pins_of_its_part(bench: Bench) -> None:
    through_cautions(bench)
    view = bench.read("ohms", "rf1.A", "RF1.b", "cold", "10.2")
    assert "RF1.a to RF1.b" in view.entries[-1].text
    for plus, minus, condition in (("RF1.a", "bulk", "cold"), ("RF1.a", "R1.b", "cold")):
        with pytest.raises(EntryError, match="both pins of one lifted part"):
            bench.read("ohms", plus, minus, condition, "10")
    with pytest.raises(EntryError, match="both pins of one lifted part"):
        bench.read("volts_dc", "RF1.a", "RF1.b", "full", "10")
    with pytest.raises(EntryError, match=r"REF\.PIN"):
        bench.read("ohms", "RF1.z", "RF1.b", "cold", "10")
