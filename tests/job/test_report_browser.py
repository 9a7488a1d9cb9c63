"""The HTML report in a real browser: it opens, obeys nothing that stands in it, and prints on A4 and Letter paper."""

import re
import shutil
import subprocess
from pathlib import Path

import pytest

from tests.job.test_report import HOSTILE, Page, content
from triage.job.render import render
from triage.job.report import sections

BROWSERS = ("chromium", "chromium-browser", "google-chrome")
PAPER = {"A4": (595.0, 842.0), "letter": (612.0, 792.0)}
"""Width and height [pt]: ISO 216, 210 x 297 mm; ANSI A, 8.5 x 11 in."""


@pytest.fixture(scope="session")
def browser(tmp_path_factory: pytest.TempPathFactory) -> list[str]:
    """Command line of a headless browser; where there is none the tests are skipped, saying so."""
    found = next(filter(None, map(shutil.which, BROWSERS)), None)
    if found is None:
        pytest.skip("no Chromium is installed to open the report in")
    profile = tmp_path_factory.mktemp("browser")
    return [found, "--headless", "--no-sandbox", "--disable-gpu", "--disable-dev-shm-usage", f"--user-data-dir={profile}"]


def page_of(text: str) -> str:
    return render(text, sections(content(text)), "html")


def run(browser: list[str], *options: str) -> str:
    done = subprocess.run([*browser, *options], capture_output=True, timeout=120)
    assert done.returncode == 0, done.stderr[-2000:]
    return done.stdout.decode("utf-8", "replace")


def test_the_page_opens_and_runs_nothing_that_stands_in_it(browser: list[str], tmp_path: Path) -> None:
    page = tmp_path / "report.html"
    text = HOSTILE + '<img src=x onerror="document.title=1"><style>body{display:none}</style>'
    page.write_text(page_of(text), encoding="utf-8")
    seen = run(browser, "--dump-dom", page.as_uri())
    assert "<h1>" in seen and "&lt;script&gt;" in seen and "Verdict" in seen
    page_as_seen = Page()
    page_as_seen.feed(seen)
    assert not page_as_seen.tags & {"script", "img", "iframe", "object", "link", "form"}
    assert not any(name.startswith("on") or name in ("src", "href") for name in page_as_seen.attributes)
    assert seen.count("<style") == 1 and "\x1b" not in seen
    assert seen.count("<section>") == seen.count("<h2>") > 5, "no part of the record is swallowed"


@pytest.mark.parametrize("paper", PAPER)
def test_it_prints_on_either_paper(browser: list[str], tmp_path: Path, paper: str) -> None:
    """The page names no paper; here the printer's choice is played by one rule more."""
    html = page_of("unbroken" * 60)
    assert "size:" not in re.sub(r"font-size:", "", html), "the page leaves the paper to the printer"
    page, printed = tmp_path / "report.html", tmp_path / "report.pdf"
    page.write_text(html.replace("</head>", f"<style>@page {{ size: {paper} }}</style></head>"), encoding="utf-8")
    run(browser, "--no-pdf-header-footer", f"--print-to-pdf={printed}", page.as_uri())
    boxes = re.findall(rb"/MediaBox\s*\[\s*0\s+0\s+([\d.]+)\s+([\d.]+)\s*\]", printed.read_bytes())
    width, height = PAPER[paper]
    assert 1 <= len(boxes) <= 6
    assert all(abs(float(w) - width) < 1.5 and abs(float(h) - height) < 1.5 for w, h in boxes)
