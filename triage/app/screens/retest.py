"""After the repair: the checks with their limits, what the repair led to, and closing the job."""

from typing import ClassVar

from textual import events
from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.frame import Frame
from triage.app.lines import Line, Span, line, wrapped
from triage.app.text.bench import mode_words
from triage.app.text.retest import answer_hint, retest_detail, retest_line
from triage.app.typed import understand
from triage.app.widgets.field import Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.views import JobView, RetestView

_SAY = {
    "repaired works": ("it works", "the repair led to a working adapter"),
    "repaired still faulty": ("still faulty", "the same or another fault is there: the readings go on"),
    "repaired given up": ("given up", "not worth while, or not safe to repair"),
    "close repaired": ("close: repaired", "every needed check has passed"),
    "close replaced": ("close: replaced", "the adapter is replaced by another one"),
    "close scrapped": ("close: scrapped", "the adapter goes to recycling"),
}


_DONE = "close repaired"
"""The line to go to when every needed check has passed."""


class RetestScreen(Frame):
    """Checks and outcomes in one list; the result of a check is entered below it."""

    PLACE: ClassVar[str] = "retest"
    NAME: ClassVar[str] = "retest"
    AUTO_FOCUS = "#list"
    CSS_PATH = "retest.tcss"
    BINDINGS = [("up", "step(-1)", "line up"), ("down", "step(1)", "line down")]  # noqa: RUF012 (Textual's own way)

    def __init__(self) -> None:
        super().__init__()
        self._arrived = False
        """True between coming to the front and the first lines shown."""

    def body(self) -> ComposeResult:
        """What was found, the list, the line in full, its reading."""
        yield Panel(id="found")
        yield ListPanel(id="list")
        yield Panel(id="full")
        with Horizontal(classes="row"):
            yield Panel(id="read-label")
            yield Field(id="read")
            yield Panel(id="hint")

    def entered(self) -> None:
        """The cursor goes to the first needed check, unless it stands on one that is still open."""
        self._arrived = True

    def refresh_body(self, view: JobView | None) -> None:
        """The checks with their results, then what can be said."""
        if view is None:
            return
        named = {"open": "none named yet", "does not fit": "none that fits"}
        fault = f"{view.verdict.ref} {mode_words(view.verdict.mode)}".strip()
        fault = named.get(view.verdict.status, fault or view.verdict.status)
        self.panel("found").show((line("fault found: ", Span(fault, "strong")),))
        rows: list[tuple[str, Line]] = [(one.key, retest_line(one, self.wide)) for one in view.retest]
        rows += [(key, line("   ", Span(word.ljust(18), "key"), text)) for key, (word, text) in _SAY.items()]
        head = "after the repair: the checks in order, then what came of it; Enter takes a line"
        self.query_one("#list", ListPanel).fill(rows, line(Span(head.ljust(self.wide), "head")))
        here = self._here()
        if self._arrived and (here is None or here.result or not here.required):
            self._to_needed()
        self._arrived = False
        self._show_full()

    def _here(self) -> RetestView | None:
        key = self.query_one("#list", ListPanel).key
        view = self.desk.view
        return next((one for one in view.retest if one.key == key), None) if view else None

    def _show_full(self) -> None:
        here = self._here()
        waits = self.desk.view.waits_for if self.desk.view else ()
        note = f"before power: {'; '.join(waits)}" if waits else ""
        self.panel("full").show(retest_detail(here, self.wide) if here else wrapped(note, self.wide, "near"))
        self.panel("read-label").show((line(Span("reading ", "strong")),) if here else ())
        self.panel("hint").show((line(Span(f" {answer_hint(here)}", "quiet")),) if here else ())

    def on_key(self, event: events.Key) -> None:
        """What is typed with the cursor on a check is its reading."""
        letter = event.character or ""
        if letter.isprintable() and letter not in ("", "?") and isinstance(self.focused, ListPanel) and self._here() is not None:
            event.stop()
            field = self.query_one("#read", Field)
            field.focus()
            field.insert_text_at_cursor(letter)

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the line in full."""
        self._show_full()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """A check: on to its result. An outcome: into the job."""
        if self._here() is not None:
            self.query_one("#read").focus()
            return
        what, _, word = event.key.partition(" ")
        if what == "close":
            self.desk.enter(lambda bench: bench.close(word), lambda: self.triage.action_go("record"))
        else:
            self.desk.enter(lambda bench: bench.repaired(word), self._repaired)

    def _repaired(self) -> None:
        view = self.desk.view
        if view is not None and view.stage not in ("retest", "repair"):
            self.triage.action_go("bench")

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """The reading of the check under the cursor."""
        here = self._here()
        text = understand(event.value).text
        if not text:
            self.show_message("type the reading, or yes or no; Escape goes back to the list")
        elif here is not None:
            self.desk.enter(lambda bench: bench.retest(here.key, text), self._accepted)

    def action_step(self, by: int) -> None:
        """Another line, from within the field."""
        self.query_one("#read", Field).value = ""
        self.query_one("#list", ListPanel).action_move(by)
        if self._here() is None:
            self.query_one("#list").focus()

    def _accepted(self) -> None:
        """To the next check that is needed; when all are done, to closing the job."""
        self.query_one("#read", Field).value = ""
        if not self._to_needed():
            self.query_one("#list").focus()

    def _to_needed(self) -> bool:
        """Put the cursor on the next needed check, or on what comes after all of them; True for a check."""
        panel, view = self.query_one("#list", ListPanel), self.desk.view
        lines = view.retest if view else ()
        here = next((at for at, one in enumerate(lines) if one.key == panel.key), 0)
        left = [one.key for one in (*lines[here:], *lines[:here]) if one.required and not one.result]
        failed = any(one.required and one.result != "pass" for one in lines)
        panel.go_to(left[0] if left else next(iter(_SAY)) if failed or not lines else _DONE)
        return bool(left)
