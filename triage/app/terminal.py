"""What the terminal is, read from its environment before the first byte is drawn.

Refuses with one line where a screen cannot work; otherwise says how many colours to use and which characters
to draw with. Which terminals take what was measured in pseudo terminals, not read from terminfo.
"""

import sys
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TextIO

from triage.app.glyphs import ASCII, BOX, FULL, Glyphs
from triage.errors import TriageError

_NO_BRAILLE = ("linux", "vt100", "vt102", "vt220", "ansi", "cons25")
"""Consoles whose fonts hold line drawing at most."""


class TerminalError(TriageError):
    """A terminal in which the app cannot draw."""


@dataclass(frozen=True, slots=True)
class Terminal:
    """How to draw in this terminal."""

    own_colours: bool
    """Use the 16 colours of the terminal's own palette instead of ours: fewer bytes, and right under
    NO_COLOR."""
    glyphs: Glyphs


def refusal(environ: Mapping[str, str], stdin: TextIO, stderr: TextIO) -> TerminalError | None:
    """Why the app cannot draw here, or None. The screen is drawn on stderr, keys come from stdin."""
    advice = "use the sub-commands, for instance `triage next JOB`"
    if environ.get("TERM", "dumb") in ("", "dumb"):
        return TerminalError("TERM", repr(environ.get("TERM", "")), "a terminal that can place text, such as xterm", advice)
    for name, stream in (("standard input", stdin), ("standard error", stderr)):
        if stream is None or not stream.isatty():
            return TerminalError(name, "is not a terminal", "both standard input and error on a terminal", advice)
    return None


def glyphs_for(environ: Mapping[str, str], encoding: str) -> Glyphs:
    """The characters to draw with: plain ASCII unless the locale and the stream both speak UTF-8."""
    locale = environ.get("LC_ALL") or environ.get("LC_CTYPE") or environ.get("LANG") or ""
    speaks = [name.lower().replace("-", "").replace("_", "") for name in (locale, encoding)]
    if environ.get("TRIAGE_ASCII") or not all(name.endswith("utf8") for name in speaks):
        return ASCII
    return BOX if environ.get("TERM", "") in _NO_BRAILLE else FULL


def look(environ: Mapping[str, str]) -> Terminal:
    """How to draw in the terminal of this process."""
    term = environ.get("TERM", "")
    many = "256color" in term or "kitty" in term or environ.get("COLORTERM", "") in ("truecolor", "24bit")
    encoding = getattr(sys.__stderr__, "encoding", "") or ""
    return Terminal(own_colours="NO_COLOR" in environ or not many, glyphs=glyphs_for(environ, encoding))


def harden_stream(stream: TextIO | None) -> None:
    """Make a stream replace what its encoding lacks, so that a stray character cannot break the layout."""
    if stream is not None and hasattr(stream, "reconfigure"):
        stream.reconfigure(errors="replace")
