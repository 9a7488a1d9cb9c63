"""Writes a board as a profile file that a person can read: values with their units, one table a part."""

import os
import tempfile
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import tomli_w

from triage.board.kinds import kinds
from triage.board.part import Board, Part
from triage.board.profile import RATING_UNITS, board_from_dict, board_to_dict
from triage.errors import ProfileError
from triage.quantities import engineering

DIGITS = 7
"""Significant digits of a value: more than any part is good for."""
WRITTEN = ("ohm", "F", "H", "V", "A", "W", "Hz")
"""Units that are written behind a value; other values stand as plain SI numbers."""
HEAD = """\
# Profile of an adapter. Values are strings with a unit or plain SI numbers; tolerances are fractions, spreads factors (nine of
# ten such boards lie between the value divided by it and the value times it); temperatures degC; i2t in A2s.
"""


def profile_text(board: Board, name: str) -> str:
    """The profile file of a board under the id ``name``; reading it gives the board again."""
    content = board_to_dict(board)
    head = {"id": name, **{key: content[key] for key in ("title", "family", "note", "drawing") if content[key] or key == "title"}}
    head["isolation_resistance"] = content["isolation_resistance"]
    tables = {key: content[key] for key in ("label", "mains", "sides", "ground")}
    text = HEAD + tomli_w.dumps(head, multiline_strings=True) + "\n" + tomli_w.dumps(tables)
    return text + "".join(_part_text(part) for part in board.parts)


def save_profile(board: Board, path: Path, replace: bool = False) -> None:
    """Write a board as a profile in one step; ``replace``: over a file that is there.

    Raises ProfileError when the file cannot be written, is there already, or the board would not be read back.
    """
    if path.suffix != ".toml":
        raise ProfileError(str(path), "a profile's name ends in .toml", advice=f"call it {path.stem}.toml")
    if path.exists() and not replace:
        raise ProfileError(str(path), "a file of that name is there already", advice="choose another name")
    board_from_dict(board_to_dict(board), str(path))
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with tempfile.NamedTemporaryFile("w", encoding="utf-8", dir=path.parent, prefix=f".{path.stem}-", suffix=".draft",
                                         delete=False) as draft:
            draft.write(profile_text(board, path.stem))
        os.replace(draft.name, path)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise ProfileError(str(path), f"cannot be written: {reason}", advice="choose another place") from None


def _part_text(part: Part) -> str:
    """One part as a table with its values on one line each."""
    kind = kinds()[part.kind]
    lines = ["", "[[part]]"]
    lines += [f"{key} = {_scalar(value)}" for key, value in (("ref", part.ref), ("kind", part.kind), ("role", part.role))]
    if part.type:
        lines.append(f"type = {_scalar(part.type)}")
    lines += [f"origin = {_scalar(part.origin)}", f"pins = {_inline(part.pins)}"]
    for key, table in (("value", _with_units(part.value, kind.values)), ("tolerance", part.tolerance), ("spread", part.spread),
                       ("ratings", _with_units(part.ratings, RATING_UNITS))):
        if table:
            lines.append(f"{key} = {_inline(table)}")
    if part.fault_modes:
        lines.append(f"fault_modes = {_scalar(list(part.fault_modes))}")
    return "\n".join(lines) + "\n"


def _with_units(values: Mapping[str, float], units: Mapping[str, str]) -> dict[str, Any]:
    """Values as text with their unit where the unit has prefixes to write, else as numbers."""
    return {key: engineering(value, units[key], DIGITS) if units[key] in WRITTEN else value for key, value in values.items()}


def _inline(table: Mapping[str, Any]) -> str:
    return "{ " + ", ".join(f"{_key(key)} = {_scalar(value)}" for key, value in table.items()) + " }"


def _key(key: str) -> str:
    return tomli_w.dumps({key: 0}).partition(" = ")[0]


def _scalar(value: Any) -> str:
    """One value as TOML writes it, on one line."""
    if isinstance(value, list):
        return "[" + ", ".join(_scalar(item) for item in value) + "]"
    return tomli_w.dumps({"x": value}).partition(" = ")[2].strip()
