"""Figures of meters and settings as they are read from files, and how draws and bins use them."""

import math
from pathlib import Path

import numpy as np
import pytest

from triage.diagnosis.axis import draw_width
from triage.diagnosis.bins import BINS, bin_edges
from triage.diagnosis.settings import HERE, Settings, instruments
from triage.errors import EntryError


def meters(folder: Path, text: str) -> dict[str, object]:
    path = folder / "meters.toml"
    path.write_text(text, "utf-8")
    return dict(instruments(path))


ROW = "relative = 0.03\nmodel_relative = 0.04\nabsolute = 0.6\nmodel_absolute = 0.8\nstep = 0.1\n"


def test_a_row_of_a_meter_is_instrument_and_model_together(tmp_path: Path) -> None:
    """JCGM 100:2008, 5.1.2: 3-4-5."""
    plain = meters(tmp_path, f"[cold.ohms]\n{ROW}")["ohms"]
    assert (plain.relative, plain.absolute) == (pytest.approx(0.05), pytest.approx(1.0))  # type: ignore[attr-defined]
    assert (plain.meter, plain.over, plain.step, plain.signed) == ("multimeter", math.inf, 0.1, False)  # type: ignore[attr-defined]
    assert (plain.knee, plain.relative_above_knee) == (math.inf, 0.0)  # type: ignore[attr-defined]
    assert (plain.model_relative, plain.model_absolute) == (0.04, 0.8)  # type: ignore[attr-defined]


def test_a_row_may_name_meter_limit_sign_and_knee(tmp_path: Path) -> None:
    more = 'meter = "bridge"\nover = 2e6\nsigned = true\nknee = 1e5\nrelative_above_knee = 0.2\n'
    full = meters(tmp_path, f"[live.volts_dc]\n{ROW}{more}")["volts_dc"]
    assert (full.meter, full.over, full.signed) == ("bridge", 2e6, True)  # type: ignore[attr-defined]
    assert (full.knee, full.relative_above_knee) == (1e5, 0.2)  # type: ignore[attr-defined]


@pytest.mark.parametrize(("row", "said"), [
    (ROW.replace("0.03", "-0.03"), "relative"), (ROW.replace("step = 0.1\n", ""), "step"), (ROW + "over = -1\n", "over"),
    (ROW + "knee = 5.0\n", "relative_above_knee"), (ROW + "knee = 5.0\nrelative_above_knee = 1.5\n", "relative_above_knee"),
])
def test_a_figure_that_makes_no_sense_is_named(tmp_path: Path, row: str, said: str) -> None:
    with pytest.raises(EntryError, match=f"cold.ohms, {said}"):
        meters(tmp_path, f"[cold.ohms]\n{row}")


@pytest.mark.parametrize(("key", "most"), [("failed_repair_minutes", 1e4), ("hunch_factor", 1e3), ("gross_error", 1.0)])
def test_settings_are_bounded(tmp_path: Path, key: str, most: float) -> None:
    lines = (HERE / "settings.toml").read_text("utf-8").splitlines()
    path = tmp_path / "settings.toml"

    def write(value: float) -> Path:
        path.write_text("\n".join(f"{key} = {value}" if line.startswith(key) else line for line in lines), "utf-8")
        return path

    assert getattr(Settings.load(write(most)), key) == most and getattr(Settings.load(write(0.0)), key) == 0.0
    for value in (1.001 * most, -0.001):
        with pytest.raises(EntryError, match=key):
            Settings.load(write(value))


def test_draws_without_a_number_do_not_widen_the_others() -> None:
    """OL and readings that cannot be taken are left out of the spread."""
    chance = np.random.default_rng(3)
    for spread in (0.5, 3.0, 12.0, 40.0):
        draws = chance.normal(size=24) * spread
        padded = np.concatenate([draws, [np.nan, np.inf, np.nan]])
        assert draw_width(padded[None, :]) == draw_width(draws[None, :])
    assert draw_width(np.array([[np.nan, np.inf]])).tolist() == [0]
    both = np.stack([chance.normal(size=24), chance.normal(size=24) * 40.0])
    assert draw_width(both).tolist() == [int(draw_width(row[None, :])[0]) for row in both], "each row by itself"


def test_evenly_spread_readings_fill_the_bins_evenly() -> None:
    """Quantiles: no bin holds much more than its share, and there are as many as were asked for."""
    cells = np.arange(240, dtype=np.int32)[None, :]
    edges = bin_edges(cells, 240)
    widths = np.diff(edges[:-1])
    assert len(widths) == BINS and widths.max() <= 1.6 * 240 / BINS and widths.min() >= 0.4 * 240 / BINS


def test_open_line_and_unknown_readings_make_no_bins() -> None:
    """They have their own place behind the last edge."""
    cells = np.full((5, 10), 100, dtype=np.int32)
    cells[:, :3] = [[-1, 100, 99]] * 5
    assert bin_edges(cells, 100)[-2:] == [100, 101]
    nothing = bin_edges(np.full((5, 10), 100, dtype=np.int32), 100)
    assert nothing[0] == 0 and nothing[-2:] == [100, 101] and nothing == sorted(set(nothing))


def test_a_rare_group_between_two_common_ones_is_told_apart() -> None:
    """The largest density counts that any hypothesis has in a cell, not the sum over all."""
    cells = np.concatenate([np.full((30, 8), 40), np.full((30, 8), 160), np.full((1, 8), 100)]).astype(np.int32)
    edges = bin_edges(cells, 220)
    places = np.searchsorted(edges, [40, 100, 160], side="right")
    assert len(set(places.tolist())) == 3
