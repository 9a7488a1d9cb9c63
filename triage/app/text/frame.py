"""The lines that stand on every screen of a job: where the job stands, whether the board is safe to touch,
the keys."""

from collections.abc import Sequence

from triage.app.keys import COMMANDS, Command
from triage.app.lines import Line, Span, apart, clip, line, width_of
from triage.job.views import STAGES, JobView

_STAGE_WORDS = {"cold": "cold readings", "live": "live readings"}


def stage_words(stage: str) -> str:
    """``3 of 7, cold readings``."""
    if stage not in STAGES:
        return stage
    return f"step {STAGES.index(stage) + 1} of {len(STAGES)}: {_STAGE_WORDS.get(stage, stage).upper()}"


def status_lines(view: JobView, place: str, width: int) -> tuple[Line, ...]:
    """Two rows: the job and its stage; whether the board is safe to touch, with ``computing`` while it
    lasts."""
    right = line(Span(f" {stage_words(view.stage)} ", "head"))
    first = apart(line(Span(f" {place} ", "head"), " ", Span(view.title, "strong")), right, width)
    note = Span(" computing... ", "near") if view.computing else Span(view.read_only, "bad")
    danger = view.safe_to_touch.startswith("NOT")
    touch = line(Span("! " if danger else "ok ", "bad" if danger else "good"), Span(view.safe_to_touch, "bad" if danger else ""))
    return first, apart(touch, line(note), width) if note.text else clip(touch, width)


def key_line(commands: Sequence[Command], width: int, job: bool = True) -> Line:
    """Keys with their words, as many as fit, two columns apart where all fit so; each can be clicked."""
    keyed = [one for one in commands if one.shown and (job or not one.job)]
    wide = sum(len(one.shown) + len(one.label) + 3 for one in keyed) <= width
    spans: list[Span] = []
    for one in keyed:
        word = f" {one.label}" if one.label else ""
        more = [Span("  " if wide else " "), Span(one.shown, "key", one.action), Span(word, "", one.action)]
        longer = [*spans, *more] if spans else more[1:]
        if width_of(tuple(longer)) > width:
            break
        spans = longer
    return line(*spans)


def standard_keys(width: int, job: bool = True) -> Line:
    """The key line of the commands that hold everywhere."""
    return key_line(COMMANDS, width, job)
