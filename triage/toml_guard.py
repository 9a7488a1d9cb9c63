"""Reads a TOML file that may come from anybody, within limits of size, depth and shape.

The parser itself recurses on nested brackets and takes quadratic time on long dotted keys, so both are
counted before it sees the text. Strings and comments are taken out first: nothing a technician types into a
note can trip a limit of depth. Every refusal is one error, of the class that the caller names, with the file and what to do.
"""

import errno
import math
import os
import re
import stat
import tomllib
from pathlib import Path
from typing import Any

from triage.errors import JobError, TriageError

Refusal = type[TriageError]

LARGEST_FILE = 1_000_000
"""[bytes]; a long job of 500 entries has about 100,000."""
LARGEST_DEPTH = 8
"""Levels of tables and arrays; a job needs five."""
LARGEST_KEY = 6
"""Parts of a dotted key; a job needs three."""
LONGEST_STRING = 20_000
"""[characters]; the drawing of a board has about 2,000."""
MOST_ITEMS = 150_000
"""Keys and values in one file; a job of 500 entries has about 12,000."""

_QUOTED = re.compile(r'"""(?:\\.|[^\\])*?"""|\'\'\'.*?\'\'\'|"(?:\\.|[^"\\\n])*"|\'[^\'\n]*\'|#[^\n]*', re.DOTALL)


def read_toml(path: Path, refusal: Refusal = JobError, name: str = "") -> tuple[dict[str, Any], bytes]:
    """The parsed document and its bytes.

    refusal: raised when the file cannot be read or goes past a limit. name: of the file in messages; its path by default.
    """
    try:
        content = read_regular(path, LARGEST_FILE + 1)
    except OSError as error:
        reason = error.strerror or type(error).__name__
        raise refusal(name or str(path), f"cannot be read: {reason}", advice="check the name and the permissions") from None
    except ValueError:
        raise refusal("file name", "holds a character no file name can have", advice="type it again") from None
    return parse_toml(content, name or str(path), refusal), content


def read_regular(path: Path, most: int) -> bytes:
    """At most so many bytes of a regular file; a pipe or device, which could give bytes without end, raises
    OSError.

    most: [bytes]
    """
    descriptor = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0))
    if not stat.S_ISREG(os.fstat(descriptor).st_mode):
        os.close(descriptor)
        raise OSError(errno.EINVAL, "not a regular file", str(path))
    with os.fdopen(descriptor, "rb") as file:
        return file.read(most)


def parse_toml(content: bytes, where: str, refusal: Refusal = JobError) -> dict[str, Any]:
    """Parse the bytes of a TOML document within the limits of this module. where: file, for the message; refusal: raised."""
    if len(content) > LARGEST_FILE:
        raise refusal(where, "the file is larger than one can be", f"at most {LARGEST_FILE:,} bytes")
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise refusal(where, f"byte {error.start} is not UTF-8 text", "a TOML file in UTF-8") from None
    _check_shape(text, where, refusal)
    try:
        document = tomllib.loads(text.replace("\r\n", "\n"))
    except (tomllib.TOMLDecodeError, ValueError) as error:
        raise refusal(where, f"not readable as TOML: {str(error)[:120]}", advice="mend that line") from None
    except (RecursionError, OverflowError):
        raise refusal(where, "nested deeper than a file can be", f"at most {LARGEST_DEPTH} levels") from None
    _check_items(document, where, refusal)
    return document


def _check_shape(text: str, where: str, refusal: Refusal) -> None:
    """Count brackets and dots outside strings and comments, before the parser works on them."""
    bare = _QUOTED.sub("q", text)
    if sum(map(bare.count, "[{=,")) > MOST_ITEMS:
        raise refusal(where, "more keys and values than a file can have", f"at most {MOST_ITEMS:,}")
    depth = 0
    dots = 0
    for character in bare:
        if character in "[{":
            depth += 1
            dots = 0
            if depth > LARGEST_DEPTH + 2:
                raise refusal(where, "nested deeper than a file can be", f"at most {LARGEST_DEPTH} levels")
        elif character in "]}":
            depth = max(depth - 1, 0)
        elif character == ".":
            dots += 1
            if dots >= LARGEST_KEY:
                raise refusal(where, "a dotted key is longer than a file has", f"at most {LARGEST_KEY} parts")
        elif character in "=,\n":
            dots = 0


def _check_items(document: dict[str, Any], where: str, refusal: Refusal) -> None:
    """Bound depth, number and size of what was parsed. Walks without recursion."""
    pending: list[tuple[object, int]] = [(document, 0)]
    items = 0
    while pending:
        value, depth = pending.pop()
        items += 1
        if items > MOST_ITEMS:
            raise refusal(where, "more keys and values than a file can have", f"at most {MOST_ITEMS:,}")
        if depth > LARGEST_DEPTH:
            raise refusal(where, "nested deeper than a file can be", f"at most {LARGEST_DEPTH} levels")
        if isinstance(value, dict):
            pending.extend((child, depth + 1) for child in value.values())
            pending.extend((key, depth + 1) for key in value)
        elif isinstance(value, list):
            pending.extend((child, depth + 1) for child in value)
        elif isinstance(value, str) and len(value) > LONGEST_STRING:
            raise refusal(where, "a text longer than a file can have", f"at most {LONGEST_STRING:,} characters")
        elif isinstance(value, int) and abs(value) >= 2**63:
            raise refusal(where, "a whole number beyond 64 bits", "a number of the trade")
        elif isinstance(value, float) and math.isnan(value):
            raise refusal(where, "nan where a value belongs", "a number, or inf for OL")
