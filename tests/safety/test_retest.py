"""The retest: limits of this board, verdicts with the meter's accuracy, what is required, what was not
done."""

import math
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from tests.safety.boards import brick, charger, iron
from triage.safety import gate, retest
from triage.safety.instruments import SHIPPED, InstrumentError, load

TODAY = date(2026, 3, 1)
BENCH = load()


@pytest.fixture(scope="module")
def full_bench(tmp_path_factory) -> "retest.Instruments":
    """The shipped meters and a wattmeter, an insulation tester, a touch-current meter, a scope and a
    thermometer."""
    path: Path = tmp_path_factory.mktemp("bench") / "shop.toml"
    rows = "".join(
        f'[[instrument]]\nname = "{key} meter"\n[[instrument.function]]\nkey = "{key}"\nranges = [{top}]\n'
        f"percent = [{percent}]\ncounts = [1]\ncount_size = [{count}]\n"
        for key, top, percent, count in (
            ("watts", 100.0, 1.0, 0.001),
            ("insulation_ohms", 200e6, 5.0, 1e4),
            ("touch_amps", 2e-3, 2.0, 1e-6),
            ("volts_pp", 50.0, 3.0, 0.001),
            ("temperature", 200.0, 1.0, 1.0),
        )
    )
    path.write_text(SHIPPED.read_text() + "\n" + rows)
    return load(path)


def by_key(board, bench=BENCH, connector=""):
    return {line.key: line for line in retest.lines(board, bench, TODAY, connector)}


def test_limits_belong_to_this_board() -> None:
    cube, large = by_key(charger(2014)), by_key(brick())
    assert (cube["output full load"].low, cube["output full load"].high) == (4.75, 5.25)
    assert (large["output full load"].low, large["output full load"].high) == (pytest.approx(18.05), pytest.approx(19.95))
    assert cube["no-load input power"].high == 0.3
    assert large["no-load input power"].high == 0.5
    assert large["touch current"].high == pytest.approx(0.25e-3)
    assert cube["insulation"].low == 2e6


def test_no_load_line_names_the_level_then_and_now() -> None:
    assert by_key(charger(2014))["no-load input power"].note == "Level V when marked; today 0.1 W (EU 2019/1782)"


def test_unknown_year_is_told_today_but_not_held_to_it(full_bench) -> None:
    line = by_key(charger(None), full_bench)["no-load input power"]
    assert line.high is None
    assert not line.required
    assert "marked year unknown" in line.note and "0.1 W" in line.note


def test_connector_told_beats_the_guess() -> None:
    assert by_key(charger(2014), connector="USB since 2014")["output full load"].high == 5.5


def test_unregulated_adapter_may_stand_high_without_load() -> None:
    lines = by_key(iron())
    assert lines["output no load"].high == pytest.approx(16.2)
    assert lines["output full load"].high == pytest.approx(9.9)


def test_class_i_asks_for_its_protective_conductor() -> None:
    assert "protective conductor" not in by_key(brick())
    earthed = replace(brick(), label=replace(brick().label, insulation_class="I"))
    assert by_key(earthed)["protective conductor"].required


def test_required_with_a_hand_meter_and_with_a_full_bench(full_bench) -> None:
    basic = {key for key, line in by_key(brick()).items() if line.required}
    full = {key for key, line in by_key(brick(), full_bench).items() if line.required}
    assert basic == {"visual", "insulation", "polarity", "output no load", "output full load", "soak", "cord pull"}
    assert full - basic == {"touch current", "no-load input power", "ripple", "temperature"}


def test_electric_strength_is_never_asked_and_says_who_may() -> None:
    line = by_key(brick())["electric strength"]
    assert not line.required
    assert "trained person" in line.title
    assert line.note == "type test of IEC 60950-1, mains to output: 3000 V ac or 4242 V dc"


@pytest.mark.parametrize(("volts", "verdict"), [(5.0, "pass"), (4.77, "too close to call"), (4.60, "fail"), (5.4, "fail")])
def test_output_verdict_with_the_hand_meter(volts, verdict) -> None:
    """Reasoned: 0.5 % + 2 counts on 20 V is 45 mV at 5 V, 26 mV standard; two of them are the guard band."""
    line = by_key(charger(2014))["output full load"]
    result = retest.judge(line, volts, BENCH)
    assert result.verdict == verdict
    assert result.instrument == "hand multimeter, 3.5 digits"
    assert result.uncertainty == pytest.approx((0.005 * volts + 0.02) / math.sqrt(3.0))


def test_insulation_over_range_passes_and_two_megohms_is_too_close(full_bench) -> None:
    line = by_key(brick(), full_bench)["insulation"]
    assert retest.judge(line, math.inf, full_bench).verdict == "pass"
    assert retest.judge(line, 2.05e6, full_bench).verdict == "too close to call"
    assert retest.judge(line, 0.5e6, full_bench).verdict == "fail"


def test_a_multimeter_is_no_insulation_tester() -> None:
    with pytest.raises(InstrumentError, match="insulation_ohms"):
        retest.judge(by_key(brick())["insulation"], math.inf, BENCH)


def test_a_close_reading_tells_how_likely_it_is_within() -> None:
    line = by_key(charger(2014))["output full load"]
    assert retest.judge(line, 4.75, BENCH).within == pytest.approx(0.5)
    assert retest.judge(line, 5.0, BENCH).within > 0.99


def test_looks_take_yes_or_no() -> None:
    line = by_key(charger())["visual"]
    assert retest.judge(line, 1.0, BENCH).verdict == "pass"
    assert retest.judge(line, 0.0, BENCH).verdict == "fail"
    with pytest.raises(retest.RetestError, match="1 or 0"):
        retest.judge(line, 0.5, BENCH)


def test_too_close_counts_for_performance_but_not_for_safety() -> None:
    lines = by_key(charger())
    assert retest.gate_verdict(lines["output full load"], "too close to call") == "pass"
    assert retest.gate_verdict(lines["insulation"], "too close to call") == "too close to call"
    assert retest.gate_verdict(lines["output full load"], "fail") == "fail"


def test_what_is_still_required_and_what_was_not_done() -> None:
    lines = tuple(by_key(charger()).values())
    done = {line.key: "pass" for line in lines if line.required}
    assert retest.still_required(lines, done) == ()
    assert retest.still_required(lines, {**done, "insulation": "fail", "soak": "too close to call"}) == ("insulation",)
    left = retest.not_done(lines, done)
    assert any("Ripple" in title for title in left) and len(left) == len(lines) - len(done)


def test_load_regulation_from_two_readings() -> None:
    lines = by_key(charger())
    idle, full = (retest.judge(lines[key], volts, BENCH) for key, volts in (("output no load", 5.2), ("output full load", 5.0)))
    drop, u = retest.load_regulation(idle, full)
    assert drop == pytest.approx(0.2)
    assert u == pytest.approx(math.hypot(idle.uncertainty, full.uncertainty))
    assert retest.judge(lines["load regulation"], drop, BENCH, u).verdict == "too close to call"


def test_gates_take_the_lines_of_a_board(full_bench) -> None:
    before, required, live = retest.gate_keys(retest.lines(brick(), full_bench, TODAY))
    assert before == {"visual", "insulation"}
    assert before <= required
    assert not before & live
    facts = gate.facts_for(brick(), (), before, required, live)
    assert gate.permit(facts, "close as repaired").missing
