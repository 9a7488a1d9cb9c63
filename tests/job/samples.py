"""A small board and log for tests of the job room that need no physics."""

from typing import Any

from triage.job.entries import Entry, make_entry

TIME = "2026-01-31T08:15:00Z"

BOARD: dict[str, Any] = {
    "id": "cube",
    "title": "invented 5 V cube",
    "part": [{"ref": "R1", "kind": "resistor", "value": {"resistance": 4700.0}, "pins": {"a": "x", "b": "y"}}],
}


def reading(value: float = 4700.0, **more: Any) -> Entry:
    return make_entry(
        "reading",
        TIME,
        function="ohms",
        plus="x",
        minus="y",
        condition="cold",
        value=value,
        unit="ohm",
        **more,
    )


def log() -> list[Entry]:
    return [
        make_entry("complaint", TIME, state="dead", condition="full"),
        make_entry("acknowledge", TIME, caution="isolation transformer"),
        make_entry("sign", TIME, sign="sound", ref=""),
        make_entry("skip", TIME, function="esr", plus="x", minus="y", condition="cold", reason="no ESR meter"),
        reading(float("inf"), typed="OL"),
        reading(0.1 + 0.2, typed="0.3"),
        make_entry("undo", TIME, entry=5),
        make_entry("fitted", TIME, ref="R1", type="metal film 4k7"),
        make_entry("repaired", TIME, result="still faulty"),
    ]
