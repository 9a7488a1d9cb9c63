"""Charts of a job's board, sound and under the leading suspect: the switch, the bulk, the load line of the output.

The waveforms are solved at the highest mains and full load, where the voltages are nearest to their ratings; the load line
comes from the points at nominal mains that the diagnosis uses. Everything is a pure function of the board and the fault.
"""

from collections.abc import Iterator, Sequence

from triage.board.circuit import output_ground
from triage.board.fault import Fault
from triage.board.part import Board
from triage.board.probe import Probe
from triage.families import family_of
from triage.families.points import LOADS, OperatingPoints, load_resistance, point_key
from triage.families.waveforms import Waveform, Waveforms, ends_of_bulk, ends_of_switch, waveforms
from triage.job.display import plain
from triage.job.progress import report
from triage.job.views import ChartView, CurveView, LevelView, StressView
from triage.physics.transient import NoConvergence
from triage.safety.output import guessed_kind, window

SOUND = "healthy"
"""Name of the curve of the board without a fault."""
_VOLTAGES = ("peak_voltage", "reverse_voltage")
_WHAT = "waveforms and load line"


class Curves:
    """Solves the curves of one board and remembers them."""

    def __init__(self, board: Board, points: OperatingPoints) -> None:
        self._board = board
        self._points = points
        self._known: dict[str, Waveforms | None] = {}

    def charts(self, faults: tuple[Fault, ...], stresses: Sequence[StressView]) -> tuple[ChartView, ...]:
        """The charts of the board with these faults beside the sound one; no faults: the healthy one alone.

        stresses: of the board, for the limit lines. What the solution cannot follow is left out, and the chart says so.
        """
        steps = self._steps(faults)
        for done, _ in enumerate(steps):
            report(_WHAT, done, self._wanted(faults))
        sound, faulty = self._known[""], self._known[_key(faults)] if faults else None
        note = self._note(faults, faulty)
        found = []
        for key, ends in (("switch", ends_of_switch), ("bulk", ends_of_bulk)):
            at = ends(self._board, family_of(self._board.family))
            if at is not None and sound is not None:
                ref = at[0]
                curves = [_curve(SOUND, getattr(sound, key))]
                if faulty is not None:
                    curves.append(_curve(_named(faults), getattr(faulty, key)))
                title = f"{plain(ref)} {plain(self._board.part(ref).role)}: voltage at {self._board.mains.high:.0f} V, full load"
                found.append(ChartView(key, title, "s", "V", tuple(curves), _levels(stresses, ref), note))
        return (*found, self._load_line(faults, note))

    def _wanted(self, faults: tuple[Fault, ...]) -> int:
        return (1 + len(LOADS)) * (2 if faults else 1)

    def _steps(self, faults: tuple[Fault, ...]) -> Iterator[None]:
        """Solves what is not known yet, a step at a time: between them the calculation can be stopped."""
        for case in ((), faults) if faults else ((),):
            yield
            self._solve(case)
            for load in LOADS:
                yield
                self._points.at(case, load)

    def _solve(self, faults: tuple[Fault, ...]) -> None:
        key = _key(faults)
        if key in self._known:
            return
        sound = self._known.get("")
        span = float(sound.switch.time[-1]) if faults and sound is not None and sound.switch is not None else None
        try:
            self._known[key] = waveforms(self._board, faults, mains=self._board.mains.high, load=self._board.full_load, span=span)
        except NoConvergence:
            self._known[key] = None

    def _note(self, faults: tuple[Fault, ...], faulty: Waveforms | None) -> str:
        if not faults:
            return "no suspect yet: the healthy board alone"
        if faulty is None:
            return f"with {_named(faults)} the solution breaks off: nothing repeats"
        broken = self._points.at(faults, "full").breaks
        return f"drawn before it destroys {' and '.join(map(str, broken))}" if broken else ""

    def _load_line(self, faults: tuple[Fault, ...], note: str) -> ChartView:
        """Output voltage over output current, with the window the retest holds it to."""
        curves = [self._line(SOUND, ())]
        if faults:
            curves.append(self._line(_named(faults), faults))
        kind = guessed_kind(self._board)
        limits = [(load, window(kind, self._board.label.output_voltage, load)) for load in LOADS]
        amps = [self._board.label.output_voltage / load_resistance(self._board, load) for load, _ in limits]
        edges = tuple(
            CurveView(name, tuple((current, getattr(found, name)) for current, (_, found) in zip(amps, limits, strict=True)))
            for name in ("low", "high")
        )
        title = f"output at {self._board.mains.nominal:.0f} V, no load to full load; window: {kind}"
        return ChartView("load line", title, "A", "V", tuple(curves), (), note, edges)

    def _line(self, name: str, faults: tuple[Fault, ...]) -> CurveView:
        points = []
        for load in LOADS:
            readings = self._points.at(faults, load).readings
            volts = readings.get(Probe("volts_dc", "out", output_ground(self._board), load))
            if volts is not None and volts == volts:
                points.append((volts / load_resistance(self._board, load), volts))
        return CurveView(name, tuple(sorted(points)))


def _key(faults: tuple[Fault, ...]) -> str:
    return point_key(faults, "").rstrip("@")


def _named(faults: tuple[Fault, ...]) -> str:
    return plain(" + ".join(f"{fault.ref} {fault.mode.replace('_', ' ')}" for fault in faults))


def _curve(name: str, found: Waveform | None) -> CurveView:
    if found is None:
        return CurveView(name, ())
    return CurveView(name, tuple(zip(map(float, found.time), map(float, found.voltage), strict=True)))


def _levels(stresses: Sequence[StressView], ref: str) -> tuple[LevelView, ...]:
    """Rating and derated limit of the voltage of a part."""
    one = next((one for one in stresses if one.ref == ref and one.quantity in _VOLTAGES and one.rating), None)
    if one is None or one.rating is None:
        return ()
    derated = (LevelView("derated limit", one.limit),) if one.limit is not None and one.limit < one.rating else ()
    return (LevelView("rating", one.rating), *derated)
