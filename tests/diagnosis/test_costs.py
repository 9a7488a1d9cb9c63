"""Minutes of readings: what setting up adds. Reasoned checks, common practice, no source."""

from triage.board.probe import Probe
from triage.diagnosis.costs import Costs

COSTS = Costs.load()


def live(load: str, plus: str = "out") -> Probe:
    return Probe("volts_dc", plus, "sgnd", load)


def test_the_load_is_changed_against_the_last_live_reading_and_not_against_an_earlier_one() -> None:
    back = [live("full"), live("half"), live("full", "raw")]
    assert COSTS.minutes(live("full", "led"), back) == COSTS.reading["volts_dc"]
    assert COSTS.minutes(live("half", "led"), back) == COSTS.reading["volts_dc"] + COSTS.setup["change_load"]


def test_the_first_live_reading_powers_up_and_the_first_reading_of_all_opens_the_case() -> None:
    cold = Probe("ohms", "out", "sgnd")
    assert COSTS.minutes(cold, []) == COSTS.reading["ohms"] + COSTS.setup["open_case"]
    assert COSTS.minutes(live("full"), [cold]) == COSTS.reading["volts_dc"] + COSTS.setup["power_up"]
