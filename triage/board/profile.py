"""The profile file: a board as TOML, checked so that every fault in it is reported at once.

A profile holds the label, the mains, the sides with the nodes a probe can reach, the parts with their values, tolerances,
ratings and pins, and the drawing. Values are strings with a unit (``"4.7 uF"``) or plain numbers in SI; tolerances are
fractions, the spreads of estimated values factors; temperatures degC. The same content, embedded in a job file, makes a job
open anywhere.
"""

from collections.abc import Mapping
from pathlib import Path
from typing import Any

from triage.board.check import Check
from triage.board.kinds import PartKind, kinds
from triage.board.part import ORIGINS, Board, Label, Mains, Part
from triage.data import data_folder
from triage.errors import ProfileError
from triage.toml_guard import read_toml

RATING_UNITS = {
    "voltage": "V", "current": "A", "power": "W", "ripple_current": "A", "temperature": "degC", "i2t": "A2s",
    "collector_emitter_voltage": "V", "isolation_voltage": "V", "ac_voltage": "V", "surge_current": "A",
    "saturation_current": "A", "breaking_current": "A", "life": "h",
}
MAX_PARTS, MAX_NODES = 200, 120


def profile_path(name: str) -> Path:
    """File of a profile given by its path or by the name of a shipped one. Raises ProfileError when there is none."""
    direct = Path(name)
    if direct.suffix == ".toml" and direct.is_file():
        return direct
    shipped = data_folder("profiles") / f"{Path(name).name}.toml"
    if shipped.is_file():
        return shipped
    known = ", ".join(sorted(p.stem for p in data_folder("profiles").glob("*.toml")))
    raise ProfileError(name[:80], "no such profile", f"the path of a .toml file or one of: {known}")


def load_profile(name: str) -> Board:
    """Board of a profile, by path or by the name of a shipped one. Raises ProfileError with every fault found."""
    path = profile_path(name)
    content, _ = read_toml(path, ProfileError, path.name)
    return board_from_dict(content, path.name)


def board_from_dict(content: Mapping[str, Any], where: str) -> Board:
    """Board from the content of a profile or of a job's board table.

    Raises ProfileError that lists each fault with its key, what was found and what was expected; ``where`` names the file.
    """
    if content.get("template") is True:
        raise ProfileError(where, "is a template without values", "a profile", "make one with: triage profile estimate")
    check = Check(where)
    label, mains = check.table(content, "label"), check.table(content, "mains")
    parts = check.rows(content, "part", MAX_PARTS)
    board = Board(
        id=check.text(content, "id"), title=check.text(content, "title"), family=check.text(content, "family"),
        label=Label(check.text(label, "input", at="label"), check.quantity(label, "output_voltage", "V", at="label"),
                    check.quantity(label, "output_current", "A", at="label"),
                    check.text(label, "insulation_class", at="label", default="II"),
                    label["marked_year"] if isinstance(label.get("marked_year"), int) else None),
        mains=Mains(check.quantity(mains, "frequency", "Hz", at="mains"), check.quantity(mains, "low", "V", at="mains"),
                    check.quantity(mains, "nominal", "V", at="mains"), check.quantity(mains, "high", "V", at="mains"),
                    check.quantity(mains, "source_resistance", "ohm", at="mains", default=0.8)),
        parts=tuple(_part(check, row, number) for number, row in enumerate(parts, 1)),
        sides=_sides(check, content), ground=dict(check.table(content, "ground")),
        drawing=check.text(content, "drawing", default=""), note=check.text(content, "note", default=""),
        isolation_resistance=check.quantity(content, "isolation_resistance", "ohm", default=100e6),
    )
    _cross_checks(check, board)
    check.finish()
    return board


def board_to_dict(board: Board) -> dict[str, Any]:
    """Content of a profile file that gives this board again."""
    label: dict[str, Any] = {"input": board.label.input, "output_voltage": board.label.output_voltage,
                             "output_current": board.label.output_current,
                             "insulation_class": board.label.insulation_class}
    if board.label.marked_year is not None:
        label["marked_year"] = board.label.marked_year
    m = board.mains
    return {
        "id": board.id, "title": board.title, "family": board.family, "note": board.note, "drawing": board.drawing,
        "isolation_resistance": board.isolation_resistance,
        "label": label,
        "mains": {"frequency": m.frequency, "low": m.low, "nominal": m.nominal, "high": m.high,
                  "source_resistance": m.source_resistance},
        "sides": {side: list(nodes) for side, nodes in board.sides.items()}, "ground": dict(board.ground),
        "part": [_part_to_dict(part) for part in board.parts],
    }


def _part_to_dict(part: Part) -> dict[str, Any]:
    row: dict[str, Any] = {"ref": part.ref, "kind": part.kind, "role": part.role}
    if part.type:
        row["type"] = part.type
    row |= {"origin": part.origin, "pins": dict(part.pins), "value": dict(part.value),
            "tolerance": dict(part.tolerance), "ratings": dict(part.ratings)}
    if part.spread:
        row["spread"] = dict(part.spread)
    if part.fault_modes:
        row["fault_modes"] = list(part.fault_modes)
    return row


def _part(check: Check, row: Mapping[str, Any], number: int) -> Part:
    """One part of the profile; ``number`` stands for it where it has no ref."""
    ref = check.text(row, "ref", at=f"part {number}")
    at = f"part {ref or number}"
    kind = kinds().get(str(row.get("kind")))
    if kind is None:
        check.fault(f"{at} kind", row.get("kind"), "one of " + ", ".join(sorted(kinds())))
        return Part(ref, "resistor", "", {})
    pins = check.table(row, "pins", at)
    missing = [pin for pin in kind.pins if not isinstance(pins.get(pin), str)]
    if missing:
        check.fault(f"{at} pins", sorted(map(str, pins)), "nodes for the pins " + ", ".join(kind.pins))
    values = check.table(row, "value", at) if "value" in row else {}
    for key in kind.required:
        if key not in values:
            check.fault(f"{at} value", sorted(values), f"{key} among them")
    origin = row.get("origin", "marking")
    if origin not in ORIGINS:
        check.fault(f"{at} origin", origin, "one of " + ", ".join(ORIGINS))
    return Part(
        ref, kind.key, check.text(row, "role", at=at), {str(k): str(v) for k, v in pins.items()},
        _numbers(check, values, kind.values, f"{at} value"),
        {str(k): check.quantity(row["tolerance"], k, "", f"{at} tolerance") for k in
         (check.table(row, "tolerance", at) if "tolerance" in row else {})},
        _numbers(check, check.table(row, "ratings", at) if "ratings" in row else {}, RATING_UNITS, f"{at} ratings"),
        check.text(row, "type", at=at, default=""), str(origin), _modes(check, row, kind, at),
        _spread(check, row, kind, at),
    )


def _numbers(check: Check, table: Mapping[str, Any], units: Mapping[str, str], at: str) -> dict[str, float]:
    result = {}
    for key in table:
        if key not in units:
            check.fault(f"{at} {key}", key, "one of " + ", ".join(units))
            continue
        unit = units[key]
        result[key] = check.quantity(table, key, "" if unit == "-" else unit, at)
    return result


def _spread(check: Check, row: Mapping[str, Any], kind: PartKind, at: str) -> dict[str, float]:
    """Factors of the estimated values: each above 1, each of a value that the kind has."""
    table = check.table(row, "spread", at) if "spread" in row else {}
    for key in table:
        if key not in kind.values:
            check.fault(f"{at} spread {key}", key, "one of " + ", ".join(kind.values))
    return {str(key): check.quantity(table, key, "", f"{at} spread", lowest=1.0) for key in table}


def _modes(check: Check, row: Mapping[str, Any], kind: PartKind, at: str) -> tuple[str, ...]:
    modes = row.get("fault_modes", [])
    if not isinstance(modes, list) or any(mode not in kind.fault_modes for mode in modes):
        check.fault(f"{at} fault_modes", modes, "a list out of " + ", ".join(kind.fault_modes))
        return ()
    return tuple(modes)


def _sides(check: Check, content: Mapping[str, Any]) -> dict[str, tuple[str, ...]]:
    sides = check.table(content, "sides")
    result = {}
    for side, nodes in sides.items():
        if isinstance(nodes, list) and len(nodes) <= MAX_NODES and all(isinstance(n, str) and n for n in nodes):
            result[str(side)] = tuple(nodes)
        else:
            check.fault(f"sides {side}", nodes, f"a list of at most {MAX_NODES} node names")
    return result


def _cross_checks(check: Check, board: Board) -> None:
    """Faults that show only between the parts of a profile."""
    refs = [part.ref for part in board.parts]
    for ref in sorted({ref for ref in refs if refs.count(ref) > 1}):
        check.fault("part ref", ref, "each ref once")
    for side, node in board.ground.items():
        if node not in board.sides.get(side, ()):
            check.fault(f"ground {side}", node, f"a node of the side {side}")
    for side in board.sides:
        if side not in board.ground:
            check.fault("ground", sorted(board.ground), f"a node for the side {side}")
    placed = {node for part in board.parts for node in part.pins.values()}
    for side, nodes in board.sides.items():
        for node in nodes:
            if board.parts and node not in placed:
                check.fault(f"sides {side}", node, "a node that a part is connected to")
    if not board.mains.low <= board.mains.nominal <= board.mains.high:
        check.fault("mains", f"{board.mains.low}, {board.mains.nominal}, {board.mains.high}", "low <= nominal <= high")
