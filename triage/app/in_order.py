"""Keys in their order: what is typed behind an Enter waits until that Enter has been carried out.

A slow link holds keys back and brings them together. Textual hands each to the widget that has the cursor at that moment, and
moves the cursor only after all of them: a value would stand in the field before. So keys behind an Enter in a field are kept
until the screen has dealt with it.
"""

from textual import events
from textual.app import App

from triage.app.widgets.field import Field

LONGEST_WAIT = 0.4
"""Keys are let go after this even when the screen of the field is gone [s]."""


class KeysInOrder(App[int]):
    """An app whose fields may be filled in faster than the screen follows."""

    _kept: list[events.Key] | None = None
    """Keys behind an Enter; None while none is under way."""
    _enters = 0

    async def on_event(self, event: events.Event) -> None:
        """Keep keys back behind an Enter in a field (called by Textual)."""
        if isinstance(event, events.Key) and not event.is_forwarded:
            if self._kept is not None:
                self._kept.append(event)
                return
            if event.key == "enter" and isinstance(self.focused, Field):
                self._kept = []
                self._enters += 1
                number = self._enters
                self.set_timer(LONGEST_WAIT, lambda: self._let_go(number))
        await super().on_event(event)

    def on_field_passed(self, event: Field.Passed) -> None:
        """The screen has dealt with the Enter; a cursor it moved is moved by what is queued now."""
        event.stop()
        number = self._enters
        self.call_later(self._let_go, number)

    async def _let_go(self, number: int) -> None:
        """Carry out the keys that were kept behind this Enter, up to the next one."""
        if number != self._enters or self._kept is None:
            return
        kept, self._kept = self._kept, None
        while kept:
            await self.on_event(kept.pop(0))
            if self._kept is not None:
                self._kept += kept
                return
