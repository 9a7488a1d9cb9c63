"""The guided look before any reading: what to look at, and what the answer means for safety and for the
diagnosis.

Questions and answers are in ``inspection.toml``; lengths are judged against the barrier of the board with
the uncertainty of the calliper. A finding carries the clause, the figures, and the signs that the diagnosis
takes as evidence.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from triage.board.evidence import Sign
from triage.board.part import Board
from triage.errors import TriageError
from triage.safety import insulation
from triage.safety.limits import Source, source_of, table
from triage.safety.safety_parts import class_source, fuse_fits, may_replace, parse_fuse
from triage.safety.uncertainty import rectangular, verdict

VERDICTS = ("sound", "doubtful", "restorable", "veto")
"""What a look can say: ``restorable`` forbids power until put right, ``veto`` forbids the repair."""

CALLIPER = rectangular(1e-4)
"""Standard uncertainty of a length read with a vernier calliper of 0.1 mm [m]; common practice, no source."""

_BY_VERDICT = {"pass": "sound", "fail": "veto", "too close to call": "doubtful"}


class InspectionError(TriageError):
    """An answer that does not belong to its question, or a part that is not on the board."""


@dataclass(frozen=True, slots=True)
class Item:
    """One thing to look at or to measure."""

    key: str
    question: str
    touch: bool
    """True when it needs a discharged board."""
    answers: tuple[str, ...]
    """Keys of the possible answers; empty when a number is asked for."""
    unit: str
    """Unit of the number: ``m``, ``layers``, or empty."""
    refs: tuple[str, ...]
    """Parts of the board the look is about."""


@dataclass(frozen=True, slots=True)
class Finding:
    """What one look has come to."""

    item: str
    verdict: str
    """One of VERDICTS."""
    text: str
    """What to do, with the figures."""
    source: Source
    signs: tuple[Sign, ...]
    """What the diagnosis takes from it."""


def items(board: Board, dismantled: bool = False) -> tuple[Item, ...]:
    """The looks and measurements that fit a board. ``dismantled``: its transformer was taken apart."""
    facts = _facts(board, dismantled)
    return tuple(_item(board, row) for row in table("inspection")["item"] if facts.get(row.get("when", ""), True))


def looks_needed(board: Board) -> frozenset[str]:
    """Keys of the looks that come before the first cold reading; distances can be measured later."""
    return frozenset(item.key for item in items(board) if not item.touch)


def judge(board: Board, key: str, answer: str | float, ref: str = "", length_uncertainty: float = CALLIPER) -> Finding:
    """What an answer to an item means.

    Parameters: the item's key; the answer's key, or a length [m] or number of layers; the part it was seen
    at (empty: the board as a whole); standard uncertainty of a length [m]. Raises InspectionError.
    """
    row = next((row for row in table("inspection")["item"] if row["key"] == key), None)
    if row is None:
        raise InspectionError("inspection", repr(key), ", ".join(row["key"] for row in table("inspection")["item"]))
    if ref and all(part.ref != ref for part in board.parts):
        raise InspectionError(key, f"{ref!r} is not on this board", ", ".join(part.ref for part in board.parts))
    if "measure" in row:
        if isinstance(answer, str) or not answer >= 0.0:
            raise InspectionError(key, repr(answer), "a length or number at or above 0")
        return _measured(board, row, float(answer), length_uncertainty)
    return _seen(board, row, answer, ref)


def judge_fuse(fitted: str, original: str) -> Finding:
    """What the markings of a fitted and the original fuse say, such as ``F2AL250V`` and ``T2AH250V``.

    Raises SafetyPartError for a marking that cannot be read.
    """
    reasons = fuse_fits(parse_fuse(fitted), parse_fuse(original))
    source = Source("IEC 60127-2", "breaking capacity and time gates", "verified")
    said = "restorable" if reasons else "sound"
    return Finding("fuse", said, "; ".join(reasons) or f"{fitted} as {original}", source, ())


def judge_capacitor_class(fitted: str, original: str) -> Finding:
    """What the classes of a fitted and the original X or Y capacitor say, such as ``X2`` and ``Y1``.

    Raises SafetyPartError for a class that is not of the standard.
    """
    fits = may_replace(fitted, original)
    text = f"{fitted} {'may' if fits else 'must not'} stand in for {original}"
    return Finding("safety capacitors", "sound" if fits else "restorable", text, class_source(original), ())


def _facts(board: Board, dismantled: bool) -> Mapping[str, bool]:
    roles, part_kinds = " ".join(part.role for part in board.parts), {part.kind for part in board.parts}
    return {
        "varistor": "varistor" in part_kinds,
        "input fuse": bool(part_kinds & {"fuse", "fusible_resistor"}),
        "safety capacitor": bool(part_kinds & {"x_capacitor", "y_capacitor"}) or "X capacitor" in roles or "Y capacitor" in roles,
        "transformer": "transformer" in part_kinds,
        "optocoupler": "optocoupler" in part_kinds,
        "isolated": insulation.is_isolated(board),
        "dismantled": dismantled,
    }


def _refs(board: Board, row: Mapping[str, Any]) -> tuple[str, ...]:
    wanted = row.get("kinds", ())
    return tuple(part.ref for part in board.parts if part.kind in wanted or part.role.replace(" ", "_").lower() in wanted)


def _item(board: Board, row: Mapping[str, Any]) -> Item:
    unit = "" if "measure" not in row else "layers" if row["measure"] == "tape layers" else "m"
    return Item(
        row["key"],
        row["question"],
        row.get("touch", False),
        tuple(answer["key"] for answer in row.get("answers", ())),
        unit,
        _refs(board, row),
    )


def _seen(board: Board, row: Mapping[str, Any], answer: str | float, ref: str) -> Finding:
    found = next((a for a in row["answers"] if a["key"] == answer), None)
    if found is None:
        raise InspectionError(row["key"], repr(answer), ", ".join(a["key"] for a in row["answers"]))
    signs: tuple[Sign, ...] = ()
    if found["key"] == "sound":
        places = (row["place"],) if "place" in row else ()
        signs = tuple(Sign("sound", seen) for seen in ((ref,) if ref else (*_refs(board, row), *places)))
    elif "sign" in found:
        signs = (Sign(found["sign"], ref),)
    text = f"{answer}{f' at {ref}' if ref else ''}: {found['text']}" if "text" in found else str(answer)
    return Finding(row["key"], found["verdict"], text, source_of(row), signs)


def _measured(board: Board, row: Mapping[str, Any], value: float, uncertainty: float) -> Finding:
    match row["measure"]:
        case "tape layers":
            return _layers(row["key"], value)
        case "through insulation":
            record = table("insulation")["through_insulation"]
            need, rework, source = insulation.through_insulation(), 0.0, source_of(record)
        case measure:
            wanted = insulation.barrier(board, row["grade"])
            need = wanted.creepage if measure == "creepage" else wanted.clearance
            rework = wanted.rework_creepage if (measure, row["grade"]) == ("creepage", "reinforced") else 0.0
            source = wanted.source
    said = _BY_VERDICT[verdict(value, uncertainty, low=need)]
    text = f"{value * 1e3:.1f} mm, required {need * 1e3:.1f} mm"
    if said == "doubtful":
        text += f", too close to call within {2e3 * uncertainty:.2f} mm"
    elif said == "sound" and value < rework:
        text += f"; after rework keep {rework * 1e3:.0f} mm"
    return Finding(row["key"], said, text, source, ())


def _layers(key: str, count: float) -> Finding:
    """Three layers pass in pairs; two only where each alone stands the full test, which the bench cannot
    know."""
    record = table("insulation")["thin_sheet"]
    need = record["bench_layers"]
    said = "sound" if count >= need else "doubtful" if count >= record["layers"] else "veto"
    text = f"{count:.0f} layers, count {need}" + (
        "; two need a tape of which each layer stands the full test" if said == "doubtful" else ""
    )
    return Finding(key, said, text, source_of(record), ())
