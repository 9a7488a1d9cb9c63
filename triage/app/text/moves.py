"""How the suspects moved with each entry, a row a suspect, in lines."""

from collections.abc import Sequence

from triage.app.bars import ramp
from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, clip, line
from triage.app.text.bench import fault_words, percent
from triage.job.views import MoveView


def move_lines(track: Sequence[MoveView], width: int, rows: int, glyphs: Glyphs) -> tuple[Line, ...]:
    """A row for each of the leading suspects: one sign an entry, the fuller the likelier, and the change by
    the last one."""
    if not track:
        return (line(Span("no suspects yet", "quiet")),)
    shares = [{(one.ref, one.mode): one.probability for one in move.suspects} for move in track]
    last = track[-1].suspects
    room = max(width - 46, 8)
    seen = shares[-room:]
    out = [line(Span("suspects over the entries, oldest left".ljust(width), "head"))]
    for one in last[:rows]:
        key = (one.ref, one.mode)
        now, before = one.probability, shares[-2].get(key, 0.0) if len(shares) > 1 else one.probability
        step = "=" if abs(now - before) < 0.005 else f"{(now - before) * 100:+.0f}"
        out.append(
            line(
                Span(fault_words(one).ljust(24)[:24], "strong"),
                " |",
                Span(ramp([share.get(key, 0.0) for share in seen], glyphs), "fill"),
                "| ",
                percent(now).rjust(6),
                f"  last {step}",
            )
        )
    return tuple(clip(row, width) for row in out)


def entry_lines(track: Sequence[MoveView], width: int) -> tuple[Line, ...]:
    """What each entry did: who led after it."""
    out = [line(Span("entries and who led after them".ljust(width), "head"))]
    for move in track:
        lead = f"{fault_words(move.suspects[0])} {percent(move.suspects[0].probability)}" if move.suspects else "-"
        out.append(clip(line(Span(lead.ljust(30), "strong"), " ", move.text), width))
    return tuple(out)
