"""A form in front of a screen: a few labelled fields, each with its choices; Enter goes on, in the last
field it enters."""

from collections.abc import Sequence
from typing import NamedTuple

from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Form
from triage.app.lines import Span, clip, line, wrapped
from triage.app.widgets.field import ChoiceField, Field
from triage.app.widgets.panel import Panel
from triage.job.views import JobView


class Asked(NamedTuple):
    """One field of a form."""

    name: str
    label: str
    choices: Sequence[str] = ()
    """Words to choose from; empty: anything can be typed."""
    value: str = ""
    optional: bool = False


class EntryForm(Form):
    """Asks for the fields of ``asked`` and gives them to ``enter``; both are written by the subclass."""

    CSS_PATH = "entry_form.tcss"
    HEAD = ""
    """What the form is for, in one line."""

    def asked(self) -> Sequence[Asked]:
        """The fields, in order."""
        return ()

    def enter(self, said: dict[str, str]) -> bool:
        """Give the bench the entry; False when it cannot take one now."""
        return False

    def body(self) -> ComposeResult:
        """Head, then a row a field, then the choices of the field with the cursor."""
        yield Panel(id="head")
        for one in self.asked():
            with Horizontal(classes="row"):
                yield Panel(id=f"label-{one.name}", classes="label")
                if one.choices:
                    yield ChoiceField(one.choices, one.value, id=one.name)
                else:
                    yield Field(one.value, id=one.name)
        yield Panel(id="choices")

    def refresh_body(self, view: JobView | None) -> None:
        """Labels; choices of the field with the cursor."""
        self.panel("head").show(wrapped(self.HEAD, self.wide, "strong"))
        for one in self.asked():
            self.panel(f"label-{one.name}").show((line(one.label.rjust(18) + "  "),))
        self._show_choices()

    def _show_choices(self) -> None:
        field = self.focused
        if not isinstance(field, ChoiceField):
            self.panel("choices").show(())
            return
        fitting = field.fitting if field.value else field.choices
        rows = [line(Span("up and down go through: ", "quiet"))]
        for choice in fitting:
            word = Span(choice or "(whole adapter)", "strong" if choice == field.choice else "")
            more = (*rows[-1], word, Span("   "))
            if sum(len(span.text) for span in more) > self.wide - 2 and rows[-1]:
                rows.append((word, Span("   ")))
            else:
                rows[-1] = more
        self.panel("choices").show([clip(row, self.wide) for row in rows])

    def on_input_changed(self, event: Input.Changed) -> None:
        """Show what fits."""
        self._show_choices()

    def on_descendant_focus(self) -> None:
        """Show the choices of the field that got the cursor."""
        self.call_after_refresh(self._show_choices)

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """On to the next field; from the last, into the job."""
        fields = [self.query_one(f"#{one.name}", Field) for one in self.asked()]
        if isinstance(event.input, ChoiceField):
            event.input.settle()
        here = fields.index(event.input)  # type: ignore[arg-type]
        if here + 1 < len(fields):
            fields[here + 1].focus()
            return
        for one, field in zip(self.asked(), fields, strict=True):
            if not field.value.strip() and not one.optional:
                self.show_message(f"{one.label} is empty; type it or choose with up and down", refused=True)
                field.focus()
                return
        self.enter({one.name: field.value.strip() for one, field in zip(self.asked(), fields, strict=True)})

    def accepted(self) -> None:
        """Put the form away once the bench has taken the entry."""
        if self.is_current:
            self.triage.pop_screen()
