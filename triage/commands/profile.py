"""Sub-commands of ``triage profile``: boards that nobody has drawn, from the label to a profile file."""

import argparse
from collections.abc import Callable, Sequence
from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING, Any

from triage.commands.output import columns, percent, print_json, print_lines
from triage.errors import EntryError
from triage.quantities import engineering, parse, parse_with_tolerance

if TYPE_CHECKING:
    from triage.board.estimate.assemble import Derivation
    from triage.board.part import Board

Argument = tuple[tuple[str, ...], dict[str, Any]]

FILE: Argument = (("file",), {"metavar": "FILE", "help": "profile file of your own"})
REF: Argument = (("ref",), {"metavar": "REF", "help": "part"})
SEEN: Argument = (("--seen",), {"action": "append", "default": [], "metavar": "WHAT",
                      "help": "optocoupler, 'no Y capacitor', '3 windings' ...; may be given again"})
ACTIONS: dict[str, tuple[str, tuple[Argument, ...]]] = {
    "propose": ("which family a board belongs to", (
        (("--output",), {"metavar": "VOLTS"}), (("--current",), {"metavar": "AMPERES"}), SEEN)),
    "estimate": ("make a profile from the label, every value estimated", (
        (("family",), {}),
        (("--input",), {"required": True, "metavar": "LINE", "help": "input line of the label, such as '100-240 V~ 50/60 Hz'"}),
        (("--output",), {"required": True, "metavar": "VOLTS"}), (("--current",), {"required": True, "metavar": "AMPERES"}),
        (("--class",), {"dest": "insulation", "default": "II", "choices": ("I", "II"), "help": "protection class"}), SEEN,
        (("-o", "--save"), {"metavar": "FILE", "help": "profile to make; without it the estimates are only shown"}))),
    "set": ("enter a value, a rating or a marking that was read or measured", (
        FILE, REF, (("key",), {"help": "'marking', or a value or rating such as resistance, voltage"}), (("value",), {}),
        (("--measured",), {"action": "store_true", "help": "measured, not read off the part"}))),
    "turns": ("enter counted turns and check them", (
        FILE, REF, (("counts",), {"nargs": "*", "metavar": "winding=turns"}),
        (("--core-area",), {"type": float, "metavar": "MM2", "help": "cross-section of the middle leg in mm2"}))),
    "strike": ("strike out a part the board lacks", (
        FILE, REF,
        (("--link",), {"action": argparse.BooleanOptionalAction, "default": None,
                       "help": "join its two nodes (default: where that is usual)"}))),
    "add": ("add a part out of the list of roles", (
        FILE, (("role",), {}), (("pins",), {"nargs": "+", "metavar": "pin=node"}), (("--ref",), {"default": ""}))),
    "move": ("put one pin of a part on another node", (FILE, REF, (("pin",), {}), (("node",), {}))),
    "roles": ("list the roles a part can be added in", ()),
    "save": ("save the board of a job as a profile", ((("job",), {}), FILE)),
}
"""Action -> (help, its arguments)."""


def parser() -> argparse.ArgumentParser:
    """The parser of everything behind ``triage profile``."""
    about = "Boards that nobody has drawn: from the label to a profile file."
    top = argparse.ArgumentParser(prog="triage profile", description=about)
    subs = top.add_subparsers(dest="action", metavar="ACTION", required=True)
    for name, (summary, arguments) in ACTIONS.items():
        sub = subs.add_parser(name, help=summary, description=summary)
        sub.add_argument("--json", action="store_true", help="print one JSON document")
        for names, options in arguments:
            sub.add_argument(*names, **options)
    return top


def run_profile(asked: argparse.Namespace) -> int:
    """Carry out one action; see ACTIONS."""
    chosen = parser().parse_args([*asked.words, *(["--json"] if asked.json else [])])
    action: Callable[[argparse.Namespace], int] = globals()[f"_{chosen.action}"]
    return action(chosen)


def _propose(asked: argparse.Namespace) -> int:
    from triage.board.estimate.proposal import propose_family
    from triage.board.estimate.seen import parse_seen

    power = parse(asked.output, "V") * parse(asked.current, "A") if asked.output and asked.current else None
    found = propose_family(parse_seen(asked.seen), power)
    if asked.json:
        print_json(found)
    else:
        rows = [(percent(one.chance), one.family, one.title, "; ".join(one.reasons)) for one in found]
        print_lines(columns(("chance", "family", "what it is", "because"), rows))
    return 0


def _estimate(asked: argparse.Namespace) -> int:
    from triage.board.estimate.assemble import derivations, estimate
    from triage.board.estimate.seen import parse_seen
    from triage.board.estimate.template import template_of
    from triage.board.part import Label
    from triage.job.profile_file import save_profile

    template, seen = template_of(asked.family), parse_seen(asked.seen)
    label = Label(asked.input, parse(asked.output, "V"), parse(asked.current, "A"), asked.insulation)
    if asked.save:
        path = Path(asked.save)
        save_profile(estimate(template, label, seen, path.stem), path)
    found = derivations(template, label, seen)
    if asked.json:
        print_json({"file": asked.save, "estimates": [asdict(one) for one in found]})
    else:
        print_lines(_derivation_lines(found))
        print_lines([f"saved: {asked.save}"] if asked.save else [])
    return 0


def _derivation_lines(found: "Sequence[Derivation]") -> list[str]:
    def shown(value: float, unit: str) -> str:
        return f"{value:.4g}" if unit == "-" else engineering(value, unit)

    def row(one: "Derivation") -> tuple[str, ...]:
        ends = f"{shown(one.value / one.spread, one.unit)} to {shown(one.value * one.spread, one.unit)}"
        return one.ref, one.role, one.key.replace("_", " "), shown(one.value, one.unit), ends, one.reason

    rows = [row(one) for one in found]
    return columns(("part", "role", "value", "estimate", "9 of 10 boards", "because"), rows)


def _set(asked: argparse.Namespace) -> int:
    from triage.board.estimate.revise import part_called, with_value
    from triage.job.intake import with_marking
    from triage.replacement.catalog import Catalog

    board = _own(asked.file)
    part = part_called(board, asked.ref)
    if asked.key == "marking":
        changed, said = with_marking(board, part.ref, asked.value, Catalog())
        return _saved(asked, changed, said)
    unit = _unit(part.kind, asked.key)
    value, tolerance = parse_with_tolerance(asked.value, unit)
    changed = with_value(board, part.ref, asked.key, value, "measured" if asked.measured else "marking", tolerance)
    return _saved(asked, changed, f"{part.ref} {asked.key}: {engineering(value, unit)}")


def _unit(kind: str, key: str) -> str:
    """Unit of a value or rating, as quantities are typed."""
    from triage.board.kinds import kinds
    from triage.board.profile import RATING_UNITS

    unit = {**RATING_UNITS, **kinds()[kind].values}.get(key, "-")
    return "1" if unit == "-" else unit


def _turns(asked: argparse.Namespace) -> int:
    from triage.board.estimate.turns import turn_checks, with_turns

    counts = {winding: parse(text, "1") for winding, text in _pairs(asked.counts).items()}
    board = with_turns(_own(asked.file), asked.ref, counts)
    area = asked.core_area
    if area is not None and not 1.0 <= area <= 10_000.0:
        raise EntryError("core area", f"{area:g} mm2", "1 to 10000 mm2")
    checks = turn_checks(board, asked.ref, None if area is None else area * 1e-6)
    if asked.json:
        _store(asked, board)
        print_json([{**asdict(one), "fits": one.fits} for one in checks])
        return 0
    rows = [(f"{one.value:.3g} {one.unit if one.unit != '1' else ''}".strip(), f"{one.low:.3g} to {one.high:.3g}",
             "fits" if one.fits else "does not fit: count or measure again", one.text, one.note) for one in checks]
    _saved(asked, board, f"{asked.ref}: " + ", ".join(f"{winding} {turns:g} turns" for winding, turns in counts.items()))
    print_lines(columns(("value", "bounds", "", "check", "remark"), rows))
    return 0


def _strike(asked: argparse.Namespace) -> int:
    from triage.board.estimate.revise import strike

    return _saved(asked, strike(_own(asked.file), asked.ref, asked.link), f"{asked.ref} struck out")


def _add(asked: argparse.Namespace) -> int:
    from triage.board.estimate.revise import add_part

    board = add_part(_own(asked.file), asked.role, _pairs(asked.pins), asked.ref)
    return _saved(asked, board, f"{board.parts[-1].ref} added: {asked.role}")


def _move(asked: argparse.Namespace) -> int:
    from triage.board.estimate.revise import move_pin

    board = move_pin(_own(asked.file), asked.ref, asked.pin, asked.node)
    return _saved(asked, board, f"{asked.ref} {asked.pin} on {asked.node}")


def _roles(asked: argparse.Namespace) -> int:
    from triage.board.estimate.roles import roles
    from triage.board.kinds import kinds

    rows = [(one.name, one.kind, " ".join(kinds()[one.kind].pins)) for one in roles().values()]
    if asked.json:
        print_json([{"role": name, "kind": kind, "pins": pins.split()} for name, kind, pins in rows])
    else:
        print_lines(columns(("role", "kind", "pins"), rows))
    return 0


def _save(asked: argparse.Namespace) -> int:
    from dataclasses import replace

    from triage.job.bench import Bench
    from triage.job.profile_file import save_profile

    board = Bench.open(Path(asked.job), write=False).board_now()
    path = Path(asked.file)
    save_profile(replace(board, id=path.stem), path)
    return _said(asked, f"saved: {path}")


def _own(name: str) -> "Board":
    """The board of a profile file of one's own. Raises EntryError for a shipped one, which is not to be changed."""
    from triage.board.profile import load_profile

    if Path(name).suffix != ".toml":
        advice = "shipped profiles are not changed: save a copy first"
        raise EntryError("profile", repr(name)[:60], "the path of a .toml file", advice)
    return load_profile(name)


def _store(asked: argparse.Namespace, board: "Board") -> None:
    from triage.job.profile_file import save_profile

    save_profile(board, Path(asked.file), replace=True)


def _saved(asked: argparse.Namespace, board: "Board", said: str) -> int:
    """Write the changed board back and say what changed."""
    _store(asked, board)
    return _said(asked, said)


def _said(asked: argparse.Namespace, said: str) -> int:
    if asked.json:
        print_json({"file": asked.file, "message": said})
    else:
        print_lines([said])
    return 0


def _pairs(words: Sequence[str]) -> dict[str, str]:
    """``a=b`` texts as a table. Raises EntryError for another text."""
    pairs = {}
    for word in words:
        name, equals, text = word.partition("=")
        if not equals or not name or not text:
            raise EntryError("argument", repr(word)[:60], "of the form name=value")
        pairs[name] = text
    return pairs
