"""Which terminals are refused, how many colours and which characters the others get."""

import io

import pytest

from triage.app import terminal
from triage.app.glyphs import ASCII, BOX, FULL


class Tty(io.StringIO):
    """A stream that says it is a terminal."""

    def isatty(self) -> bool:
        return True


@pytest.mark.parametrize("environ", [{}, {"TERM": "dumb"}, {"TERM": ""}])
def test_a_terminal_that_cannot_place_text_is_refused_in_one_line(environ):
    refused = terminal.refusal(environ, Tty(), Tty())
    assert refused is not None
    assert "TERM" in str(refused) and "\n" not in str(refused)


@pytest.mark.parametrize(
    ("stdin", "stderr", "named"),
    [
        (io.StringIO(), Tty(), "standard input"),
        (Tty(), io.StringIO(), "standard error"),
    ],
)
def test_a_stream_that_is_no_terminal_is_named(stdin, stderr, named):
    assert named in str(terminal.refusal({"TERM": "xterm"}, stdin, stderr))


def test_a_terminal_is_accepted():
    assert terminal.refusal({"TERM": "xterm"}, Tty(), Tty()) is None


@pytest.mark.parametrize(
    ("environ", "encoding", "glyphs"),
    [
        ({"LANG": "C.UTF-8", "TERM": "xterm-256color"}, "utf-8", FULL),
        ({"LANG": "C.UTF-8", "TERM": "linux"}, "utf-8", BOX),
        ({"LANG": "C", "TERM": "xterm"}, "utf-8", ASCII),
        ({"LANG": "de_DE.ISO-8859-1", "TERM": "xterm"}, "iso8859-1", ASCII),
        ({"LANG": "C.UTF-8", "LC_ALL": "POSIX", "TERM": "xterm"}, "utf-8", ASCII),
        ({"LANG": "en_GB.utf8", "TERM": "screen"}, "utf-8", FULL),
        ({"LANG": "en_GB.utf8", "TERM": "screen", "TRIAGE_ASCII": "1"}, "utf-8", ASCII),
    ],
)
def test_characters_follow_locale_stream_and_terminal(environ, encoding, glyphs):
    assert terminal.glyphs_for(environ, encoding) is glyphs


@pytest.mark.parametrize(
    ("environ", "own"),
    [
        ({"TERM": "xterm-256color"}, False),
        ({"TERM": "xterm"}, True),
        ({"TERM": "vt100"}, True),
        ({"TERM": "xterm-256color", "NO_COLOR": "1"}, True),
        ({"TERM": "xterm", "COLORTERM": "truecolor"}, False),
    ],
)
def test_few_colours_are_left_to_the_terminal(environ, own):
    assert terminal.look(environ).own_colours is own
