"""A hypothesis under which a reading cannot be foreseen says nothing about it, in proper shares."""

import numpy as np
import pytest

from triage.board.fault import Fault, Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.expectations import Expectations
from triage.diagnosis.likelihood import ReadingModel
from triage.diagnosis.settings import Settings


def test_tables_of_a_reading_are_shares_for_known_and_unknown_hypotheses() -> None:
    hypotheses = (Hypothesis(()), Hypothesis((Fault("R1", "open"),)), Hypothesis((Fault("R2", "open"),)))
    samples = np.array([[[100.0, 101.0, 99.0]], [[np.inf, np.inf, np.inf]], [[np.nan, np.nan, np.nan]]], dtype=np.float32)
    expectations = Expectations(hypotheses, (Probe("ohms", "a", "b"),), samples, np.zeros((3, 3, 1), dtype=np.int64))
    model = ReadingModel(expectations, Settings.load())
    sound = model.sound_table(0, np.arange(3))
    assert sound.sum(axis=1) == pytest.approx(1.0)
    assert np.ptp(sound[2]) == pytest.approx(0.0)
    assert model.cell_table(0).sum(axis=1) == pytest.approx(1.0)
