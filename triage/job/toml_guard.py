"""Reads a TOML file that may come from anybody, within limits of size, depth and shape.

The parser itself recurses on nested brackets and takes quadratic time on long dotted keys, so both are
counted before it sees the text. Strings and comments are taken out first: nothing a technician types into a
note can trip a limit of depth. Every refusal is one JobError that names the file and what to do.
"""

import errno
import math
import os
import re
import stat
import tomllib
from pathlib import Path
from typing import Any

from triage.errors import JobError

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


def read_toml(path: Path) -> tuple[dict[str, Any], bytes]:
    """The parsed document and its bytes. Raises JobError when the file cannot be read or goes past a
    limit."""
    try:
        content = read_regular(path, LARGEST_FILE + 1)
    except OSError as error:
        reason = error.strerror or type(error).__name__
        raise JobError(str(path), f"cannot be read: {reason}", advice="check the name and the permissions") from None
    except ValueError:
        raise JobError("job name", "holds a character no file name can have", advice="type it again") from None
    return parse_toml(content, str(path)), content


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


def parse_toml(content: bytes, where: str) -> dict[str, Any]:
    """Parse the bytes of a TOML document within the limits of this module. where: file, for the message."""
    if len(content) > LARGEST_FILE:
        raise JobError(where, "the file is larger than a job can be", f"at most {LARGEST_FILE:,} bytes")
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise JobError(where, f"byte {error.start} is not UTF-8 text", "a TOML file in UTF-8") from None
    _check_shape(text, where)
    try:
        document = tomllib.loads(text.replace("\r\n", "\n"))
    except (tomllib.TOMLDecodeError, ValueError) as error:
        raise JobError(where, f"not readable as TOML: {str(error)[:120]}", advice="mend that line") from None
    except (RecursionError, OverflowError):
        raise JobError(where, "nested deeper than a job can be", f"at most {LARGEST_DEPTH} levels") from None
    _check_items(document, where)
    return document


def _check_shape(text: str, where: str) -> None:
    """Count brackets and dots outside strings and comments, before the parser works on them."""
    bare = _QUOTED.sub("q", text)
    if sum(map(bare.count, "[{=,")) > MOST_ITEMS:
        raise JobError(where, "more keys and values than a job can have", f"at most {MOST_ITEMS:,}")
    depth = 0
    dots = 0
    for character in bare:
        if character in "[{":
            depth += 1
            dots = 0
            if depth > LARGEST_DEPTH + 2:
                raise JobError(where, "nested deeper than a job can be", f"at most {LARGEST_DEPTH} levels")
        elif character in "]}":
            depth = max(depth - 1, 0)
        elif character == ".":
            dots += 1
            if dots >= LARGEST_KEY:
                raise JobError(where, "a dotted key is longer than a job has", f"at most {LARGEST_KEY} parts")
        elif character in "=,\n":
            dots = 0


def _check_items(document: dict[str, Any], where: str) -> None:
    """Bound depth, number and size of what was parsed. Walks without recursion."""
    pending: list[tuple[object, int]] = [(document, 0)]
    items = 0
    while pending:
        value, depth = pending.pop()
        items += 1
        if items > MOST_ITEMS:
            raise JobError(where, "more keys and values than a job can have", f"at most {MOST_ITEMS:,}")
        if depth > LARGEST_DEPTH:
            raise JobError(where, "nested deeper than a job can be", f"at most {LARGEST_DEPTH} levels")
        if isinstance(value, dict):
            pending.extend((child, depth + 1) for child in value.values())
            pending.extend((key, depth + 1) for key in value)
        elif isinstance(value, list):
            pending.extend((child, depth + 1) for child in value)
        elif isinstance(value, str) and len(value) > LONGEST_STRING:
            raise JobError(where, "a text longer than a job can have", f"at most {LONGEST_STRING:,} characters")
        elif isinstance(value, int) and abs(value) >= 2**63:
            raise JobError(where, "a whole number beyond 64 bits", "a number of the trade")
        elif isinstance(value, float) and math.isnan(value):
            raise JobError(where, "nan where a value belongs", "a number, or inf for OL")
