"""Complaint: what is wrong with the adapter, and under which load that was seen."""

from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal

from triage.app.frame import Frame
from triage.app.lines import Span, line
from triage.app.widgets.field import ChoiceField, Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.board.evidence import STATES
from triage.board.probe import CONDITIONS
from triage.job.views import JobView

_MEANS = {
    "normal": "the output is right; the fault was not seen here",
    "dead": "no output at all",
    "output low": "output there, but below its window",
    "output high": "output above its window: keep it away from the device",
    "pulsing": "comes and goes, ticks, or the lamp blinks",
    "works only without load": "right without load, breaks down under load",
    "hum or ripple": "output there, with hum or heavy ripple",
    "hot part": "works, but something gets too hot",
    "fuse gone": "no output, and the input path is open",
}


class IntakeScreen(Frame):
    """A list of states, the load, and free words."""

    PLACE: ClassVar[str] = "intake"
    NAME: ClassVar[str] = "complaint"
    AUTO_FOCUS = "ListPanel"
    CSS_PATH = "intake.tcss"

    def __init__(self) -> None:
        super().__init__()
        self._begun = False
        """True between the choice of a state and the Enter that puts the complaint into the job."""

    def body(self) -> ComposeResult:
        """State, load, words."""
        yield Panel(id="ask")
        yield ListPanel(id="states")
        with Horizontal(classes="row"):
            yield Panel(id="load-label")
            yield ChoiceField(CONDITIONS[1:], "full", id="load")
            yield Panel(id="load-hint")
        with Horizontal(classes="row"):
            yield Panel(id="words-label")
            yield Field(id="words")

    def refresh_body(self, view: JobView | None) -> None:
        """The list and the labels."""
        self.panel("ask").show((line(Span("What is wrong with it? ", "strong"), "Enter on the line that fits best."),))
        states = self.query_one("#states", ListPanel)
        rows = [(state, line(Span(state.ljust(26), "strong"), _MEANS.get(state, ""))) for state in STATES]
        first = not states.key
        states.fill(rows)
        if first:
            states.go_to("dead")
        self.panel("load-label").show((line("seen under load: "),))
        self.panel("load-hint").show((line(Span(f"  {', '.join(CONDITIONS[1:])} (up and down change it)", "quiet")),))
        self.panel("words-label").show((line("in the owner's words (may stay empty): "),))

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """The state is chosen: on to the load."""
        self._begun = True
        self.query_one("#load").focus()

    def on_input_submitted(self, event: Field.Submitted) -> None:
        """From the load to the words, from the words into the job."""
        load = self.query_one("#load", ChoiceField)
        if event.input is load:
            load.settle()
            self.query_one("#words").focus()
            return
        state = self.query_one("#states", ListPanel).key
        self._begun = False
        words, condition = event.value.strip(), load.settle() or "full"
        self.desk.enter(lambda bench: bench.complain(words, state, condition), self._accepted)

    def on_screen_suspend(self) -> None:
        """Say so when the screen is left with half a complaint."""
        if self._begun:
            self.desk.say("the complaint is not in the job yet: Enter on its load and on its words puts it there")

    def _accepted(self) -> None:
        self.triage.action_go(self.triage.place_of_stage())
