"""Sub-commands that ask a job or a profile something and change nothing."""

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

from triage.commands import words
from triage.commands.output import print_json, print_lines
from triage.errors import EntryError, JobError

if TYPE_CHECKING:
    from triage.board.fault import Fault
    from triage.board.part import Board
    from triage.job.bench import Bench


NO_READING: dict[str, Any] = {
    "function": None, "plus": None, "minus": None, "condition": None, "unit": None, "minutes": None, "reason": "",
    "outcomes": [], "hazard": "",
}  # fmt: skip
"""The fields of a suggestion when there is none."""


def run_suspects(asked: argparse.Namespace) -> int:
    """Suspects, likeliest first; with the derivation of each chance when asked to explain."""
    bench = _prepared(asked.job)
    suspects = bench.view().suspects
    if asked.explain:
        reasons, evidence = bench.why(), bench.evidence()
    if asked.json:
        if asked.explain:
            print_json([{**_table(one), "explain": reasons.get((one.ref, one.mode), "")} for one in suspects])
        else:
            print_json(suspects)
        return 0
    print_lines(words.suspect_lines(suspects))
    if asked.explain:
        print_lines(["", "before anything was seen:"])
        print_lines(
            f"  {one.ref} {one.mode}: {reasons[one.ref, one.mode]}"
            for one in suspects[: words.MOST_SUSPECTS]
            if (one.ref, one.mode) in reasons
        )
        print_lines(["", "what the entries did to the odds of the leading suspect:", *(f"  {one}" for one in evidence)])
    return 0


def run_next(asked: argparse.Namespace) -> int:
    """The next reading; in JSON its fields, with stage, verdict and what the gates wait for beside them."""
    view = _prepared(asked.job).view()
    if asked.json:
        reading = _table(view.suggestion) if view.suggestion else {**NO_READING, "reason": view.message}
        print_json({**reading, "stage": view.stage, "verdict": view.verdict, "waits_for": view.waits_for})
    else:
        print_lines(words.next_lines(view))
    return 0


def run_verdict(asked: argparse.Namespace) -> int:
    """What the job has come to."""
    view = _prepared(asked.job).view()
    if asked.json:
        print_json(view.verdict)
    else:
        print_lines(words.verdict_lines(view))
    return 0


def run_worth(asked: argparse.Namespace) -> int:
    """Whether the repair is worth while."""
    from triage.quantities import parse

    price = parse(asked.new_price, "1") if asked.new_price else None
    worth = _prepared(asked.job).worth(price)
    if asked.json:
        print_json(worth)
    else:
        print_lines(words.worth_lines(worth))
    return 0


def run_show(asked: argparse.Namespace) -> int:
    """The whole job."""
    view = _prepared(asked.job).view()
    if asked.json:
        print_json(view)
        return 0
    print_lines([f"{view.title}", *words.view_lines(view), f"touch: {view.safe_to_touch}", ""])
    print_lines(f"{one.number:4d} {one.time} {one.text}{'  (taken back)' if one.undone else ''}" for one in view.entries)
    print_lines(f"[{'x' if one.acknowledged else ' '}] {one.key}: {one.text}" for one in view.cautions)
    print_lines(f"look {one.key}: {one.said or ' | '.join(one.answers)}" for one in view.looks)
    print_lines(f"retest {one.key}: {one.limit}: {one.result or 'not done'}" for one in view.retest)
    return 0


def run_stress(asked: argparse.Namespace) -> int:
    """Stresses of the parts of a profile, or of the board of a job with what was fitted."""
    bench, board = _bench_or_board(asked.profile)
    if bench is not None:
        stresses = bench.stresses()
    else:
        from triage.job.shown import stress_view

        stresses = tuple(stress_view(one, board) for one in _wiring().stresses(board))
    if asked.json:
        print_json(stresses)
    else:
        print_lines(words.stress_lines(stresses))
    return 0


def run_expect(asked: argparse.Namespace) -> int:
    """Readings to expect on the healthy board, or under the named faults together."""
    _, board = _bench_or_board(asked.profile)
    faults = tuple(_fault(board, text) for text in asked.fault)
    expected = [one for one in _wiring().expected(board, faults) if not asked.condition or one.condition == asked.condition]
    if asked.json:
        print_json(expected)
    else:
        print_lines(words.expected_lines(expected))
    return 0


def run_demand(asked: argparse.Namespace) -> int:
    """What a position asks of a replacement."""
    demand = _looked_at(asked.job).demand(asked.ref)
    if asked.json:
        print_json(demand)
    else:
        print_lines(words.demand_lines(demand))
    return 0


def run_candidates(asked: argparse.Namespace) -> int:
    """Catalog parts for a position, or what one type fails there."""
    bench = _looked_at(asked.job)
    found = (bench.ask(asked.ref, asked.type),) if asked.type else bench.candidates(asked.ref)
    if asked.json:
        print_json(found)
    else:
        print_lines(words.candidate_lines(found))
    return 0


def run_parts(asked: argparse.Namespace) -> int:
    """Catalog parts that a marking may mean."""
    found = _wiring().matches(asked.marking)
    if asked.json:
        print_json(found)
    else:
        print_lines(words.match_lines(found) if found else ["no part of the catalog is marked like that"])
    return 0


def run_report(asked: argparse.Namespace) -> int:
    """The record of a job, to the terminal or into a file."""
    text = _prepared(asked.job).report(asked.format)
    if not asked.output:
        print_lines([text.rstrip("\n")])
        return 0
    try:
        Path(asked.output).write_text(text, encoding="utf-8")
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "no file name"
        raise JobError(asked.output, f"cannot be written: {reason}", advice="choose another place") from None
    return 0


def run_deck(asked: argparse.Namespace) -> int:
    """The powered board as a SPICE deck."""
    _, board = _bench_or_board(asked.profile)
    from triage.job.deck import deck

    print_lines([deck(board, tuple(_fault(board, text) for text in asked.fault)).rstrip("\n")])
    return 0


def run_solve(asked: argparse.Namespace) -> int:
    """Solve a board beforehand."""
    from triage.job.cache import Cache
    from triage.job.wiring import Wiring

    _, board = _bench_or_board(asked.profile)
    wiring = Wiring(Cache(Path(asked.into))) if asked.into else Wiring()
    wiring.solve(board, lambda done: print_lines([f"solved: {done}"]))
    return 0


def _wiring() -> Any:
    from triage.job.wiring import Wiring

    return Wiring()


def _looked_at(name: str) -> "Bench":
    from triage.job.bench import Bench

    return Bench.open(Path(name), write=False)


def _prepared(name: str) -> "Bench":
    bench = _looked_at(name)
    bench.prepare()
    return bench


def _bench_or_board(name: str) -> "tuple[Bench | None, Board]":
    """The job of that file, or the board of that profile."""
    from triage.board.profile import load_profile
    from triage.toml_guard import read_toml

    path = Path(name)
    if path.suffix == ".toml" and path.is_file() and "job" in read_toml(path)[0]:
        bench = _looked_at(name)
        return bench, bench.board_now()
    return None, load_profile(name)


def _fault(board: "Board", text: str) -> "Fault":
    from triage.board.fault import Fault
    from triage.board.kinds import kinds

    try:
        fault = Fault.parse(text)
    except ValueError:
        raise EntryError("fault", f"{text[:40]!r}", "REF.mode, for instance R1.open") from None
    part = next((part for part in board.parts if part.ref.lower() == fault.ref.lower()), None)
    if part is None:
        raise EntryError("fault", f"{fault.ref[:40]!r}", "one of " + ", ".join(part.ref for part in board.parts))
    modes = kinds()[part.kind].fault_modes
    if fault.mode not in modes:
        raise EntryError(f"fault of {part.ref}", f"{fault.mode[:40]!r}", "one of " + ", ".join(modes))
    return Fault(part.ref, fault.mode)


def _table(record: Any) -> dict[str, Any]:
    from dataclasses import asdict

    return asdict(record)
