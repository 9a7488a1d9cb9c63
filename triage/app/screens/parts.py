"""Replacement: what the position demands, which parts meet it, a search by half-read marking, and the fit."""

from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Frame
from triage.app.lines import Line, Span, line, wrapped
from triage.app.text.parts import (
    candidate_detail,
    candidate_line,
    combination_detail,
    combination_line,
    demand_lines,
    match_line,
    reason_lines,
)
from triage.app.text.stress import before_after, with_it
from triage.app.widgets.field import ChoiceField, Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import CandidateView, CombinationView, DemandView, JobView, MatchView, StressView

_TOGETHER = "together "
"""Keys of the lines with several parts begin so; no type of the catalog does."""
_WHY = wrapped(
    "Where one part will not do or is not in the drawers: resistors in series or parallel, electrolytics in parallel, a film "
    "capacitor beside an electrolytic, whose ripple current is solved first; Esc stops that.",
    78,
)
_OFFER = "Enter works them out"


class PartsScreen(Frame):
    """Position and marking above, the list in the middle, the part under the cursor below."""

    PLACE: ClassVar[str] = "parts"
    NAME: ClassVar[str] = "parts"
    CSS_PATH = "parts.tcss"

    BINDINGS = [("right", "detail(2)", "text down"), ("left", "detail(-2)", "text up")]  # noqa: RUF012

    def __init__(self) -> None:
        super().__init__()
        self._ref = ""
        self._candidates: dict[str, CandidateView] = {}
        self._matches: tuple[MatchView, ...] = ()
        self._before: tuple[StressView, ...] = ()
        self._asked_for: DemandView | None = None
        self._fitted_here: set[str] = set()
        self._sure = ("", "")
        """Position and type on which Enter was pressed once."""
        self._together: dict[str, CombinationView] = {}
        """Key of a line -> several parts that will do together."""
        self._combined = _OFFER
        """What the line for several parts says; empty once they are listed."""
        self._with: dict[tuple[str, str], tuple[StressView, ...] | None] = {}
        """Position and type -> the stresses with it; None while they are computed."""

    def body(self) -> ComposeResult:
        """Fields, demand, list, detail."""
        with Horizontal(classes="row"):
            yield Panel(id="ref-label")
            yield ChoiceField((), id="ref")
            yield Panel(id="marking-label")
            yield Field(id="marking")
            yield Panel(id="hint")
        yield Panel(id="demand")
        yield ListPanel(id="list")
        yield Panel(id="detail")

    def on_mount(self) -> None:
        """Ask for the position that the verdict names."""
        super().on_mount()
        self.panel("ref-label").show((line(Span("position ", "strong")),))
        self.panel("marking-label").show((line(Span("  marking ", "strong")),))
        self.panel("hint").show((line(Span("  Enter twice: fit; left, right: its text", "quiet")),))

    def entered(self) -> None:
        """Offer the positions of the verdict first, else the suspects; keep the one chosen while it is among
        them."""
        self._with.clear()
        bench, view = self.desk.bench, self.desk.view
        if bench is None or view is None:
            return
        refs = [part.ref for part in bench.board.parts]
        wanted = [ref for ref in view.verdict.repair or [one.ref for one in view.suspects] if ref in refs]
        wanted = [ref for ref in wanted if ref not in self._fitted_here] or wanted
        field = self.query_one("#ref", ChoiceField)
        field.choices = (*wanted, *(ref for ref in refs if ref not in wanted))
        if wanted and self._ref not in view.verdict.repair:
            field.value = wanted[0]
        self._ask()

    def refresh_body(self, view: JobView | None) -> None:
        """Lines for this width."""
        self._fill()

    def _ask(self) -> None:
        ref = self.query_one("#ref", ChoiceField).settle()
        if not ref:
            self.panel("demand").show((line("which position? type a ref such as C1, Enter"),))
            return
        if ref == self._ref:
            return
        self._ref, self._candidates, self._asked_for, self._together = ref, {}, None, {}
        self._combined = _OFFER
        self.panel("demand").show((line(Span(f"computing what {ref} must withstand...", "near")),))
        self.ask(
            "demand",
            lambda bench: (bench.demand(ref), bench.candidates(ref)),
            self._demand,
            self._failed,
            long=True,
        )
        self.ask("stress", lambda bench: bench.stresses(), self._keep_before, self._ask_failed, long=True)

    def _combine(self, ref: str) -> None:
        """Behind the single parts, several that will do together; for an electrolytic that may take a solution of its own."""

        def show(found: tuple[CombinationView, ...]) -> None:
            if self._ref == ref:
                self._together = {f"{_TOGETHER}{number}": one for number, one in enumerate(found)}
                self._combined = "" if found else "none that passes every rule"
                self._fill()

        self._combined = "computing..."
        self._fill()
        self.ask("combinations", lambda bench: bench.combinations(ref), show, self._ask_failed, long=True)

    def _keep_before(self, found: tuple[StressView, ...]) -> None:
        self._before = found
        self._show_detail()

    def _failed(self, text: str) -> None:
        self._ref = ""
        self.panel("demand").show((line(Span(text, "bad")),))

    def _demand(self, found: tuple[DemandView, tuple[CandidateView, ...]]) -> None:
        self._asked_for, candidates = found
        self.panel("demand").show(demand_lines(self._asked_for, self.wide, 6))
        self._candidates = {one.type: one for one in candidates}
        self._fill()

    def _fill(self) -> None:
        """The matches while a marking is typed, else the candidates."""
        marking = self.query_one("#marking", Field).value.strip()
        if marking:
            rows = [(one.type, match_line(one, self.wide)) for one in self._matches]
            head = f"catalog parts that {marking!r} may mean, asked for {self._ref or 'no position yet'}"
        else:
            rows = [(one.type, candidate_line(one, self.wide)) for one in self._candidates.values() if one.accepted]
            rows += [(key, combination_line(one, self.wide)) for key, one in self._together.items()]
            if self._combined and self._asked_for is not None and not self._asked_for.safety_part:
                rows.append((_TOGETHER, line(Span("both ", "near"), f"several parts together: {self._combined}")))
            head = f"rated for {self._ref}, best first" if rows else f"no candidate for {self._ref} yet"
        self.query_one("#list", ListPanel).fill(rows, line(Span(head.ljust(self.wide), "head")))
        self._show_detail()

    def _show_detail(self) -> None:
        key = self.query_one("#list", ListPanel).key
        if key == _TOGETHER:
            self.panel("detail").show(_WHY)
            return
        if key in self._together:
            self.panel("detail").show(combination_detail(self._together[key], self.wide), top=0)
            return
        known = self._candidates.get(key)
        if known is not None:
            self._tell(known, (line(Span("with it: computing; a value that was never solved takes a minute", "near")),))
            if known.accepted and self._before:
                self._what_if(known)
            return
        self.panel("detail").show(())
        if key and self._ref:
            ref = self._ref
            self.ask("ask", lambda bench: bench.ask(ref, key), self._asked, self._ask_failed)

    def _what_if(self, known: CandidateView) -> None:
        """Add what the stresses would be with the part under the cursor."""
        ref, before, key = self._ref, self._before, (self._ref, known.type)

        def show(after: tuple[StressView, ...]) -> None:
            self._with[key] = after
            if self._ref == ref and self.query_one("#list", ListPanel).key == known.type:
                self._tell(known, with_it(before, after, ref, self.wide))

        if found := self._with.get(key):
            show(found)
        elif key not in self._with:
            self._with = {done: stresses for done, stresses in self._with.items() if stresses is not None} | {key: None}
            self.ask("what if", lambda bench: bench.what_if(ref, known.type), show, self._ask_failed, long=True)

    def _tell(self, known: CandidateView, first: tuple[Line, ...]) -> None:
        """The text on a candidate: the stresses with it, the part, and why the position asks for what it asks."""
        rows = (*(first if known.accepted else ()), *candidate_detail(known, self.wide))
        if self._asked_for is not None:
            rows = (*rows, *reason_lines(self._asked_for, self.wide))
        self.panel("detail").show(rows, top=0)

    def _asked(self, found: CandidateView) -> None:
        self._candidates[found.type] = found
        if self.query_one("#list", ListPanel).key == found.type:
            self._tell(found, ())

    def _ask_failed(self, text: str) -> None:
        self.panel("detail").show((line(Span(text, "bad")),))

    def action_detail(self, rows: int) -> None:
        """Scroll the text on the part under the cursor."""
        self.panel("detail").scroll_rows(rows)

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the part under the cursor."""
        self._show_detail()

    def on_input_changed(self, event: Input.Changed) -> None:
        """Search as one types; only the newest answer is shown."""
        if event.input.id != "marking":
            return
        text = event.value.strip()
        if not text:
            self._matches = ()
            self._fill()
            return
        self.ask("marking", lambda bench: bench.matches(text), self._matched, self._ask_failed)

    def _matched(self, found: tuple[MatchView, ...]) -> None:
        self._matches = found
        self._fill()

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """A position: ask for it. A marking: on to the list."""
        if event.input.id == "ref":
            self._ask()
        self.query_one("#list").focus()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """Fit the part under the cursor, once Enter was pressed twice on it."""
        ref, wanted = self._ref, event.key
        if wanted == _TOGETHER:
            self._combine(ref)
            return
        if self._sure != (ref, wanted):
            self._sure = (ref, wanted)
            several = self._together.get(wanted)
            how = f"note that {several.text} is" if several else f"{wanted} was"
            self.show_message(f"Enter again: {how} fitted at {ref}")
            return
        self._sure = ("", "")
        if wanted in self._together:
            text = f"fitted at {ref}: {self._together[wanted].text}"
            self.desk.enter(lambda bench: bench.note(text))
            return
        self.desk.enter(lambda bench: bench.fit(ref, wanted), self._fitted)

    def _fitted(self) -> None:
        before, ref, view = self._before, self._ref, self.desk.view
        self._fitted_here.add(ref)
        self._with.clear()
        more = [one for one in (view.verdict.repair if view else ()) if one not in self._fitted_here]
        following = f"Enter: {more[0]} is next" if more else "F6 goes on to the checks"
        if more:
            field = self.query_one("#ref", ChoiceField)
            field.value = more[0]
            field.focus()

        def show(after: tuple[StressView, ...]) -> None:
            self._before = after
            self.panel("demand").show(before_after(before, after, ref, self.wide, following))

        self.panel("demand").show((line(Span(f"fitted at {ref}; computing its stresses; {following}", "near")),))
        self.ask("stress", lambda bench: bench.stresses(), show, self._failed, long=True)
