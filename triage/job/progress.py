"""How far a slow calculation is, told to whoever asked for it, past all the rooms in between.

The listener may raise: that ends the calculation where it stands. What was kept until then stays.
"""

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from contextvars import ContextVar

Listener = Callable[[str, int, int], None]
"""Hears what is being computed, how much of it is done, and how much is wanted (0: not known)."""

_LISTENER: ContextVar[Listener | None] = ContextVar("listener", default=None)


@contextmanager
def heard_by(listener: Listener | None) -> Iterator[None]:
    """Within this block ``report`` goes to the listener (of this thread)."""
    token = _LISTENER.set(listener)
    try:
        yield
    finally:
        _LISTENER.reset(token)


def report(what: str, done: int = 0, wanted: int = 0) -> None:
    """Tell the listener, if there is one."""
    listener = _LISTENER.get()
    if listener is not None:
        listener(what, done, wanted)
