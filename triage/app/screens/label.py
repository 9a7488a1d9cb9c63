"""A board nobody has drawn: what its label says, what can be seen on it, and which family it then belongs to."""

from typing import ClassVar

from textual import events
from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Form
from triage.app.lines import Line, Span, line
from triage.app.places import make_screen
from triage.app.text.draft import family_detail, family_line, seen_line
from triage.app.widgets.field import ChoiceField, Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.board.estimate.seen import COUNTS, EXCLUSIVE, FEATURES
from triage.job.draft_views import DraftView, FamilyView
from triage.job.views import JobView

_FIELDS = (("title", "called ", ""), ("input", "  input ", "100-240 V~ 50/60 Hz"), ("volts", "output ", ""), ("amps", " V  ", ""),
           ("class", " A  class ", "II"))  # fmt: skip
_WORDS = {"windings": "windings of the transformer (count)", "transistors": "transistors, mains side (count)"}
_SEEN = (*COUNTS, *FEATURES)


class SeenPanel(ListPanel):
    """The list of what can be seen: one key answers the row and goes to the next."""

    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("y,plus", "answer('+')", "seen"),
        ("n,minus", "answer('-')", "not there"),
        ("space,backspace,delete", "answer('')", "not looked at"),
        *((str(number), f"answer('{number}')", "count") for number in range(10)),
    ]

    def action_answer(self, said: str) -> None:
        """Answer the row under the cursor."""
        screen = self.screen
        assert isinstance(screen, LabelScreen)
        screen.answer(self.key, said)


class LabelScreen(Form):
    """Fields of the label above, what is seen and the families side by side, the family under the cursor below."""

    PLACE: ClassVar[str] = "label"
    NAME: ClassVar[str] = "board from its label"
    AUTO_FOCUS = "#title"
    CSS_PATH = "label.tcss"

    def __init__(self) -> None:
        super().__init__()
        self._families: tuple[FamilyView, ...] = ()

    def body(self) -> ComposeResult:
        """Two rows of fields, two lists, detail."""
        typed = self.triage.drafting.typed
        for last, row in enumerate((_FIELDS[:2], _FIELDS[2:])):
            with Horizontal(classes="row"):
                for name, _, usual in row:
                    yield Panel(id=f"{name}-label")
                    if name == "class":
                        yield ChoiceField(("II", "I"), typed.get(name, usual), id=name)
                    else:
                        yield Field(typed.get(name, usual), id=name)
                if last:
                    yield Panel(id="class-hint")
        with Horizontal(id="lists"):
            yield SeenPanel(id="seen")
            yield ListPanel(id="families")
        yield Panel(id="detail")

    def on_mount(self) -> None:
        """Labels of the fields; the families as far as they are known without a label."""
        super().on_mount()
        for name, label, _ in _FIELDS:
            self.panel(f"{name}-label").show((line(Span(label, "strong")),))
        self.panel("class-hint").show((line(Span("  II: double square; I: earthed", "quiet")),))
        self._ask()

    def refresh_body(self, view: JobView | None) -> None:
        """The lists for this width."""
        self._fill_seen()
        self._fill_families()

    def _fill_seen(self) -> None:
        seen = self.triage.drafting.seen
        rows = [(one, seen_line(_WORDS.get(one, one), seen.get(one, ""))) for one in _SEEN]
        panel = self.query_one("#seen", SeenPanel)
        panel.fill(rows, line(Span("seen? y, n or a count".ljust(40), "head")))

    def _fill_families(self) -> None:
        panel = self.query_one("#families", ListPanel)
        rows: list[tuple[str, Line]] = [(one.family, family_line(one, panel.size.width or self.wide)) for one in self._families]
        panel.fill(rows, line(Span("then it is: Enter takes one".ljust(panel.size.width), "head")))
        self._show_detail()

    def _show_detail(self) -> None:
        key = self.query_one("#families", ListPanel).key
        found = next((one for one in self._families if one.family == key), None)
        self.panel("detail").show(family_detail(found, self.wide) if found else ())

    def answer(self, feature: str, said: str) -> None:
        """Note what was seen, ask for the families anew, go to the next question."""
        seen = self.triage.drafting.seen
        counted = feature in COUNTS
        if (said in ("+", "-")) if counted else said.isdigit():
            self.show_message("a count takes a digit, the others y (seen) or n (not there)", refused=True)
            return
        for group in EXCLUSIVE:
            if said == "+" and feature in group:
                seen.update((other, "-") for other in group if seen.get(other) == "+")
        seen[feature] = said
        self._fill_seen()
        self.query_one("#seen", SeenPanel).action_move(1)
        self._ask()

    def _ask(self) -> None:
        typed, statements = self._typed(), self.triage.drafting.statements
        self.triage.drafting.ask(
            "families", lambda draft: draft.families(typed["volts"], typed["amps"], statements), self._show, self._refuse
        )

    def _typed(self) -> dict[str, str]:
        return {name: self.query_one(f"#{name}", Field).value for name, _, _ in _FIELDS}

    def _show(self, found: tuple[FamilyView, ...]) -> None:
        if self.is_attached:
            self._families = found
            self._fill_families()
            self.query_one("#families", ListPanel).action_move(-len(found))
            self.show_message(" ")

    def _refuse(self, text: str) -> None:
        if self.is_attached:
            self.show_message(text, refused=True)

    def on_input_changed(self, event: Input.Changed) -> None:
        """Keep what is typed."""
        self.triage.drafting.typed = self._typed()

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """On to the next field; from the last to what is seen."""
        if isinstance(event.input, ChoiceField):
            event.input.settle()
        names = [name for name, _, _ in _FIELDS]
        here = names.index(event.input.id or "")
        if here + 1 < len(names):
            self.query_one(f"#{names[here + 1]}").focus()
        else:
            self.query_one("#seen").focus()
        self._ask()

    def on_descendant_focus(self, event: events.DescendantFocus) -> None:
        """The power counts as soon as the field of it is left."""
        if event.widget.id == "families":
            self._ask()

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the family under the cursor in full."""
        if event.panel.id == "families":
            self._show_detail()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """From what is seen on to the families; from there to the estimates."""
        if event.panel.id == "seen":
            self.query_one("#families").focus()
            return
        typed, family, drafting = self._typed(), event.key, self.triage.drafting
        statements = drafting.statements
        for name, label in (("volts", "output volts"), ("amps", "output amperes")):
            if not typed[name].strip():
                self.show_message(f"{label} of the label are missing; where it cannot be read take those of the connector", True)
                self.query_one(f"#{name}").focus()
                return
        drafting.begin()
        self.show_message("estimating...")
        drafting.change(
            lambda draft: draft.estimate(
                family, typed["input"], typed["volts"], typed["amps"], typed["class"].strip() or "II", statements, typed["title"]
            ),
            self._estimated,
            self._refuse,
        )

    def _estimated(self, view: DraftView) -> None:
        if self.is_current:
            self.show_message(" ")
            self.triage.push_screen(make_screen("draft"))

    def action_back(self) -> None:
        """From the lists back to the fields, from there to the start page; what was typed and ticked stays."""
        if self.focused is not None and self.focused.id in ("seen", "families"):
            self.query_one("#seen" if self.focused.id == "families" else "#volts").focus()
            return
        self.triage.pop_screen()
