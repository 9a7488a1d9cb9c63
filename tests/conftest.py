"""Shared fixtures: the reference data that lie beside the checkout, when they do."""

from pathlib import Path

import pytest

SHARED = Path(__file__).resolve().parents[2] / "shared"


@pytest.fixture(scope="session")
def shared() -> Path:
    """Folder of the full reference data; a test that needs it is skipped, saying so, where it is absent."""
    if not (SHARED / "reference").is_dir():
        pytest.skip("the reference data folder does not lie beside this checkout")
    return SHARED
