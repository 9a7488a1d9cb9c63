"""Estimating a board: label, what is seen, templates, the rules against the rules of thumb of the trade."""

import math
import tomllib

import numpy as np
import pytest

from triage.board.estimate.assemble import derivations, design_of, estimate
from triage.board.estimate.design import Design
from triage.board.estimate.label import mains_of
from triage.board.estimate.practice import choices
from triage.board.estimate.proposal import propose_family
from triage.board.estimate.roles import roles
from triage.board.estimate.rounding import preferred
from triage.board.estimate.seen import FEATURES, Seen, parse_seen
from triage.board.estimate.template import template_files, template_from_dict, template_of, templates
from triage.board.kinds import kinds
from triage.board.part import Label
from triage.board.profile import board_from_dict, board_to_dict, load_profile
from triage.errors import EntryError, ProfileError, QuantityError
from triage.families import families
from triage.physics.rectifier import with_power_load

SINGLE, WIDE = "220-240 V~ 50 Hz", "100-240 V~ 50/60 Hz"


@pytest.mark.parametrize(("line", "low", "nominal", "high", "frequency"), [
    ("100-240V~ 50/60Hz 0.5A", 90.0, 230.0, 264.0, 50.0),
    ("230 V~ 50 Hz", 207.0, 230.0, 253.0, 50.0),
    ("198-253 V~ 50 Hz", 198.0, 230.0, 253.0, 50.0),
    ("AC 220V-240V 50Hz", 198.0, 230.0, 264.0, 50.0),
    ("120V 60Hz 9W", 108.0, 120.0, 132.0, 60.0),
    ("120 V~", 108.0, 120.0, 132.0, 60.0),
    ("100 - 240 VAC", 90.0, 230.0, 264.0, 50.0),
    ("127 V", 114.3, 127.0, 139.7, 60.0),
])
def test_mains_of_the_input_line(line, low, nominal, high, frequency):
    mains = mains_of(line)
    assert (mains.low, mains.nominal, mains.high, mains.frequency) == (low, nominal, high, frequency)


@pytest.mark.parametrize("line", ["", "AC mains", "5 V", "240-100 V", "9999 V", "\x1b[2J230"])
def test_an_input_line_without_mains_volts_is_refused(line):
    with pytest.raises(QuantityError, match="input line"):
        mains_of(line)


def test_every_family_has_a_template_and_every_template_a_family():
    assert set(templates()) == set(families())
    assert {path.stem for path in template_files()} == set(templates())


def test_templates_hold_no_values():
    """Only names of quantities: whatever is estimated comes from a rule or a choice."""
    for template in templates().values():
        for place in template.places:
            assert all(isinstance(quantity, str) for quantity in place.value.values())


def test_templates_are_no_profiles():
    for path in template_files():
        with pytest.raises(ProfileError, match="template"):
            load_profile(str(path))


def test_faults_of_a_template_are_reported_together():
    content = tomllib.loads(template_files()[0].read_text(encoding="utf-8"))
    content["usual"] = ["chrome"]
    content["part"][0]["role"] = "flux capacitor"
    content["part"][1]["pins"] = {}
    content["part"][2]["when"] = "full moon"
    content["ground"] = {}
    with pytest.raises(ProfileError) as caught:
        template_from_dict(content, "mine.toml")
    for word in ("mine.toml", "usual", "flux capacitor", "pins", "full moon", "ground"):
        assert word in str(caught.value)


@pytest.mark.parametrize(("change", "said"), [
    (lambda c: c["part"][0].update(value={"colour": 1.0}), "value colour"),
    (lambda c: c["part"][0].update(role="a hand-made role", kind="resistor"), "resistance among them"),
    (lambda c: c["part"][0].update(ratings={"speed": 1.0}), "ratings speed"),
    (lambda c: c["part"][0].update(fault_modes=["bent"]), "fault_modes"),
    (lambda c: c["part"].append(dict(c["part"][0])), "each ref once"),
    (lambda c: c["sides"].update(primary="bulk"), "a list of nodes"),
    (lambda c: c["look"].update(transistors={"two": 0.5}), "a table of shares by number"),
])
def test_each_fault_of_a_template_is_named(change, said):
    content = tomllib.loads(template_files()[0].read_text(encoding="utf-8"))
    change(content)
    with pytest.raises(ProfileError) as caught:
        template_from_dict(content, "mine.toml")
    assert said in str(caught.value)


@pytest.mark.parametrize("family", sorted(families()))
@pytest.mark.parametrize(("line", "volts", "amperes"), [
    (SINGLE, 5.0, 0.5), (WIDE, 12.0, 1.5), ("120 V~ 60 Hz", 9.0, 0.3), (WIDE, 3.3, 0.2), (SINGLE, 24.0, 3.0),
    ("230 V~", 48.0, 0.1),
])  # fmt: skip
def test_any_label_gives_a_board(family, line, volts, amperes):
    board = estimate(template_of(family), Label(line, volts, amperes))
    assert board_from_dict(board_to_dict(board), "estimated") == board
    for part in board.parts:
        assert set(part.spread) == set(part.value) and not part.tolerance and part.origin == "estimated"
        assert all(math.isfinite(value) and value > 0.0 for value in part.value.values())
        assert all(1.0 < spread < 20.0 for spread in part.spread.values()), (part.ref, part.spread)
    assert board == estimate(template_of(family), Label(line, volts, amperes)), "the same every time"


def test_every_role_names_quantities_that_some_family_knows():
    known = {family: Design(family, Label(SINGLE, 5.0, 1.0), mains_of(SINGLE)) for family in families()}
    for role in roles().values():
        assert role.kind in kinds() and set(role.value) <= set(kinds()[role.kind].values)
        assert any(_knows(design, role.value.values()) for design in known.values()), role.name


def _knows(design, names):
    try:
        return all(np.all(design[name] > 0.0) for name in names)
    except ProfileError:
        return False


def test_every_choice_is_used_and_reasoned():
    used = {quantity for template in templates().values() for place in template.places for quantity in place.value.values()}
    source = "".join(path.read_text(encoding="utf-8") for path in _rule_files())
    for choice in choices():
        assert choice.name in used or f'"{choice.name}"' in source, choice.name
        assert choice.why and choice.source


def _rule_files():
    from pathlib import Path

    import triage.board.estimate as room

    folder = Path(room.__file__).parent
    return [*sorted((folder / "rules").glob("*.py")), folder / "roles.toml"]


def test_choices_are_drawn_with_the_spread_they_state():
    """Reasoned: nine of ten draws within the spread, the median the typical value."""
    for choice in choices():
        draws = choice.draws(400)
        inside = np.mean(np.abs(np.log(draws / choice.typical)) <= np.log(choice.spread) + 1e-9)
        assert inside == pytest.approx(0.9, abs=0.006)
        assert np.median(draws) == pytest.approx(choice.typical, rel=0.02)


def test_bulk_capacitor_keeps_the_valley_it_was_made_for():
    """Against the solved rectifier: the hand equation is on the safe side, by no more than a tenth of the valley."""
    design = design_of(template_of("pwm_flyback_opto"), Label(WIDE, 12.0, 2.0))
    crest = float(design["crest_low"][0])
    solved = with_power_load(crest, 50.0, design["bulk_capacitance"], design["input_power"], 2).valley
    wanted = crest * (1.0 - design["sag"])
    assert np.all(solved >= wanted) and np.all(solved <= 1.1 * wanted)


def test_half_wave_needs_twice_the_bulk_capacitor():
    """Reasoned: one charge a period instead of two, more than twice the time to bridge."""
    template, label = template_of("ringing_choke_zener"), Label(SINGLE, 5.0, 0.6)
    half, full = (np.median(design_of(template, label, parse_seen([word]))["bulk_capacitance"])
                  for word in ("half wave", "bridge"))
    assert 2.0 < half / full < 2.6


def test_shunt_reference_divider_gives_the_output_of_the_label():
    """Reasoned: in every draw the two resistors set the output, however wide each of them lies."""
    design = design_of(template_of("pwm_flyback_opto"), Label(WIDE, 19.0, 2.0))
    output = design["reference_voltage"] * (1.0 + design["upper_feedback_resistance"] / design["lower_feedback_resistance"])
    assert output == pytest.approx(19.0, rel=1e-9)


@pytest.mark.parametrize("volts", [5.0, 9.0, 12.0, 19.0, 24.0])
def test_middle_values_work_together(volts):
    """Reasoned: the board made of the middle values regulates to the label, though each value is known only by itself."""
    board = estimate(template_of("pwm_flyback_opto"), Label(WIDE, volts, 20.0 / volts))
    upper, lower = (board.by_role(f"{which} feedback resistor").value["resistance"] for which in ("upper", "lower"))
    assert board.by_role("shunt reference").value["reference_voltage"] * (1.0 + upper / lower) == pytest.approx(volts, rel=0.02)
    coupled = estimate(template_of("ringing_choke_opto"), Label(SINGLE, volts, 5.0 / volts))
    zener = coupled.by_role("output voltage reference zener")
    assert zener.value["zener_voltage"] + 1.15 == pytest.approx(volts, rel=0.06)
    rail = estimate(template_of("ringing_choke_zener"), Label(SINGLE, volts, 3.0 / volts))
    turns = rail.part("T1").value
    winding = (volts + 0.45) * turns["feedback_turns"] / turns["secondary_turns"]
    assert winding == pytest.approx(rail.by_role("regulation zener").value["zener_voltage"], rel=0.08)
    iron = estimate(template_of("linear_regulated"), Label("230 V~ 50 Hz", volts, 5.0 / volts))
    turns = iron.part("T1").value
    crest = math.sqrt(2.0) * 207.0 * turns["secondary_turns"] / turns["primary_turns"] - 1.8
    assert crest > volts + 2.0


def test_bulk_capacitor_is_rated_above_the_crest():
    for line, rating in ((SINGLE, 400.0), (WIDE, 400.0), ("120 V~ 60 Hz", 200.0)):
        board = estimate(template_of("ringing_choke_opto"), Label(line, 5.0, 1.0))
        assert board.by_role("bulk capacitor").ratings["voltage"] == rating


def test_preferred_values():
    """IEC 60063: the values of E6, E12 and E24."""
    assert [preferred(value, 6) for value in (5.2e-6, 9.0e-6, 1.2e3)] == [4.7e-6, 1e-5, 1e3]
    assert preferred(0.95e6, 12) == 1e6
    assert preferred(3.78, 24) == 3.9


def test_derivations_give_value_spread_and_reason():
    found = derivations(template_of("linear_regulated"), Label("230 V~ 50 Hz", 9.0, 0.5))
    assert len(found) > 25
    assert all(one.reason and one.spread > 1.0 for one in found)


@pytest.mark.parametrize(("words", "power", "family"), [
    (["controller", "optocoupler", "field-effect switch"], 24.0, "pwm_flyback_opto"),
    (["iron transformer", "regulator"], 4.5, "linear_regulated"),
    (["1 transistor", "no optocoupler", "no controller", "3 windings"], 3.0, "ringing_choke_zener"),
    (["controller", "no optocoupler", "3 windings"], 5.0, "pwm_flyback_primary"),
    (["controller", "output coil", "0 windings"], 1.4, "buck_nonisolated"),
    (["2 transistors", "optocoupler", "no controller"], 5.0, "ringing_choke_opto"),
    (["optocoupler", "no controller"], None, "ringing_choke_opto"),
    (["iron transformer", "regulator"], 60.0, "linear_regulated"),
    (["iron transformer", "no regulator", "centre tap"], 4.8, "linear_unregulated"),
    (["dropper capacitor", "0 windings"], 0.3, "capacitor_dropper"),
])  # fmt: skip
def test_proposed_family(words, power, family):
    found = propose_family(parse_seen(words), power)
    assert found[0].family == family
    assert found[0].chance > 0.8
    assert sum(one.chance for one in found) == pytest.approx(1.0)
    assert any(": for it" in reason for reason in found[0].reasons)


def test_without_looking_no_family_is_ruled_out():
    assert min(one.chance for one in propose_family(Seen())) > 0.5 / len(families())
    assert min(one.chance for one in propose_family(Seen(), 6.0)) > 0.002, "a capacitor dropper of 6 W is hardly ever met"


@pytest.mark.parametrize("words", [["half wave", "bridge"], ["fuse", "no fuse"], ["7 dwarfs"], ["\x1b[31m"], ["9999 windings"]])
def test_what_cannot_have_been_seen_is_refused(words):
    with pytest.raises(EntryError, match="seen"):
        parse_seen(words)


def test_what_is_seen_shapes_the_board():
    template, label = template_of("ringing_choke_zener"), Label(SINGLE, 5.0, 0.6)
    half = estimate(template, label)
    bridge = estimate(template, label, parse_seen(["bridge", "fuse", "Y capacitor", "no LED"]))
    assert half.side_of("mains_n") is None and half.by_role("mains rectifier")
    assert bridge.side_of("mains_n") == "primary" and not bridge.by_role("mains rectifier")
    assert sum(part.role == "bridge diode" for part in bridge.parts) == 4
    assert bridge.by_role("mains fuse") and not bridge.by_role("fusible input resistor")
    assert bridge.by_role("Y capacitor across the barrier") and not bridge.by_role("power LED")
    assert bridge.side_of("led") is None


@pytest.mark.parametrize(("family", "words", "gone"), [
    ("ringing_choke_zener", ["no fusible resistor", "no fuse"], "rect"),
    ("pwm_flyback_opto", ["no inrush limiter"], "ac_l"),
    ("ringing_choke_opto", ["no output coil"], "out1"),
    ("linear_regulated", ["no thermal fuse"], "pri"),
])  # fmt: skip
def test_a_missing_series_part_is_bridged(family, words, gone):
    board = estimate(template_of(family), Label("230 V~ 50 Hz", 5.0, 1.0), parse_seen(words))
    assert board.side_of(gone) is None
    assert board.side_of("mains_l") and board.side_of("out")
    assert board_from_dict(board_to_dict(board), "estimated") == board


@pytest.mark.parametrize(("volts", "amperes"), [(0.1, 1.0), (400.0, 1.0), (12.0, 100.0)])
def test_an_output_no_adapter_has_is_refused(volts, amperes):
    with pytest.raises(ProfileError, match="label"):
        estimate(template_of("pwm_flyback_opto"), Label(WIDE, volts, amperes))


def test_features_are_words_a_template_can_use():
    for template in templates().values():
        assert template.usual <= set(FEATURES)
        assert all(0.0 < share < 1.0 for share in template.look.features.values())
        assert all(sum(shares.values()) == pytest.approx(1.0) for shares in template.look.counts.values())
