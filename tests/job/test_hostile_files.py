"""Job files from anybody: one clear line or a job, without hanging, and nothing that a terminal obeys.

The short run is part of every test run; TRIAGE_FUZZ=25000 makes it 100,000 documents over its four tests (a quarter of an hour).
"""

import os
import re
import tempfile
from pathlib import Path
from typing import Any

import pytest
import tomli_w
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.hang import answers_in_time
from tests.job.samples import BOARD, TIME, log
from tests.job.stand_in import PROFILE, StandIn
from triage.board.profile import board_to_dict, load_profile
from triage.errors import TriageError
from triage.job import store
from triage.job.bench import Bench
from triage.job.display import plain
from triage.job.entries import KINDS, Entry, entry_to_dict, replay
from triage.job.shown import entry_text
from triage.job.summary import read_summary

CONTROL = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u200b-\u200f\u202a-\u202e\u2066-\u2069]")
FUZZ = settings(max_examples=int(os.environ.get("TRIAGE_FUZZ", "60")), deadline=None, suppress_health_check=list(HealthCheck))

scalars = st.one_of(
    st.text(max_size=30), st.integers(-(2**70), 2**70), st.floats(), st.booleans(),
    st.sampled_from(["\x1b[2J", "<script>", "[bold]", "\u202e", "=1+1", "../../etc", "a" * 3000]),
)  # fmt: skip
values = st.recursive(
    scalars, lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=12), inner, max_size=4)
)
WORDS = sorted({key for keys in KINDS.values() for key in keys} | {"kind", "time", "typed", "fault", "cured"})
entries = st.lists(
    st.dictionaries(st.sampled_from(WORDS), values | st.sampled_from(sorted(KINDS)), max_size=8)
    | st.sampled_from([entry_to_dict(entry) for entry in log()]),
    max_size=6,
)
documents = st.fixed_dictionaries(
    {},
    optional={
        "job": st.fixed_dictionaries(
            {"format": st.just(1) | values},
            optional={"opened": values, "profile": values, "closed_jobs": values},
        ) | values,
        "board": st.just(BOARD) | values,
        "entry": entries | values,
        "more": values,
    },
)  # fmt: skip


def load_or_refuse(content: bytes) -> None:
    """What is asked of every file: a job, or one line, soon, and nothing that moves the terminal."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "job.toml"
        path.write_bytes(content)
        for look in (_whole, read_summary):
            try:
                with answers_in_time():
                    look(path)
            except TriageError as error:
                assert not CONTROL.search(plain(str(error), 2000))
                assert "\n" not in plain(str(error), 2000)


def _whole(path: Path) -> None:
    job = store.load(path)
    replay(job.entries)
    for entry in job.entries:
        assert not CONTROL.search(plain(entry_text(entry)))


def written(document: dict[str, Any]) -> bytes:
    """The document as TOML; what TOML cannot hold (surrogates) is left to the test of raw bytes."""
    try:
        return tomli_w.dumps(document).encode()
    except UnicodeEncodeError:
        return b""


@FUZZ
@given(documents)
def test_documents_of_the_right_shape_and_wrong_content(document: dict[str, Any]) -> None:
    load_or_refuse(written(document))


@FUZZ
@given(st.binary(max_size=400))
def test_any_bytes(content: bytes) -> None:
    load_or_refuse(content)


@FUZZ
@given(st.integers(0, 10**6), st.binary(max_size=12))
def test_a_job_damaged_anywhere(place: int, patch: bytes) -> None:
    whole = written({"job": {"format": 1}, "board": BOARD, "entry": [entry_to_dict(entry) for entry in log()]})
    place %= len(whole)
    load_or_refuse(whole[:place] + patch + whole[place + len(patch) :])


SIGNS = ["[", "]", "{", "}", "=", ".", '"', "'", '"""', "'''", "\n", "#", ",", "\\", "a", "1", "inf", "[["]


@FUZZ
@given(st.lists(st.sampled_from(SIGNS)).map("".join) | st.text())
def test_the_signs_of_the_notation_in_any_order(text: str) -> None:
    load_or_refuse(text.encode(errors="replace"))


def hostile_board(**change: Any) -> dict[str, Any]:
    board = board_to_dict(load_profile(PROFILE))
    board.update(change)
    return board


@pytest.mark.parametrize(
    "board",
    [
        hostile_board(part=[hostile_board()["part"][0]] * 5000),
        hostile_board(title="\x1b]0;x\x07" * 50),
        hostile_board(drawing="x" * 19_000),
        hostile_board(sides={"primary": [f"n{n}" for n in range(5000)]}),
        hostile_board(label={"input": "x", "output_voltage": float("inf"), "output_current": 1.0}),
        hostile_board(mains=[]),
        hostile_board(family="../../x"),
        {},
    ],
    ids=["5000 parts", "escapes", "huge drawing", "5000 nodes", "infinite volts", "no mains", "path", "empty"],
)
def test_a_hostile_board_in_a_job_is_refused_in_one_line_or_shown_as_text(tmp_path: Path, board: dict[str, Any]) -> None:
    path = tmp_path / "job.toml"
    path.write_bytes(written({"job": {"format": 1}, "board": board}))
    try:
        with answers_in_time(), Bench.open(path, StandIn()) as bench:
            view = bench.view()
            assert not CONTROL.search(repr(view.title)) and not CONTROL.search(view.drawing)
    except TriageError as error:
        assert len(plain(str(error), 4000)) < 4000 and not CONTROL.search(plain(str(error), 4000))


def test_markup_and_formulas_of_an_entry_stay_text_everywhere(tmp_path: Path) -> None:
    nasty = "=cmd|'/c x'!A1 [red]x[/] {0} %s <b>"
    with Bench.create(PROFILE, tmp_path / "job.toml", StandIn()) as bench:
        view = bench.note(nasty)
        assert view.entries[-1].text == f"note: {nasty}"
        bench.prepare()
        assert "&lt;b&gt;" in bench.report("html")


def test_entry_text_knows_every_kind() -> None:
    said = {"entry": 1, "look": "sound", "on": True, "function": "ohms", "plus": "a", "minus": "b", "condition": "cold",
            "value": 1.0, "state": "dead", "sign": "hot", "ref": "", "passed": True}  # fmt: skip
    for kind, rules in KINDS.items():
        entry = Entry(kind, TIME, {key: said.get(key, "words") for key in rules})
        assert entry_text(entry) and "{" not in entry_text(entry)
