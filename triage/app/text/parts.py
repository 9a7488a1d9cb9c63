"""Replacement in lines: what a position demands, how candidates meet it, why a part is refused."""

from triage.app.lines import Line, Span, clip, columns, line, wrapped
from triage.app.text.bench import mode_words
from triage.app.text.stress import amount
from triage.job.views import CandidateView, CombinationView, DemandView, MatchView, RequirementView


def demand_lines(found: DemandView, width: int, rows: int) -> tuple[Line, ...]:
    """Head with position and role, then a row a requirement with its reason."""
    kind = "  SAFETY PART: like for like only" if found.safety_part else ""
    out = [
        line(
            Span(f"{found.ref} {found.role} must withstand".ljust(width - len(kind)), "head"),
            Span(kind, "head"),
        )
    ]
    for one in found.requirements:
        bound = line(Span(_bounds(one), "strong"))
        old = f"old part {amount(one.offered, one.unit)}" if one.offered is not None else ""
        out.append(
            clip(
                (
                    *columns([(one.text, 26), (bound[0], 20), (Span(old, "quiet"), 18)]),
                    Span(" "),
                    Span(one.reason, "quiet"),
                ),
                width,
            )
        )
    if found.note and len(out) < rows:
        out.append(clip(line(Span(found.note, "near")), width))
    return tuple(out[:rows])


def reason_lines(found: DemandView, width: int) -> tuple[Line, ...]:
    """Why a position asks for what it asks, a paragraph a requirement, and the note in full."""
    out: list[Line] = []
    for one in found.requirements:
        out += wrapped(f"{one.reason} ({one.source})" if one.source else one.reason, width, "quiet", first=f"{one.text}: ")
    return (*out, *wrapped(found.note, width, "near")) if found.note else tuple(out)


def _bounds(one: RequirementView) -> str:
    low = "" if one.minimum is None else f"at least {amount(one.minimum, one.unit)}"
    high = "" if one.maximum is None else f"at most {amount(one.maximum, one.unit)}"
    if low and high:
        return f"{amount(one.minimum, one.unit)} to {amount(one.maximum, one.unit)}"
    return low or high or "as the old one"


def candidate_line(one: CandidateView, width: int) -> Line:
    """How well it fits, type, its margins; a refused one says so."""
    word = Span(f"{one.score * 100:3.0f} %", "good") if one.accepted else Span("NO   ", "bad")
    text = "; ".join(one.margins) if one.accepted else "; ".join(one.refusals)
    return clip(columns([(word, 5), (Span(one.type, "strong"), _type_width(width)), (text, max(width, 20))]), width)


def _type_width(width: int) -> int:
    return max(min(width // 3, 40), 14)


def combination_line(one: CombinationView, width: int) -> Line:
    """Several parts together, and whether all of them lie in the drawers."""
    stock = Span("in the drawers  ", "good") if one.in_stock else Span("")
    return clip(line(Span("both ", "near"), stock, Span(one.text, "strong")), width)


def combination_detail(one: CombinationView, width: int) -> tuple[Line, ...]:
    """How the parts share the stress."""
    out: list[Line] = []
    for figure in one.arithmetic:
        out += wrapped(figure, width)
    return tuple(out)


def match_line(one: MatchView, width: int) -> Line:
    """How sure the marking is read, type, class, main ratings."""
    kind = mode_words(one.part_class)
    cells: list[tuple[str | Span, int]] = [(Span(one.band, "near"), 8), (Span(one.type, "strong"), _type_width(width))]
    return clip(columns([*cells, (Span(kind, "quiet"), 18), (one.text, max(width, 20))]), width)


def candidate_detail(one: CandidateView, width: int) -> tuple[Line, ...]:
    """All about one candidate: refusals first, then margins, notes, source."""
    out: list[Line] = []
    for refusal in one.refusals:
        out += wrapped(refusal, width, "bad", first="refused: ", rest="  ")
    if one.margins:
        out += wrapped("; ".join(one.margins), width, "good" if one.accepted else "", first="margins: ", rest="  ")
    for note in one.notes:
        out += wrapped(note, width) if len(note) > width else (line(note),)
    source = f"{one.source} ({one.confidence})" if one.confidence else one.source
    if source:
        out.append(clip(line(Span("source: " + source, "quiet")), width))
    return tuple(out)
