"""What is solved beforehand and shipped is what the program asks for today: a shipped profile opens without solving anything."""

import pytest

from triage.board.profile import load_profile
from triage.data import data_folder
from triage.families.points import fingerprint
from triage.job.cache import Cache, Shipped
from triage.job.learning import NONE
from triage.job.wiring import Wiring

KEPT = data_folder("profiles") / "kept"
SOLVED = [path.stem for path in sorted(data_folder("profiles").glob("*.toml"))
          if (KEPT / f"points-{fingerprint(load_profile(path.stem))}.json").is_file()]


def test_the_demo_board_is_solved():
    """The board that README's first command opens."""
    assert "harbour-handset-charger" in SOLVED


@pytest.mark.parametrize("name", SOLVED)
def test_a_solved_profile_opens_without_solving(name, tmp_path):
    """Nothing new is put into the cache; when this fails, run ``triage solve NAME --into profiles/kept`` and commit it."""
    cache = tmp_path / "answers"
    Wiring(Shipped(KEPT, Cache(cache))).diagnosis(load_profile(name), NONE)
    assert not cache.exists() or not list(cache.iterdir())
