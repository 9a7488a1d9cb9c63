"""Two faults put together from one each."""

import numpy as np

from tests.diagnosis import small_board as sb
from triage.board.evidence import STATES
from triage.board.fault import Hypothesis
from triage.diagnosis.composed import with_pairs

E = sb.expectations()
PAIR = Hypothesis((sb.R1_HIGH, sb.C1_SHORT))


def test_each_fault_moves_its_own_readings() -> None:
    both = with_pairs(E, [PAIR])
    row = both.hypotheses.index(PAIR)
    got = dict(zip(sb.PROBES, both.samples[row], strict=True))
    assert (got[sb.OHMS_R1] == E.samples[2, 0]).all(), "only R1 moves it"
    assert (got[sb.OHMS_C1] == E.samples[3, 1]).all(), "only C1 moves it"
    assert (got[sb.DIODE_D1] == E.samples[0, 2]).all(), "neither moves it"
    assert np.isnan(got[sb.VOLTS]).all(), "both move it: not known"


def test_a_stopped_adapter_hides_the_other_fault() -> None:
    both = with_pairs(E, [PAIR])
    assert (both.states[-1] == STATES.index("fuse gone")).all()


def test_collateral_is_taken_from_the_half_that_has_it() -> None:
    pair = Hypothesis((sb.D1_SHORT, sb.C1_SHORT), (sb.R1_OPEN,))
    both = with_pairs(E, [pair])
    assert np.isinf(both.samples[-1, 0]).all() and both.hypotheses[-1] == pair


def test_what_cannot_be_composed_is_left_out() -> None:
    from triage.board.fault import Fault

    odd = Hypothesis((sb.R1_HIGH, Fault("Q7", "open")))
    assert with_pairs(E, [odd, E.hypotheses[1]]).hypotheses == E.hypotheses
