"""The wall: nothing outside the app's room knows the screen library, and the app's start brings none of the
heavy rooms along.

Each question is put to a fresh interpreter, which is asked what it has loaded.
"""

import json
import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
SCREEN_LIBRARIES = ("textual", "rich")
HEAVY = (
    "numpy",
    "pint",
    "numba",
    "scipy",
    "rapidfuzz",
    "triage.replacement",
    "triage.diagnosis",
    "triage.families",
    "triage.job.bench",
    "triage.job.views",
)


def loaded_by(code: str, names: tuple[str, ...]) -> list[str]:
    """Which of the names (and what lies below them) a fresh interpreter has loaded after running the code."""
    question = f"{code}\nimport json, sys\nprint(json.dumps(sorted(sys.modules)))"
    done = subprocess.run([sys.executable, "-c", question], capture_output=True, text=True, cwd=ROOT, check=True)
    modules = json.loads(done.stdout.splitlines()[-1])
    return [module for module in modules if any(module == name or module.startswith(name + ".") for name in names)]


def modules_outside_the_app() -> list[str]:
    """Every module of the package but those of the app."""
    found = []
    for path in sorted((ROOT / "triage").rglob("*.py")):
        parts = path.relative_to(ROOT).with_suffix("").parts
        if parts[1] != "app" and parts[-1] != "__main__":
            found.append(".".join(parts[:-1] if parts[-1] == "__init__" else parts))
    return found


def test_no_module_outside_the_app_imports_the_screen_library():
    code = "import importlib, sys\n" + "\n".join(f"importlib.import_module({name!r})" for name in modules_outside_the_app())
    assert loaded_by(code, SCREEN_LIBRARIES) == []


def test_the_start_of_the_app_brings_no_heavy_room_along():
    assert loaded_by("import triage.app.app, triage.app.screens.start", HEAVY) == []


@pytest.mark.parametrize("pattern", ["open(", "read_text", "write_text", "Path.home", "os.environ"])
def test_screens_and_texts_touch_no_file(pattern):
    for folder in ("screens", "text", "widgets"):
        for path in (ROOT / "triage/app" / folder).glob("*.py"):
            text = path.read_text(encoding="utf-8").replace("desk.open(", "")
            assert pattern not in text, path


def test_the_app_module_only_wires():
    assert len((ROOT / "triage/app/app.py").read_text(encoding="utf-8").splitlines()) < 200


def test_every_screen_has_a_help_page_and_every_command_a_sentence():
    from triage.app.keys import COMMANDS

    pages = {path.stem for path in (ROOT / "triage/app/help").glob("*.txt")}
    screens = {path.stem for path in (ROOT / "triage/app/screens").glob("*.py")} - {"__init__", "entry_form", "help"}
    assert screens <= pages
    assert all(command.help for command in COMMANDS)


def test_no_key_has_two_meanings():
    from triage.app.keys import COMMANDS

    keys = [command.key for command in COMMANDS if command.key]
    assert len(keys) == len(set(keys))


def test_set_lines_of_help_pages_fit_80_columns():
    for path in (ROOT / "triage/app/help").glob("*.txt"):
        for row in path.read_text(encoding="utf-8").splitlines():
            assert not row.startswith(" ") or len(row) <= 79, (path.name, row)
            assert row.isascii(), (path.name, row)


def test_the_pictures_of_the_screens_ask_nothing_of_the_net():
    pictures = sorted((ROOT / "triage/app/help").glob("*.svg"))
    assert len(pictures) >= 2
    for path in pictures:
        addresses = set(re.findall(r"https?://[^\s\"')]+", path.read_text(encoding="utf-8")))
        assert addresses <= {"http://www.w3.org/2000/svg", "https://www.textualize.io"}, path.name
