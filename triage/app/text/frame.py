"""The lines that stand on every screen of a job: where the job stands, whether the board is safe to touch,
the keys."""

from triage.app.lines import Line, Span, apart, clip, line, width_of
from triage.job.views import STAGES, JobView

_STAGE_WORDS = {"cold": "cold readings", "live": "live readings"}


def stage_words(stage: str) -> str:
    """``3 of 7, cold readings``."""
    if stage not in STAGES:
        return stage
    return f"step {STAGES.index(stage) + 1} of {len(STAGES)}: {_STAGE_WORDS.get(stage, stage).upper()}"


def status_lines(view: JobView, place: str, width: int, progress: str = "", looking: str = "") -> tuple[Line, ...]:
    """Two rows: the job and its stage; whether the board is safe to touch, with what is being computed while it lasts:
    what to expect (``progress``), or what a screen asked for (``looking``)."""
    right = line(Span(f" {stage_words(view.stage)} ", "head"))
    first = apart(line(Span(f" {place} ", "head"), " ", Span(view.title, "strong")), right, width)
    danger = view.safe_to_touch.startswith("NOT")
    touch = line(Span("! " if danger else "ok ", "bad" if danger else "good"), Span(view.safe_to_touch, "bad" if danger else ""))
    told = looking or progress or (view.computing and "computing...")
    if not told:
        return first, apart(touch, line(Span(view.read_only, "bad")), width) if view.read_only else clip(touch, width)
    more = "; Esc stops" if looking else ""
    # Whether the board may be touched comes before what is being computed.
    room = width - width_of(touch) - 3
    words = next((one for one in (f"{told}{more}", f"{_short(told)}{more}") if len(one) <= room), _short(told))
    return first, apart(touch, line(Span(f" {words} ", "near")), width)


def _short(told: str) -> str:
    """``computing cold readings, 35 %`` -> ``computing, 35 %``."""
    what, comma, share = told.rpartition(", ")
    return f"{what.split()[0]}, {share}" if comma and share.endswith("%") else told.split()[0]
