"""A stand-in for the bench: keeps the contract, with a made-up charger cube and a toy belief, so that screens
can be tested.

The job: the 5 V 0.6 A cube that feeds the radio desk of a lighthouse keeper went dead in a thunderstorm.
Every figure here is invented; nothing in the program uses it.
"""

import math
import time
from dataclasses import dataclass, field, replace
from pathlib import Path

from triage.board.part import Board, Label, Mains, Part
from triage.board.probe import UNITS
from triage.errors import EntryError, JobError, QuantityError
from triage.job import views as v
from triage.job.progress import Listener, report

DRAWING = """\
 mains_l          rect         bulk                        |  sec          out
   o----[RF1]------+---D1->|----+------+------+------+     |  +---D5->|---+----+--o
                                |      |      |      |     |  |           |    |
                                C1   [R1]   [R2]C2   T1    |  T1         C5  [R5]
                                |      |      |clamp pri   |  sec         |    +- led
                                |      |      D2<----+ coll|  |           |  LED1
                                |      |             |     |  +-----------+----+--o sgnd
      fb +--[R3]--drive-C3------|-----base----------Q1     |
         |                      |    |    |          |     |
        T1                      |   DZ1  D3          |     |
     feedback                   |    |    |          |     |
         +--[R4]--auxr-D4-------|---aux   |          |     |
         |                      |    |    |          |     |
  pgnd --+----------------------+---C4----+----------+     |"""

_PARTS = (
    ("RF1", "fusible_resistor", "fusible input resistor", {"a": "mains_l", "b": "rect"}),
    ("D1", "diode", "mains rectifier", {"anode": "rect", "cathode": "bulk"}),
    ("C1", "electrolytic", "bulk capacitor", {"plus": "bulk", "minus": "pgnd"}),
    ("R1", "resistor", "startup resistor", {"a": "bulk", "b": "base"}),
    ("D2", "diode", "clamp diode", {"anode": "coll", "cathode": "clamp"}),
    ("C2", "capacitor", "clamp capacitor", {"a": "clamp", "b": "bulk"}),
    ("R2", "resistor", "clamp resistor", {"a": "clamp", "b": "bulk"}),
    ("Q1", "bipolar_transistor", "main switch", {"collector": "coll", "base": "base", "emitter": "pgnd"}),
    ("DZ1", "zener", "regulation zener", {"anode": "aux", "cathode": "base"}),
    ("C4", "electrolytic", "auxiliary rail capacitor", {"plus": "pgnd", "minus": "aux"}),
    ("D5", "diode", "output rectifier", {"anode": "sec", "cathode": "out"}),
    ("C5", "electrolytic", "output capacitor", {"plus": "out", "minus": "sgnd"}),
    ("R5", "resistor", "LED resistor", {"a": "out", "b": "led"}),
    ("LED1", "led", "power LED", {"anode": "led", "cathode": "sgnd"}),
)

BOARD = Board(
    id="radio-desk-cube",
    title="Radio desk cube, 5 V 0.6 A",
    family="ringing_choke_zener",
    label=Label("198-253 V~ 50 Hz", 5.0, 0.6),
    mains=Mains(50.0, 198.0, 230.0, 253.0),
    parts=tuple(Part(*part) for part in _PARTS),
    sides={
        "primary": ("mains_l", "rect", "bulk", "coll", "clamp", "base", "drive", "fb", "aux", "auxr", "pgnd"),
        "secondary": ("sec", "out", "led", "sgnd"),
    },
    ground={"primary": "pgnd", "secondary": "sgnd"},
    drawing=DRAWING,
)

CAUTIONS = (
    (
        "plug",
        "Pull the plug and keep it in sight. Work on mains parts only where local codes and your training "
        "allow it; a licensed person does what they reserve.",
    ),
    (
        "bulk",
        "C1 (4.7 uF, 400 V) can hold 325 V. Bleed it through 10 kohm 2 W for 1 s, then read it below 60 V before touching.",
    ),
    (
        "live",
        "For live readings use an isolating transformer and a current-limited feed; one hand, clip the black lead first.",
    ),
)

LOOKS = (
    v.LookView("board", "Board: browned, charred or carbonised anywhere?", ("sound", "browned", "charred")),
    v.LookView("capacitors", "Electrolytics: bulged top, pushed-out bung, leaked?", ("sound", "bulging"), "", ("C1", "C4", "C5")),
    v.LookView("distance", "Shortest way over the board between the sides", (), "m", (), False),
)


NEEDS = (
    v.RetestView(
        "insulation", "insulation between the sides at 500 V", "ohms", "cold", "ohm", "at least 2 Mohm", True, "invented"
    ),
    v.RetestView("output", "output", "volts_dc", "full", "V", "4.75 V to 5.25 V", True, "invented", "through the current limit"),
)


_FAULTS = (
    ("Q1", "ce_short", 0.34, ("RF1.open",), "main switch", "collector-emitter voltage 104 % of rating"),
    ("RF1", "open", 0.22, (), "fusible input resistor", ""),
    ("R1", "open", 0.16, (), "startup resistor", "voltage 97 % of rating"),
    ("C4", "low_capacitance", 0.12, (), "auxiliary rail capacitor", ""),
    ("D5", "short", 0.09, (), "output rectifier", ""),
    ("", v.NO_PART_FAULT, 0.07, (), "", ""),
)

_READINGS = (
    (
        "volts_dc",
        "bulk",
        "pgnd",
        "cold",
        0.5,
        "shows whether the board may be touched at all",
        (
            ("below 60 V", 0.0, 60.0, 0.99, "the board may be touched"),
            ("60 V and more", 60.0, 400.0, 0.01, "bleed it again"),
        ),
    ),
    (
        "ohms",
        "mains_l",
        "rect",
        "cold",
        0.5,
        "the fusible resistor opens with a shorted switch, so this splits the two leading suspects from the rest",
        (
            ("about 10 ohm", 5.0, 20.0, 0.44, "the input path is whole"),
            ("OL", 1e6, math.inf, 0.56, "RF1 is open; something took it"),
        ),
    ),
    (
        "ohms",
        "coll",
        "pgnd",
        "cold",
        0.8,
        "a shorted main switch shows below 5 ohm here, a sound one reads high",
        (
            ("below 5 ohm", 0.0, 5.0, 0.6, "Q1 is shorted"),
            ("above 100 kohm", 1e5, math.inf, 0.4, "Q1 is not shorted"),
        ),
    ),
    (
        "ohms",
        "bulk",
        "base",
        "cold",
        0.8,
        "the startup resistor is the only path between these two",
        (("about 1 Mohm", 8e5, 1.2e6, 0.8, "R1 is sound"), ("OL", 2e6, math.inf, 0.2, "R1 is open")),
    ),
)

_BANDS = {
    ("mains_l", "rect"): {"Q1": (1e6, math.inf), "RF1": (1e6, math.inf)},
    ("coll", "pgnd"): {"Q1": (0.0, 5.0)},
    ("bulk", "base"): {"R1": (2e6, math.inf)},
}
_SOUND = {("mains_l", "rect"): (5.0, 20.0), ("coll", "pgnd"): (1e5, math.inf), ("bulk", "base"): (8e5, 1.2e6)}

STRESSES = (
    v.StressView(
        "Q1",
        "main switch",
        "peak_voltage",
        728.0,
        "V",
        700.0,
        560.0,
        1.04,
        "over rating",
        "common practice, no source",
        "253 V, no load",
    ),
    v.StressView(
        "R1",
        "startup resistor",
        "peak_voltage",
        485.0,
        "V",
        500.0,
        400.0,
        0.97,
        "over derated limit",
        "common practice, no source",
        "253 V, full load",
    ),
    v.StressView(
        "C1",
        "bulk capacitor",
        "ripple_current",
        0.048,
        "A",
        0.08,
        0.064,
        0.6,
        "ok",
        "invented",
        "198 V, full load",
    ),
    v.StressView(
        "D5",
        "output rectifier",
        "reverse_voltage",
        36.0,
        "V",
        60.0,
        48.0,
        0.6,
        "ok",
        "invented",
        "253 V, no load",
    ),
    v.StressView(
        "C5",
        "output capacitor",
        "life",
        21000.0,
        "h",
        20000.0,
        None,
        1.05,
        "ok",
        "invented",
        "230 V, full load",
    ),
    v.StressView("LED1", "power LED", "average_current", 0.003, "A", None, None, None, "rating unknown", "", "230 V"),
)

_TYPES = (
    (
        "MJE13005",
        "bipolar transistor",
        0.82,
        True,
        ("collector-emitter 700 V: 4 % short of nothing", "current x2.6"),
    ),
    ("KSC5027", "bipolar transistor", 0.77, True, ("collector-emitter 1100 V: x1.5", "current x2")),
    ("MJE13003", "bipolar transistor", 0.40, False, ("collector-emitter 700 V",)),
    ("1N4007", "diode", 0.30, False, ()),
)


def _value(text: str, unit: str) -> float:
    """Numbers with k and M only: enough for a stand-in."""
    if text.upper() == "OL":
        return math.inf
    cleaned = text.replace("ohm", "").replace(unit, "").replace(",", ".").strip()
    scale = {"k": 1e3, "M": 1e6, "m": 1e-3}.get(cleaned[-1:], 1.0)
    try:
        return float(cleaned.rstrip("kMm")) * scale
    except ValueError:
        raise QuantityError("reading", repr(text), f"a value in {unit}", "type for instance 4k7 or OL") from None


@dataclass
class FakeBench:
    """Keeps the contract of ``triage.app.contract.OpenJob``."""

    path: Path
    prepare_seconds: float = 0.0
    chart_seconds: float = 0.0
    unsolved: int = 0
    """Steps of the powered board still to be solved."""
    board: Board = BOARD
    ready: bool = False
    track: list[v.MoveView] = field(default_factory=list)
    said: list[v.EntryView] = field(default_factory=list)
    values: dict[tuple[str, str, str, str], float] = field(default_factory=dict)
    order: list[object] = field(default_factory=list)
    skipped: list[tuple[str, str, str, str]] = field(default_factory=list)
    acknowledged: list[str] = field(default_factory=list)
    fitted: dict[str, str] = field(default_factory=dict)
    result: str = ""
    looked: dict[str, str] = field(default_factory=dict)
    checked: dict[str, str] = field(default_factory=dict)
    powered: bool = False
    released: bool = False
    closed: str = ""
    message: str = ""
    drawing: str = DRAWING

    def _log(self, text: str, undo: object = None) -> v.JobView:
        self.said.append(v.EntryView(len(self.said) + 1, f"2026-02-03T02:{len(self.said):02d}:00Z", text))
        self.order.append(undo)
        self.message = f"noted: {text}"
        self.path.write_text("\n".join(entry.text for entry in self.said), encoding="utf-8")
        return self.view()

    def _belief(self) -> list[float]:
        weights = [fault[2] for fault in _FAULTS]
        for (_, plus, minus, _), value in self.values.items():
            for index, fault in enumerate(_FAULTS):
                sound = _SOUND.get((plus, minus), (-math.inf, math.inf))
                low, high = _BANDS.get((plus, minus), {}).get(fault[0], sound)
                weights[index] *= 1.0 if low <= value <= high else 0.01
        total = sum(weights)
        return [weight / total for weight in weights]

    def _stage(self) -> str:
        if self.closed:
            return "closed"
        if len(self.acknowledged) < len(CAUTIONS):
            return "cautions"
        if any(one.needed and one.key not in self.looked for one in LOOKS):
            return "inspection"
        if self.fitted:
            return "retest"
        return "repair" if self._verdict().status == "found" else "cold"

    def _suspects(self) -> tuple[v.SuspectView, ...]:
        ranked = sorted(zip(self._belief(), _FAULTS, strict=True), key=lambda pair: -pair[0])
        return tuple(
            v.SuspectView(ref, mode, share, along, role, stress) for share, (ref, mode, _, along, role, stress) in ranked
        )

    def _suggestion(self) -> v.SuggestionView | None:
        for function, plus, minus, condition, minutes, reason, outcomes in _READINGS:
            if (function, plus, minus, condition) not in self.values and (
                function,
                plus,
                minus,
                condition,
            ) not in self.skipped:
                return v.SuggestionView(
                    function,
                    plus,
                    minus,
                    condition,
                    UNITS[function],
                    minutes,
                    reason,
                    tuple(v.OutcomeView(*one) for one in outcomes),
                    "C1 may hold 325 V until this has been read" if function == "volts_dc" else "",
                )
        return None

    def _verdict(self) -> v.VerdictView:
        top = self._suspects()[0]
        if top.probability < 0.9:
            return v.VerdictView("open")
        along = tuple(fault.split(".")[0] for fault in top.collateral)
        return v.VerdictView(
            "found",
            top.ref,
            top.mode,
            top.collateral,
            (top.ref, *along),
            top.probability,
            "collector-emitter voltage reaches 728 V at 253 V without load, 104 % of its 700 V",
            tuple(entry.text for entry in self.said if "ohms" in entry.text),
        )

    def view(self) -> v.JobView:
        if not self.ready:
            return self._framed(computing=True)
        suspects = self._suspects()
        if not self.track or self.track[-1].suspects != suspects:
            self.track.append(v.MoveView(self.said[-1].text if self.said else "at the start", suspects))
        verdict = self._verdict()
        gate_open = self._stage() not in ("cautions", "inspection")
        return self._framed(
            suspects=self._suspects(),
            verdict=verdict,
            suggestion=self._suggestion() if gate_open and verdict.status == "open" else None,
        )

    def _framed(self, **more: object) -> v.JobView:
        read = ("volts_dc", "bulk", "pgnd", "cold") in self.values
        looks = tuple(replace(one, said=self.looked.get(one.key, "")) for one in LOOKS)
        return v.JobView(
            looks=looks,
            retest=tuple(replace(one, result=self.checked.get(one.key, "")) for one in NEEDS),
            id=BOARD.id,
            title=BOARD.title,
            stage=self._stage() if self.ready else "cautions",
            safe_to_touch="safe to touch while unplugged" if read else "NOT safe to touch: unplug and read the bulk voltage",
            entries=tuple(self.said),
            message=self.message,
            drawing=self.drawing,
            cautions=tuple(v.CautionView(key, text, key in self.acknowledged) for key, text in CAUTIONS),
            **more,  # type: ignore[arg-type]
        )

    def moves(self) -> tuple[v.MoveView, ...]:
        return tuple(self.track)

    def work_out(self, listener: Listener | None = None) -> bool:
        for done in range(self.unsolved):
            time.sleep(0.05)
            if listener is not None:
                listener("the powered board", done, self.unsolved)
        found, self.unsolved = bool(self.unsolved), 0
        return found

    def take_up(self) -> v.JobView:
        return self.view()

    def prepare(self, listener: Listener | None = None) -> None:
        for done in range(20):
            time.sleep(self.prepare_seconds / 20)
            if listener is not None:
                listener("cold readings", done, 20)
        self.ready = True

    def acknowledge(self, key: str) -> v.JobView:
        self.acknowledged.append(key)
        return self._log(f"caution read: {key}", ("acknowledge", key))

    def complain(self, text: str, state: str, condition: str) -> v.JobView:
        return self._log(f"complaint: {state} at {condition}" + (f", {text}" if text else ""))

    def look(self, item: str, answer: str, ref: str = "") -> v.JobView:
        self.looked[item] = "sound" if answer == "sound" else "doubtful"
        return self._log(f"looked at {item}: {answer} {ref}".strip())

    def power(self, on: bool) -> v.JobView:
        self.powered = on
        return self._log("powered up" if on else "unplugged")

    def note(self, text: str) -> v.JobView:
        return self._log(f"note: {text}")

    def release(self) -> None:
        self.released = True

    def retest(self, line: str, text: str) -> v.JobView:
        need = next(one for one in NEEDS if one.key == line)
        _value(text, need.unit)
        self.checked[line] = "pass"
        return self._log(f"retest {line}: pass ({text})")

    def see(self, sign: str, ref: str) -> v.JobView:
        if sign == "sound" and not ref:
            self.looked |= {one.key: "sound" for one in LOOKS if one.key not in self.looked}
        if ref and ref not in {part.ref for part in BOARD.parts}:
            raise EntryError("sign", f"no part {ref}", "a ref of the board", "look at the drawing")
        return self._log(f"seen: {sign} {ref}".strip())

    def read(self, function: str, plus: str, minus: str, condition: str, text: str) -> v.JobView:
        nodes = BOARD.sides["primary"] + BOARD.sides["secondary"]
        for node in (plus, minus):
            if node not in nodes:
                raise EntryError("reading", f"no node {node!r}", "one of " + ", ".join(nodes))
        self.values[function, plus, minus, condition] = _value(text, UNITS[function])
        return self._log(f"{function} {plus} {minus} {condition}: {text}", ("read", (function, plus, minus, condition)))

    def skip(self, function: str, plus: str, minus: str, condition: str, reason: str) -> v.JobView:
        self.skipped.append((function, plus, minus, condition))
        return self._log(f"skipped {function} {plus} {minus}: {reason}", ("skip", (function, plus, minus, condition)))

    def undo(self) -> v.JobView:
        standing = [
            index for index, entry in enumerate(self.said) if not entry.undone and not entry.text.startswith("taken back")
        ]
        if not standing:
            raise JobError("undo", "no entry stands", advice="nothing to take back")
        last = standing[-1]
        self.said[last] = replace(self.said[last], undone=True)
        match self.order[last]:
            case ("read", key):
                self.values.pop(key, None)
            case ("skip", key):
                self.skipped.remove(key)
            case ("acknowledge", key):
                self.acknowledged.remove(key)
        return self._log(f"taken back: entry {last + 1}")

    def suspect(self, ref: str) -> v.JobView:
        return self._log(f"hunch: {ref}")

    def what_if(self, ref: str, type: str) -> tuple[v.StressView, ...]:
        return (replace(STRESSES[0], rating=1100.0, limit=880.0, ratio=0.66, verdict="ok"), *STRESSES[1:])

    def stresses(self) -> tuple[v.StressView, ...]:
        if self.fitted:
            return (replace(STRESSES[0], rating=1100.0, limit=880.0, ratio=0.66, verdict="ok"), *STRESSES[1:])
        return STRESSES

    def charts(self) -> tuple[v.ChartView, ...]:
        for step in range(4):
            report("waveforms and load line", step, 4)
            time.sleep(self.chart_seconds / 4)
        lead = next((one for one in self._suspects() if one.ref), None)
        names = ("healthy", *([f"{lead.ref} {lead.mode.replace('_', ' ')}"] if lead else []))
        ringing = [400.0 + 60.0 * math.exp(-(t % 200) / 8) * math.cos(t / 2) for t in range(300)]
        swing = [(t * 1e-7, 0.0 if 60 < t % 200 < 120 else volts) for t, volts in enumerate(ringing)]
        bulk = [(t * 1e-4, 320.0 - 30.0 * (t % 200) / 200) for t in range(200)]
        line = [(0.0, 5.2), (0.3, 5.1), (0.6, 4.9)]
        curves = [
            tuple(v.CurveView(name, tuple((x, y * (1.0 - 0.3 * n)) for x, y in points)) for n, name in enumerate(names))
            for points in (swing, bulk, line)
        ]
        window = (v.CurveView("low", ((0.0, 4.75), (0.6, 4.75))), v.CurveView("high", ((0.0, 5.25), (0.6, 5.25))))
        limits, rated = (v.LevelView("rating", 700.0), v.LevelView("derated limit", 595.0)), (v.LevelView("rating", 400.0),)
        return (
            v.ChartView("switch", "Q1 main switch: voltage at 253 V, full load", "s", "V", curves[0], limits),
            v.ChartView("bulk", "C1 bulk capacitor: voltage at 253 V, full load", "s", "V", curves[1], rated),
            v.ChartView("load line", "output at 230 V, no load to full load", "A", "V", curves[2], (), "invented", window),
        )

    def demand(self, ref: str) -> v.DemandView:
        role = BOARD.part(ref).role
        return v.DemandView(
            ref,
            role,
            (
                v.RequirementView(
                    "voltage",
                    "collector-emitter voltage",
                    910.0,
                    None,
                    "V",
                    "728 V at 253 V no load over 0.8",
                    "common practice, no source",
                    700.0,
                ),
                v.RequirementView(
                    "current",
                    "collector current",
                    0.6,
                    None,
                    "A",
                    "0.3 A peak over 0.5",
                    "common practice, no source",
                    1.5,
                ),
            ),
            ref == "RF1",
            "",
        )

    def candidates(self, ref: str) -> tuple[v.CandidateView, ...]:
        return tuple(self.ask(ref, one[0]) for one in _TYPES if one[3])

    def combinations(self, ref: str) -> tuple[v.CombinationView, ...]:
        if ref != "R1":
            return ()
        half = "metal film 510k 0.5 W 350 V"
        arithmetic = ("510 kohm + 510 kohm = 1.02 Mohm", "voltage at most 52.5% of 447 V = 235 V, rated 350 V")
        return (v.CombinationView(f"2 x {half} in series: 1.02 Mohm", (half, half), "series", 1.02e6, arithmetic, True),)

    def ask(self, ref: str, type: str) -> v.CandidateView:
        for name, part_class, score, accepted, margins in _TYPES:
            if name.lower() == type.lower():
                refusals = () if accepted else (f"{name}: collector-emitter 700 V is below the 910 V this place demands",)
                return v.CandidateView(
                    name,
                    part_class,
                    score,
                    margins,
                    ("TO-126 fits TO-126",),
                    "maker's data sheet",
                    "sure",
                    accepted,
                    refusals,
                )
        raise JobError("part", f"no type {type!r} in the catalog", "a type number", "type a few characters to search")

    def matches(self, marking: str) -> tuple[v.MatchView, ...]:
        wanted = marking.lower()
        return tuple(
            v.MatchView(name, part_class, 90.0, "likely", "700 V 4 A" if accepted else "700 V 1.5 A")
            for name, part_class, _, accepted, _ in _TYPES
            if wanted and wanted in name.lower()
        )

    def fit(self, ref: str, type: str) -> v.JobView:
        if self.ask(ref, type).refusals:
            raise JobError(f"{ref} {type}", "is not rated for this place", "an accepted candidate", "see its refusals")
        self.fitted[ref] = type
        return self._log(f"fitted {type} at {ref}")

    def repaired(self, result: str) -> v.JobView:
        self.result = result
        return self._log(f"after the repair: {result}")

    def close(self, verdict: str) -> v.JobView:
        self.closed = verdict or "closed"
        return self._log(f"closed: {self.closed}")

    def report(self, format: str) -> str:
        return "\n".join([f"{BOARD.title}", "", *(f"{one.number:3d} {one.text}" for one in self.said)])
