"""The key line, made from the table of commands."""

from collections.abc import Sequence

from triage.app.keys import COMMANDS, Command
from triage.app.lines import Line, Span, line, width_of


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
