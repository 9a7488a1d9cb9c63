"""The look over the board before the readings: each question with its answers."""

from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Frame
from triage.app.lines import Line, Span, line, wrapped
from triage.app.text.bench import leading_line
from triage.app.widgets.field import ChoiceField, Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import JobView, LookView

_REST = "all the others"
_SIGNS = {"": ("!  ", "bad"), "sound": ("ok ", "good")}


class LooksScreen(Frame):
    """Questions above, the answers of the one under the cursor below."""

    PLACE: ClassVar[str] = "looks"
    NAME: ClassVar[str] = "look"
    AUTO_FOCUS = "#list"
    CSS_PATH = "looks.tcss"

    BINDINGS = [("s,space", "sound", "sound"), ("a", "all_sound", "all sound")]  # noqa: RUF012 (Textual's own way)

    def __init__(self) -> None:
        super().__init__()
        self._answer = ""
        self._sent: set[str] = set()
        """Questions answered on their way to the bench."""

    def body(self) -> ComposeResult:
        """Questions, the question in full, answers, part."""
        yield ListPanel(id="list")
        yield Panel(id="full")
        yield ListPanel(id="answers")
        with Horizontal(classes="row"):
            yield Panel(id="ref-label")
            yield ChoiceField((), id="ref")
            yield Panel(id="ref-hint")
        yield Panel(id="lead")

    def _looks(self) -> tuple[LookView, ...]:
        looks = self.desk.view.looks if self.desk.view else ()
        return tuple(sorted(looks, key=lambda one: not one.needed))

    def _here(self) -> LookView | None:
        key = self.query_one("#list", ListPanel).key
        return next((one for one in self._looks() if one.key == key), None)

    def refresh_body(self, view: JobView | None) -> None:
        """Answered ones carry ``ok``, those still needed ``!``, the later ones a dot."""
        looks = self._looks()
        left = sum(one.needed and not one.said for one in looks)
        text = (
            f"to look at: {left} before the readings; s: sound, a: all the rest is, Enter: else"
            if left
            else "looked at; F2 goes on to the readings"
        )
        rows: list[tuple[str, Line]] = [(one.key, self._row(one)) for one in looks]
        rows.append((_REST, line("   ", Span("everything not answered was looked at and is sound", "key"))))
        self.query_one("#list", ListPanel).fill(rows, line(Span(text.ljust(self.wide), "head")))
        self.panel("lead").show((leading_line(view.suspects if view else (), self.wide),))
        self._show_answers()

    @staticmethod
    def _row(one: LookView) -> Line:
        sign, mark = _SIGNS.get(one.said, ("!! ", "over"))
        if not one.said and not one.needed:
            sign, mark = ".  ", "quiet"
        said = Span(f"  {one.said}", mark) if one.said else Span("")
        return line(Span(sign, mark), one.text, said)

    def _show_answers(self) -> None:
        here = self._here()
        answers, field, label = (
            self.query_one("#answers", ListPanel),
            self.query_one("#ref", ChoiceField),
            self.panel("ref-label"),
        )
        if here is None:
            self.panel("full").show(())
            answers.fill([])
            label.show(())
            return
        self.panel("full").show(wrapped(here.text, self.wide, "strong"))
        answers.fill([(answer, line("  " + answer)) for answer in here.answers])
        field.choices = ("", *here.refs)
        if here.answers:
            label.show((line("at part "),))
            self.panel("ref-hint").show((line(Span("  (may stay empty) up and down go through the parts", "quiet")),))
        else:
            label.show((line("measured"),))
            self.panel("ref-hint").show(
                (line(Span(f"  {'with its unit, for instance 6.5 mm' if here.unit == 'm' else 'a number'}", "quiet")),)
            )

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the answers of the question under the cursor."""
        if event.panel.id == "list":
            self._show_answers()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """From question to answers or number, from answer into the job or to the part."""
        here = self._here()
        if event.panel.id == "list":
            if here is None:
                self.action_all_sound()
            else:
                self.query_one("#answers" if here.answers else "#ref").focus()
        elif event.key == "sound" or here is None or not here.refs:
            self._enter(event.key, "")
        else:
            self._answer = event.key
            self.query_one("#ref").focus()

    def action_sound(self) -> None:
        """The question under the cursor: looked at, nothing found."""
        here = self._here()
        if here is not None and "sound" in here.answers:
            self._enter("sound", "")

    def action_all_sound(self) -> None:
        """Everything not answered yet: looked at, nothing found."""
        self.desk.enter(lambda bench: bench.see("sound", ""), self._accepted, queue=True)

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """The part, or the number."""
        here = self._here()
        if here is None:
            return
        if here.answers:
            self._enter(self._answer or self.query_one("#answers", ListPanel).key, self.query_one("#ref", ChoiceField).settle())
        else:
            self._enter(event.value.strip(), "")

    def _enter(self, answer: str, ref: str) -> None:
        here = self._here()
        if here is not None and self.desk.enter(lambda bench: bench.look(here.key, answer, ref), self._accepted, queue=True):
            self._sent.add(here.key)
            self._to_next()

    def _to_next(self) -> None:
        left = [one.key for one in self._looks() if one.needed and not one.said and one.key not in self._sent]
        panel = self.query_one("#list", ListPanel)
        panel.focus()
        if left:
            panel.go_to(left[0])

    def _accepted(self) -> None:
        self._answer = ""
        self._sent.clear()
        self.query_one("#ref", Field).value = ""
        if any(one.needed and not one.said for one in self._looks()):
            self._to_next()
        else:
            self.triage.action_go("bench")
