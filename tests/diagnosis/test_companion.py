"""Two readings through one unread resistor are one piece of news."""

import numpy as np
import pytest
from scipy.stats import multivariate_normal

from triage.board.evidence import Reading
from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.axis import to_axis
from triage.diagnosis.belief import Likelihoods
from triage.diagnosis.companion import Companions
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.settings import Settings, instruments

FIRST, SECOND, APART = Probe("ohms", "a", "g"), Probe("ohms", "b", "g"), Probe("ohms", "c", "g")
OHMS = instruments()["ohms"]


def board(spread: float, draws: int = 24, tie: float = 1.0, seed: int = 3) -> Likelihoods:
    """Sound, or one leaky part that halves both readings; ``spread`` is that of the resistor both are read through."""
    rng = np.random.default_rng(seed)
    shared = rng.standard_normal(draws)
    own = rng.standard_normal((2, draws))
    moves = np.stack([shared, tie * shared + (1 - tie**2) ** 0.5 * own[0], own[1]])
    sound = np.array([10e3, 12e3, 3e3])[:, None] * np.exp(spread * moves)
    leaky = sound * np.array([[0.5], [0.5], [1.0]]) * np.exp(0.5 * rng.standard_normal(draws))
    expectations = Expectations(
        (Hypothesis(()), Hypothesis((Fault("C1", "leaky"),))), (FIRST, SECOND, APART),
        np.stack([sound, leaky]).astype(np.float32), np.zeros((2, 3, 1), dtype=np.int64),
    )  # fmt: skip
    settings = Settings.load()
    return Likelihoods(expectations, ReadingModel(expectations, settings), {"C1": "electrolytic"}, settings)


def odds(likelihoods: Likelihoods, *readings: Reading) -> float:
    """Factor for the leaky part against the sound board."""
    sound, leaky = likelihoods.log(readings)
    return float(leaky - sound)


def test_a_second_reading_through_the_same_resistor_adds_little():
    """The resistor is at the low end of its spread: one low reading speaks a little for the leak, the second not again."""
    one = board(0.3)
    low = 10e3 * np.exp(-0.5)
    first = odds(one, Reading(FIRST, low))
    both = odds(one, Reading(FIRST, low), Reading(SECOND, low * 1.2))
    assert first > 0.0
    assert abs(both - first) < 0.5 * first


def test_a_reading_that_breaks_the_tie_speaks_all_the_more():
    """Both readings follow one resistor, so that one of them alone at half its value cannot be its spread."""
    one = board(0.3)
    assert one.companions.of(1, (0,)) == 0
    kept = one.terms([Reading(FIRST, 10e3), Reading(SECOND, 12e3)])[SECOND]
    broken = one.terms([Reading(FIRST, 10e3), Reading(SECOND, 6e3)])[SECOND]
    alone = one.terms([Reading(SECOND, 6e3)])[SECOND]
    assert broken[0] < alone[0] < kept[0]


def test_readings_without_a_tie_have_no_companion():
    one = board(0.3, tie=0.2, draws=200)
    assert one.companions.of(1, (0,)) is None
    assert one.companions.of(2, (0, 1)) is None


def test_what_moves_less_than_its_own_error_has_no_companion():
    assert board(0.002).companions.of(1, (0,)) is None


def test_the_order_of_entry_changes_no_bit():
    one, other = board(0.3), board(0.3)
    entries = [Reading(FIRST, 8e3), Reading(SECOND, 9e3), Reading(APART, 3.1e3)]
    assert one.log(entries).tobytes() == other.log(entries[::-1]).tobytes()


def test_a_leak_of_unknown_size_is_a_tie_of_its_own():
    """The resistor is known well, the leak is not: under the leak the second reading follows the first, on a sound board not."""
    one = board(0.003)
    assert one.companions.of(1, (0,)) is None
    own = one.companions.own(1, (0,), None)
    assert list(own) == [0] and list(own[0]) == [1]
    far = 10e3 * 0.5 * np.exp(-1.0)
    both, alone = (one.terms(entries)[SECOND][1] for entries in ([Reading(FIRST, far), Reading(SECOND, 1.2 * far)],
                                                                 [Reading(SECOND, 1.2 * far)]))
    assert both > alone + 1.0, "what the first reading told of the leak is not held against it again"
    assert one.companions.own(1, (0,), 0) == {}, "what the common companion ties already needs no other"


def test_an_open_line_moves_nothing():
    one = board(0.3)
    alone = one.terms([Reading(SECOND, 9e3)])[SECOND]
    assert one.terms([Reading(FIRST, np.inf), Reading(SECOND, 9e3)])[SECOND] == pytest.approx(alone)


def test_a_slip_at_the_companion_drags_nothing_along():
    """A hundred times what any board shows is a wrong range: the second reading then counts by itself on the sound board."""
    one = board(0.1)
    alone = one.terms([Reading(SECOND, 12e3)])[SECOND]
    assert one.terms([Reading(FIRST, 1e6), Reading(SECOND, 12e3)])[SECOND][0] == pytest.approx(alone[0], abs=0.05)
    assert one.terms([Reading(FIRST, 12e3), Reading(SECOND, 12e3)])[SECOND][0] != pytest.approx(alone[0], abs=0.05)


@pytest.mark.parametrize("tie", [0.8, 0.9, 0.97])
@pytest.mark.parametrize("off", [(0.0, 0.0), (-1.0, -1.0), (1.5, 1.0), (-0.5, 0.0)])
def test_the_conditional_density_is_that_of_the_normal_distribution(tie, off):
    """Reference: scipy.stats.multivariate_normal, with the error of each reading added; 4,000 draws, logarithms within 0.25."""
    spread, draws = 0.2, 4000
    one = board(spread, draws, tie)
    companions = Companions(one.readings)
    width = spread / OHMS.relative
    centre = [float(to_axis(value, OHMS)) for value in (10e3, 12e3)]
    at = np.array([centre[0] + off[0] * width, centre[1] + off[1] * width])
    shown = [float(np.sinh(u * OHMS.relative) * OHMS.absolute / OHMS.relative) for u in at]
    given = companions.likelihood(1, [shown[1]], 0, shown[0])[0] / 0.5
    covariance = width**2 * np.array([[1.0, tie], [tie, 1.0]]) + np.eye(2)
    joint = multivariate_normal(centre, covariance).pdf(at)
    single = multivariate_normal(centre[0], covariance[0, 0]).pdf(at[0])
    assert np.log(given / (1.0 - one.readings.gross)) == pytest.approx(np.log(joint / single), abs=0.25)
