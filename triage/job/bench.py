"""One open job with everything computed: what the app and the command line work with, and the Python
interface.

    with Bench.create("harbour-handset-charger", Path("cube.toml")) as bench:
        bench.prepare()
        bench.complain("dead", "dead", "full")
        view = bench.read("ohms", "mains_l", "rect", "cold", "OL")

Each method that accepts something first asks the gate, then has the entry on the disk, then answers with the
new view. Belief, suggestion and verdict are a pure function of board and entries; the clock only stamps
entries and, for safety's sake, lets acknowledgements expire with the day.
"""

import weakref
from collections.abc import Callable, Mapping
from datetime import UTC, datetime
from pathlib import Path
from types import TracebackType
from typing import Any

from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.profile import board_from_dict, board_to_dict, load_profile
from triage.errors import EntryError, JobError
from triage.job import picture, store
from triage.job.engine_room import Workings
from triage.job.entries import last_standing, make_entry, probe_of, replay
from triage.job.gates import Rules, allow, facts_of
from triage.job.learning import NONE, experience_from_dict, experience_of
from triage.job.lock import Lock
from triage.job.pointing import probe_on, ref_on
from triage.job.progress import Listener, heard_by, report
from triage.job.proof import answer, lines_of
from triage.job.record import report_sections
from triage.job.render import render
from triage.job.shown import SuspectWriter, entry_text, stress_view
from triage.job.views import (
    CandidateView,
    ChartView,
    CombinationView,
    DemandView,
    JobView,
    MatchView,
    MoveView,
    StressView,
    WorthView,
)
from triage.job.worth import worth_of
from triage.quantities import parse, parse_reading
from triage.safety.cautions import cautions
from triage.safety.inspection import items, judge
from triage.safety.retest import gate_keys

Clock = Callable[[], datetime]


def utc_now() -> datetime:
    """The present, UTC."""
    return datetime.now(UTC)


class Bench:
    """One open job."""

    def __init__(self, job: store.Job, lock: Lock | None, workings: Workings | None, clock: Clock) -> None:
        """Use ``create`` or ``open``. lock: None for a session that only looks."""
        if workings is None:
            from triage.job.wiring import Wiring

            workings = Wiring()
        self.workings: Workings = workings
        self.board: Board = board_from_dict(job.board, str(job.path))
        """The board as it came onto the mat."""
        self.job = job
        self._lock = lock
        self._clock = clock
        self.lines = lines_of(self.board, str(job.document["job"].get("opened", "")))
        """The lines of the retest."""
        self.experience = experience_from_dict(job.document["job"].get("closed_jobs"), str(job.path))
        """What the bench's closed jobs said when this one was begun."""
        self.cautions = cautions(self.board)
        """What is to be known before touching the board, and before powering it."""
        self.rules = Rules.of_board(self.board, gate_keys(self.lines))
        """What the gates of this board ask for."""
        self.answers: picture.Answers | None = None
        """What ``prepare`` computed; None before."""
        self._better: picture.Answers | None = None
        """What was worked out since, for the next entry."""
        if lock is not None:
            weakref.finalize(self, lock.release)

    @classmethod
    def create(
        cls,
        profile: str | Path,
        path: Path,
        workings: Workings | None = None,
        clock: Clock = utc_now,
        learn: bool = True,
    ) -> "Bench":
        """A new job on a profile (name of a shipped one or path of a file), in a new file.

        learn: let the closed jobs of the same folder count in what is likely.
        Raises ProfileError for a profile with faults, JobError when the file cannot be made or is there
        already.
        """
        board = load_profile(str(profile))
        path = _resolved(path)
        lock = Lock(path)
        if not lock.take() and lock.holder:
            raise JobError(str(path), f"in use by {lock.holder}", advice="choose another name")
        try:
            experience = experience_of(path.parent, board) if learn else NONE
            head = {"closed_jobs": experience.to_dict()} if experience.family_jobs else {}
            job = store.create(path, board_to_dict(board), _stamp(clock), Path(profile).stem, head)
            return cls(job, lock, workings, clock)
        except BaseException:
            lock.release()
            raise

    @classmethod
    def open(cls, path: Path, workings: Workings | None = None, clock: Clock = utc_now, write: bool = True) -> "Bench":
        """Open a job file. Where another session has it, or nothing can be written, it opens read-only.

        write: False to look only, without taking the lock. Raises JobError for a file that is no job.
        """
        path = _resolved(path)
        lock = Lock(path) if write else None
        if lock is not None and lock.take():
            store.clear_drafts(path)
        try:
            return cls(store.load(path), lock, workings, clock)
        except BaseException:
            if lock is not None:
                lock.release()
            raise

    def __enter__(self) -> "Bench":
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None) -> None:
        self.release()

    def release(self) -> None:
        """Give the job free for other sessions; it can still be looked at here."""
        if self._lock is not None:
            self._lock.release()

    @property
    def path(self) -> Path:
        """The job file."""
        return self.job.path

    @property
    def read_only(self) -> str:
        """Why nothing can be entered here, or empty."""
        if self._lock is None:
            return "opened to look only"
        if self._lock.held:
            return ""
        if self._lock.holder:
            return f"in use by {self._lock.holder}"
        return f"the folder cannot be written: {self._lock.problem or 'no lock'}"

    @property
    def only_looks(self) -> bool:
        """True for a session that never wanted to write."""
        return self._lock is None

    @property
    def last_session(self) -> str:
        """Who left this job without closing it, when a session was cut off; empty otherwise."""
        left = self._lock.left_behind if self._lock is not None else None
        return str(left) if left is not None else ""

    def prepare(self, listener: Listener | None = None) -> None:
        """Compute what every instrument would show under every fault: on the unpowered board, and as far as it was solved
        before on the powered one. Takes seconds the first time.

        listener: hears how far it is; what it raises ends the calculation.
        """
        with heard_by(listener):
            self.answers, self._better = self._answers(), None

    def work_out(self, listener: Listener | None = None) -> bool:
        """Solve what the powered board does under every fault, the leading suspects first; True when there was anything to
        solve. Minutes; what is solved is kept.

        The answers come into the belief with the next entry or ``take_up``, so that no suggestion changes under the hand
        that holds the probe.
        """
        step = 0
        with heard_by(listener):
            for _, number, wanted in self.workings.work_out(self.board, self._leading):
                step += 1
                report("the powered board", number, wanted)
                if step & (step - 1) == 0:
                    # Each time twice as many as before: putting the answers together costs about as much as a step.
                    self._better = self._answers()
            if step:
                self._better = self._answers()
        return step > 0

    def take_up(self) -> JobView:
        """What there is to show, with all that was worked out."""
        self._take_better()
        return self.view()

    def _take_better(self) -> None:
        if self._better is not None:
            self.answers, self._better = self._better, None

    def _answers(self) -> picture.Answers:
        diagnosis = self.workings.diagnosis(self.board, self.experience)
        stresses = tuple(stress_view(one, self.board) for one in self.workings.known_stresses(self.board))
        return picture.Answers(diagnosis, stresses, SuspectWriter(self.board, stresses))

    def _leading(self) -> list[Fault]:
        """Every fault, the likeliest now first."""
        chances = picture.fault_chances(self) if self.answers else {}
        return sorted(chances, key=lambda fault: -chances[fault])

    def view(self, message: str = "") -> JobView:
        """What there is to show now."""
        return picture.view(self, message)

    def facts(self, probability: Mapping[Fault, float] | None = None, found: bool = False) -> Any:
        """The facts that the gates know (``triage.safety.gate.GateFacts``)."""
        return facts_of(self.rules, self.job.entries, _stamp(self._clock)[:10], probability, found)

    def acknowledge(self, key: str) -> JobView:
        """A caution was read; ``all`` stands for every caution of the board."""
        known = [caution.key for caution in picture.cautions_of(self)]
        if key == "all":
            for one in known[:-1]:
                self._enter("acknowledge", caution=one)
            key = known[-1]
        if key not in known:
            raise EntryError("caution", f"{key!r}", "one of " + ", ".join(known))
        return self._enter("acknowledge", caution=key)

    def complain(self, text: str, state: str, condition: str = "full") -> JobView:
        """What is wrong, in the customer's words and as one of ``triage.board.evidence.STATES``, and under
        which load."""
        return self._enter("complaint", state=state, condition=condition, typed=text)

    def see(self, sign: str, ref: str = "") -> JobView:
        """Something seen, heard, smelt or felt, at a part or on the whole adapter."""
        return self._enter("sign", sign=sign, ref=ref_on(self.board, ref) if ref else "")

    def look(self, item: str, answer: str, ref: str = "") -> JobView:
        """What one look of the inspection found: one of its answers, or a length (``6.5 mm``) or count as
        typed.

        Raises EntryError or InspectionError naming the answers there are. What the diagnosis takes from it is
        entered as signs of its own.
        """
        ref = ref_on(self.board, ref) if ref else ""
        asked = next((one for one in items(self.board) if one.key == item), None)
        if asked is None:
            raise EntryError("look", f"{item[:40]!r}", "one of " + ", ".join(one.key for one in items(self.board)))
        value = answer if asked.answers else parse(answer, "m" if asked.unit == "m" else "1")
        finding = judge(self.board, item, value, ref)
        view = self._enter("look", item=item, look=finding.verdict, answer=answer, ref=ref, text=finding.text)
        for sign in finding.signs:
            view = self._enter("sign", sign=sign.sign, ref=sign.ref)
        return view

    def read(self, function: str, plus: str, minus: str, condition: str, text: str, instrument: str = "") -> JobView:
        """A reading as typed: ``4k7``, ``0.62``, ``OL``. Raises EntryError or QuantityError naming what is
        wrong."""
        probe = probe_on(self.board, self.rules, function, plus, minus, condition)
        value = parse_reading(text, probe.unit)
        more = {"instrument": instrument} if instrument else {}
        return self._enter("reading", **probe._asdict(), value=value, unit=probe.unit, typed=text, **more)

    def skip(self, function: str, plus: str, minus: str, condition: str, reason: str = "") -> JobView:
        """A reading that cannot or shall not be taken."""
        return self._enter("skip", **probe_on(self.board, self.rules, function, plus, minus, condition)._asdict(), reason=reason)

    def power(self, on: bool) -> JobView:
        """The adapter was powered up through the current limit, or unplugged."""
        return self._enter("power", on=on)

    def undo(self) -> JobView:
        """Take the last standing entry back. Raises EntryError when there is none."""
        number = last_standing(self.job.entries)
        if number is None:
            raise EntryError("undo", "there is no entry to take back")
        return self._enter("undo", entry=number)

    def suspect(self, ref: str) -> JobView:
        """The technician's own hunch."""
        return self._enter("hunch", ref=ref_on(self.board, ref))

    def note(self, text: str) -> JobView:
        """A remark for the next reader."""
        return self._enter("note", note=text)

    def moves(self) -> tuple[MoveView, ...]:
        """How the suspects moved over the entries, oldest first; empty before ``prepare``."""
        from triage.job.track import moves

        return moves(self)

    def stresses(self) -> tuple[StressView, ...]:
        """Stresses at their worst conditions, with the parts fitted so far."""
        return self._stress_views(self.board_now())

    def stresses_before(self) -> tuple[StressView, ...]:
        """Stresses of the board as it came onto the mat."""
        known = self.answers.stresses if self.answers else ()
        return known or self._stress_views(self.board)

    def charts(self) -> tuple[ChartView, ...]:
        """Waveforms and load line of the board as it came, sound and under the leading suspect; seconds for a suspect that
        was not drawn before."""
        return self.workings.charts(self.board, picture.leading_fault(self), self.stresses_before())

    def board_now(self) -> Board:
        """The board with the parts fitted so far."""
        board = self.board
        for ref, type in replay(self.job.entries).fitted:
            board = self.workings.fitted(board, ref, type)
        return board

    def _stress_views(self, board: Board) -> tuple[StressView, ...]:
        return tuple(stress_view(one, board) for one in self.workings.stresses(board))

    def demand(self, ref: str) -> DemandView:
        """What the position of a part asks of a replacement. Raises EntryError for an unknown part."""
        return self.workings.demand(self.board, ref_on(self.board, ref))

    def candidates(self, ref: str) -> tuple[CandidateView, ...]:
        """Catalog parts for a position, best first."""
        return self.workings.candidates(self.board, ref_on(self.board, ref))

    def ask(self, ref: str, type: str) -> CandidateView:
        """One catalog part held against a position, with what it fails."""
        return self.workings.ask(self.board, ref_on(self.board, ref), type)

    def combinations(self, ref: str) -> tuple[CombinationView, ...]:
        """Several parts that together do for a position what one should, those in the drawers first; none for a
        safety part."""
        return self.workings.combinations(self.board, ref_on(self.board, ref))

    def matches(self, marking: str) -> tuple[MatchView, ...]:
        """Catalog parts that a half-read marking may mean."""
        return self.workings.matches(marking)

    def what_if(self, ref: str, type: str) -> tuple[StressView, ...]:
        """The stresses with this part in this position, nothing recorded."""
        return self._stress_views(self.workings.fitted(self.board_now(), ref_on(self.board, ref), type))

    def fit(self, ref: str, type: str) -> JobView:
        """A part was fitted. Raises EntryError when a hard rule forbids it in that position."""
        ref = ref_on(self.board, ref)
        asked = self.workings.ask(self.board, ref, type)
        if not asked.accepted:
            raise EntryError(f"{type} at {ref}", "; ".join(asked.refusals), advice="choose one of the candidates")
        self.workings.fitted(self.board_now(), ref, asked.type)
        return self._enter("fitted", ref=ref, type=asked.type)

    def repaired(self, result: str) -> JobView:
        """What the repair led to: ``works``, ``still faulty`` or ``given up``."""
        if not replay(self.job.entries).fitted and result == "still faulty":
            raise EntryError("repaired", "no part has been fitted", advice="record what was fitted first")
        return self._enter("repaired", result=result)

    def retest(self, line: str, text: str) -> JobView:
        """What a line of the retest came out as: a reading as typed, or ``yes`` or ``no`` for a look."""
        found = answer(self.lines, line, text)
        more = {"instrument": found.instrument} if found.instrument else {}
        return self._enter(
            "retest", check=line, result=found.verdict, counts_as=found.counts_as, value=found.value, typed=text, **more
        )

    def close(self, verdict: str) -> JobView:
        """Close the job: ``repaired``, or whatever else became of the adapter (``replaced``, ``scrapped``
        ...).

        The fault that the next job may learn from is noted: that of the verdict, confirmed when its part was
        replaced and the adapter works.
        """
        return self._enter("closed", verdict=verdict, **picture.lesson(self, verdict))

    def returned(self, reason: str) -> JobView:
        """The adapter came back after the repair; the job is open again."""
        return self._enter("returned", reason=reason)

    def worth(self, new_price: float | None = None) -> WorthView:
        """Repair, replace or scrap, each with its expected cost; after ``prepare``.

        new_price: of a new adapter of the same rating [money of the shop]; None: the house estimate by power.
        """
        return worth_of(self, new_price)

    def why(self) -> dict[tuple[str, str], str]:
        """(ref, mode) -> where the chance of that fault comes from before anything was seen; after
        ``prepare``."""
        return picture.derivations(self)

    def evidence(self) -> tuple[str, ...]:
        """What each entry did to the odds of the leading suspect, in a line each; after ``prepare``."""
        return picture.weighed_lines(self)

    def report(self, format: str = "text") -> str:
        """The record of the job as ``text``, ``markdown`` or ``html``."""
        return render(f"{self.board.title}: repair record", report_sections(self), format)

    def _enter(self, kind: str, **said: Any) -> JobView:
        """Ask the gate, put the entry on the disk, show what it led to."""
        if self.read_only:
            raise JobError(str(self.path), self.read_only, advice="nothing can be entered in this session")
        entry = make_entry(kind, _stamp(self._clock), **said)
        facts = self._facts_now()
        allow(self.rules, facts, kind, said)
        self.job.append(entry)
        if self._lock is not None:
            self._lock.touch()
        is_cold_reading = kind == "reading" and said["condition"] == "cold"
        caution = picture.unready(facts, self.rules, probe_of(said)) if is_cold_reading else ""
        self._take_better()
        return self.view("; ".join(filter(None, (entry_text(entry), caution))))

    def _facts_now(self) -> Any:
        """The facts with the shorts that the belief rules out, where it has been computed."""
        return self.facts(picture.fault_chances(self)) if self.answers else self.facts()


def _stamp(clock: Clock) -> str:
    return clock().astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")


def _resolved(path: Path) -> Path:
    """The real file behind a link, so that it is the file that is replaced and locked."""
    try:
        return Path(path).expanduser().resolve()
    except (OSError, ValueError, RuntimeError):
        raise JobError("job name", "leads to no file", advice="type it again") from None
