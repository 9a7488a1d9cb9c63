"""A board made from its label, before there is a job: the family it may belong to, every value estimated, and what the
technician reads, measures, strikes out or adds.

    draft = Draft()
    draft.families("5", "0.6", ["1 transistor", "no optocoupler"])
    view = draft.estimate("ringing_choke_zener", "220-240 V~", "5", "0.6", "II", ["1 transistor"])
    view = draft.mark("Q1", "MJE13003")
    draft.save(Path("cube.toml"))

Every call that changes something answers with the new view and can be taken back. A draft that has a file is on the disk
before the view is given.
"""

from collections.abc import Mapping, Sequence
from dataclasses import replace
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING

from triage.board.estimate.assemble import Derivation, derivations, estimate
from triage.board.estimate.proposal import propose_family
from triage.board.estimate.revise import add_part, move_pin, part_called, strike, with_value
from triage.board.estimate.roles import roles
from triage.board.estimate.seen import parse_seen
from triage.board.estimate.template import template_of
from triage.board.estimate.turns import TurnCheck, turn_checks, with_turns
from triage.board.kinds import kinds
from triage.board.part import Board, Label, Part
from triage.board.profile import RATING_UNITS, load_profile
from triage.errors import EntryError, ProfileError, QuantityError
from triage.job.display import plain
from triage.job.draft_views import DraftPartView, DraftView, FamilyView, KnownView, TurnCheckView
from triage.job.folder import PROFILES, data_directory, free_name
from triage.job.intake import with_marking
from triage.job.profile_file import save_profile
from triage.quantities import engineering, parse, parse_with_tolerance

if TYPE_CHECKING:
    from triage.replacement.catalog import Catalog

MOST_AREA = 10_000.0
"""Largest cross-section of a core that is taken for one [mm2]."""


def profiles_folder() -> Path:
    """Where the profiles of the shop's own lie; it need not exist."""
    return data_directory() / PROFILES


class Draft:
    """One board being put together."""

    def __init__(self, catalog: "Catalog | None" = None) -> None:
        """catalog: where markings are looked up; by default the shipped one, read when first needed."""
        self._given = catalog
        self.path: Path | None = None
        """Profile that every change is written to; None: only ``save`` writes."""
        self._boards: list[Board] = []
        self._derived: dict[tuple[str, str], Derivation] = {}

    @cached_property
    def _catalog(self) -> "Catalog":
        from triage.replacement.catalog import Catalog

        return self._given or Catalog()

    @property
    def board(self) -> Board:
        """The board as it stands. Raises EntryError before anything was estimated."""
        if not self._boards:
            raise EntryError("board", "nothing is estimated yet", "the label and a family first")
        return self._boards[-1]

    @classmethod
    def open(cls, path: Path, catalog: "Catalog | None" = None) -> "Draft":
        """Go on with a profile of one's own; every change is written to it. Raises ProfileError."""
        draft = cls(catalog)
        draft._boards = [load_profile(str(path))]
        draft.path = path
        return draft

    def families(self, volts: str, amperes: str, seen: Sequence[str]) -> tuple[FamilyView, ...]:
        """The families it may be, likeliest first. volts, amperes: as on the label, or empty where they cannot be read.

        Raises QuantityError or EntryError naming what cannot be read.
        """
        power = parse(volts, "V") * parse(amperes, "A") if volts.strip() and amperes.strip() else None
        return tuple(
            FamilyView(one.family, plain(one.title), one.chance, tuple(map(plain, one.reasons)))
            for one in propose_family(parse_seen(seen), power)
        )

    def estimate(
        self, family: str, input_line: str, volts: str, amperes: str, insulation_class: str, seen: Sequence[str], title: str = ""
    ) -> DraftView:
        """Begin with the board of a family, every value estimated. Arguments as on the label; title: what the adapter is
        called, by default its output and family.

        Raises EntryError, QuantityError or ProfileError naming what is wrong.
        """
        if insulation_class not in ("I", "II"):
            raise EntryError("class", repr(insulation_class)[:20], "I (earthed) or II (double square)")
        template, told = template_of(family), parse_seen(seen)
        label = Label(input_line, parse(volts, "V"), parse(amperes, "A"), insulation_class)
        board = estimate(template, label, told)
        self._boards = [replace(board, title=title.strip()) if title.strip() else board]
        self._derived = {(one.ref, one.key): one for one in derivations(template, label, told)}
        return self.view(f"{len(self.board.parts)} parts estimated from the label")

    def set(self, ref: str, key: str, text: str, measured: bool = False) -> DraftView:
        """One value or rating as read off the part, or measured. Raises EntryError or QuantityError."""
        part = part_called(self.board, ref)
        unit = _unit(part, key)
        value, tolerance = parse_with_tolerance(text, unit)
        changed = with_value(self.board, part.ref, key, value, "measured" if measured else "marking", tolerance)
        return self._take(changed, f"{part.ref} {_words(key)}: {engineering(value, unit)}")

    def mark(self, ref: str, marking: str) -> DraftView:
        """What is printed on a part: a type of the catalog, a value code, or its main value in full.

        Raises EntryError naming the nearest types.
        """
        part = part_called(self.board, ref)
        try:
            changed, said = with_marking(self.board, part.ref, marking, self._catalog)
        except EntryError:
            key = next(iter(kinds()[part.kind].required), "")
            if not key or _unit(part, key) == "1":
                raise
            try:
                return self.set(part.ref, key, marking)
            except QuantityError:
                pass
            raise
        return self._take(changed, said)

    def strike(self, ref: str) -> DraftView:
        """A part that the board lacks. Raises EntryError where the board would lose mains, output or ground."""
        return self._take(strike(self.board, ref), f"{part_called(self.board, ref).ref} struck out")

    def add(self, role: str, pins: Mapping[str, str], ref: str = "") -> DraftView:
        """A part more. pins: pin -> node. Raises EntryError."""
        changed = add_part(self.board, role, pins, ref)
        return self._take(changed, f"{changed.parts[-1].ref} added: {role}")

    def move(self, ref: str, pin: str, node: str) -> DraftView:
        """One pin of a part on another node. Raises EntryError."""
        return self._take(move_pin(self.board, ref, pin, node), f"{part_called(self.board, ref).ref} {pin} on {node}")

    def turns(self, ref: str, counts: Mapping[str, str], core_area: str = "") -> DraftView:
        """Counted turns of a transformer, winding -> as typed, held against the rest of the board.

        core_area: cross-section of the middle leg in mm2 as typed; empty: not measured. Raises EntryError or QuantityError.
        """
        numbers = {winding: parse(text, "1") for winding, text in counts.items() if text.strip()}
        area = parse(core_area, "1") if core_area.strip() else None
        if area is not None and not 1.0 <= area <= MOST_AREA:
            raise EntryError("core area", f"{area:g} mm2", f"1 to {MOST_AREA:g} mm2")
        changed = with_turns(self.board, ref, numbers)
        checks = tuple(map(_check_view, turn_checks(changed, ref, None if area is None else area * 1e-6)))
        odd = sum(not one.fits for one in checks)
        said = "the turns fit the rest of the board"
        if odd:
            said = f"{odd} of {len(checks)} checks do not fit: count or measure again"
        return replace(self._take(changed, f"{ref}: {said}"), checks=checks)

    def undo(self) -> DraftView:
        """Take the last change back. Raises EntryError when there is none."""
        if len(self._boards) < 2:
            raise EntryError("undo", "nothing was changed yet")
        self._boards.pop()
        self._write()
        return self.view("taken back")

    def role_pins(self) -> dict[str, tuple[str, ...]]:
        """Roles in which a part can be added -> its pins."""
        return {name: kinds()[one.kind].pins for name, one in sorted(roles().items())}

    def save(self, path: Path, over: bool = False) -> Path:
        """Write the board as a profile and return its file. over: in place of a file that is there.

        Raises ProfileError when it cannot be written, or is there already.
        """
        save_profile(replace(self.board, id=path.stem), path, replace=over)
        return path

    def keep(self) -> Path:
        """From now on write every change into a file of its own in the shop's folder of profiles, and say which."""
        if self.path is None:
            self.path = self.save(free_name(profiles_folder(), self.board.title))
        return self.path

    def view(self, message: str = "") -> DraftView:
        """The board as it stands."""
        board = self.board
        parts = tuple(self._part_view(part) for part in board.parts)
        nodes = tuple(plain(node) for side in board.sides.values() for node in side)
        known = sum(any(one.known in ("marking", "measured") for one in part.values) or bool(part.type) for part in parts)
        return DraftView(plain(board.title), board.family, parts, plain(board.drawing, 8000, lines=True), plain(message),
                         nodes=nodes, known=known)  # fmt: skip

    def _take(self, board: Board, said: str) -> DraftView:
        self._boards.append(board)
        try:
            self._write()
        except ProfileError:
            self._boards.pop()
            raise
        return self.view(said)

    def _write(self) -> None:
        if self.path is not None:
            self.save(self.path, over=True)

    def _part_view(self, part: Part) -> DraftPartView:
        values = [self._known(part, key, value) for key, value in part.value.items()]
        values += [KnownView(key, value, RATING_UNITS[key], value, value, "rating") for key, value in part.ratings.items()]
        pins = tuple((pin, plain(node)) for pin, node in part.pins.items())
        return DraftPartView(plain(part.ref), part.kind, plain(part.role), plain(part.type), part.origin, pins, tuple(values))

    def _known(self, part: Part, key: str, value: float) -> KnownView:
        unit = kinds()[part.kind].values[key]
        if key in part.spread:
            derived = self._derived.get((part.ref, key))
            ends = value / part.spread[key], value * part.spread[key]
            return KnownView(key, value, unit, *ends, "estimated", plain(derived.reason) if derived else "usual in this role")
        width = part.tolerance.get(key, 0.0)
        known = part.origin if part.origin != "estimated" else "marking"
        return KnownView(key, value, unit, value * (1.0 - width), value * (1.0 + width), known)


def _unit(part: Part, key: str) -> str:
    """Unit of a value or rating, as quantities are typed."""
    unit = {**RATING_UNITS, **kinds()[part.kind].values}.get(key, "-")
    return "1" if unit == "-" else unit


def _words(key: str) -> str:
    return key.replace("_", " ")


def _check_view(one: TurnCheck) -> TurnCheckView:
    unit = "" if one.unit == "1" else f" {one.unit}"
    shown = f"{one.value:.3g}{unit}, bounds {one.low:.3g} to {one.high:.3g}"
    return TurnCheckView(plain(one.text), shown, one.fits, plain(one.note))
