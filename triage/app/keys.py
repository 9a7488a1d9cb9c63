"""One table of what the app can be told to do: key, words on the key line, action, help.

The same key does the same on every screen; the key line, the command palette and the help pages are all made
from this table.
"""

from typing import NamedTuple


class Command(NamedTuple):
    """One thing the app can be told to do."""

    key: str
    """Key as Textual names it; empty for commands of the palette only."""
    shown: str
    """Key as written on the key line."""
    label: str
    """One or two words for the key line."""
    action: str
    """Action of the app."""
    help: str
    job: bool = True
    """True when it needs an open job."""


COMMANDS = (
    Command("f1", "F1 ?", "", "help", "what this screen is for and which keys it takes", job=False),
    Command("f2", "F2", "bench", "go('bench')", "the board, the suspects and the next reading"),
    Command("f3", "F3", "stress", "go('stress')", "how hard each part is driven, against rating and derated limit"),
    Command("f4", "F4", "moves", "go('moves')", "how the suspects moved with each reading"),
    Command("f5", "F5", "parts", "go('parts')", "what a replacement must withstand; find one; fit it"),
    Command("f6", "F6", "retest", "go('retest')", "the result of the repair, the checks after it, closing the job"),
    Command("f7", "F7", "record", "go('record')", "the job as it is saved, and its report"),
    Command("f8", "F8", "look", "go('looks')", "what to look at, and what was seen, heard, smelt or felt"),
    Command("f9", "F9", "undo", "undo", "take the last entry back"),
    Command("f10", "F10", "cautions", "go('cautions')", "the cautions, and which are acknowledged"),
    Command("", "", "waveforms", "go('waveforms')", "switch, bulk and load line, healthy and under the suspect (Enter on F3)"),
    Command("", "", "any reading", "form('reading')", "enter a reading of your own choice (+ in the empty field)"),
    Command("", "", "seen", "form('sign')", "enter something seen, heard, smelt or felt at a part"),
    Command("", "", "power on", "power(True)", "say that the adapter was powered up through the current limit"),
    Command("", "", "unplug", "power(False)", "say that the adapter was unplugged"),
    Command("", "", "stop", "stop", "end the calculation of what to expect (stop in the empty field)"),
    Command("", "", "go", "compute", "go on with it (go in the empty field)"),
    Command("", "", "note", "form('note')", "a remark for the next reader of the record"),
    Command("", "", "complaint", "go('intake')", "what is wrong with the adapter, and where it was seen"),
    Command("", "", "suspect", "form('hunch')", "name a part that you suspect yourself"),
    Command("", "", "jobs", "form('jobs')", "find a job among all by a few words", job=False),
    Command("", "", "label", "form('label')", "begin on a board nobody has drawn, from its label", job=False),
    Command("ctrl+p", "^P", "menu", "menu", "all commands by name (/ in the empty reading field)", job=False),
    Command("ctrl+t", "^T", "light", "other_theme", "dark or light screen", job=False),
    Command("ctrl+z", "^Z", "to shell", "suspend_process", "leave for the shell; `fg` comes back", job=False),
    Command("ctrl+l", "^L", "redraw", "redraw", "draw the whole screen again", job=False),
    Command("", "", "start page", "start", "put this job away; open another or begin a new one"),
    Command("ctrl+q", "^Q", "leave", "quit", "leave; everything entered is saved already", job=False),
)
