"""One small board with the usual positions, and worst-case stresses of the size a 3 W adapter has.

Invented for these tests in the range of common chargers; nothing here is a reference value.
"""

from triage.board.part import Board, Label, Mains, Part
from triage.board.stress import Stress

TWO = {"a": "p1", "b": "p2"}
SECOND = {"a": "s1", "b": "s2"}


def part(ref: str, kind: str, role: str, type_number: str = "", pins: dict[str, str] | None = None, **figures: float) -> Part:
    """A part; figures named ``rated_...`` are ratings, the others values."""
    ratings = {key.removeprefix("rated_"): value for key, value in figures.items() if key.startswith("rated_")}
    values = {key: value for key, value in figures.items() if not key.startswith("rated_")}
    return Part(ref=ref, kind=kind, role=role, pins=pins or TWO, value=values, ratings=ratings, type=type_number)


def board(*parts: Part, high: float = 253.0, family: str = "ringing_choke_zener") -> Board:
    """A board of these parts on 230 V mains (or with another highest voltage)."""
    return Board(
        id="bench", title="bench", family=family, label=Label("198-253 V~", 5.0, 0.6),
        mains=Mains(50.0, high * 0.78, high / 1.1, high), parts=parts,
        sides={"primary": ("p1", "p2", "p3"), "secondary": ("s1", "s2", "s3")}, ground={},
    )


def stress(ref: str, **values: float) -> tuple[Stress, ...]:
    """Stresses of one part: ``stress("D1", reverse_voltage=711.0)``."""
    return tuple(Stress(ref, quantity, value, condition="253 V, full load") for quantity, value in values.items())
