"""The report: everything in it, nothing of it obeyed."""

import re
from html.parser import HTMLParser

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.job.samples import TIME, log, reading
from triage.errors import JobError
from triage.job.entries import make_entry
from triage.job.render import FORMATS, PAGE_WIDTH, Section, Table, render
from triage.job.report import ReportContent, RetestLine, sections, stress_text
from triage.job.views import CautionView, StressView, VerdictView

HOSTILE = '<script>alert(1)</script> \x1b]0;owned\x07 [bold]x[/] \u202eevil\u2066 | `a` ![x](http://x) & "q" \''

STRESS = StressView("Q1", "main switch", "peak_voltage", 612.0, "V", 700.0, 560.0, 612 / 700, "over derated limit", "s", "c")


def content(text: str = "works on the bench") -> ReportContent:
    entries = (
        *log(),
        make_entry("complaint", TIME, state="dead", condition="full", typed=text),
        make_entry("sign", TIME, sign="charred", ref="R1"),
        make_entry("note", TIME, note=text),
        reading(4700.0, typed="4k7", instrument=text),
    )
    return ReportContent(
        id="cube-7", title=text, opened=TIME, label=(("input", text), ("output", "5 V")), entries=entries,
        verdict=VerdictView("found", "R1", "open", ("D1.short",), ("R1", "D1"), 0.973, "it ran too hot"),
        before=(STRESS,), after=(STRESS,),
        retest=(RetestLine("output voltage", "4.75 V to 5.25 V", "label", "pass"),),
        not_done=("no insulation tester",), cautions=(CautionView("k", text, True),),
    )  # fmt: skip


class Page(HTMLParser):
    """Collects what a browser would see of a page."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: set[str] = set()
        self.attributes: set[str] = set()
        self.text = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.add(tag)
        self.attributes |= {name for name, _ in attrs}

    def handle_data(self, data: str) -> None:
        self.text += data


@pytest.mark.parametrize("format", FORMATS)
def test_every_part_of_the_record_is_in_every_format(format: str) -> None:
    text = render("Report", sections(content()), format).replace("\\", "")
    for expected in (
        "cube-7", "works on the bench", "charred at R1", "4k7", "4.7 kohm", "R1 open", "97.3 %", "D1.short",
        "it ran too hot", "612 V", "700 V", "87 %", "metal film 4k7", "4.75 V to 5.25 V", "no ESR meter",
        "no insulation tester", "still faulty", "licensed", "taken back",
    ):  # fmt: skip
        assert re.search(re.escape(expected).replace(r"\ ", r"\s+"), text, re.IGNORECASE), expected


def test_an_entry_taken_back_is_not_reported_as_a_reading() -> None:
    text = render("Report", sections(content()), "text")
    assert "OL" not in text.split("READINGS")[1].split("VERDICT")[0]


@given(st.text() | st.just(HOSTILE))
def test_no_text_gets_a_tag_or_attribute_into_the_page(text: str) -> None:
    harmless, hostile = Page(), Page()
    harmless.feed(render("x", sections(content("x")), "html"))
    hostile.feed(render(text, sections(content(text)), "html"))
    assert hostile.tags == harmless.tags and hostile.attributes == harmless.attributes
    assert "script" not in hostile.tags


@pytest.mark.parametrize("format", FORMATS)
def test_no_control_or_direction_character_comes_through(format: str) -> None:
    text = render(HOSTILE, sections(content(HOSTILE)), format)
    assert not re.search("[\x00-\x09\x0b-\x1f\x7f-\x9f\u200b-\u200f\u202a-\u202e\u2066-\u2069]", text)


def test_markdown_from_a_job_is_no_markup_and_no_html() -> None:
    text = render("t", sections(content(HOSTILE)), "markdown")
    assert "<script" not in text and "![x]" not in text
    tables = [line for line in text.splitlines() if line.startswith("|")]
    assert {len(re.findall(r"(?<!\\)\|", line)) for line in tables} <= {3, 5, 6}


def test_the_page_loads_nothing_from_anywhere() -> None:
    page = render("t", sections(content()), "html")
    assert not re.search(r"https?://|src=|href=|url\(|@import", page)


def test_plain_text_keeps_to_the_width_of_the_page() -> None:
    text = render("t", sections(content("word " * 300)), "text")
    assert max(map(len, text.splitlines())) <= PAGE_WIDTH


def test_an_empty_section_says_that_it_is_empty() -> None:
    for format in FORMATS:
        assert "none taken" in render("t", (Section("Readings", table=Table(("a",), ()), nothing="none taken"),), format)


def test_an_unknown_format_is_refused_with_the_known_ones() -> None:
    with pytest.raises(JobError, match="text, markdown, html"):
        render("t", (), "pdf")


def test_a_stress_is_told_with_its_share_of_the_rating() -> None:
    assert stress_text(STRESS) == "peak voltage 612 V of 700 V rated (87 %), over derated limit"
