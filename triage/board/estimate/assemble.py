"""Makes a board of a template, the label and what is seen: every value estimated, with the spread that is left."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

from triage.board.estimate.design import Design
from triage.board.estimate.label import mains_of
from triage.board.estimate.roles import Role
from triage.board.estimate.rounding import estimate_of, rating_of
from triage.board.estimate.seen import EXCLUSIVE, Seen
from triage.board.estimate.template import Place, Template
from triage.board.kinds import kinds
from triage.board.kinds.wiring import PINS as CONDUCTORS
from triage.board.part import Board, Label, Part
from triage.errors import ProfileError

LEAST_VOLTS, MOST_VOLTS, MOST_WATTS = 1.0, 60.0, 300.0
"""Outputs that adapters have; beyond them the rules say nothing [V, W]."""
NOTE = "Nobody has drawn this board: its values are estimated from the label; the drawing shows the usual build of the family."
KEPT_NODES = ("mains_l", "mains_n", "out")
"""Nodes that keep their name when a wire joins them to another: the program looks for them."""


@dataclass(frozen=True, slots=True)
class Derivation:
    """Where one estimated value of a board comes from."""

    ref: str
    role: str
    key: str
    value: float
    """[SI]"""
    spread: float
    """[-]"""
    unit: str
    reason: str


def features_of(template: Template, seen: Seen) -> frozenset[str]:
    """Features taken as there: seen, or usual and neither denied nor replaced by what is seen."""
    taken = set(template.usual - seen.absent) | set(seen.present)
    for group in EXCLUSIVE:
        here = [feature for feature in group if feature in seen.present]
        if here:
            taken -= set(group) - set(here)
        elif any(feature in seen.absent for feature in group) and not taken & set(group):
            others = [place.when for place in template.places if place.when in group and place.when not in seen.absent]
            taken.update(others[:1])
    return frozenset(taken)


def estimate(template: Template, label: Label, seen: Seen = Seen(), name: str = "") -> Board:  # noqa: B008
    """Board of a template with every value estimated from the label. ``name``: id of the board.

    Raises ProfileError for an output that no adapter has, QuantityError for an input line without volts.
    """
    design = design_of(template, label, seen)
    places = tuple(place for place in template.places if not place.when or place.when in design.features)
    parts = tuple(_part(design, place) for place in places)
    rating = f"{label.output_voltage:g} V {label.output_current:g} A"
    board = Board(
        name or f"estimated-{rating.replace(' ', '')}", f"{rating} adapter, {template.title}", template.family, label,
        design.mains, parts, dict(template.sides), dict(template.ground), template.drawing, NOTE)
    for place in template.places:
        if place not in places and place.link and not _joined(board, place):
            for pair in through(place.pins):
                board = with_link(board, *pair)
    return without_bare_nodes(board)


def design_of(template: Template, label: Label, seen: Seen = Seen()) -> Design:  # noqa: B008
    """The designs behind the estimates. Raises as ``estimate``."""
    watts = label.output_voltage * label.output_current
    if not (LEAST_VOLTS <= label.output_voltage <= MOST_VOLTS and 0.0 < watts <= MOST_WATTS):
        raise ProfileError("label", f"{label.output_voltage:g} V, {label.output_current:g} A",
                           f"{LEAST_VOLTS:g} to {MOST_VOLTS:g} V and at most {MOST_WATTS:g} W", "read the output line again")
    return Design(template.family, label, mains_of(label.input), features_of(template, seen))


def derivations(template: Template, label: Label, seen: Seen = Seen()) -> tuple[Derivation, ...]:  # noqa: B008
    """Each estimated value with its reason, in the order of the template."""
    design = design_of(template, label, seen)
    found = []
    for place in template.places:
        if place.when and place.when not in design.features:
            continue
        for key, quantity in place.value.items():
            value, spread = estimate_of(design[quantity], place.kind, key, place.precise)
            unit = kinds()[place.kind].values[key]
            found.append(Derivation(place.ref, place.role, key, value, spread, unit, design.reason(quantity)))
    return tuple(found)


def part_in_role(design: Design, role: Role, ref: str, pins: dict[str, str]) -> Part:
    """A part that is usual in a role, estimated like those of a template."""
    return _part(design, Place(ref, role.name, pins, role.kind, role.value, role.ratings, precise=role.precise))


def _part(design: Design, place: Place) -> Part:
    estimates = {key: estimate_of(design[quantity], place.kind, key, place.precise) for key, quantity in place.value.items()}
    ratings = {key: float(figure) if isinstance(figure, int | float) else rating_of(design[figure], place.kind, key)
               for key, figure in place.ratings.items()}
    values = {key: value for key, (value, _) in estimates.items()}
    spreads = {key: spread for key, (_, spread) in estimates.items()}
    return Part(place.ref, place.kind, place.role, dict(place.pins), values, ratings=ratings, origin="estimated",
                fault_modes=place.fault_modes, spread=spreads)


def through(pins: Mapping[str, str]) -> tuple[tuple[str, str], ...]:
    """Pairs of nodes that wires join where a part is missing: its two ends, or both conductors of a cable; empty for others."""
    if set(CONDUCTORS) == set(pins):
        return (pins["a_in"], pins["a_out"]), (pins["b_in"], pins["b_out"])
    ends = tuple(pins.values())
    return ((ends[0], ends[1]),) if len(ends) == 2 else ()


def _joined(board: Board, place: Place) -> bool:
    """True where another part of the board already lies between the nodes of a place."""
    nodes = set(place.pins.values())
    return any(nodes <= set(part.pins.values()) and len(part.pins) == 2 for part in board.parts)


def with_link(board: Board, a: str, b: str) -> Board:
    """The board with two nodes joined by a wire: the first name stays, unless the program looks for the second."""
    gone, kept = (a, b) if b in KEPT_NODES or b in board.ground.values() else (b, a)

    def moved(part: Part) -> Part:
        return replace(part, pins={pin: kept if node == gone else node for pin, node in part.pins.items()})

    return replace(board, parts=tuple(map(moved, board.parts)))


def without_bare_nodes(board: Board) -> Board:
    """The board with only those nodes that a part is connected to."""
    used = {node for part in board.parts for node in part.pins.values()}
    return replace(board, sides={side: tuple(node for node in nodes if node in used) for side, nodes in board.sides.items()})
