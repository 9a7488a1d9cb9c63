"""The decision beside what became of 63 real supplies, printed with the reasons for disagreement.

Facts: tests/reference/data/repair_outcomes.toml (Open Repair Data, CC BY-SA 4.0; attribution there). The
decision sees what was found, how surely, and an assumed price of a new one; it sees neither outcome nor
barrier. Volunteers' time costs nothing. The records name no posterior, so confirmed, suspected and not found
stand for 0.9, 0.5 and 0.2 (own choice, no source).
"""

import tomllib
from collections import Counter
from pathlib import Path

import pytest

from triage.safety.decision import Case, Decision, Shop, decide, work

FACTS = tomllib.loads((Path(__file__).parent / "data" / "repair_outcomes.toml").read_text(encoding="utf-8"))["case"]

KIND = {
    "cable": "cord",
    "output_connector": "connector",
    "solder_joint": "joint",
    "pcb_track": "track",
    "dirt_liquid": "cleaning",
    "capacitor_unspecified": "electrolytic",
    "film_capacitor": "capacitor",
    "transistor": "bipolar_transistor",
    "controller": "pwm_controller",
}
HOLDS = {"confirmed": 0.9, "suspected": 0.5, "not found": 0.2}


BUILT_IN_PRICE = 60.0
"""Assumed price of doing without a built-in supply: a used board or another appliance; house estimate."""


def decided(facts: dict, rate: float) -> Decision:
    """The decision on one record, from what was found alone."""
    found = facts["found"]
    works = tuple(work(KIND.get(f["class"], f["class"])) for f in found if f["class"] != "none")
    vetoes = tuple("liquid in the supply" for f in found if f["mode"] == "water")
    return decide(Case(works, min(HOLDS[f["certainty"]] for f in found), facts["price"], vetoes), Shop(rate=rate))


def disagreement(facts: dict, choice: str) -> str:
    """Why decision and record differ, in words, from the record's own barrier or action."""
    if choice == "repair":
        if facts["barrier"] != "not stated":
            return f"record: {facts['barrier']}"
        return f"record: {facts.get('action', 'reason not stated')}"
    if any(f["class"] == "none" for f in facts["found"]):
        return "cause never found"
    return "spare held to be hard to get, but " + facts.get("action", "it was repaired")


@pytest.fixture(scope="module")
def rows() -> list[tuple[dict, Decision, bool]]:
    """(facts, decision at no hourly rate, agreement) of every record."""
    result = []
    for facts in FACTS:
        said = decided(facts, 0.0)
        result.append((facts, said, (said.choice == "repair") == (facts["happened"] == "repaired")))
    return result


def test_decision_beside_what_happened(rows, outside_check, capsys) -> None:
    agreed = sum(same for *_, same in rows)
    with capsys.disabled():
        print("\nid | found | decision | what happened | agreement")
        for facts, said, same in rows:
            parts = ", ".join(f"{f['class']} ({f['certainty']})" for f in facts["found"])
            why = "agrees" if same else f"differs: {disagreement(facts, said.choice)}"
            print(f"{facts['id']} | {parts} | {said.choice} | {facts['happened']} | {why}")
        print(f"{agreed} of {len(rows)} agree")
    outside_check.at_least("repair or not", "Open Repair Data, Open Repair Alliance", agreed / len(rows), 0.8)


def test_cases_with_a_recorded_barrier(rows) -> None:
    """Of the given-up cases with a barrier in the dataset at least two in three are told not to repair."""
    barred = [(facts, same) for facts, _, same in rows if facts["barrier"] != "not stated"]
    assert len(barred) >= 9
    assert sum(same for _, same in barred) / len(barred) >= 2 / 3


def test_built_in_supplies(shared, outside_check) -> None:
    """The same rule on the supplies built into appliances, which were not looked at while it was made."""
    path = shared / "reference" / "real_repairs" / "cases.toml"
    cases = [
        {**case, "price": BUILT_IN_PRICE}
        for case in tomllib.loads(path.read_text(encoding="utf-8"))["case"]
        if case["placement"] == "built-in" and case["outcome"] in ("fixed", "end of life") and case["depth"] != "load"
    ]
    same = [(decided(case, 0.0).choice == "repair") == (case["outcome"] == "fixed") for case in cases]
    print(f"{sum(same)} of {len(same)} built-in supplies agree")
    outside_check.at_least("repair or not", "Open Repair Data, built-in supplies", sum(same) / len(same), 0.8)


def test_a_paid_hour_turns_repairs_into_replacements(rows) -> None:
    """Reasoned: at a workshop's rate no case turns towards repair, and most small adapters turn away from
    it."""
    paid = [decided(facts, 40.0).choice for facts, *_ in rows]
    free = [said.choice for _, said, _ in rows]
    turned = Counter(zip(free, paid, strict=True))
    assert not any(p == "repair" and f != "repair" for f, p in turned)
    assert turned["repair", "replace"] > turned["repair", "repair"]


def test_every_record_carries_its_attribution() -> None:
    head = (Path(__file__).parent / "data" / "repair_outcomes.toml").read_text(encoding="utf-8")[:1200]
    assert "Open Repair Alliance" in head and "CC BY-SA 4.0" in head
    assert len(FACTS) >= 20
    assert len({facts["id"] for facts in FACTS}) == len(FACTS)
