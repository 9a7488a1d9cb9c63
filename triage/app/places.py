"""The screens of an open job: made when first gone to, kept with what was typed in them, dropped with the
job."""

from importlib import import_module
from typing import Any

from textual.app import App
from textual.screen import Screen

_BASE = 2
"""Screens below those of a job: Textual's own and the start page."""


def make_screen(place: str, *arguments: Any) -> Screen[Any]:
    """The screen of a place, from the module of that name, imported when first wanted."""
    module = import_module(f"triage.app.screens.{place}")
    screen = getattr(module, f"{place.title()}Screen")(*arguments)
    assert isinstance(screen, Screen)
    return screen


class Places:
    """Goes from screen to screen; a screen gone back to is painted once, not made anew."""

    def __init__(self, app: App[Any]) -> None:
        self._app = app
        self._ready: set[str] = set()

    def show(self, place: str) -> None:
        """Bring a place to the front; forms and help pages before it are put away."""
        app = self._app
        while len(app.screen_stack) > _BASE + 1:
            app.pop_screen()
        if getattr(app.screen, "PLACE", "") == place:
            return
        if place not in self._ready:
            self._ready.add(place)
            app.install_screen(make_screen(place), place)
        if len(app.screen_stack) > _BASE:
            app.switch_screen(place)
        else:
            app.push_screen(place)

    def clear(self) -> None:
        """Back to the start page; the screens of the job are dropped."""
        app = self._app
        while len(app.screen_stack) > _BASE:
            app.pop_screen()
        for place in self._ready:
            screen = app.get_screen(place)
            app.uninstall_screen(place)
            screen.remove()
        self._ready.clear()
