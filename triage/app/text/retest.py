"""The retest in lines: each check with its limit and how it came out."""

from triage.app.lines import Line, Span, clip, columns, line, wrapped
from triage.app.text.bench import CONDITION_WORDS, FUNCTION_WORDS
from triage.job.views import RetestView

_SIGNS = {"pass": ("ok ", "good"), "fail": ("!! ", "over"), "too close to call": ("?  ", "near")}


def retest_line(one: RetestView, width: int) -> Line:
    """Sign, when it is due, limit, result, check."""
    sign, mark = _SIGNS.get(one.result, ("!  ", "bad") if one.required else (".  ", "quiet"))
    live = one.condition != "cold"
    due = "unplugged" if not live else f"LIVE {one.condition}"
    result = f"{one.result}: " if one.result else ""
    cells = columns([(Span(sign.strip(), mark), 2), (Span(due, "bad" if live else "quiet"), 11), (Span(one.limit, "strong"), 18)])
    return clip(line(*cells, " ", Span(result, mark), one.text), width)


def retest_detail(one: RetestView, width: int) -> tuple[Line, ...]:
    """One check in full: how it is read, whether it is needed, the source of its limit."""
    need = "needed before the job can be closed as repaired" if one.required else "advised"
    how = "answer yes or no" if one.function == "look" else FUNCTION_WORDS.get(one.function, one.function)
    how += f", {CONDITION_WORDS.get(one.condition, one.condition)}"
    rows = [*wrapped(f"{one.text}: {one.limit}", width, "strong"), *wrapped(f"{how}; {need}", width)]
    if one.note:
        rows += wrapped(one.note, width, "near")
    if one.source:
        rows += wrapped(f"limit after: {one.source}", width, "quiet")
    return tuple(rows)


def answer_hint(one: RetestView) -> str:
    """What can be typed for a check."""
    return "yes or no" if one.function == "look" else f"{one.unit}  the reading, OL or *"
