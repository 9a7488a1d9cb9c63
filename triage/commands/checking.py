"""``triage check``: every file that a job may come to read, with every fault it has.

A fault is told with the file, the key, what was found and what was expected.
"""

import argparse
from collections.abc import Callable, Iterator
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

from triage.commands.output import print_json, print_lines
from triage.errors import TriageError

if TYPE_CHECKING:
    from triage.job.kept_check import KeptCheck


def run_check(asked: argparse.Namespace) -> int:
    """Check files and say what is wrong with each; status 1 when anything is."""
    found = list(checked([Path(name) for name in asked.files]))
    if asked.json:
        print_json([{"file": file, "kind": kind, "faults": faults} for file, kind, faults in found])
    else:
        for file, kind, faults in found:
            print_lines([f"{file}: {kind}: {fault}" for fault in faults] or [f"{file}: {kind} in order"])
    return 1 if any(faults for _, _, faults in found) else 0


def checked(files: list[Path]) -> Iterator[tuple[str, str, list[str]]]:
    """(file, what it is, its faults) for each file; when none is named every shipped one and the shop's own settings."""
    from triage.job.display import plain

    for path in files or [*_shipped(), *_own()]:
        kind, faults = _judged(path)
        yield plain(path if files else path.name), kind, [plain(fault, 2000) for fault in faults]


def _shipped() -> list[Path]:
    from triage.data import data_folder

    profiles = data_folder("profiles")
    found = [*sorted(profiles.glob("*.toml")), *sorted((profiles / "templates").glob("*.toml"))]
    found += sorted((profiles / "kept").glob("*.json")) + sorted((profiles / "kept").glob("*.npz"))
    return found + sorted(data_folder("part_catalog").glob("*.toml"))


def _own() -> list[Path]:
    from triage.job.folder import data_directory
    from triage.job.workshop import SETTINGS

    return [path for name in SETTINGS if (path := data_directory() / name).is_file()]


def _judged(path: Path) -> tuple[str, list[str]]:
    """What a file is, and what is wrong with it."""
    from triage.toml_guard import read_toml

    kind = "kept" if path.suffix in (".json", ".npz") else "list" if path.suffix == ".csv" else "file"
    try:
        if kind == "kept":
            return kind, _kept_check().faults(path)
        if kind == "list":
            return kind, _list_faults(path)
        document, _ = read_toml(path)
        kind = _kind_of(document)
        return kind, CHECKS[kind](path, document)
    except TriageError as error:
        return kind, _separated(error)


def _separated(error: TriageError) -> list[str]:
    """The faults of a file one by one, where they came together."""
    return [str(fault) for fault in getattr(error, "faults", ())] or [str(error)]


def _kind_of(document: dict[str, Any]) -> str:
    if document.get("template") is True:
        return "template"
    marks = {
        "job": "job", "family": "profile", "mains": "profile", "class": "catalog", "instrument": "instruments",
        "item": "drawers", "shop": "shop", "new_adapter": "shop", "supplier": "shop",
    }  # fmt: skip
    return next((kind for key, kind in marks.items() if key in document), "table")


def _job(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.board.profile import board_from_dict
    from triage.job.store import load

    job = load(path)
    board_from_dict(job.board, f"{path}, board")
    return [f"a sync program left another version: {copy.name}" for copy in job.conflicts]


def _profile(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.board.profile import board_from_dict

    board_from_dict(document, str(path))
    return []


def _template(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.board.estimate.template import template_from_dict
    from triage.families import family_of

    family_of(template_from_dict(document, str(path)).family)
    return []


def _catalog(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.replacement.catalog_file import read_catalog_file

    read_catalog_file(path)
    return []


def _instruments(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.safety.instruments import load

    load(path)
    return []


def _drawers(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.replacement.drawers import read_drawers

    return _unknown_types(path, read_drawers(path).items)


def _shop(path: Path, document: dict[str, Any]) -> list[str]:
    from triage.job.workshop import read_shop, read_suppliers

    read_suppliers(path.parent, read_shop(path))
    return []


def _list_faults(path: Path) -> list[str]:
    """Own stock when it is named so, else a supplier's list."""
    from triage.replacement.drawers import FILES, read_drawers
    from triage.replacement.supplier import read_supplier_list

    if path.name in FILES:
        return _unknown_types(path, read_drawers(path).items)
    read_supplier_list(path)
    return []


def _unknown_types(path: Path, items: Any) -> list[str]:
    """Parts in stock that the catalog does not know can never be offered."""
    from triage.replacement.catalog import Catalog

    catalog = Catalog()
    return [
        f"{path.name}, item {number}, type: {item.type!r} found, expected a type of the catalog; it is never offered"
        for number, item in enumerate(items, 1)
        if catalog.find(item.type) is None
    ]


def _nothing(path: Path, document: dict[str, Any]) -> list[str]:
    """A table that its own room checks when it is loaded."""
    return []


CHECKS: dict[str, Callable[[Path, dict[str, Any]], list[str]]] = {
    "job": _job, "profile": _profile, "template": _template, "catalog": _catalog, "instruments": _instruments,
    "drawers": _drawers, "shop": _shop, "table": _nothing,
}  # fmt: skip
"""What a TOML file is -> how it is checked."""


@cache
def _kept_check() -> "KeptCheck":
    """The check of kept answers against the shipped profiles, worked out once."""
    from triage.board.profile import load_profile
    from triage.data import data_folder
    from triage.job.kept_check import KeptCheck

    return KeptCheck(load_profile(str(path)) for path in sorted(data_folder("profiles").glob("*.toml")))
