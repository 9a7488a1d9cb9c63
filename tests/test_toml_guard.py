"""Limits of what is read from a file of unknown origin: one line, at once, whatever comes."""

import pytest

from tests.hang import answers_in_time
from triage.errors import JobError
from triage.toml_guard import LARGEST_FILE, LONGEST_STRING, parse_toml

HOSTILE = {
    "deep arrays": "a = " + "[" * 100_000,
    "deep closed arrays": "a = " + "[" * 5000 + "]" * 5000,
    "deep inline tables": "a = " + "{b=" * 3000 + "1" + "}" * 3000,
    "dotted key": ".".join(["a"] * 500_000) + " = 1",
    "dotted header": "[" + ".".join(["a"] * 50_000) + "]",
    "quoted dotted key": ".".join(['"a"'] * 50_000) + " = 1",
    "many dotted keys": "\n".join(f"k{n}." + ".".join(["a"] * 300) + " = 1" for n in range(1000)),
    "long string": f'a = "{"x" * (LONGEST_STRING + 1)}"',
    "many items": "a = [" + "1," * 200_000 + "]",
    "many tables": "[[a]]\n" * 160_000,
    "too large": "#" * (LARGEST_FILE + 1),
    "not a number": "a = nan",
    "huge integer": "a = " + "9" * 4000,
    "absurd integer": "a = " + "9" * 50_000,
    "open string": 'a = """' + 'x"' * 100_000,
    "quote storm": "a = " + "\"'" * 200_000,
    "escape storm": 'a = "' + "\\" * 200_001,
}


@pytest.mark.parametrize("name", HOSTILE)
def test_a_hostile_document_is_refused_at_once_in_one_line(name: str) -> None:
    with answers_in_time(), pytest.raises(JobError) as caught:
        parse_toml(HOSTILE[name].encode(), "job.toml")
    assert "\n" not in str(caught.value) and len(str(caught.value)) < 400


def test_bytes_that_are_no_text_are_placed() -> None:
    with pytest.raises(JobError, match="byte 4 is not UTF-8"):
        parse_toml(b"a = \xff", "job.toml")


def test_what_a_technician_types_cannot_trip_the_limits() -> None:
    note = "R1. R2. R3. R4. R5. R6. R7. R8. [[[[[[[[[[[[ {{{{{{{{{{{{{{ a.b.c.d.e.f.g.h.i = 1 # '"
    text = f"a = \"{note}\"\nb = '''\n{note.replace('{', '(')[:-1]}\n'''\n# {note}\nc = 1.5\n"
    document = parse_toml(text.encode(), "job.toml")
    assert document["a"] == note
    assert document["c"] == 1.5


def test_windows_line_ends_and_a_byte_order_mark_are_read() -> None:
    assert parse_toml(b"\xef\xbb\xbfa = 1\r\nb = 2\r\n", "job.toml") == {"a": 1, "b": 2}
