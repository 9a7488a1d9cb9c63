"""The bench screen in lines: suspects, the next reading, the verdict, the log."""

from collections.abc import Mapping, Sequence
from typing import NamedTuple

from triage.app.bars import share_bar
from triage.app.glyphs import Glyphs
from triage.app.lines import Line, Span, apart, clip, columns, line, width_of, wrapped
from triage.job.views import EntryView, OutcomeView, RetestView, SuggestionView, SuspectView, VerdictView

FUNCTION_WORDS = {
    "ohms": "ohms",
    "diode": "diode test",
    "esr": "ESR",
    "capacitance": "capacitance",
    "volts_dc": "volts DC",
    "volts_ac": "volts AC",
    "volts_pp": "scope, peak to peak",
    "watts": "watts at the plug",
    "amps_ac": "amps AC at the plug",
    "hertz": "frequency",
    "insulation_ohms": "insulation tester",
    "touch_amps": "touch current",
    "temperature": "temperature",
}
AT_THE_PLUG = ("watts", "amps_ac")
"""Functions of the meter in the mains lead: there are no leads to place."""
CONDITION_WORDS = {
    "cold": "unplugged",
    "noload": "LIVE, no load",
    "half": "LIVE, half load",
    "full": "LIVE, full load",
}


class Rooms(NamedTuple):
    """Rows of the panels of the bench screen."""

    board: int
    suspects: int
    next: int
    log: int


def rooms(height: int, board: int, beside: bool) -> Rooms:
    """How the rows between status and field are shared out.

    height: rows to share out. board: rows of the drawing. beside: the suspects stand beside the drawing, not
    under it. The next reading and three suspects come first, then the drawing, then more of everything, the
    log last.
    """
    suspects, following = (0, 5) if beside else (3, 5)
    board = max(min(board, height - suspects - following), 3)
    left = max(height - board - suspects - following, 0)
    more = min(left, 3)
    following, left = following + more, left - more
    more = 0 if beside else min(left, 5)
    suspects, left = (board if beside else suspects + more), left - more
    return Rooms(board, suspects, following, left)


def mode_words(mode: str) -> str:
    """A fault mode, or a whole fault, as words: ``Q1.ce_short`` -> ``Q1 ce short``."""
    return mode.replace("_", " ").replace(".", " ")


def fault_words(suspect: SuspectView) -> str:
    """``Q1 ce short``, ``C5 high esr + R1 open``."""
    refs, modes = suspect.ref.split("+"), suspect.mode.split("+")
    if len(refs) != len(modes):
        return f"{suspect.ref} {mode_words(suspect.mode)}".strip()
    return " + ".join(f"{ref} {mode_words(mode)}".strip() for ref, mode in zip(refs, modes, strict=True))


def percent(share: float) -> str:
    """A probability as a person reads it: never 0 or 100 % for what is not certain."""
    if 0 < share < 0.005:
        return "<1 %"
    if 0.995 < share < 1:
        return ">99 %"
    return f"{share * 100:.0f} %"


def suspect_lines(suspects: Sequence[SuspectView], width: int, rows: int, glyphs: Glyphs) -> tuple[Line, ...]:
    """One row a suspect: probability, bar, fault, what it took along, worst stress; a head where there is
    room for it."""
    wide = width >= 60
    out: list[Line] = []
    if rows > 4:
        head = "suspects" + (", with what they took along and their worst stress" if wide else "")
        out.append(line(Span(head.ljust(width), "head")))
    for number, suspect in enumerate(suspects[: rows - len(out)]):
        out.append(_suspect_line(suspect, number == 0, width, wide, glyphs))
    if not suspects:
        out.append(line(Span("no suspects yet", "quiet")))
    return tuple(out)


def _suspect_line(suspect: SuspectView, first: bool, width: int, wide: bool, glyphs: Glyphs) -> Line:
    sign = " " if not suspect.ref else "*" if first else "?"
    bar = 10 if wide else 6
    row = columns(
        [
            (percent(suspect.probability), -5),
            (Span(share_bar(suspect.probability, bar, glyphs), "fill"), bar),
            (
                Span(sign + fault_words(suspect), "strong" if first else ""),
                20 if wide else max(width - bar - 7, 8),
            ),
        ]
    )
    if wide:
        along = " + ".join(mode_words(fault) for fault in suspect.collateral)
        stress = Span("! " + suspect.stress, "over") if suspect.stress else Span("")
        took = line(Span("took " + along, "strong"), "  ") if along else ()
        row = (*row, Span(" "), *took, *line(stress, "  " if suspect.stress else "", Span(suspect.role, "quiet")))
    return clip(row, width)


def leading_line(suspects: Sequence[SuspectView], width: int) -> Line:
    """The leading suspects in one row."""
    told = ", ".join(f"{fault_words(one)} {percent(one.probability)}" for one in suspects[:4])
    return clip(line(Span("suspects now: ", "quiet"), Span(told, "near")), width) if told else ()


def suggestion_lines(
    found: SuggestionView,
    pins: Mapping[str, Sequence[str]],
    width: int,
    rows: int,
) -> tuple[Line, ...]:
    """The next reading: what to set, where the leads go, why, and what each outcome would mean.

    ``pins``: node -> part pins that meet there, so that the leads are found on the board and not only in the
    drawing.
    """
    out = [_lead_line(found, pins, width)]
    if found.hazard:
        out.append(clip(line(Span("! " + found.hazard, "bad")), width))
    keep = max(rows - len(out) - min(len(found.outcomes), 2), 1)
    reason = wrapped(found.reason, width)
    out += reason[:keep] if len(reason) <= keep else (*reason[: keep - 1], clip((*reason[keep - 1], Span(" ..." * 30)), width))
    for outcome in _likeliest(found.outcomes, max(rows - len(out), 0)):
        out.append(
            clip(
                columns(
                    [
                        (percent(outcome.probability), -5),
                        (Span(outcome.text, "strong"), 20),
                        (outcome.says, max(width - 27, 10)),
                    ]
                ),
                width,
            )
        )
    return tuple(out[:rows])


def _likeliest(outcomes: Sequence[OutcomeView], rows: int) -> list[OutcomeView]:
    """As many outcomes as there is room for, the likeliest, in the order of the meter's scale."""
    kept = sorted(range(len(outcomes)), key=lambda at: -outcomes[at].probability)[:rows]
    return [outcomes[at] for at in sorted(kept)]


def pin_words(node: str, other: str, pins: Mapping[str, Sequence[str]], count: int) -> str:
    """Part pins at which a node is found on the board: first those of a part whose other end the other
    lead goes to."""
    all_pins = [pin.split(" ")[0] for found in pins.values() for pin in found]
    shared = {ref for pin in pins.get(other, ()) if all_pins.count(ref := pin.split(" ")[0]) == 2}
    found = sorted(pins.get(node, ()), key=lambda pin: (pin.split(" ")[0] not in shared, len(pin)))
    return ", ".join(found[:count])


def _lead_line(found: SuggestionView, pins: Mapping[str, Sequence[str]], width: int) -> Line:
    """Function, leads with as many part pins as there is room for, condition and minutes."""
    live = found.condition != "cold"
    right = line(
        Span(CONDITION_WORDS.get(found.condition, found.condition), "bad" if live else "strong"),
        Span(f" {found.minutes:.1f} min", "quiet"),
    )
    if found.function in AT_THE_PLUG:
        words = Span(f"{FUNCTION_WORDS[found.function]}, between socket and adapter", "strong")
        return apart(line(Span("next ", "head"), " ", words), right, width)
    for count in (3, 2, 1, 0):
        red, black = (pin_words(*pair, pins, count) for pair in ((found.plus, found.minus), (found.minus, found.plus)))
        left = line(
            Span("next ", "head"),
            " ",
            Span(FUNCTION_WORDS.get(found.function, found.function), "strong"),
            "  red ",
            Span(f"{{+{found.plus}}}", "red"),
            " ",
            Span(red),
            "  black ",
            Span(f"{{-{found.minus}}}", "black"),
            " ",
            Span(black),
        )
        if width_of(left) + width_of(right) < width:
            break
    return apart(left, right, width)


def verdict_lines(found: VerdictView, width: int, rows: int) -> tuple[Line, ...]:
    """What the job has come to: the part, why it failed, what decided it, what to do."""
    if found.status == "open":
        return ()
    if found.status == "does not fit":
        text = "no single or joint fault explains the entries: read the last ones again (F9 takes one back)"
        return (line(Span("does not fit ", "bad")), *wrapped(found.why or text, width))[:rows]
    if found.status == "no part fault":
        head = line(Span("found ", "head"), Span(" no part of the board: look at cord, plug, joints, cable", "strong"))
        return (head, *wrapped(found.why, width))[:rows]
    what = f"{found.ref} {mode_words(found.mode)}" + "".join(f" + {mode_words(fault)}" for fault in found.collateral)
    head = apart(
        line(Span("found ", "head"), " ", Span(what, "strong")),
        line(Span(percent(found.probability), "strong")),
        width,
    )
    out = [
        head,
        clip(
            line(
                "replace ",
                Span(" ".join(found.repair), "strong"),
                Span("   F5 finds parts rated for the place", "key"),
            ),
            width,
        ),
    ]
    if found.why:
        out += wrapped(found.why, width, first="why: ", rest="     ")
    if found.evidence:
        out += wrapped("; ".join(found.evidence), width, "quiet", first="decided by ", rest="  ")
    return tuple(out[:rows])


_WHERE = {"acknowledge": "F10", "look at": "F8", "put right": "F8", "retest": "F6", "not passed": "F6", "record the repair": "F5",
          "read or refuse the cold check": "F2", "unplug": "F2"}
"""First words of what must be done -> key of the screen where it is done."""


def key_for(text: str) -> str:
    """Key of the screen where what a refusal asks for is done first; empty when it names nothing of the kind."""
    _, found, rest = text.partition(": first ")
    return next((key for words, key in _WHERE.items() if found and rest.startswith(words)), "")


def retest_lines(checks: Sequence[RetestView], width: int) -> tuple[Line, ...]:
    """After the repair: what is still to be checked, and where."""
    left = [one for one in checks if one.required and one.result != "pass"]
    if not left:
        return (line(Span("next ", "head"), Span(" every needed check has passed: F6 closes the job", "strong")),)
    text = f" F6: checks after the repair, needed: {len(left)} left, now: {left[0].text}"
    return (clip(line(Span("next ", "head"), Span(text, "strong")), width),)


def waiting_lines(waits: Sequence[str], width: int, rows: int) -> tuple[Line, ...]:
    """What must be done before the adapter may be powered, in order, each with the key of its screen."""
    out = [line(Span("next ", "head"), Span(" before any reading with mains:", "strong"))]
    for wait in waits:
        key = next((key for words, key in _WHERE.items() if wait.startswith(words)), "")
        out += [
            line(Span(f"{key:4}" if number == 0 else "    ", "key"), *row) for number, row in enumerate(wrapped(wait, width - 4))
        ]
    return tuple(out[:rows])


def log_lines(entries: Sequence[EntryView], width: int, rows: int) -> tuple[Line, ...]:
    """The last entries, newest below; what was taken back says so."""
    out = [line(Span("entries".ljust(width), "head"))]
    for entry in entries[-rows:]:
        text = f"{entry.text} (taken back)" if entry.undone else entry.text
        out.append(clip(line(Span(f"{entry.number:3d} ", "quiet"), Span(text, "quiet" if entry.undone else "")), width))
    return tuple(out)
