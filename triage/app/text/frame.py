"""The lines that stand on every screen of a job: where the job stands, whether the board is safe to touch,
the keys."""

from triage.app.lines import Line, Span, apart, clip, line
from triage.job.views import STAGES, JobView

_STAGE_WORDS = {"cold": "cold readings", "live": "live readings"}


def stage_words(stage: str) -> str:
    """``3 of 7, cold readings``."""
    if stage not in STAGES:
        return stage
    return f"step {STAGES.index(stage) + 1} of {len(STAGES)}: {_STAGE_WORDS.get(stage, stage).upper()}"


def status_lines(view: JobView, place: str, width: int, progress: str = "") -> tuple[Line, ...]:
    """Two rows: the job and its stage; whether the board is safe to touch, with what is being computed
    (``progress``) while it lasts."""
    right = line(Span(f" {stage_words(view.stage)} ", "head"))
    first = apart(line(Span(f" {place} ", "head"), " ", Span(view.title, "strong")), right, width)
    note = Span(f" {progress or 'computing...'} ", "near") if view.computing else Span(view.read_only, "bad")
    danger = view.safe_to_touch.startswith("NOT")
    touch = line(Span("! " if danger else "ok ", "bad" if danger else "good"), Span(view.safe_to_touch, "bad" if danger else ""))
    return first, apart(touch, line(note), width) if note.text else clip(touch, width)
