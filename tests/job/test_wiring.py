"""The real rooms joined: demand, candidates, fitting and search as a job sees them; no circuit is solved
here."""

from pathlib import Path

import pytest

from triage.board.part import Board
from triage.board.profile import load_profile
from triage.board.stress import Stress
from triage.errors import CatalogError
from triage.job.cache import Cache
from triage.job.fitting import with_part
from triage.job.wiring import Wiring

BOARD = load_profile("harbour-handset-charger")


class WithStresses(Wiring):
    """The wiring with two stresses set by hand."""

    def stresses(self, board: Board) -> tuple[Stress, ...]:
        return (
            Stress("D1", "reverse_voltage", 712.0, 1000.0, 0.7, "table", "253 V, no load"),
            Stress("D1", "average_current", 0.016, 1.0, 0.5, "table", "198 V, full load"),
            Stress("C1", "peak_voltage", 357.0, 400.0, 0.9, "table", "253 V, no load"),
            Stress("C1", "ripple_current", 0.0625, 0.08, 0.9, "table", "198 V, full load"),
        )


@pytest.fixture(scope="module")
def wiring(tmp_path_factory: pytest.TempPathFactory) -> Wiring:
    return WithStresses(Cache(tmp_path_factory.mktemp("kept")))


def test_a_demand_is_computed_from_the_stress_of_the_place(wiring: Wiring) -> None:
    demand = wiring.demand(BOARD, "D1")
    voltage = next(one for one in demand.requirements if one.key == "vrrm_V")
    assert demand.role == "mains rectifier"
    assert voltage.minimum is not None and voltage.minimum >= 712.0 and voltage.source


def test_every_accepted_candidate_meets_the_figures_and_can_be_fitted(wiring: Wiring) -> None:
    found = wiring.candidates(BOARD, "D1")
    accepted = [one for one in found if one.accepted]
    assert accepted and accepted == sorted(accepted, key=lambda one: -round(one.score, 6))
    for one in accepted[:5]:
        board = wiring.fitted(BOARD, "D1", one.type)
        assert board.part("D1").type == one.type
        assert board.part("D1").ratings["voltage"] >= 712.0
    assert all(one.refusals for one in found if not one.accepted)


def test_a_part_that_will_not_do_says_why(wiring: Wiring) -> None:
    refused = wiring.ask(BOARD, "D1", "1N4001")
    assert not refused.accepted and any("50 V" in text for text in refused.refusals)


def test_fitting_changes_that_part_only(wiring: Wiring) -> None:
    part = wiring.catalog.find("1N4005")
    assert part is not None
    board = with_part(BOARD, "D1", part)
    assert board.part("D1").ratings["voltage"] == 600.0
    assert [p for p in board.parts if p.ref != "D1"] == [p for p in BOARD.parts if p.ref != "D1"]
    assert board.part("D1").pins == BOARD.part("D1").pins and board.part("D1").role == "mains rectifier"


def test_an_unknown_type_is_refused_by_name(wiring: Wiring) -> None:
    with pytest.raises(CatalogError, match="XYZ999"):
        wiring.fitted(BOARD, "D1", "XYZ999")
    with pytest.raises(CatalogError, match="XYZ999"):
        wiring.ask(BOARD, "D1", "XYZ999")


def test_a_half_read_marking_finds_the_part(wiring: Wiring) -> None:
    found = wiring.matches("1N40?7")
    assert "1N4007" in [one.type for one in found[:3]]
    assert all(0 <= one.score <= 100 and one.band for one in found)


def test_every_part_of_every_shipped_board_has_a_demand(wiring: Wiring) -> None:
    from triage.data import data_folder

    for path in Path(data_folder("profiles")).glob("*.toml"):
        board = load_profile(str(path))
        for part in board.parts:
            demand = wiring.demand(board, part.ref)
            assert demand.requirements or demand.note, f"{path.name} {part.ref}"
