"""The figures that a shop may edit: each fault in their files is named, and what they mean is reckoned by hand."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from tests.diagnosis.small_board import HYPOTHESES, KINDS, PROBES, SIDES, expectations
from triage.board.evidence import SIGNS, STATES, Sign, Symptom
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis import costs as cost_room
from triage.diagnosis.costs import Costs
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.settings import HERE, Settings, instruments
from triage.diagnosis.signs import complaint_likelihood, complaint_table, sign_likelihood, sign_table
from triage.errors import EntryError

SETTINGS, COSTS = Settings.load(), Costs.load()


def changed(folder: Path, name: str, old: str, new: str) -> Path:
    """A copy of a shipped table with something else in one place."""
    text = (HERE / name).read_text("utf-8")
    assert text.count(old) >= 1, old
    path = folder / name
    path.write_text(text.replace(old, new, 1), "utf-8")
    return path


@pytest.mark.parametrize(("name", "old", "new", "load", "said"), [
    ("costs.toml", '"ESR meter" = { owned = true }', "", Costs.load, "ESR meter"),
    ("costs.toml", "ohms = 0.7", "ohms = -0.7", Costs.load, "reading, ohms"),
    ("costs.toml", "ohms = 0.7", "ohms = true", Costs.load, "reading, ohms"),
    ("costs.toml", "primary = 4.0", "primary = 10001", Costs.load, "hazard, primary"),
    ("costs.toml", "open_case = 4.0", "", Costs.load, "setup, open_case"),
    ("costs.toml", "once = 4.0", 'once = "soon"', Costs.load, "repair, once"),
    ("settings.toml", "stop_target = 0.95", "stop_target = 1.5", Settings.load, "stop_target"),
    ("settings.toml", "stop_target = 0.95", "stop_target =", Settings.load, "a readable TOML file"),
    ("instruments.toml", "relative = ", "relative = -", instruments, "relative"),
    ("complaints.toml", '[given."normal"]', '[given."splendid"]', complaint_table, "normal"),
    ("signs.toml", "[at_part.bulging]", "[at_part.bulky]", sign_table, "at_part.bulging"),
])
def test_each_fault_of_a_table_is_named(tmp_path: Path, name: str, old: str, new: str, load: object, said: str) -> None:
    with pytest.raises(EntryError) as told:
        load(changed(tmp_path, name, old, new))  # type: ignore[operator]
    assert said in str(told.value) and str(told.value).count("\n") == 0


def test_a_complaint_table_adds_up_to_one_and_not_to_more(tmp_path: Path) -> None:
    assert complaint_table().sum(axis=1) == pytest.approx(1.0)
    path = tmp_path / "complaints.toml"
    rows = "\n".join(f'"{state}" = {{ dead = 0.7, normal = 0.4 }}' for state in STATES)
    path.write_text(f"inside = {{ dead = 0.5 }}\noutside = {{ dead = 0.5 }}\n[given]\n{rows}\n", "utf-8")
    with pytest.raises(EntryError, match="at most 1"):
        complaint_table(path)
    path.write_text(path.read_text("utf-8").replace("normal = 0.4", "normal = 0.3"), "utf-8")
    table = complaint_table(path)
    assert table[0, STATES.index("dead")] == pytest.approx(0.7) and table[0, STATES.index("normal")] == pytest.approx(0.3)
    left = table[-1, STATES.index("normal")]
    assert left == pytest.approx(0.5 / (len(STATES) - 1)), "what is not told is shared by the states that are not named"


SHAPES = {
    "a hypothesis twice": lambda e: replace(e, hypotheses=(e.hypotheses[0],) * len(e.hypotheses)),
    "a probe twice": lambda e: replace(e, probes=(e.probes[0],) * len(e.probes)),
    "samples of two axes": lambda e: replace(e, samples=e.samples[:, :, 0]),
    "samples of other hypotheses": lambda e: replace(e, samples=e.samples[1:]),
    "samples without draws": lambda e: replace(e, samples=e.samples[:, :, :0]),
    "states of two axes": lambda e: replace(e, states=e.states[:, :, 0]),
    "states of two loads": lambda e: replace(e, states=e.states[:, :2]),
    "states without draws": lambda e: replace(e, states=e.states[:, :, :0]),
    "a state beyond the list": lambda e: replace(e, states=np.full_like(e.states, len(STATES))),
    "a state below unknown": lambda e: replace(e, states=np.full_like(e.states, -2)),
}


@pytest.mark.parametrize("name", SHAPES)
def test_expectations_of_wrong_shape_are_refused(name: str) -> None:
    with pytest.raises(EntryError, match="expectations"):
        SHAPES[name](expectations())


def test_expectations_join_only_what_was_computed_alike() -> None:
    one = expectations()
    pair = Hypothesis(HYPOTHESES[1].root + HYPOTHESES[3].root)
    more = Expectations((pair, HYPOTHESES[1]), one.probes, one.samples[:2], one.states[:2])
    both = one.joined(more)
    assert len(both.hypotheses) == len(HYPOTHESES) + 1, "a hypothesis known already stays as it is"
    assert np.array_equal(both.samples[-1], more.samples[0]) and np.array_equal(both.samples[:-1], one.samples)
    for other in (replace(more, probes=more.probes[::-1]), replace(more, samples=more.samples[:, :, 1:]),
                  replace(more, states=np.repeat(more.states, 2, axis=2))):
        with pytest.raises(EntryError, match="different probes or draws"):
            one.joined(other)


def test_a_reading_costs_what_its_place_is_worth() -> None:
    """No danger unpowered; at the plug no probe goes inside; a node nobody knows counts as mains."""
    sides = {**SIDES, "out": "secondary", "sgnd": "secondary"}
    assert COSTS.danger(Probe("ohms", "a", "b"), sides) == 0.0
    assert COSTS.danger(Probe("volts_dc", "out", "sgnd", "full"), sides) == COSTS.hazard["secondary"] == 1.0
    assert COSTS.danger(Probe("volts_dc", "a", "b", "full"), sides) == COSTS.hazard["primary"] == 4.0
    assert COSTS.danger(Probe("volts_dc", "out", "b", "full"), sides) == 4.0
    assert COSTS.danger(Probe("volts_dc", "out", "nowhere", "full"), sides) == 4.0
    plug = next(iter(sorted(cost_room.PLUG_FUNCTIONS)))
    assert COSTS.danger(Probe(plug, "a", "b", "full"), sides) == COSTS.hazard["plug"] == 0.5


def test_a_lifted_leg_costs_its_soldering_once_in_a_row() -> None:
    """Lifted, read, read again with the leg still up, then another leg."""
    first, again = Probe("ohms", "R1.a", "R1.b"), Probe("diode", "R1.a", "R1.b")
    plain, other = Probe("ohms", "b", "g"), Probe("ohms", "D1.anode", "D1.cathode")
    lift = COSTS.setup["lift_leg"]
    assert COSTS.minutes(first, [plain]) == COSTS.reading["ohms"] + lift
    assert COSTS.minutes(again, [plain, first]) == COSTS.reading["diode"]
    assert COSTS.minutes(other, [plain, first]) == COSTS.reading["ohms"] + lift
    assert COSTS.minutes(again, [plain, first, other]) == COSTS.reading["diode"] + lift, "it was soldered in between"


def test_a_reading_at_the_plug_opens_no_case() -> None:
    plug = next(iter(sorted(cost_room.PLUG_FUNCTIONS)))
    probe = Probe(plug, "a", "b", "full")
    assert COSTS.minutes(probe, []) == COSTS.reading[plug] + COSTS.setup["power_up"]
    inside = Probe("volts_dc", "a", "b", "full")
    assert COSTS.minutes(inside, [probe]) == COSTS.reading["volts_dc"] + COSTS.setup["open_case"]


def test_repairs_cost_once_and_by_part() -> None:
    assert COSTS.repair_minutes((), KINDS) == 10.0
    assert COSTS.repair_minutes(("R1",), KINDS) == 4.0 + 5.0
    assert COSTS.repair_minutes(("R1", "C1"), KINDS) == 4.0 + 5.0 + 5.0
    assert COSTS.repair_minutes(("T1",), {"T1": "transformer"}) == 4.0 + 15.0


def test_a_sign_at_a_part_speaks_for_the_faults_of_that_part_alone() -> None:
    table, sign = sign_table(), next(one for one in SIGNS if one != "sound")
    found = sign_likelihood(Sign(sign, "R1"), expectations(), KINDS)
    for chance, hypothesis in zip(found, HYPOTHESES, strict=True):
        fault = next((one for one in hypothesis.faults if one.ref == "R1"), None)
        assert chance == (table.at_good(sign) if fault is None else table.at_fault(sign, "resistor", fault.mode))


def test_a_part_that_looks_sound_shows_none_of_the_visible_signs() -> None:
    table = sign_table()
    found = sign_likelihood(Sign("sound", "D1"), expectations(), KINDS)
    for chance, hypothesis in zip(found, HYPOTHESES, strict=True):
        fault = next((one for one in hypothesis.faults if one.ref == "D1"), None)
        chances = [table.at_good(s) if fault is None else table.at_fault(s, "diode", fault.mode) for s in table.visible]
        assert chance == pytest.approx(float(np.prod([1.0 - c for c in chances])))


def test_a_place_outside_the_board_found_sound_speaks_against_faults_there() -> None:
    place, row = next(iter(sign_table().at_place.items()))
    found = sign_likelihood(Sign("sound", place), expectations(), KINDS)
    assert found[0] == row["outside"] and (found[1:] == row["other"]).all() and row["outside"] < row["other"]


def test_a_sign_of_the_whole_adapter_goes_by_its_states() -> None:
    """Mean over the states of a hypothesis that are known; none known: the chance of any other state."""
    sign, row = next((one, row) for one, row in sign_table().on_adapter.items() if set(row) & set(STATES))
    told = next(state for state in STATES if row.get(state, row["other"]) != row["other"])
    plain = next(state for state in STATES if state not in row)
    states = np.full((len(HYPOTHESES), 3, 1), -1)
    states[1] = STATES.index(told)
    states[2, 0], states[2, 1] = STATES.index(told), STATES.index(plain)
    made = Expectations(HYPOTHESES, PROBES, expectations().samples, states)
    found = sign_likelihood(Sign(sign), made, KINDS)
    assert found[0] == row["outside"]
    assert found[1] == pytest.approx(row[told]) and found[2] == pytest.approx((row[told] + row["other"]) / 2.0)
    assert found[3] == pytest.approx(row["other"])


def test_a_complaint_is_weighed_by_the_state_under_its_load() -> None:
    """By hand, with the share of careless words spread over all states."""
    table, careless = complaint_table(), SETTINGS.careless_word
    found = complaint_likelihood(Symptom("dead"), expectations(), SETTINGS)
    said = table[:, STATES.index("dead")]
    for row, state in ((1, "dead"), (2, "output low"), (3, "fuse gone")):
        assert found[row] == pytest.approx((1.0 - careless) * said[STATES.index(state)] + careless / len(STATES))
    assert found[0] == pytest.approx((1.0 - careless) * said[-1] + careless / len(STATES)), "outside the board"
    blank = replace(expectations(), states=np.full((len(HYPOTHESES), 3, 1), -1))
    unknown = complaint_likelihood(Symptom("dead"), blank, SETTINGS)
    assert unknown[1] == pytest.approx((1.0 - careless) * said[:-2].mean() + careless / len(STATES))


@pytest.mark.parametrize("sign", [Sign("purple"), Sign("purple", "R1"), Sign(SIGNS[0], "R99")])
def test_unknown_signs_and_parts_are_refused(sign: Sign) -> None:
    with pytest.raises(EntryError):
        sign_likelihood(sign, expectations(), KINDS)


@pytest.mark.parametrize("symptom", [Symptom("purple"), Symptom("dead", "half moon")])
def test_unknown_states_and_loads_are_refused(symptom: Symptom) -> None:
    with pytest.raises(EntryError, match="symptom"):
        complaint_likelihood(symptom, expectations(), SETTINGS)
