"""The app: wires keys, screens, the open job and signals together, and does nothing else."""

import asyncio
import os
import signal
import sys
from pathlib import Path

from textual.binding import Binding

from triage.app import terminal, theme
from triage.app.desk import Desk
from triage.app.drafting import Drafting
from triage.app.in_order import KeysInOrder
from triage.app.keys import COMMANDS
from triage.app.places import Places, make_screen
from triage.app.shelf import Shelf

_WITHOUT_JOB = ("jobs", "label")
_SAVE_SECONDS = 3.0
"""Longest wait for entries on their way to the file when the terminal goes away [s]."""


class TriageApp(KeysInOrder):
    """The bench companion on a terminal.

    Parameters
    ----------
    shelf : where jobs and profiles come from
    job : job file to open at once, or None
    profile : profile to begin a job on at once, or None
    look : how to draw in this terminal
    """

    TITLE = "triage"
    CSS_PATH = "app.tcss"
    ENABLE_COMMAND_PALETTE = False
    BINDINGS = [  # noqa: RUF012 (Textual's own way)
        *(Binding(one.key, one.action, one.label, priority=True) for one in COMMANDS if one.key),
        Binding("question_mark", "help", "help"),
    ]

    def __init__(
        self,
        shelf: Shelf,
        look: terminal.Terminal,
        job: Path | None = None,
        profile: str | None = None,
    ) -> None:
        super().__init__(ansi_color=True if look.own_colours else None)
        self.animation_level = "none"
        self.glyphs = look.glyphs
        self.shelf = shelf
        self.desk = Desk(self.call_later, self._changed, self._fault)
        self.drafting = Drafting(self.desk, shelf.draft)
        self.faults: list[Exception] = []
        self._first = (job, profile)
        self.places = Places(self)
        for each in (theme.DARK, theme.LIGHT, theme.OWN):
            self.register_theme(each)
        self.theme = (theme.OWN if look.own_colours else theme.DARK).name

    def get_theme_variable_defaults(self) -> dict[str, str]:
        """Our colour names, known before our themes are registered (called by Textual)."""
        return dict(theme.DARK.variables)

    def on_mount(self) -> None:
        """Show the start page, or the job asked for; take care of a terminal that goes away."""
        loop = asyncio.get_running_loop()
        for number in (signal.SIGHUP, signal.SIGTERM):
            try:
                loop.add_signal_handler(number, self._leave_on, number)
            except (NotImplementedError, RuntimeError, ValueError):
                continue
        self.push_screen(make_screen("start"))
        job, profile = self._first
        if job is not None:
            self.desk.open(self.shelf.opener(job), self._opened)
        elif profile is not None:
            self.desk.open(self.shelf.beginner(profile), self._opened)

    def _leave_on(self, number: int) -> None:
        self.desk.finish(_SAVE_SECONDS)
        self.exit(128 + number, return_code=128 + number)

    def _opened(self) -> None:
        """Go to the first thing this job needs."""
        view = self.desk.view
        if view is None:
            return
        self.action_go("intake" if not view.entries else self.place_of_stage())

    def place_of_stage(self) -> str:
        """The place where the job goes on at its present stage."""
        stage = self.desk.view.stage if self.desk.view else ""
        return {"cautions": "cautions", "inspection": "looks", "retest": "retest", "closed": "record"}.get(stage, "bench")

    def begin(self, profile: str) -> None:
        """Begin a job on a profile."""
        self.desk.open(self.shelf.beginner(profile), self._opened)

    def resume(self, path: Path) -> None:
        """Open a job file."""
        self.desk.open(self.shelf.opener(path), self._opened)

    def _changed(self, status_only: bool = False) -> None:
        """Tell the screen on top that there is something new to show, or only how far a calculation is."""
        refresh_view = getattr(self.screen, "refresh_status" if status_only else "refresh_view", None)
        if refresh_view is None:
            return
        try:
            refresh_view()
        except Exception as error:
            self._fault(error)
            self.notify(f"this screen cannot be drawn ({type(error).__name__}: {error}); every entry is saved")

    def _fault(self, error: Exception) -> None:
        self.faults.append(error)

    def action_go(self, place: str) -> None:
        """Go to a place of the open job; forms and help pages in front of it are put away."""
        if self.desk.view is None:
            (getattr(self.screen, "action_begin", self._changed) if place == "bench" else self._changed)()
            return
        self.places.show(place)

    def action_form(self, name: str) -> None:
        """Open a form for an entry in front of the screen."""
        if (self.desk.view is not None or name in _WITHOUT_JOB) and getattr(self.screen, "PLACE", "") != name:
            self.push_screen(make_screen(name))

    def action_help(self) -> None:
        """Open the page on the screen in front, or close it."""
        place = getattr(self.screen, "PLACE", "start")
        if place == "help":
            self.pop_screen()
        else:
            self.push_screen(make_screen("help", place))

    def action_menu(self) -> None:
        """Open the list of all commands."""
        if getattr(self.screen, "PLACE", "") != "menu":
            self.push_screen(make_screen("menu"))

    def action_undo(self) -> None:
        """Take the last entry back, or the last change of a board that is being made."""
        getattr(self.screen, "action_take_back", lambda: self.desk.enter(lambda bench: bench.undo()))()

    def action_power(self, on: bool) -> None:
        """Say that the adapter was powered up or unplugged."""
        self.desk.enter(lambda bench: bench.power(on))

    def action_stop(self) -> None:
        """End the calculation of what to expect."""
        self.desk.stop()

    def action_compute(self) -> None:
        """Go on with it."""
        self.desk.compute()

    def action_start(self) -> None:
        """Put the job away and go back to the start page."""
        self.places.clear()
        self.desk.put_away()
        self._changed()

    def action_other_theme(self) -> None:
        """Dark or light; a terminal that brings its own colours keeps them."""
        if self.theme != theme.OWN.name:
            self.theme = (theme.LIGHT if self.theme == theme.DARK.name else theme.DARK).name

    def action_redraw(self) -> None:
        """Draw everything again, after line noise or another program's output."""
        self.refresh(layout=True)
        self.screen.refresh(layout=True)


def run(job: Path | None, profile: str | None, jobs_folder: Path | None) -> int:
    """Open the app on a job, a new job on a profile, or the start page; return the exit status of the
    process."""
    refused = terminal.refusal(os.environ, sys.stdin, sys.stderr)
    if refused is not None:
        print(f"triage: {refused}", file=sys.stderr)
        return 2
    terminal.harden_stream(sys.__stderr__)
    app = TriageApp(Shelf(jobs_folder), terminal.look(os.environ), job, profile)
    app.run()
    if app.desk.bench is not None:
        app.shelf.keep(app.desk.bench.path, app.desk.half_typed)
    for fault in app.faults:
        print(f"triage: fault in the program: {type(fault).__name__}: {fault}", file=sys.stderr)
    code = app.return_code or 0
    if app.desk.busy:
        # Python would wait for the threads of a running solution, up to a minute; the entries are on the disk.
        app.desk.finish(_SAVE_SECONDS)
        app.desk.put_away()
        sys.stderr.flush()
        os._exit(code)
    return code
