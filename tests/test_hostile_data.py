"""Profiles, templates, catalog files, stock, meters, shop files and suppliers' lists from anybody: one clear line or the
content, without hanging, and nothing that a terminal obeys.

The short run is part of every test run; TRIAGE_LONG_EXAMPLES sets the inputs of the long one for each kind of file.
"""

import os
import re
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import tomli_w
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.hang import answers_in_time
from triage.board.estimate.template import read_template
from triage.board.profile import load_profile
from triage.data import data_folder
from triage.errors import TriageError
from triage.job.display import plain
from triage.job.workshop import read_shop
from triage.replacement.catalog_file import read_catalog_file
from triage.replacement.drawers import read_drawers
from triage.replacement.supplier import read_supplier_list
from triage.safety.instruments import SHIPPED, load

CONTROL = re.compile("[\x00-\x1f\x7f-\x9f\u200b-\u200f\u2028-\u202e\u2060-\u2069]")
SHORT = 25
LONG = int(os.environ.get("TRIAGE_LONG_EXAMPLES", "200"))
"""Inputs of the long run for each kind of file; set TRIAGE_LONG_EXAMPLES=20000 for more than 100,000 in all."""


def fuzz(examples: int) -> Any:
    return settings(max_examples=examples, deadline=None, suppress_health_check=list(HealthCheck))


DRAWERS = '[[item]]\ntype = "UF4007"\nquantity = 20\nwhere = "box 2"\nprice = 0.1\nread = { vrrm_V = 1000.0 }\n'
SHOP = '[shop]\nrate_per_hour = 30\n[new_adapter]\nx = 9\n[[supplier]]\nfile = "a.csv"\ncolumns = { type = "t" }\n'
LIST = "type;price;stock;order\nUF4007;0,12;500;77-1\n1N4937;0,05;10;77-2\n"
STOCK = 'type, quantity, where, price\nBC547B, 40, "box 2", "0,03"\n'


def _text(*place: str) -> str:
    return data_folder(place[0]).joinpath(*place[1:]).read_text(encoding="utf-8")


LOADERS: dict[str, tuple[str, Callable[[Path], object], str]] = {
    "profile": ("a.toml", lambda path: load_profile(str(path)), _text("profiles", "harbour-handset-charger.toml")),
    "template": ("a.toml", read_template, _text("profiles", "templates", "ringing_choke_zener.toml")),
    "catalog": ("schottky.toml", read_catalog_file, _text("part_catalog", "schottky.toml")),
    "sizes": ("resistor.toml", read_catalog_file, _text("part_catalog", "resistor.toml")),
    "drawers": ("drawers.toml", read_drawers, DRAWERS),
    "instruments": ("instruments.toml", load, SHIPPED.read_text(encoding="utf-8")),
    "shop": ("shop.toml", read_shop, SHOP),
    "stock": ("drawers.csv", read_drawers, STOCK),
    "list": ("list.csv", read_supplier_list, LIST),
}
"""Kind of file -> its name, what reads it, and a sound one."""


def load_or_refuse(kind: str, content: bytes) -> bool:
    """What is asked of every file; True when it was refused."""
    name, loader, _ = LOADERS[kind]
    refused = False
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / name
        path.write_bytes(content)
        try:
            with answers_in_time():
                loader(path)
        except TriageError as error:
            refused = True
            shown = plain(str(error), 2000)
            assert shown and not CONTROL.search(shown)
    return refused


NASTY: dict[str, bytes] = {
    "empty": b"",
    "nul": b"\0" * 1000,
    "not utf-8": b"\xff\xfe\x00a",
    "deep arrays": b"a = " + b"[" * 100_000,
    "deep tables": b"a = " + b"{a=" * 50_000,
    "long dotted key": b"a." * 50_000 + b"a = 1\n",
    "long dotted table": b"[" + b"a." * 50_000 + b"a]\n",
    "many dotted tables": b"".join(b"[a.b%d.c]\n" % n for n in range(20_000)),
    "huge number": b"a = " + b"9" * 10_000,
    "huge exponent": b"a = 1e999999999\n",
    "one long line": b"type" + b"," * 300_000,
    "quotes": b'type,price\n"' + b'""' * 100_000,
    "escapes": b'"\\u001b[2J" = "\\u202e"\nid = "\\u0007"\n',
    "raw escapes": b"type\x1b[2J;price\n\x1b]0;x\x07;1\n",
    "date": b"family = 1979-05-27\nclass = 1979-05-27\n[shop]\nrate = 1979-05-27\n",
    "tables of wrong shape": b"part = 3\nitem = 'x'\ninstrument = [1]\nsupplier = {}\nmains = []\nlabel = 'x'\nfields = 1\n",
}


@pytest.mark.parametrize("kind", LOADERS)
@pytest.mark.parametrize("name", NASTY)
def test_nothing_nasty_gets_through_or_hangs(kind: str, name: str) -> None:
    load_or_refuse(kind, NASTY[name])


scalars = st.one_of(
    st.text(max_size=20), st.integers(-(2**70), 2**70), st.floats(), st.booleans(),
    st.sampled_from(["\x1b[2J", "<script>", "[bold]", "\u202e", "=1+1", "../../etc", "4.7 uF", "1e999", "-5 V", "a" * 3000]),
)  # fmt: skip
values = st.recursive(
    scalars, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=8), inner, max_size=3)
)


def changed(content: dict[str, Any], draw: st.DrawFn) -> dict[str, Any]:
    """The tables of a sound file with something else in up to four places."""
    for _ in range(draw(st.integers(1, 4))):
        place: Any = content
        while True:
            keys = list(place) if isinstance(place, dict) else list(range(len(place)))
            if not keys:
                break
            key = draw(st.sampled_from(keys))
            if isinstance(place[key], dict | list) and draw(st.booleans()):
                place = place[key]
                continue
            place[key] = draw(values)
            break
    return content


@st.composite
def files(draw: st.DrawFn, kind: str) -> bytes:
    """A file of this kind: changed in its tables, damaged in its bytes, or any bytes at all."""
    import tomllib

    sound = LOADERS[kind][2]
    way = draw(st.sampled_from(("tables", "tables", "bytes", "any")))
    if way == "any":
        return draw(st.binary(max_size=200))
    if way == "tables" and LOADERS[kind][0].endswith(".toml"):
        try:
            return tomli_w.dumps(changed(tomllib.loads(sound), draw)).encode()
        except UnicodeEncodeError:
            return b""
    whole = sound.encode()
    for _ in range(draw(st.integers(1, 3))):
        place, patch = draw(st.integers(0, len(whole))), draw(st.binary(max_size=10) | st.text(max_size=6).map(_utf8))
        whole = whole[:place] + patch + whole[place + draw(st.integers(0, 10)) :]
    return whole


def _utf8(text: str) -> bytes:
    return text.encode("utf-8", "replace")


def run_fuzz(kind: str, examples: int) -> None:
    refused = [0, 0]

    @fuzz(examples)
    @given(files(kind))
    def one(content: bytes) -> None:
        refused[load_or_refuse(kind, content)] += 1

    one()
    print(f"{kind}: {refused[0]} read, {refused[1]} refused")


@pytest.mark.parametrize(("kind", "old", "new"), [
    ("template", '\n[[part]]\nref = ', '\n[[part]]\nvalue = [1]\nref = '),
    ("template", '\n[[part]]\nref = ', '\n[[part]]\nratings = "x"\nref = '),
    ("template", '\n[[part]]\nref = ', '\n[[part]]\nfault_modes = 3\nref = '),
    ("template", '\n[[part]]\nref = ', '\n[[part]]\nwhen = [1]\nref = '),
    ("sizes", "columns = [", "columns = [[1], "),
    ("sizes", "\n[[kind]]\n", "\n[[kind]]\nvalues = 3\n"),
    ("sizes", "\n[[kind]]\n", '\n[[kind]]\ndecade = ["a", 1]\n'),
])  # fmt: skip
def test_what_the_long_run_found_is_refused(kind: str, old: str, new: str) -> None:
    sound = LOADERS[kind][2]
    assert old in sound
    assert load_or_refuse(kind, sound.replace(old, new, 1).encode())


@pytest.mark.parametrize("kind", LOADERS)
def test_any_file_is_read_or_refused_in_one_line(kind: str) -> None:
    run_fuzz(kind, SHORT)


@pytest.mark.long
@pytest.mark.parametrize("kind", LOADERS)
def test_any_file_long_run(kind: str) -> None:
    """As many inputs of each kind as TRIAGE_LONG_EXAMPLES says."""
    run_fuzz(kind, LONG)


@pytest.mark.parametrize("kind", LOADERS)
def test_the_sound_file_is_read(kind: str) -> None:
    assert not load_or_refuse(kind, LOADERS[kind][2].encode())
