"""How the suspects moved over the entries of a job, computed anew from its log, so that a resumed job shows its
whole way."""

from dataclasses import replace
from typing import TYPE_CHECKING

from triage.job.display import plain
from triage.job.entries import replay
from triage.job.picture import asked
from triage.job.shown import entry_text
from triage.job.views import MoveView

if TYPE_CHECKING:
    from triage.job.bench import Bench

AT_START = "at the start"
"""What stands for the entry before the first that says anything about the fault."""


def moves(bench: "Bench") -> tuple[MoveView, ...]:
    """The suspects before the first entry and after each that told something, oldest first; empty before
    ``prepare``.

    Entries taken back are left out; hunches count from the start.
    """
    if bench.answers is None:
        return ()
    state, diagnosis = replay(bench.job.entries), bench.answers.diagnosis
    found: list[MoveView] = []
    last = None
    for count in range(len(state.told) + 1):
        job = asked(replace(state, told=state.told[:count]))
        if job != last:
            text = entry_text(bench.job.entries[state.told_numbers[count - 1] - 1]) if count else AT_START
            found.append(MoveView(plain(text), tuple(map(bench.answers.suspects.view, diagnosis.suspects(job)))))
        last = job
    return tuple(found)
