"""Collects the content of a job's report from the open job."""

from typing import TYPE_CHECKING

from triage.job.entries import replay
from triage.job.picture import cautions_of, view
from triage.job.render import Section
from triage.job.report import ReportContent, RetestLine, sections
from triage.quantities import engineering

if TYPE_CHECKING:
    from triage.job.bench import Bench

RESULTS = {"": "not done", "pass": "passed", "fail": "failed", "too close to call": "too close to call"}


def report_sections(bench: "Bench") -> tuple[Section, ...]:
    """The sections of the report on an open job; computes what is missing for it."""
    if bench.answers is None:
        bench.prepare()
    shown = view(bench, "")
    state = replay(bench.job.entries)
    worth = bench.worth() if shown.verdict.status == "found" else None
    head = bench.job.document["job"]
    retest = tuple(RetestLine(one.text, one.limit, one.source, RESULTS[one.result]) for one in shown.retest)
    return sections(
        ReportContent(
            id=bench.job.id,
            title=bench.board.title,
            opened=str(head.get("opened", "")),
            label=_label(bench),
            entries=bench.job.entries,
            verdict=shown.verdict,
            before=bench.answers.stresses if bench.answers else bench.stresses_before(),
            after=bench.stresses() if state.fitted else (),
            retest=retest,
            worth=(worth.reason, *worth.upgrades) if worth else (),
            not_done=(
                *(f"retest: {one.text}" for one in shown.retest if not one.result),
                *(f"not looked at: {one.text}" for one in shown.looks if not one.said),
            ),
            cautions=cautions_of(bench),
        )
    )


def _label(bench: "Bench") -> tuple[tuple[str, str], ...]:
    board, label = bench.board, bench.board.label
    year = str(label.marked_year) if label.marked_year else "not marked"
    return (
        ("adapter", board.title),
        ("profile", str(bench.job.document["job"].get("profile", ""))),
        ("input", label.input),
        ("output", f"{engineering(label.output_voltage, 'V')}, {engineering(label.output_current, 'A')}"),
        ("protection class", label.insulation_class),
        ("year", year),
    )
