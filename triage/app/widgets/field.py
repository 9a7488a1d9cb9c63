"""Fields to type in: narrow, compact, without a blinking cursor; a click or Tab puts the cursor in."""

from collections.abc import Sequence
from typing import Any, ClassVar

from textual import events
from textual.message import Message
from textual.widgets import Input


class Field(Input):
    """A field for a value or a word."""

    EMPTY: ClassVar[dict[str, str]] = {"?": "app.help"}
    """Character -> what it does while the field is empty."""
    AT_ONCE: ClassVar[dict[str, str]] = {
        "backspace": "delete_left",
        "delete": "delete_right",
        "left": "cursor_left",
        "right": "cursor_right",
        "home": "home",
        "end": "end",
        "enter": "submit",
    }
    """Keys that act where they stand among the letters: a slow link brings many at a time, and Textual would carry these
    out after the letters behind them."""

    class Passed(Message):
        """Comes behind the message of an Enter, on the same way."""

    def __init__(self, value: str = "", placeholder: str = "", **names: Any) -> None:
        super().__init__(value, placeholder, compact=True, select_on_focus=False, **names)
        self.cursor_blink = False

    async def _on_key(self, event: events.Key) -> None:
        """Leave the keys of ``EMPTY`` to their actions while nothing is typed; within words they are
        letters."""
        action = self.EMPTY.get(event.character or "") if not self.value else None
        if action:
            event.stop()
            event.prevent_default()
            await self.run_action(action)
            return
        if event.key in self.AT_ONCE:
            event.stop()
            event.prevent_default()
            await self.run_action(self.AT_ONCE[event.key])
            if event.key == "enter":
                self.post_message(self.Passed())
            return
        await super()._on_key(event)

    def taken(self, text: str) -> None:
        """Take what was accepted out of the field, and leave what was typed meanwhile."""
        if self.value.startswith(text):
            self.value = self.value[len(text) :]
            self.cursor_position = len(self.value)


class ReadingField(Field):
    """The field of the reading loop: ``<`` and ``>`` move the drawing while nothing is typed."""

    EMPTY: ClassVar[dict[str, str]] = {**Field.EMPTY, "<": "screen.pan(-12)", ">": "screen.pan(12)"}


class ChoiceField(Field):
    """A field for one of a few words: typing completes to the first that fits, up and down step through."""

    BINDINGS = [("up", "step(-1)", "before"), ("down", "step(1)", "next")]  # noqa: RUF012 (Textual's own way)

    def __init__(self, choices: Sequence[str], value: str = "", **names: Any) -> None:
        super().__init__(value, **names)
        self.choices = tuple(choices)

    @property
    def fitting(self) -> tuple[str, ...]:
        """The choices that begin with what is typed, or contain it where none begins with it."""
        typed = self.value.strip().lower()
        starts = tuple(choice for choice in self.choices if choice.lower().startswith(typed))
        return starts or tuple(choice for choice in self.choices if typed in choice.lower())

    @property
    def choice(self) -> str:
        """The choice meant: the exact one, else the first that fits, else what is typed."""
        typed = self.value.strip()
        if not typed or typed in self.choices:
            return typed
        return self.fitting[0] if self.fitting else typed

    def action_step(self, by: int) -> None:
        """Go to the next choice in the list."""
        if not self.choices:
            return
        here = self.choices.index(self.choice) if self.choice in self.choices else (-1 if by > 0 else 0)
        self.value = self.choices[(here + by) % len(self.choices)]
        self.cursor_position = len(self.value)

    def settle(self) -> str:
        """Write the choice meant out in full and return it."""
        if self.value.strip() and self.value != self.choice:
            self.value = self.choice
        return self.choice
