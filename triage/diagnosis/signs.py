"""How probable a complaint and a seen sign are under each hypothesis, from complaints.toml and signs.toml."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from triage.board.evidence import SIGNS, STATES, Sign, Symptom
from triage.board.fault import Fault
from triage.diagnosis.expectations import LOADS, Expectations
from triage.diagnosis.settings import HERE, Settings, load_table, number
from triage.errors import EntryError


@cache
def complaint_table(path: Path = HERE / "complaints.toml") -> NDArray[np.float64]:
    """p(complaint | state), shape (states + 2, states), rows sum to 1; the last rows are for a fault of the
    board, whichever, and for one outside it.

    Raises EntryError when a state is missing, unknown, or a row adds up to more than 1.
    """
    file = load_table(path)
    rows = []
    for state, row in [
        *((s, file.get("given", {}).get(s)) for s in STATES),
        ("inside", file.get("inside")),
        ("outside", file.get("outside")),
    ]:
        where = f"{path.name}, {state}"
        if not isinstance(row, dict) or not set(row) <= set(STATES):
            raise EntryError(where, repr(row), f"a row with keys among {', '.join(STATES)}")
        given = {key: number(where, row, key, 0.0, 1.0) for key in row}
        rest = 1.0 - sum(given.values())
        if rest < -1e-9:
            raise EntryError(where, f"a sum of {1 - rest:.4g}", "at most 1")
        left = max(rest, 0.0) / max(1, len(STATES) - len(given))
        chances = np.array([given.get(said, left) for said in STATES])
        rows.append(chances / chances.sum())
    return np.stack(rows)


@dataclass(frozen=True, slots=True)
class SignTable:
    """The chances of signs.toml."""

    visible: tuple[str, ...]
    """Signs that ``sound`` at a part rules out."""
    at_part: Mapping[str, Mapping[str, float]]
    on_adapter: Mapping[str, Mapping[str, float]]
    at_place: Mapping[str, Mapping[str, float]]
    """Place outside the board, found sound."""

    def at_fault(self, sign: str, kind: str, mode: str) -> float:
        """Chance of a sign at a part of this kind in this fault mode [-]."""
        row = self.at_part[sign]
        return next(row[key] for key in (f"{kind}/{mode}", f"{kind}/*", f"*/{mode}", "*/*") if key in row)

    def at_good(self, sign: str) -> float:
        """Chance of a sign at a sound part [-]."""
        return self.at_part[sign]["good"]


@cache
def sign_table(path: Path = HERE / "signs.toml") -> SignTable:
    """signs.toml, checked: every sign of SIGNS has its rows. Raises EntryError."""
    file = load_table(path)

    def rows(group: str, needed: tuple[str, ...], signs: tuple[str, ...]) -> dict[str, dict[str, float]]:
        table: dict[str, Any] = file.get(group, {})
        found = {}
        for sign in signs:
            where = f"{path.name}, {group}.{sign}"
            row = table.get(sign)
            if not isinstance(row, dict) or not set(needed) <= set(row):
                raise EntryError(where, repr(row), f"a row with the keys {', '.join(needed)}")
            found[sign] = {key: number(where, row, key, 1e-6, 1 - 1e-6) for key in row}
        return found

    part_signs = tuple(sign for sign in SIGNS if sign != "sound")
    return SignTable(
        tuple(file.get("visible", ())),
        rows("at_part", ("good", "*/*"), part_signs),
        rows("on_adapter", ("outside", "other"), SIGNS),
        rows("at_place", ("outside", "other"), tuple(file.get("at_place", {}))),
    )


def complaint_likelihood(
    symptom: Symptom, expectations: Expectations, settings: Settings, prior: NDArray[np.float64] | None = None
) -> NDArray[np.float64]:
    """p(complaint | hypothesis), shape (H,) [-]. Raises EntryError for an unknown state or condition.

    prior: chances of the hypotheses. With it a fault outside the board is weighed against those of the board
    together as public repair records do: failure rates count every fault that happens, records only the
    adapters that somebody found wanting, and most faults of parts are not noticed.
    """
    if symptom.state not in STATES:
        raise EntryError("symptom", repr(symptom.state), f"one of {', '.join(STATES)}")
    if symptom.condition not in LOADS:
        raise EntryError("symptom, condition", repr(symptom.condition), f"one of {', '.join(LOADS)}")
    said = complaint_table()[:, STATES.index(symptom.state)]
    codes = expectations.states[:, LOADS.index(symptom.condition), :]
    known = codes >= 0
    count = known.sum(axis=1)
    chance = np.where(known, said[:-2][np.maximum(codes, 0)], 0.0).sum(axis=1) / np.maximum(count, 1)
    chance = np.where(count > 0, chance, said[:-2].mean())
    outside = np.array([not hypothesis.root for hypothesis in expectations.hypotheses])
    weight = np.zeros(len(outside)) if prior is None else np.where(outside, 0.0, prior)
    scale = float(weight @ chance) / (weight.sum() * said[-2]) if weight.sum() > 0 else 1.0
    chance = np.where(outside, min(said[-1] * scale, 1.0), chance)
    return (1 - settings.careless_word) * chance + settings.careless_word / len(STATES)


def sign_likelihood(sign: Sign, expectations: Expectations, kinds: Mapping[str, str]) -> NDArray[np.float64]:
    """p(sign | hypothesis), shape (H,) [-].

    Parameters
    ----------
    sign: what was seen, at a part or on the adapter.
    expectations: hypotheses and the states of the adapter under them.
    kinds: ref -> part kind.
    Raises EntryError for an unknown sign or part.
    """
    table = sign_table()
    if sign.sign not in SIGNS:
        raise EntryError("sign", repr(sign.sign), f"one of {', '.join(SIGNS)}")
    if not sign.ref:
        return _on_adapter(table.on_adapter[sign.sign], expectations)
    if sign.sign == "sound" and sign.ref in table.at_place:
        row = table.at_place[sign.ref]
        return np.array([row["other"] if hypothesis.root else row["outside"] for hypothesis in expectations.hypotheses])
    if sign.ref not in kinds:
        raise EntryError("sign", f"no part {sign.ref!r}", f"one of {', '.join(sorted(kinds))}")

    def at(fault: Fault | None) -> float:
        signs = table.visible if sign.sign == "sound" else (sign.sign,)
        chances = [table.at_good(s) if fault is None else table.at_fault(s, kinds[fault.ref], fault.mode) for s in signs]
        return float(np.prod([1 - c for c in chances])) if sign.sign == "sound" else chances[0]

    good = at(None)
    found = {
        hypothesis: next((f for f in hypothesis.faults if f.ref == sign.ref), None) for hypothesis in expectations.hypotheses
    }
    return np.array([good if fault is None else at(fault) for fault in found.values()])


def _on_adapter(row: Mapping[str, float], expectations: Expectations) -> NDArray[np.float64]:
    """Chance of a sign on the whole adapter: mean over the states it may be in under any load."""
    by_state = np.array([row.get(state, row["other"]) for state in STATES])
    codes = expectations.states.reshape(len(expectations.hypotheses), -1)
    known = codes >= 0
    chance = np.where(known, by_state[np.maximum(codes, 0)], 0.0).sum(axis=1) / np.maximum(known.sum(axis=1), 1)
    chance = np.where(known.any(axis=1), chance, row["other"])
    outside = np.array([not hypothesis.root for hypothesis in expectations.hypotheses])
    return np.where(outside, row["outside"], chance)
