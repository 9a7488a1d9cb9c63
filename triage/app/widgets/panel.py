"""A panel of marked lines that repaints only the lines that changed, and a list with a cursor made of it.

Over a slow link the bytes of a repaint are what the technician waits for: Textual's own text widgets send
themselves whole.
"""

from collections.abc import Sequence
from typing import Any

from rich.cells import cell_len
from rich.segment import Segment
from rich.style import Style
from textual import events
from textual.geometry import Region, Size
from textual.message import Message
from textual.strip import Strip
from textual.widget import Widget

from triage.app.glyphs import FULL, Glyphs
from triage.app.lines import MARKS, Line, Span, clip, drop, merged, width_of


class Palette(Widget):
    """Holds the style of every mark, once a screen: styling each panel with all of them makes every change of
    screens wait."""

    COMPONENT_CLASSES = {f"palette--{mark}" for mark in MARKS}  # noqa: RUF012 (Textual's own way)


class Panel(Widget):
    """Shows lines; scrolls by rows when there are more than fit, and says so by arrows in its last column."""

    def __init__(self, **names: Any) -> None:
        super().__init__(**names)
        self._lines: tuple[Line, ...] = ()
        self._top = 0
        self._left = 0

    @property
    def lines(self) -> tuple[Line, ...]:
        """What the panel shows."""
        return self._lines

    @property
    def top(self) -> int:
        """Number of the first line on screen."""
        return self._top

    @property
    def glyphs(self) -> Glyphs:
        """Characters of this terminal."""
        found = getattr(self.app, "glyphs", FULL)
        return found if isinstance(found, Glyphs) else FULL

    def show(self, lines: Sequence[Line], top: int | None = None) -> None:
        """Show these lines; only rows that differ from what is on screen are painted."""
        before = [self._row(y) for y in range(self.size.height)]
        new = self._folded(lines)
        resized = len(new) != len(self._lines) and self.styles.height is not None and self.styles.height.is_auto
        self._lines = new
        self._top = self._bounded(self._top if top is None else top)
        if resized:
            self.refresh(layout=True)
        else:
            self._paint_changes(before)

    def _folded(self, lines: Sequence[Line]) -> tuple[Line, ...]:
        fold = self.glyphs.fold
        return tuple(merged(tuple(span._replace(text=fold(span.text)) for span in row)) for row in lines)

    def scroll_rows(self, rows: int) -> None:
        """Move the view by some rows."""
        before = [self._row(y) for y in range(self.size.height)]
        self._top = self._bounded(self._top + rows)
        self._paint_changes(before)

    def pan(self, columns: int) -> None:
        """Move the view sideways over lines that are wider than the panel."""
        before = [self._row(y) for y in range(self.size.height)]
        most = max(map(width_of, self._lines), default=0) - self.size.width
        self._left = max(0, min(self._left + columns, most))
        self._paint_changes(before)

    def pan_to(self, start: int, end: int) -> None:
        """Move the view sideways as little as needed to have these columns in it."""
        width = self.size.width
        if start < self._left:
            self.pan(start - self._left)
        elif width and end > self._left + width - 1:
            self.pan(end - self._left - width + 1)

    def scroll_to_row(self, row: int) -> None:
        """Move the view as little as needed to have the row in it."""
        height = max(self._body_height, 1)
        if row < self._top:
            self.scroll_rows(row - self._top)
        elif row >= self._top + height:
            self.scroll_rows(row - self._top - height + 1)

    def _paint_changes(self, before: list[Line]) -> None:
        width = self.size.width
        for y, old in enumerate(before):
            new = self._row(y)
            if new != old:
                start, end = _changed(old, new, width)
                self.refresh(Region(start, y, end - start, 1))

    @property
    def _body_height(self) -> int:
        return self.size.height

    def _bounded(self, top: int) -> int:
        return max(0, min(top, len(self._lines) - self._body_height))

    def _row(self, y: int) -> Line:
        """The line at screen row ``y`` with the scroll arrow, as it is painted."""
        number = y + self._top
        row = drop(self._lines[number], self._left) if 0 <= number < len(self._lines) else ()
        arrow = ""
        if y == 0 and self._top > 0:
            arrow = self.glyphs.up
        if y == self._body_height - 1 and number < len(self._lines) - 1:
            arrow = self.glyphs.down
        row = clip(row, self.size.width - len(arrow))
        if not arrow:
            return row
        return (*row, Span(" " * (self.size.width - 1 - width_of(row))), Span(arrow, "key"))

    def render_line(self, y: int) -> Strip:
        """The strip of screen row ``y`` (called by Textual)."""
        base = self.rich_style
        segments = [Segment(span.text, base + self.style_of(span.mark)) for span in self._row(y)]
        return Strip(segments).adjust_cell_length(self.size.width, base)

    def style_of(self, mark: str) -> Style:
        """The style sheet's style of a mark."""
        if not mark:
            return Style.null()
        return self.screen.query_one(Palette).get_component_rich_style(f"palette--{mark}", partial=True)

    def get_content_height(self, container: Size, viewport: Size, width: int) -> int:
        """Height for ``height: auto`` (called by Textual)."""
        return max(len(self._lines), 1)

    def on_mouse_scroll_down(self, event: events.MouseScrollDown) -> None:
        """Wheel down."""
        self.scroll_rows(3)

    def on_mouse_scroll_up(self, event: events.MouseScrollUp) -> None:
        """Wheel up."""
        self.scroll_rows(-3)

    async def on_click(self, event: events.Click) -> None:
        """Run the action of the clicked span, if it has one."""
        at = 0
        for span in self._row(event.y) if 0 <= event.y < self.size.height else ():
            at += cell_len(span.text)
            if event.x < at:
                if span.action:
                    await self.app.run_action(span.action)
                return


def _changed(old: Line, new: Line, width: int) -> tuple[int, int]:
    """First and last-but-one column in which two painted lines differ."""
    texts = ["".join(span.text for span in row) for row in (old, new)]
    if any(cell_len(text) != len(text) for text in texts):
        return 0, width
    left, right = _cells(old, width), _cells(new, width)
    differ = [column for column in range(width) if left[column] != right[column]]
    return (differ[0], differ[-1] + 1) if differ else (0, width)


def _cells(row: Line, width: int) -> list[tuple[str, str]]:
    cells = [(char, span.mark) for span in row for char in span.text]
    return (cells + [(" ", "")] * width)[:width]


class ListPanel(Panel, can_focus=True):
    """Rows of which one is chosen: up, down, page keys, home and end move; Enter or a click on the chosen
    row takes it."""

    COMPONENT_CLASSES = {"panel--cursor"}  # noqa: RUF012 (Textual's own way)
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        ("up", "move(-1)", "up"),
        ("down", "move(1)", "down"),
        ("pageup", "page(-1)", "page up"),
        ("pagedown", "page(1)", "page down"),
        ("home", "move(-100000)", "first"),
        ("end", "move(100000)", "last"),
        ("enter", "take", "take"),
    ]

    class Taken(Message):
        """A row was taken."""

        def __init__(self, panel: "ListPanel", key: str) -> None:
            self.panel = panel
            self.key = key
            super().__init__()

    class Moved(Message):
        """The cursor came to another row."""

        def __init__(self, panel: "ListPanel", key: str) -> None:
            self.panel = panel
            self.key = key
            super().__init__()

    def __init__(self, **names: Any) -> None:
        super().__init__(**names)
        self._keys: tuple[str, ...] = ()
        self._head: Line = ()
        self._cursor = 0

    @property
    def key(self) -> str:
        """Key of the row under the cursor, empty when there is none."""
        return self._keys[self._cursor] if self._cursor < len(self._keys) else ""

    @property
    def _body_height(self) -> int:
        return max(self.size.height - (1 if self._head else 0), 1)

    def fill(self, rows: Sequence[tuple[str, Line]], head: Line = ()) -> None:
        """Show rows with their keys; the cursor stays on its key where it is still there, else it keeps its
        place."""
        painted = [self._row(y) for y in range(self.size.height)]
        key = self.key
        self._keys = tuple(key for key, _ in rows)
        self._head = self._folded((head,))[0]
        if key in self._keys:
            self._cursor = self._keys.index(key)
        self._cursor = max(0, min(self._cursor, len(rows) - 1))
        self._lines = self._folded([row for _, row in rows])
        self._top = self._bounded(max(min(self._top, self._cursor), self._cursor - self._body_height + 1))
        self._paint_changes(painted)
        if self.key != key:
            self.post_message(self.Moved(self, self.key))

    def go_to(self, key: str) -> None:
        """Put the cursor on the row with this key, if there is one."""
        if key in self._keys:
            self.action_move(self._keys.index(key) - self._cursor)

    def action_move(self, rows: int) -> None:
        """Move the cursor."""
        target = max(0, min(self._cursor + rows, len(self._keys) - 1))
        if target == self._cursor or not self._keys:
            return
        before = [self._row(y) for y in range(self.size.height)]
        self._cursor = target
        if target < self._top:
            self._top = target
        elif target >= self._top + self._body_height:
            self._top = target - self._body_height + 1
        self._paint_changes(before)
        self.post_message(self.Moved(self, self.key))

    def action_page(self, pages: int) -> None:
        """Move the cursor by a screenful."""
        self.action_move(pages * max(self._body_height - 1, 1))

    def style_of(self, mark: str) -> Style:
        """The row under the cursor looks different where the keys go elsewhere."""
        if mark == "cursor":
            return self.get_component_rich_style("panel--cursor", partial=True)
        return super().style_of(mark)

    def action_take(self) -> None:
        """Take the row under the cursor."""
        if self._keys:
            self.post_message(self.Taken(self, self.key))

    def _row(self, y: int) -> Line:
        if self._head:
            if y == 0:
                return clip(self._head, self.size.width)
            y -= 1
        row = super()._row(y)
        number = y + self._top
        if number == self._cursor and number < len(self._keys):
            text = "".join(span.text for span in row) + " " * (self.size.width - width_of(row))
            return (Span(text, "cursor"),)
        return row

    async def on_click(self, event: events.Click) -> None:
        """A click moves the cursor; a click on the row under the cursor takes it."""
        number = event.y + self._top - (1 if self._head else 0)
        if event.y < (1 if self._head else 0) or number >= len(self._keys):
            return
        if number == self._cursor:
            self.action_take()
        else:
            self.action_move(number - self._cursor)

    def on_focus(self) -> None:
        """Repaint the cursor row as the one keys go to."""
        self._paint_cursor()

    def on_blur(self) -> None:
        """Repaint the cursor row as one that keys do not go to."""
        self._paint_cursor()

    def _paint_cursor(self) -> None:
        y = self._cursor - self._top + (1 if self._head else 0)
        self.refresh(Region(0, y, self.size.width, 1))
