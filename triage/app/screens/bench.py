"""The bench: the board in the centre, who is suspected, what to read next, and the field to type it in."""

from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Container, Horizontal

from triage.app.drawing import Marks, marked, pin_list, rows_of, squeezed
from triage.app.frame import Frame
from triage.app.lines import Line, Span, line, plain, width_of, wrapped
from triage.app.text.bench import (
    AT_THE_PLUG,
    log_lines,
    retest_lines,
    rooms,
    suggestion_lines,
    suspect_lines,
    verdict_lines,
    waiting_lines,
)
from triage.app.typed import Typed, understand
from triage.app.widgets.field import Field, ReadingField
from triage.app.widgets.panel import Panel
from triage.job.views import JobView, SuggestionView

_BESIDE = 30
"""Fewest columns beside the drawing in which the suspects can stand."""
_FIXED = 5
"""Rows of status, field, message and keys."""


def _word(node: str) -> str:
    """The word in the drawing that a lead goes to: the node, or the part whose pin it is (``C1.plus``)."""
    return node.partition(".")[0]


class BenchScreen(Frame):
    """The reading loop."""

    PLACE: ClassVar[str] = "bench"
    NAME: ClassVar[str] = "bench"
    CSS_PATH = "bench.tcss"
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("pageup", "board(-5)", "board up"),
        ("pagedown", "board(5)", "board down"),
    ]

    def __init__(self) -> None:
        super().__init__()
        self._beside = 0
        self._rooms = rooms(19, 11, beside=False)

    def body(self) -> ComposeResult:
        """Board, suspects, log, next reading, field."""
        with Container(id="upper"):
            yield Panel(id="board")
            yield Panel(id="suspects")
        yield Panel(id="next")
        yield Panel(id="log")
        with Horizontal(classes="row"):
            yield Panel(id="field-label")
            yield ReadingField(id="field")
            yield Panel(id="field-hint")

    def on_mount(self) -> None:
        """Put back what was half typed when the last session was cut off."""
        super().on_mount()
        bench = self.desk.bench
        if bench is not None:
            self.desk.work("half typed", lambda: self.triage.shelf.kept(bench.path), self._put_back, lambda text: None)

    def _put_back(self, text: str) -> None:
        field = self.query_one("#field", Field)
        if text and not field.value and self.is_attached:
            field.value = text
            field.cursor_position = len(text)
            self.desk.say("half typed when the last session ended; look at the meter again")

    def on_input_changed(self, event: Field.Changed) -> None:
        """Keep what is half typed for a session that is cut off."""
        self.desk.half_typed = event.value

    def refresh_body(self, view: JobView | None) -> None:
        """Write every panel anew; what did not change is not painted."""
        if view is None:
            return
        drawing = view.drawing or pin_list(self.desk.pins, self.wide - 2)
        least = rooms(self.app.size.height - _FIXED, len(drawing.splitlines()), beside=False).board
        rows = self._marked(view, squeezed(drawing, self.wide - 2, least))
        self._arrange(rows)
        board, suspects, log = self.panel("board"), self.panel("suspects"), self.panel("log")
        board.show(rows)
        found = view.suggestion if view.suggestion and view.suggestion.function not in AT_THE_PLUG else None
        for node in (_word(found.minus), _word(found.plus)) if found else ():
            for row in rows_of(rows, node)[:1]:
                board.scroll_to_row(row)
                at = plain(rows[row]).index(node)
                board.pan_to(max(at - 2, 0), at + len(node) + 2)
        suspects.show(suspect_lines(view.suspects, self._beside or self.wide, self._rooms.suspects, self.glyphs))
        if self._rooms.log:
            log.show(log_lines(view.entries, self.wide, self._rooms.log - 1))
        self._show_next(view)

    @staticmethod
    def _marked(view: JobView, drawing: str) -> tuple[Line, ...]:
        found = view.suggestion if view.suggestion and view.suggestion.function not in AT_THE_PLUG else None
        marks = Marks(
            suspects=[ref for one in view.suspects[:4] for ref in one.ref.split("+") if ref],
            over=frozenset(ref for one in view.suspects if one.stress for ref in one.ref.split("+")),
            red=found.plus if found else "",
            black=found.minus if found else "",
            alone=_word(found.plus) if found and _word(found.plus) != found.plus else "",
        )
        return marked(drawing, marks)

    def _arrange(self, drawing: tuple[Line, ...]) -> None:
        """Give each panel its rows and columns."""
        columns = max(map(width_of, drawing), default=0)
        self._beside = self.wide - columns - 1 if self.wide - columns > _BESIDE else 0
        self._rooms = rooms(self.app.size.height - _FIXED, len(drawing), bool(self._beside))
        self.set_class(bool(self._beside), "-beside")
        board, suspects, log = self.panel("board"), self.panel("suspects"), self.panel("log")
        board.styles.width = columns if self._beside else "1fr"
        for panel, height in (
            (board, self._rooms.board),
            (suspects, self._rooms.suspects),
            (log, self._rooms.log),
            (self.panel("next"), self._rooms.next),
            (self.query_one("#upper"), self._upper),
        ):
            panel.styles.height = height
        log.display = self._rooms.log > 0

    @property
    def _upper(self) -> int:
        return self._rooms.board + (0 if self._beside else self._rooms.suspects)

    def _show_next(self, view: JobView) -> None:
        panel = self.panel("next")
        rows = self._rooms.next
        lines = retest_lines(view.retest, self.wide) if view.stage == "retest" else ()
        verdict = verdict_lines(view.verdict, self.wide, rows - len(lines))
        if view.suggestion is not None:
            # A reading that is due comes before what is only to be known, but the verdict keeps its first line.
            verdict = verdict[:1]
            left = rows - len(lines) - len(verdict)
            verdict = (*suggestion_lines(view.suggestion, self.desk.pins, self.wide, left), *verdict)
        lines = (*lines, *verdict)
        if not lines and view.waits_for and not view.computing and view.stage != "closed":
            lines = waiting_lines(view.waits_for, self.wide, rows)
        if not lines:
            text = (
                f"{self.desk.progress or 'computing what each fault would show'}; looks and signs (F8) can be entered "
                "meanwhile; type stop to end it, go to go on"
                if view.computing
                else (view.message or "no reading left that would tell more; F6 closes the job, + enters any reading")
            )
            lines = (line(Span("next ", "head")), *wrapped(text, self.wide))
        panel.show(lines)
        unit = view.suggestion.unit if view.suggestion else ""
        self.panel("field-label").show((line(Span("reading ", "strong")),))
        hint = f" {unit:4} *=OL s=skip c=can't reach u=undo +=other /=menu"
        self.panel("field-hint").show((line(Span(hint, "quiet")),))

    def on_input_submitted(self, event: Field.Submitted) -> None:
        """Do what was typed."""
        typed = understand(event.value)
        if typed.kind in ("menu", "other", "undo", "on", "off", "stop", "go"):
            event.input.value = ""
            {
                "on": lambda: self.triage.action_power(True),
                "off": lambda: self.triage.action_power(False),
                "menu": self.triage.action_menu,
                "stop": self.desk.stop,
                "go": self.desk.compute,
                "undo": self.triage.action_undo,
                "other": lambda: self.triage.action_form("reading"),
            }[typed.kind]()
            return
        found = self.desk.view.suggestion if self.desk.view else None
        if typed.kind == "nothing":
            self.show_message("type the value and press Enter; ? tells what else can be typed")
        elif typed.probe is None and found is None:
            self.show_message("no reading is suggested now; + enters any reading", refused=True)
        else:
            self._enter(typed, found, event.value)

    def _enter(self, typed: Typed, found: SuggestionView | None, as_typed: str) -> None:
        probe = typed.probe
        if probe is not None:
            function, plus, minus, condition = probe
        else:
            assert found is not None
            function, plus, minus, condition = found.function, found.plus, found.minus, found.condition
        field = self.query_one("#field", Field)
        if typed.kind == "skip":
            self.desk.enter(lambda bench: bench.skip(function, plus, minus, condition, typed.text), lambda: field.taken(as_typed))
        else:
            self.desk.enter(lambda bench: bench.read(function, plus, minus, condition, typed.text), lambda: field.taken(as_typed))

    def action_pan(self, columns: int) -> None:
        """Move the drawing sideways."""
        self.panel("board").pan(columns)

    def action_board(self, rows: int) -> None:
        """Scroll the drawing."""
        self.panel("board").scroll_rows(rows)
