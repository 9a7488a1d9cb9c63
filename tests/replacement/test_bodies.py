"""Bodies and pin orders: what fits, what must be turned, what is drawn. Common practice, no source."""

import pytest

from triage.replacement.bodies import body_fit, pin_fit, pin_orders
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart

CATALOG = Catalog()


def _part(number: str) -> CatalogPart:
    part = CATALOG.find(number)
    assert part is not None
    return part


@pytest.mark.parametrize(
    ("candidate", "old", "fits"),
    [
        ("FR107", "1N4007", True),
        ("1N5408", "1N4007", False),
        ("1N4007", "1N5408", True),
        ("SMA1N", "1N4007", None),
        ("MBRF20100CT", "MBR20100CT", True),
        ("MBR20100CT", "MBRF20100CT", False),
        ("BUT11AF", "BUT11A", True),
        ("BUT11A", "BUT11AF", False),
        ("MJE13003", "MJE13005", False),
        ("B340", "SB340", False),
        ("DB107", "KBP210", False),
    ],
)
def test_body(candidate: str, old: str, fits: bool | None) -> None:
    """Axial leads by their holes, tabs by their insulation, chips never for wires."""
    if fits is None:
        assert CATALOG.find(candidate) is None
        return
    fit = body_fit(_part(candidate), _part(old))
    assert fit.fits is fits
    assert fits or fit.text


def test_an_unknown_body_is_compared_by_eye() -> None:
    """Nothing is refused for a body nobody knows, and it is said."""
    assert body_fit(_part("1N4007"), None).text.startswith("compare body")


def test_insulated_for_live_is_said_to_run_hotter() -> None:
    """The note of the replacement rules."""
    assert "hotter" in body_fit(_part("BUT11AF"), _part("BUT11A")).text


@pytest.mark.parametrize(
    ("text", "orders"),
    [
        ("E C B", (("E", "C", "B"),)),
        ("E C B or B C E", (("E", "C", "B"), ("B", "C", "E"))),
        ("E C B (KEC) or B C E (ON, KiCad symbol)", (("E", "C", "B"), ("B", "C", "E"))),
        ("1 A, 2 K, 3 E, 4 C", (("A", "K", "E", "C"),)),
        ("REF A K (flat side to you, leads down)", (("REF", "A", "K"),)),
        ("+ ~ ~ -", (("+", "~", "~", "-"),)),
        ("maker dependent: compare", ()),
        ("+ - on one side, ~ ~ on the other", ()),
        ("", ()),
    ],
)
def test_pin_orders_are_read_out_of_the_text(text: str, orders: tuple[tuple[str, ...], ...]) -> None:
    """Every order named and none invented."""
    assert pin_orders(text) == orders


@pytest.mark.parametrize(
    ("candidate", "old", "verdict"),
    [
        ("2SC945", "2SC1815", "same"),
        ("BC547", "2SC1815", "different"),
        ("BC547", "2N3904", "turned"),
        ("MJE13003", "MJE13003", "unsure"),
        ("7905", "7805", "different"),
        ("PC817A", "PC817B", "same"),
        ("1N4007", "FR107", "unknown"),
    ],
)
def test_pins(candidate: str, old: str, verdict: str) -> None:
    """CBE into EBC fits when turned by half a turn; ECB and CBE never meet."""
    fit = pin_fit(_part(candidate), _part(old))
    assert fit.verdict == verdict
    assert bool(fit.drawing) == (verdict in ("turned", "different", "unsure"))


def test_the_drawing_shows_both_orders() -> None:
    """Old and new part side by side, seen from the printed side, leads down, in plain characters."""
    drawing = pin_fit(_part("BC547"), _part("2SC1815")).drawing
    lines = drawing.splitlines()
    assert "old part" in lines[0] and "new part" in lines[0]
    assert lines[5].split() == ["E", "C", "B", "C", "B", "E"]
    assert drawing.isascii() and max(map(len, lines)) < 60
