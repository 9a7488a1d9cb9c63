"""Writes a report's sections as plain text, Markdown or one self-contained HTML page.

Each text of a section is data: it goes through ``plain`` and the escaping of its format here, at the last
step, so that no earlier step can forget it. The HTML page holds no script, loads nothing and prints on A4 and
Letter paper.
"""

import html
import re
import textwrap
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from triage.errors import JobError
from triage.job.display import plain

PAGE_WIDTH = 96
"""Columns of the plain text: what a text printer puts on A4 and Letter in 10 pitch with a margin."""


@dataclass(frozen=True, slots=True)
class Table:
    """Rows of texts under a heading each."""

    heads: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True, slots=True)
class Section:
    """One headed part of a report; an empty one is written with ``nothing``, never left out."""

    title: str
    lines: tuple[str, ...] = ()
    table: Table | None = None
    nothing: str = ""


def render(title: str, sections: Sequence[Section], format: str) -> str:
    """The report in one of FORMATS. Raises JobError for another word."""
    writer = FORMATS.get(format)
    if writer is None:
        raise JobError("report", f"format {plain(format, 40)!r}", "one of " + ", ".join(FORMATS))
    return writer(title, sections)


def _as_text(title: str, sections: Sequence[Section]) -> str:
    out = [plain(title), "=" * min(len(plain(title)), PAGE_WIDTH)]
    for section in sections:
        out += ["", section.title.upper(), ""]
        for line in section.lines:
            out += textwrap.wrap(plain(line, 4000), PAGE_WIDTH, initial_indent="  ", subsequent_indent="    ")
        if section.table and section.table.rows:
            out += _text_table(section.table)
        elif not section.lines:
            out.append("  " + section.nothing)
    return "\n".join(out) + "\n"


def _text_table(table: Table) -> list[str]:
    """The table in columns; a column gets the width of its longest word group, long cells wrap."""
    rows = [tuple(plain(cell) for cell in row) for row in (table.heads, *table.rows)]
    widths = _column_widths(rows)
    out: list[str] = []
    for row in rows:
        cells = [textwrap.wrap(cell, width) or [""] for cell, width in zip(row, widths, strict=True)]
        for line in range(max(map(len, cells))):
            parts = [(cell[line] if line < len(cell) else "").ljust(width) for cell, width in zip(cells, widths, strict=True)]
            out.append(("  " + "  ".join(parts)).rstrip())
    out.insert(1, "  " + "  ".join("-" * width for width in widths))
    return out


def _column_widths(rows: Sequence[tuple[str, ...]]) -> list[int]:
    """Widths that fit the page: the widest columns give way first."""
    widths = [max(1, *(len(row[column]) for row in rows)) for column in range(len(rows[0]))]
    room = PAGE_WIDTH - 2 * len(widths)
    while sum(widths) > room and max(widths) > 6:
        widths[widths.index(max(widths))] -= 1
    return widths


_MARKDOWN_SPECIAL = re.compile(r"([\\`*_{}\[\]()#+\-.!|~^=:$>@&])")


def _markdown(text: object, limit: int = 500) -> str:
    """The text with everything escaped that Markdown or HTML inside it could take for more than text."""
    escaped = _MARKDOWN_SPECIAL.sub(r"\\\1", plain(text, limit).replace("<", "\0"))
    return escaped.replace("\0", "&lt;")


def _as_markdown(title: str, sections: Sequence[Section]) -> str:
    out = [f"# {_markdown(title)}"]
    for section in sections:
        out += ["", f"## {section.title}", ""]
        out += [f"- {_markdown(line, 4000)}" for line in section.lines]
        if section.table and section.table.rows:
            out += [""] * bool(section.lines)
            out.append("| " + " | ".join(map(_markdown, section.table.heads)) + " |")
            out.append("|" + " --- |" * len(section.table.heads))
            out += ["| " + " | ".join(map(_markdown, row)) + " |" for row in section.table.rows]
        elif not section.lines:
            out.append(_markdown(section.nothing))
    return "\n".join(out) + "\n"


_POLICY = "default-src 'none'; style-src 'unsafe-inline'"
"""Content security policy of the page: nothing is loaded and nothing runs, whatever stands in it."""

_STYLE = """
:root { color-scheme: light }
body { font: 10.5pt/1.4 system-ui, sans-serif; max-width: 50em; margin: 1.5em auto; padding: 0 1em;
  color: #111; background: #fff; overflow-wrap: anywhere }
h1 { font-size: 1.5em } h2 { font-size: 1.1em; margin: 1.4em 0 .4em; border-bottom: 1px solid #999 }
table { border-collapse: collapse; width: 100%; font-size: .92em }
th, td { border: 1px solid #bbb; padding: .2em .45em; text-align: left; vertical-align: top }
th { background: #eee } ul { margin: .3em 0; padding-left: 1.3em } .nothing { color: #555 }
@page { margin: 15mm }
@media print {
  body { max-width: none; margin: 0; padding: 0 } h2 { break-after: avoid } tr, li { break-inside: avoid }
  thead { display: table-header-group }
}
"""
"""Print rules without a paper size: the browser takes that of the printer, A4 or Letter."""


def _html(text: object, limit: int = 500) -> str:
    return html.escape(plain(text, limit), quote=True)


def _as_html(title: str, sections: Sequence[Section]) -> str:
    body = [f"<h1>{_html(title)}</h1>"]
    for section in sections:
        body.append(f"<section><h2>{_html(section.title)}</h2>")
        if section.lines:
            items = "".join(f"<li>{_html(line, 4000)}</li>" for line in section.lines)
            body.append(f"<ul>{items}</ul>")
        if section.table and section.table.rows:
            heads = "".join(f"<th scope=col>{_html(head)}</th>" for head in section.table.heads)
            rows = "".join("<tr>" + "".join(f"<td>{_html(cell)}</td>" for cell in row) + "</tr>" for row in section.table.rows)
            body.append(f"<table><thead><tr>{heads}</tr></thead><tbody>{rows}</tbody></table>")
        elif not section.lines:
            body.append(f"<p class=nothing>{_html(section.nothing)}</p>")
        body.append("</section>")
    return (
        '<!DOCTYPE html>\n<html lang="en"><head><meta charset="utf-8">'
        f'<meta http-equiv="Content-Security-Policy" content="{_POLICY}">'
        '<meta name="viewport" content="width=device-width, initial-scale=1">'
        f"<title>{_html(title)}</title><style>{_STYLE}</style></head>\n<body>\n" + "\n".join(body) + "\n</body></html>\n"
    )


FORMATS: dict[str, Callable[[str, Sequence[Section]], str]] = {
    "text": _as_text,
    "markdown": _as_markdown,
    "html": _as_html,
}
"""Format -> what writes it."""
