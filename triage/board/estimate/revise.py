"""What the technician changes on an estimated board: values read or measured, parts that are not there, parts that are."""

import re
from collections.abc import Mapping
from dataclasses import replace

from triage.board.circuit import LINE, OUTPUT
from triage.board.estimate.assemble import part_in_role, through, with_link, without_bare_nodes
from triage.board.estimate.design import Design
from triage.board.estimate.roles import roles
from triage.board.kinds import kinds
from triage.board.part import ORIGINS, Board, Part
from triage.board.profile import RATING_UNITS
from triage.errors import EntryError

MARKED = {"resistor": 0.05, "fusible_resistor": 0.05, "electrolytic": 0.2, "capacitor": 0.1, "zener": 0.05, "x_capacitor": 0.2,
          "y_capacitor": 0.2, "inductor": 0.2, "ntc": 0.2, "bipolar_transistor": 0.3, "optocoupler": 0.3, "shunt_reference": 0.01,
          "regulator": 0.04}
"""Kind -> tolerance of a value printed without one [-]; common practice, no source."""
MARKED_ELSE, MEASURED = 0.1, 0.03
"""Tolerance of a printed value of another kind, and of one measured out of circuit with a hand meter [-]."""
LETTERS = {"resistor": "R", "fusible_resistor": "RF", "fuse": "F", "thermal_fuse": "F", "ntc": "RT", "diode": "D", "zener": "DZ",
           "led": "LED", "bridge": "BR", "bipolar_transistor": "Q", "mosfet": "Q", "inductor": "L", "transformer": "T",
           "varistor": "RV", "cable": "W", "connector": "J", "common_mode_choke": "L",
           "x_capacitor": "CX", "y_capacitor": "CY", "capacitor": "C", "electrolytic": "C"}
"""Kind -> letter of a reference designator; IEC 60617 and usage."""
_NODE = re.compile(r"[A-Za-z0-9_+-]{1,20}")


def part_called(board: Board, ref: str) -> Part:
    """The part with this ref, capitals or not. Raises EntryError naming the parts there are."""
    found = next((part for part in board.parts if part.ref.lower() == ref.lower()), None)
    if found is None:
        raise EntryError("part", repr(ref)[:40], "one of " + ", ".join(part.ref for part in board.parts))
    return found


def with_value(board: Board, ref: str, key: str, value: float, origin: str = "measured", tolerance: float | None = None) -> Board:
    """The board with one value or rating of a part known: the estimate's spread gives way to a tolerance.

    value: [SI]. origin: ``marking`` or ``measured``. tolerance: relative half-width [-]; by default what is usual for a print
    of that kind, or the accuracy of a hand meter. Raises EntryError for an unknown part or key, or a value not above 0.
    """
    part = part_called(board, ref)
    if origin not in ORIGINS:
        raise EntryError("origin", repr(origin)[:40], "one of " + ", ".join(ORIGINS))
    if not 0.0 < value < float("inf"):
        raise EntryError(f"{part.ref} {key}", f"{value:g}", "a value above 0")
    kind = kinds()[part.kind]
    if key in kind.values:
        usual = MARKED.get(part.kind, MARKED_ELSE) if origin == "marking" else MEASURED
        known = _known(part, key, value, usual if tolerance is None else tolerance)
        main = kind.required[0] if kind.required else next(iter(kind.values))
        changed = replace(known, origin=origin if key == main else part.origin)
    elif key in RATING_UNITS:
        changed = replace(part, ratings={**part.ratings, key: value})
    else:
        wanted = f"a value ({', '.join(kind.values)}) or a rating ({', '.join(RATING_UNITS)})"
        raise EntryError(f"{part.ref} key", repr(key)[:40], wanted)
    return replace(board, parts=tuple(changed if one is part else one for one in board.parts))


def _known(part: Part, key: str, value: float, tolerance: float) -> Part:
    """The part with one value known within a tolerance; a tolerance of 0 leaves none."""
    spread = {name: factor for name, factor in part.spread.items() if name != key}
    tolerances = {name: width for name, width in part.tolerance.items() if name != key}
    if tolerance > 0.0:
        tolerances[key] = tolerance
    return replace(part, value={**part.value, key: value}, tolerance=tolerances, spread=spread)


def strike(board: Board, ref: str, link: bool | None = None) -> Board:
    """The board without a part.

    link: join its two nodes, as a wire or track would; by default where that is usual for the role. Raises EntryError for an
    unknown part, for a link across other than two pins, and where the board would lose mains, output or ground.
    """
    part = part_called(board, ref)
    role = roles().get(part.role)
    joins = bool(role and role.link) if link is None else link
    pairs = through(part.pins) if joins else ()
    if joins and not pairs:
        raise EntryError(f"link across {part.ref}", f"{len(part.pins)} pins", "a part with two pins, or with two conductors")
    changed = replace(board, parts=tuple(one for one in board.parts if one is not part))
    for pair in pairs:
        changed = with_link(changed, *pair)
    changed = without_bare_nodes(changed)
    left = {node for nodes in changed.sides.values() for node in nodes}
    for node in (LINE, OUTPUT, *board.ground.values()):
        if node not in left:
            raise EntryError(f"strike {part.ref}", f"nothing is left on {node}", "a part the adapter can do without")
    return changed


def add_part(board: Board, role: str, pins: Mapping[str, str], ref: str = "") -> Board:
    """The board with one more part out of the list of roles, its values estimated.

    pins: pin -> node; a new node is put on the side of the part's other nodes. ref: designator, by default the next free one.
    Raises EntryError for an unknown role, a missing pin, a ref that is taken, or nodes of which none is on the board.
    """
    if role not in roles():
        raise EntryError("role", repr(role)[:60], "one of " + ", ".join(sorted(roles())))
    wanted = roles()[role]
    names = kinds()[wanted.kind].pins
    if set(pins) != set(names):
        raise EntryError(f"pins of a {role}", ", ".join(sorted(pins))[:60] or "none", "a node for each of " + ", ".join(names))
    name = ref or _free_ref(board, LETTERS.get(wanted.kind, "U"))
    if any(part.ref.lower() == name.lower() for part in board.parts):
        raise EntryError("ref", repr(name)[:40], "one that no part of the board has")
    features = frozenset({"half wave"} if board.by_role("mains rectifier") else {"bridge"})
    part = part_in_role(Design(board.family, board.label, board.mains, features), wanted, name, {pin: pins[pin] for pin in names})
    return _with_nodes(replace(board, parts=(*board.parts, part)), part)


def move_pin(board: Board, ref: str, pin: str, node: str) -> Board:
    """The board with one pin of a part on another node, for putting a part in series. Raises EntryError as ``add_part``."""
    part = part_called(board, ref)
    if pin not in part.pins:
        raise EntryError(f"{part.ref} pin", repr(pin)[:40], "one of " + ", ".join(part.pins))
    moved = replace(part, pins={**part.pins, pin: node})
    changed = replace(board, parts=tuple(moved if one is part else one for one in board.parts))
    return without_bare_nodes(_with_nodes(changed, part if node not in _nodes(board) else moved, node))


def _nodes(board: Board) -> set[str]:
    return {node for nodes in board.sides.values() for node in nodes}


def _with_nodes(board: Board, part: Part, *more: str) -> Board:
    """The board with the new nodes of a part on the side of its first known node."""
    known = [side for node in part.pins.values() if (side := board.side_of(node))]
    new = [node for node in (*part.pins.values(), *more) if node not in _nodes(board)]
    if not known:
        raise EntryError(f"nodes of {part.ref}", ", ".join(new)[:60], "at least one of " + ", ".join(sorted(_nodes(board))))
    for node in new:
        if not _NODE.fullmatch(node):
            raise EntryError("node", repr(node)[:40], "letters, digits, + - _, at most 20")
    nodes = (*board.sides[known[0]], *dict.fromkeys(new))
    return replace(board, sides={**board.sides, known[0]: nodes})


def _free_ref(board: Board, letter: str) -> str:
    taken = {part.ref for part in board.parts}
    return next(ref for number in range(1, 1000) if (ref := f"{letter}{number}") not in taken)
