"""The list of words in DEVELOPERS.md is complete: whatever a user meets as a name stands in it."""

import re
from importlib import import_module
from pathlib import Path

import pytest

from triage import cli
from triage.app.keys import COMMANDS
from triage.app.text.bench import FUNCTION_WORDS
from triage.board.estimate.seen import COUNTS, FEATURES
from triage.board.evidence import STATES
from triage.board.probe import CONDITIONS
from triage.commands.profile import ACTIONS
from triage.job.entries import KINDS
from triage.job.views import STAGES, STATUSES

ROOT = Path(__file__).resolve().parents[2]
SECTION = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8").partition("## Words on screen")[2].partition("\n## ")[0]


def screens() -> list[str]:
    found = []
    for path in sorted((ROOT / "triage/app/screens").glob("*.py")):
        module = import_module(f"triage.app.screens.{path.stem}")
        own = (one for one in vars(module).values() if getattr(one, "__module__", "") == module.__name__)
        found += [one.NAME for one in own if hasattr(one, "NAME")]
    return [name for name in found if name and name != "triage"]


def options() -> list[str]:
    tables = [arguments for _, arguments in (*cli.COMMANDS.values(), *ACTIONS.values())]
    return sorted({names[-1] for arguments in tables for names, _ in arguments if names[-1].startswith("--")})


WORDS = {
    "screens": screens(),
    "commands": [one.label for one in COMMANDS if one.label],
    "stages": list(STAGES),
    "verdicts": list(STATUSES),
    "states": list(STATES),
    "loads": [one for one in CONDITIONS if one != "cold"],
    "functions": [one.replace("scope, peak", "scope peak").removesuffix(" at the plug") for one in FUNCTION_WORDS.values()],
    "seen": [*COUNTS, *FEATURES],
    "sub-commands": list(cli.COMMANDS),
    "entries": [one for one in KINDS if one != "acknowledge"],
    "profile": list(ACTIONS),
    "options": options(),
}


@pytest.mark.parametrize("kind", WORDS)
def test_every_word_stands_in_the_list(kind):
    assert len(WORDS[kind]) >= 3
    missing = [word for word in WORDS[kind] if not re.search(rf"(?<![\w-]){re.escape(word)}(?![\w])", SECTION)]
    assert missing == []
