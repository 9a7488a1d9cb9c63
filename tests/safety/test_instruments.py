"""The shop's meters: the shipped file, ranges, accuracy, and faults of a file told together."""

import math
from pathlib import Path

import pytest

from triage.board.probe import COLD_FUNCTIONS
from triage.safety.instruments import SHIPPED, InstrumentError, load, missing

BENCH = load()


def test_shipped_file_can_do_the_cold_readings_but_esr() -> None:
    assert missing(BENCH, COLD_FUNCTIONS) == ("esr",)
    assert "watts" in missing(BENCH, ("watts", "volts_dc"))


def test_the_smallest_range_that_shows_a_value_is_taken() -> None:
    ohms = BENCH.best("ohms", 150.0)
    assert ohms is not None
    found = ohms.range_for(150.0)
    assert found is not None and found.full_scale == 200.0
    assert found.test_current == pytest.approx(1e-3)
    assert ohms.range_for(25e6) is None


def test_over_range_is_infinitely_uncertain() -> None:
    assert math.isinf(BENCH.accuracy("ohms", 30e6))
    assert BENCH.highest("ohms") == 20e6


def test_lead_resistance_counts_in_a_low_reading() -> None:
    """Reasoned: 0.8 % of 1 ohm, two counts of 0.1 ohm and 0.3 ohm of leads, over root three."""
    assert BENCH.accuracy("ohms", 1.0) == pytest.approx((0.008 + 0.2 + 0.3) / math.sqrt(3.0))


def test_a_function_nobody_has_is_an_error_that_says_what_to_do() -> None:
    with pytest.raises(InstrumentError, match=r"nothing here reads watts.*add the meter"):
        BENCH.accuracy("watts", 1.0)


def test_a_better_meter_is_preferred(tmp_path: Path) -> None:
    extra = tmp_path / "shop.toml"
    extra.write_text(
        SHIPPED.read_text()
        + """
[[instrument]]
name = "bench meter"
[[instrument.function]]
key = "volts_dc"
ranges = [20.0]
percent = [0.05]
counts = [3]
count_size = [0.001]
"""
    )
    shop = load(extra)
    best = shop.best("volts_dc", 5.0)
    assert best is not None and best.instrument == "bench meter"
    assert shop.accuracy("volts_dc", 5.0) < BENCH.accuracy("volts_dc", 5.0)
    far = shop.best("volts_dc", 300.0)
    assert far is not None and far.instrument != "bench meter"


def test_all_faults_of_a_file_are_told_together(tmp_path: Path) -> None:
    bad = tmp_path / "bad.toml"
    bad.write_text("""
[[instrument]]
name = "odd"
function = [
  { key = "furlongs" },
  { key = "ohms", ranges = [200, 20], percent = [1], counts = ["x"], count_size = [0.1, 1, 10] },
  { key = "volts_dc", ranges = [2], percent = [-1], counts = [2], count_size = [0.001], offset = "much" },
]
""")
    with pytest.raises(InstrumentError) as caught:
        load(bad)
    line = str(caught.value)
    assert "\n" not in line
    for piece in (
        "furlongs",
        "ranges must be above 0 and rise",
        "counts must be a list of numbers",
        "count_size needs 1 or 2 values",
        "percent must not be below 0",
        "offset must be a number",
    ):
        assert piece in line


@pytest.mark.parametrize("text", ["", "instrument = 3", "[[instrument", "instrument = [1]\nx"])
def test_no_file_content_gives_a_traceback(tmp_path: Path, text: str) -> None:
    bad = tmp_path / "bad.toml"
    bad.write_text(text)
    with pytest.raises(InstrumentError):
        load(bad)


def test_an_absent_file_is_told() -> None:
    with pytest.raises(InstrumentError, match=r"nowhere\.toml"):
        load(Path("nowhere.toml"))
