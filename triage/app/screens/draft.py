"""The estimated board: every value with its range, to be overwritten by what is read off or measured."""

from collections.abc import Callable
from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import Input

from triage.app.contract import OpenDraft
from triage.app.frame import Form
from triage.app.lines import Line, Span, line
from triage.app.places import make_screen
from triage.app.text.draft import CORE, check_lines, draft_head, draft_rows, row_detail, unread
from triage.app.widgets.field import Field
from triage.app.widgets.panel import ListPanel, Panel
from triage.job.draft_views import DraftView
from triage.job.views import JobView


class PartField(Field):
    """The field for what is on a part; up and down move the list, plus and minus add and strike out while it is empty."""

    EMPTY: ClassVar[dict[str, str]] = {**Field.EMPTY, "+": "screen.add", "-": "screen.strike"}
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("up", "screen.move(-1)", "up"),
        ("down", "screen.move(1)", "down"),
        ("pageup", "screen.page(-1)", "page up"),
        ("pagedown", "screen.page(1)", "page down"),
    ]


class DraftScreen(Form):
    """List of parts and values, the row under the cursor in full, the field."""

    PLACE: ClassVar[str] = "draft"
    NAME: ClassVar[str] = "estimates"
    AUTO_FOCUS = "#typed"
    CSS_PATH = "draft.tcss"

    def __init__(self) -> None:
        super().__init__()
        self._striking = ""
        """Part on which minus was pressed once."""
        self._parts = 0

    def body(self) -> ComposeResult:
        """List, detail, field."""
        yield ListPanel(id="list")
        yield Panel(id="detail")
        with Horizontal(classes="row"):
            yield Panel(id="typed-label")
            yield PartField(id="typed")
            yield Panel(id="hint")

    def status(self, view: JobView | None) -> tuple[Line, ...]:
        """The board, and how much of it was read."""
        found = self.triage.drafting.view
        if found is None:
            return super().status(view)
        left, path = unread(found.parts), self.triage.drafting.path
        told = f"{left} of {len(found.parts)} parts not read yet" if left else "every part read"
        kept = f"; kept as {path.stem}" if path else ""
        return (line(Span(f" {self.NAME} ", "head"), " ", Span(found.title, "strong")), line(told + kept))

    def refresh_body(self, view: JobView | None) -> None:
        """The board for this width."""
        found = self.triage.drafting.view
        if found is None:
            return
        panel = self.query_one("#list", ListPanel)
        panel.fill(draft_rows(found, self.wide), draft_head(self.wide))
        if found.message.startswith(f"{found.parts[-1].ref} added") and self._parts < len(found.parts):
            panel.go_to(found.parts[-1].ref)
        self._parts = len(found.parts)
        self.panel("typed-label").show((line(Span("on the part ", "strong")),))
        hint = "  + add  - strike out  F9 take back  F2 begin job"
        self.panel("hint").show((line(Span(hint, "quiet")),))
        self._show_detail()

    @property
    def _key(self) -> str:
        return self.query_one("#list", ListPanel).key

    def _show_detail(self) -> None:
        found = self.triage.drafting.view
        if found is not None:
            checks = check_lines(found, self.wide) if "turns" in self._key or CORE in self._key else ()
            self.panel("detail").show((*checks, *row_detail(found, self._key, self.wide)), top=0)

    def on_list_panel_moved(self, event: ListPanel.Moved) -> None:
        """Show the row under the cursor in full."""
        self._striking = ""
        self._show_detail()

    def on_list_panel_taken(self, event: ListPanel.Taken) -> None:
        """A click on the row: back to the field."""
        self.query_one("#typed").focus()

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """What is typed belongs to the row under the cursor."""
        text = event.value.strip()
        if not text:
            self.show_message("type what is on the part, or m and what was measured; up and down choose the row")
            return
        ref, _, name = self._key.partition(" ")

        def call(draft: OpenDraft) -> DraftView:
            if not name:
                return draft.mark(ref, text)
            if name == CORE:
                return draft.turns(ref, {}, text)
            if name.endswith("_turns"):
                return draft.turns(ref, {name.removesuffix("_turns"): text})
            measured = text[:2].lower() == "m "
            return draft.set(ref, name, text[2:] if measured else text, measured)

        self._change(call, text)

    def _change(self, call: Callable[[OpenDraft], DraftView], as_typed: str = "") -> None:
        def changed(view: DraftView) -> None:
            if not self.is_attached:
                return
            field = self.query_one("#typed", Field)
            if as_typed and field.value.strip() == as_typed:
                field.value = ""
            self.desk.say(view.message)

        self.triage.drafting.change(call, changed, self._refuse)

    def _refuse(self, text: str) -> None:
        if self.is_attached:
            self.show_message(text, refused=True)

    def action_move(self, rows: int) -> None:
        """Move the list while the cursor stays in the field."""
        self.query_one("#list", ListPanel).action_move(rows)

    def action_page(self, pages: int) -> None:
        """Move the list by a screenful."""
        self.query_one("#list", ListPanel).action_page(pages)

    def action_strike(self) -> None:
        """Strike the part out, once minus was pressed twice on it."""
        ref = self._key.partition(" ")[0]
        if self._striking != ref:
            self._striking = ref
            self.show_message(f"- again: the board has no {ref}")
            return
        self._striking = ""
        self._change(lambda draft: draft.strike(ref))

    def action_add(self) -> None:
        """Ask for a part more."""
        self.triage.push_screen(make_screen("role"))

    def action_take_back(self) -> None:
        """Take the last change back (F9)."""
        self._change(lambda draft: draft.undo())

    def action_begin(self) -> None:
        """Begin a job on the board (F2)."""
        path = self.triage.drafting.path
        if path is not None and not self.desk.pending:
            self.show_message("opening...")
            self.triage.begin(str(path))
