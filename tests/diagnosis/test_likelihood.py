"""Likelihoods of readings, signs and complaints: sums, limits and symmetry."""

from itertools import pairwise

import numpy as np
import pytest

from tests.diagnosis import small_board as sb
from triage.board.evidence import SIGNS, STATES, Sign, Symptom
from triage.diagnosis.belief import Likelihoods
from triage.diagnosis.expectations import LOADS, Expectations
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.settings import Settings
from triage.diagnosis.signs import complaint_likelihood, complaint_table, sign_likelihood, sign_table
from triage.errors import EntryError

SETTINGS = Settings.load()
E = sb.expectations()
MODEL = ReadingModel(E, SETTINGS)


@pytest.mark.parametrize("column", range(len(sb.PROBES)))
def test_cells_and_bins_are_distributions(column: int) -> None:
    assert MODEL.cell_table(column).sum(axis=1) == pytest.approx(np.ones(6), abs=1e-9)
    assert MODEL.sound_table(column, np.arange(6)).sum(axis=1) == pytest.approx(np.ones(6), abs=1e-9)
    assert MODEL.bins[MODEL.owner == column].sum(axis=0) == pytest.approx(np.ones(6), abs=1e-5)


def test_bins_are_sums_of_cells() -> None:
    """What is scored is the same model as what is updated with, only coarser."""
    for column in range(len(sb.PROBES)):
        cells, edges = MODEL.cell_table(column), MODEL.edges[column]
        sums = np.stack([cells[:, a:b].sum(axis=1) for a, b in pairwise(edges)])
        assert MODEL.bins[MODEL.owner == column] == pytest.approx(sums, abs=1e-6)


def test_the_likelihood_of_a_reading_is_its_cell() -> None:
    column = E.column(sb.OHMS_R1)
    assert column is not None
    cell = int(MODEL.axes[column].index(1.02e3))
    assert MODEL.likelihood(column, [1.02e3]) == pytest.approx(MODEL.cell_table(column)[:, cell], abs=1e-12)


def test_a_reading_tells_the_hypotheses_apart() -> None:
    good, opened, high, *_ = MODEL.likelihood(0, [1e3])
    assert good > 50 * opened and good > 50 * high
    good, opened, high, *_ = MODEL.likelihood(0, [float("inf")])
    assert opened > 20 * good and opened > 20 * high


def test_no_reading_can_kill_a_hypothesis() -> None:
    """The floor for gross errors: eps x chance of the slip is always left (contaminated normal)."""
    for value in (0.0, 1.0, 5e4, 3e6, float("inf")):
        cell = int(MODEL.axes[0].index(value))
        floor = SETTINGS.gross_error * MODEL.slip(0, cell, cell + 1)
        assert (MODEL.likelihood(0, [value]) >= floor * (1 - 1e-12)).all() and floor > 0


def test_slips_are_a_distribution() -> None:
    for column, axis in enumerate(MODEL.axes):
        assert MODEL.slip(column, 0, axis.cells + 1) == pytest.approx(1.0, abs=1e-12)
        parts = sum(MODEL.slip(column, c, c + 1) for c in range(axis.cells + 1))
        assert parts == pytest.approx(1.0, abs=1e-9)


def test_two_readings_of_one_probe_share_the_part() -> None:
    """A part does not change between readings: the second equal reading says less than the first (Jensen)."""
    once, twice = MODEL.likelihood(0, [1.05e3])[0], MODEL.likelihood(0, [1.05e3, 1.05e3])[0]
    assert twice > once**2
    assert MODEL.likelihood(0, [1e3, 3e3]) == pytest.approx(MODEL.likelihood(0, [3e3, 1e3]), abs=0)


def test_what_is_not_known_says_nothing_between_its_equals() -> None:
    samples = E.samples.copy()
    samples[1:3, 0, :] = np.nan
    model = ReadingModel(Expectations(E.hypotheses, E.probes, samples, E.states), SETTINGS)
    chance = model.likelihood(0, [1e3])
    assert chance[1] == chance[2] and model.known(0)
    assert model.cell_table(0).sum(axis=1) == pytest.approx(np.ones(6), abs=1e-9)


def test_complaint_rows_add_up_to_one() -> None:
    table = complaint_table()
    assert table.shape == (len(STATES) + 2, len(STATES))
    assert table.sum(axis=1) == pytest.approx(np.ones(len(STATES) + 2), abs=1e-12)
    assert (table[:-2].argmax(axis=1) == np.arange(len(STATES)))[[0, 1, 3, 4, 5, 6, 7]].all()


def test_complaints_add_up_to_one_over_what_can_be_said() -> None:
    total = sum(complaint_likelihood(Symptom(state, "full"), E, SETTINGS) for state in STATES)
    assert total == pytest.approx(np.ones(6), abs=1e-12)


def test_a_dead_adapter_points_at_what_kills_it() -> None:
    chance = complaint_likelihood(Symptom("dead", "full"), E, SETTINGS)
    assert chance[1] > chance[2] and chance[0] > chance[2]


@pytest.mark.parametrize("state", ["dead", "output low", "pulsing"])
def test_a_complaint_weighs_board_against_outside_as_the_records_do(state: str) -> None:
    """Shares of complaints.toml: Open Repair Data, 28 records with a part at fault, 25 with the fault outside."""
    inside, outside = complaint_table()[-2:, STATES.index(state)]
    prior = np.array([0.6, 0.1, 0.2, 0.04, 0.03, 0.03])
    chance = complaint_likelihood(Symptom(state, "full"), E, SETTINGS, prior)
    chance = chance - SETTINGS.careless_word / len(STATES)
    of_board = prior[1:] @ chance[1:] / prior[1:].sum()
    assert chance[0] / of_board == pytest.approx(outside / inside, rel=1e-9)


def test_places_found_sound_clear_the_outside_step_by_step_and_once() -> None:
    places = tuple(sign_table().at_place)
    clears = [sign_likelihood(Sign("sound", place), E, sb.KINDS) for place in places]
    assert all(one[0] < one[1] and np.ptp(one[1:]) == 0 for one in clears)
    likelihoods = Likelihoods(E, MODEL, sb.KINDS, SETTINGS)
    whole = likelihoods.log([Sign("sound")])
    assert (likelihoods.log([Sign("sound"), *(Sign("sound", place) for place in places)]) == whole).all()


def test_the_looks_together_clear_the_outside_as_a_look_all_over_does() -> None:
    """Both figures stand for the same work: the steps come out within a factor of two of the whole."""
    places = [row["outside"] / row["other"] for row in sign_table().at_place.values()]
    whole = sign_table().on_adapter["sound"]
    assert 0.5 < np.prod(places) / (whole["outside"] / whole["other"]) < 2.0


def test_unknown_states_count_as_the_average_state() -> None:
    blank = Expectations(E.hypotheses, E.probes, E.samples, np.full((6, len(LOADS), 1), -1))
    chance = complaint_likelihood(Symptom("dead", "full"), blank, SETTINGS)
    assert np.ptp(chance[1:]) == 0


@pytest.mark.parametrize("sign", SIGNS)
def test_every_sign_has_a_chance_everywhere(sign: str) -> None:
    for ref in ("", "C1"):
        chance = sign_likelihood(Sign(sign, ref), E, sb.KINDS)
        assert chance.shape == (6,) and (chance > 0).all() and (chance < 1).all()


def test_a_bulging_capacitor_is_suspected_and_a_sound_one_less() -> None:
    bulging = sign_likelihood(Sign("bulging", "C1"), E, sb.KINDS)
    sound = sign_likelihood(Sign("sound", "C1"), E, sb.KINDS)
    assert bulging[3] > 10 * bulging[0] and sound[3] < sound[0]
    assert bulging[1] == bulging[0]


def test_sound_at_a_part_is_none_of_the_visible_signs() -> None:
    table = sign_table()
    expected = np.prod([1 - table.at_good(sign) for sign in table.visible])
    assert sign_likelihood(Sign("sound", "C1"), E, sb.KINDS)[0] == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("entry", [Symptom("tired", "full"), Symptom("dead", "cold")])
def test_unknown_complaints_are_refused(entry: Symptom) -> None:
    with pytest.raises(EntryError, match="expected one of"):
        complaint_likelihood(entry, E, SETTINGS)


@pytest.mark.parametrize("entry", [Sign("purple"), Sign("hot", "Q9")])
def test_unknown_signs_are_refused(entry: Sign) -> None:
    with pytest.raises(EntryError, match="expected one of"):
        sign_likelihood(entry, E, sb.KINDS)
