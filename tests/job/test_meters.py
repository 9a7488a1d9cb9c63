"""The shop's own meters, as the expectations and likelihoods take them. Reasoned checks unless a source is named."""

import math
from pathlib import Path

import numpy as np
import pytest

from tests.reference.reference_circuits import BY_CURRENT, DATA
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.diagnosis.settings import instruments as usual_instruments
from triage.families.points import OperatingPoints
from triage.job import expecting, workshop
from triage.job.cache import Cache
from triage.job.learning import NONE
from triage.job.meters import instruments_of, meter_of
from triage.job.wiring import Wiring
from triage.physics.network import HAND_METER
from triage.safety.instruments import SHIPPED, InstrumentError, load

BENCH_METERS = DATA / "bench_meters.toml"
BOARD = load_profile("choir-keyboard-supply")


def test_a_shop_that_has_told_nothing_has_the_hand_meter() -> None:
    assert meter_of(None) == HAND_METER and instruments_of(None) == usual_instruments()


def test_the_file_of_the_bench_meters_is_the_meter_of_the_simulation() -> None:
    """Source: the cold tables of the reference circuits linear-reg and pwm-opto (ngspice 39)."""
    assert meter_of(load(BENCH_METERS)) == BY_CURRENT


def test_the_accuracy_of_the_shop_replaces_the_usual_one_and_the_model_error_stays() -> None:
    """0.8 % + 2 counts, worst of a range counted in its middle, over root three (JCGM 100:2008, 4.3.7), with the model's 2 %."""
    usual, own = usual_instruments()["ohms"], instruments_of(load(SHIPPED))["ohms"]
    middle = 20e6 / math.sqrt(10.0)
    assert own.relative == pytest.approx(math.hypot((0.02 + 5 * 1e4 / middle) / math.sqrt(3.0), usual.model_relative))
    assert own.absolute == pytest.approx(math.hypot((0.2 + 0.3) / math.sqrt(3.0), usual.model_absolute))
    assert own.over == 20e6 and own.meter == usual.meter and own.knee == usual.knee


def test_what_the_shop_cannot_read_keeps_the_usual_errors_and_is_never_asked_for() -> None:
    assert instruments_of(load(SHIPPED))["watts"] == usual_instruments()["watts"]


def test_a_meter_that_ends_early_shows_ol_earlier(tmp_path: Path) -> None:
    """A bridge up to 200 uF on a reservoir of 2200 uF."""
    meter = meter_of(load(SHIPPED))
    found = expecting.expectations(BOARD, (Hypothesis(()),), OperatingPoints(BOARD), Cache(tmp_path), meter)
    column = found.column(Probe("capacitance", "raw", "sgnd"))
    assert column is not None and np.isinf(found.samples[0, column]).all()


def test_each_meter_has_its_own_kept_readings(tmp_path: Path) -> None:
    kept, probe = Cache(tmp_path), Probe("ohms", "raw", "out")
    rows = []
    for meter in (HAND_METER, BY_CURRENT, HAND_METER):
        found = expecting.expectations(BOARD, (Hypothesis((Fault("C3", "open"),)),), OperatingPoints(BOARD), kept, meter)
        rows.append(found.samples[0, found.column(probe)])
    assert len(list(tmp_path.glob("cold-*.json"))) == 2
    np.testing.assert_array_equal(rows[0], rows[2])
    assert abs(float(np.median(rows[0])) - float(np.median(rows[1]))) > 1.0, "a junction reads otherwise with another current"


def test_a_diagnosis_takes_the_meters_of_the_shop(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(workshop, "own_instruments", lambda: load(BENCH_METERS))
    found = Wiring(Cache(tmp_path)).diagnosis(load_profile("mast-lamp-adapter"), NONE)
    column = found.expectations.column(Probe("ohms", "mains_l", "mains_n"))
    own = instruments_of(load(BENCH_METERS))["ohms"]
    assert column is not None and found.model.axes[column].instrument == own != usual_instruments()["ohms"]


@pytest.mark.parametrize(("line", "told"), [
    ("constant_current = true", "test_current_A above 0"), ("constant_current = 1", "true or false"),
    ("frequency_Hz = -1", "above 0"), ("series_value = 'x'", "true or false"), ("test_voltage_V = 0", "above 0"),
])  # fmt: skip
def test_a_slip_in_the_file_is_told(tmp_path: Path, line: str, told: str) -> None:
    path = tmp_path / "instruments.toml"
    path.write_text(
        "[[instrument]]\n[[instrument.function]]\nkey = 'ohms'\nranges = [200]\npercent = [1]\ncounts = [1]\n"
        f"count_size = [0.1]\n{line}\n"
    )
    with pytest.raises(InstrumentError, match=told):
        load(path)
