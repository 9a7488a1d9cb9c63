"""The part catalog: files of part classes, read when first asked for.

A file of the folder belongs to the catalog when it states a ``class`` that is also its name. Opening the catalog reads
nothing but names; a class is loaded and checked at its first use and kept. Own stock and supplier lists lie beside the
catalog, never inside it (see ``triage.replacement.drawers``).
"""

import re
from collections.abc import Iterator
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING

from triage.data import data_folder
from triage.errors import CatalogError, TriageError
from triage.replacement.catalog_file import CatalogFaults, CatalogFile, read_catalog_file
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.generic import part_called, parts_between

if TYPE_CHECKING:
    from triage.replacement.search import MarkingList

_CLASS_LINE = re.compile(r'^class\s*=\s*"', re.MULTILINE)


def plain_number(text: str) -> str:
    """A type number without case and separators, for comparing what two people wrote: ``2SC-1815 gr`` -> ``2SC1815GR``."""
    return "".join(char for char in text.upper() if char.isalnum() or char in "+.")


class Catalog:
    """All part classes of a folder, each loaded at first use."""

    def __init__(self, folder: Path | None = None) -> None:
        """Open the catalog in ``folder``; without one, the catalog shipped with the program."""
        self.folder = folder if folder is not None else data_folder("part_catalog")
        self._files: dict[str, CatalogFile] = {}
        self.search_lists: dict[str, MarkingList] = {}
        """Markings of each class asked for, ready to be searched (see ``triage.replacement.search``)."""

    @cached_property
    def classes(self) -> tuple[str, ...]:
        """Names of the part classes, in alphabetical order."""
        return tuple(path.stem for path in _catalog_paths(self.folder))

    def file(self, part_class: str) -> CatalogFile:
        """The loaded file of one class. Raises CatalogError for an unknown class or a file with faults."""
        if part_class not in self._files:
            if part_class not in self.classes:
                raise CatalogError(
                    f"part class {part_class!r}", "not in the catalog", "one of " + ", ".join(self.classes)
                )
            self._files[part_class] = _named_like_its_class(self.folder / f"{part_class}.toml")
        return self._files[part_class]

    def parts(self, part_class: str | None = None) -> tuple[CatalogPart, ...]:
        """The parts with a type of their own, of one class or of all, in the order of the files."""
        if part_class is not None:
            return self.file(part_class).parts
        return tuple(part for name in self.classes for part in self.file(name).parts)

    def near(self, part_class: str, low: float, high: float) -> Iterator[CatalogPart]:
        """Parts of a class without type numbers, in every usual value from low to high [SI]."""
        return parts_between(self.file(part_class), low, high)

    @cached_property
    def _by_number(self) -> dict[str, CatalogPart]:
        """Plain type number -> part; a printed marking leads to a part only when it belongs to one part alone."""
        marked: dict[str, list[CatalogPart]] = {}
        for part in self.parts():
            for marking in part.markings:
                marked.setdefault(plain_number(marking), []).append(part)
        found = {number: parts[0] for number, parts in marked.items() if len(parts) == 1}
        return found | {plain_number(part.type): part for part in reversed(self.parts())}

    def find(self, number: str) -> CatalogPart | None:
        """The part with this type number, unambiguous marking or generic name, or None."""
        plain = plain_number(number)
        if not plain:
            return None
        part = self._by_number.get(plain)
        if part is not None:
            return part
        for name in self.classes:
            if self.file(name).sizes and (part := part_called(self.file(name), " ".join(number.split()))):
                return part
        return None


def check_catalog(folder: Path) -> list[TriageError]:
    """Every fault of every catalog file of a folder; an empty list means that the catalog is sound."""
    faults: list[TriageError] = []
    seen: dict[str, str] = {}
    for path in _catalog_paths(folder):
        try:
            file = _named_like_its_class(path)
        except CatalogFaults as error:
            faults.extend(error.faults)
            continue
        for part in file.parts:
            plain = plain_number(part.type)
            if seen.setdefault(plain, path.name) != path.name:
                faults.append(
                    CatalogError(f"{path.name}, {part.type}", f"the type is also in {seen[plain]}", "unique types")
                )
    return faults


def _catalog_paths(folder: Path) -> list[Path]:
    """Files of the folder that state a class; other tables may lie beside them."""
    paths = []
    for path in sorted(folder.glob("*.toml")):
        try:
            if _CLASS_LINE.search(path.read_text(encoding="utf-8", errors="replace")):
                paths.append(path)
        except OSError:
            continue
    return paths


def _named_like_its_class(path: Path) -> CatalogFile:
    file = read_catalog_file(path)
    if file.part_class != path.stem:
        fault = CatalogError(f"{path.name}, class", f"{file.part_class!r}", f"the name of the file, {path.stem!r}")
        raise CatalogFaults(path.name, [fault])
    return file
