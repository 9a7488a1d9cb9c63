"""What a screen or the command line is shown of a job: plain records, ready to be written as text or JSON.

The facade ``triage.job.bench.Bench`` answers with these and with nothing else, so that neither the app nor
the command line needs to know how an answer was found. Numbers are SI (temperature degC, life h); every text
that came from a file or from a person has already gone through ``triage.job.display.plain``. The JSON of the
command line is ``dataclasses.asdict`` of these records.
"""

from dataclasses import dataclass

STAGES = ("cautions", "inspection", "cold", "live", "repair", "retest", "closed")
"""The way of a job from the mat to the file, in order."""

NO_PART_FAULT = "no part fault"
"""Mode of the suspect that no part of the board is at fault (cable, joint, connector), whose ref is empty."""

STATUSES = ("open", "found", "does not fit", "no part fault")
"""What a verdict can say."""


@dataclass(frozen=True, slots=True)
class SuspectView:
    """One thing that may be wrong, with how likely it is now."""

    ref: str
    """Reference designator of the root part; empty for no part fault, ``R1+C2`` for two faults at once."""
    mode: str
    """Fault mode of the root; ``no part fault`` when ref is empty."""
    probability: float
    """[-], 0 to 1"""
    collateral: tuple[str, ...] = ()
    """Faults it took with it, in order of destruction: ``D1.short``."""
    role: str = ""
    """What the part does on this board."""
    stress: str = ""
    """The worst stress of the part in words, empty where every stress is in limits."""


@dataclass(frozen=True, slots=True)
class MoveView:
    """The suspects as they were after one entry."""

    text: str
    """The entry in words."""
    suspects: tuple[SuspectView, ...]


@dataclass(frozen=True, slots=True)
class OutcomeView:
    """One possible outcome of a suggested reading."""

    text: str
    """The band as a person reads a meter: ``below 10 ohm``, ``OL``."""
    low: float
    """Lower end [SI]"""
    high: float
    """Upper end [SI]; ``inf`` reaches up to OL."""
    probability: float
    """[-]"""
    says: str
    """What this outcome would mean."""


@dataclass(frozen=True, slots=True)
class SuggestionView:
    """The next reading to take."""

    function: str
    plus: str
    """Node of the red lead."""
    minus: str
    """Node of the black lead."""
    condition: str
    unit: str
    """SI unit of the reading."""
    minutes: float
    """Work to take it [min]."""
    reason: str
    """One sentence: why this one."""
    outcomes: tuple[OutcomeView, ...] = ()
    hazard: str = ""
    """What to mind while taking it; empty for a discharged board."""


@dataclass(frozen=True, slots=True)
class VerdictView:
    """What the job has come to so far."""

    status: str
    """One of STATUSES."""
    ref: str = ""
    mode: str = ""
    collateral: tuple[str, ...] = ()
    repair: tuple[str, ...] = ()
    """Refs of the parts to replace."""
    probability: float = 0.0
    """Probability of this repair [-]."""
    why: str = ""
    """The stress that explains the failure."""
    evidence: tuple[str, ...] = ()
    """The entries that decided it, strongest first."""
    rivals: tuple[str, ...] = ()
    """Other repairs that are not ruled out, likeliest first: ``R1+C2 7 %``."""
    left: tuple[str, ...] = ()
    """When nothing fits: the smallest sets of parts that could explain the odd readings, ``D1``,
    ``R1+C2``."""


@dataclass(frozen=True, slots=True)
class OptionView:
    """One way out for the adapter."""

    choice: str
    """``repair``, ``replace`` or ``scrap``."""
    cost: float
    """Expected cost [money of the shop]; ``inf`` when it is barred."""
    text: str
    """How the cost comes about, or what bars it."""


@dataclass(frozen=True, slots=True)
class WorthView:
    """Whether the repair is worth while."""

    choice: str
    """The cheapest way out that is allowed."""
    reason: str
    options: tuple[OptionView, ...]
    vetoes: tuple[str, ...] = ()
    """Why it must not be repaired."""
    upgrades: tuple[str, ...] = ()
    """Parts that the design over-stresses, and what would cure it."""


@dataclass(frozen=True, slots=True)
class EntryView:
    """One line of the job's log."""

    number: int
    """Place in the log, from 1."""
    time: str
    """UTC, ISO 8601."""
    text: str
    undone: bool = False


@dataclass(frozen=True, slots=True)
class StressView:
    """How hard one part is driven at its worst condition."""

    ref: str
    role: str
    quantity: str
    value: float
    unit: str
    rating: float | None = None
    limit: float | None = None
    """Derated limit, same unit."""
    ratio: float | None = None
    """Value over rating [-]."""
    verdict: str = ""
    """``over rating``, ``over derated limit``, ``ok`` or ``rating unknown``."""
    source: str = ""
    """Source of the derating factor."""
    condition: str = ""


@dataclass(frozen=True, slots=True)
class CurveView:
    """One curve of a chart."""

    name: str
    """``healthy``, or the fault it is drawn under: ``C1 low capacitance``."""
    points: tuple[tuple[float, float], ...]
    """x and y [SI], x rising."""


@dataclass(frozen=True, slots=True)
class LevelView:
    """A limit that holds along the whole chart."""

    name: str
    value: float


@dataclass(frozen=True, slots=True)
class ChartView:
    """Curves with the limits they are held against."""

    key: str
    """``switch``, ``bulk`` or ``load line``."""
    title: str
    x_unit: str
    y_unit: str
    curves: tuple[CurveView, ...]
    """The sound board first."""
    levels: tuple[LevelView, ...] = ()
    note: str = ""
    """What is to be known besides; empty for nothing."""
    edges: tuple[CurveView, ...] = ()
    """Limits that change along the chart."""


@dataclass(frozen=True, slots=True)
class RequirementView:
    """One thing a replacement must offer in a position."""

    key: str
    text: str
    minimum: float | None = None
    maximum: float | None = None
    unit: str = ""
    reason: str = ""
    source: str = ""
    offered: float | None = None
    """What the original part offers, where known."""


@dataclass(frozen=True, slots=True)
class DemandView:
    """What the position of one part demands of a replacement."""

    ref: str
    role: str
    requirements: tuple[RequirementView, ...] = ()
    safety_part: bool = False
    """True for a part that is replaced like for like only."""
    note: str = ""


@dataclass(frozen=True, slots=True)
class CandidateView:
    """One catalog part held against a demand."""

    type: str
    part_class: str
    score: float
    margins: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    source: str = ""
    confidence: str = ""
    accepted: bool = True
    refusals: tuple[str, ...] = ()
    """Hard rules it fails, each with its figures; empty when accepted."""
    stock: int = 0
    """How many lie in the drawers."""
    where: str = ""
    """Which drawer."""
    price: float | None = None
    """Of one, from the drawers or the cheapest supplier's list [money of the shop]."""


@dataclass(frozen=True, slots=True)
class CombinationView:
    """Several parts that together do what one should."""

    text: str
    """``2 x 510k metal film 0.5 W 350 V in series: 1.02 Mohm``."""
    types: tuple[str, ...]
    arrangement: str
    """``series`` or ``parallel``."""
    value: float
    """Of the whole [SI]."""
    arithmetic: tuple[str, ...]
    """How they share the stress, one line a figure."""
    in_stock: bool = False
    """All of it lies in the drawers."""


@dataclass(frozen=True, slots=True)
class StockView:
    """One kind of part in the drawers."""

    type: str
    quantity: int
    where: str
    price: float | None
    part_class: str
    """Class of the catalog; empty for a type it does not know, which is then never offered."""
    read: str
    """``own reading`` where the owner has compared ratings with the sheet or the print; else the catalog's word."""


@dataclass(frozen=True, slots=True)
class MatchView:
    """One catalog part that a half-read marking may mean."""

    type: str
    part_class: str
    score: float
    """0 to 100"""
    band: str
    """How sure the match is, in a word."""
    text: str
    """Its main ratings in a line."""


@dataclass(frozen=True, slots=True)
class CautionView:
    """One caution to be acknowledged before the work goes on."""

    key: str
    text: str
    acknowledged: bool = False
    gate: str = "cold"
    """What it stands before: ``cold``, touching the board; ``live``, powering it."""


@dataclass(frozen=True, slots=True)
class LookView:
    """One thing to look at or to measure on the board."""

    key: str
    text: str
    """The question."""
    answers: tuple[str, ...] = ()
    """Possible answers; empty when a length or a count is asked for."""
    unit: str = ""
    """``m`` or ``layers`` where a number is asked for."""
    refs: tuple[str, ...] = ()
    """Parts of the board it is about."""
    needed: bool = True
    """True when it comes before the cold readings; the others need a discharged board."""
    said: str = ""
    """What the last look said: ``sound``, ``doubtful``, ``restorable``, ``veto``, or empty."""


@dataclass(frozen=True, slots=True)
class RetestView:
    """One line of the proof after a repair."""

    key: str
    text: str
    function: str
    """Meter function, or ``look`` for a line that is answered with yes or no."""
    condition: str
    """``cold``, ``noload``, ``half`` or ``full``."""
    unit: str
    limit: str
    """What must hold, in words: ``4.75 V to 5.25 V``."""
    required: bool
    """True when the job cannot be closed as repaired without it."""
    source: str
    note: str = ""
    result: str = ""
    """``pass``, ``fail``, ``too close to call``, or empty while not done."""


@dataclass(frozen=True, slots=True)
class JobView:
    """All a screen shows of an open job at one moment."""

    id: str
    title: str
    stage: str
    """One of STAGES."""
    safe_to_touch: str
    """Stored energy of the bulk capacitor and how long it takes to bleed, in a sentence."""
    suspects: tuple[SuspectView, ...] = ()
    suggestion: SuggestionView | None = None
    verdict: VerdictView = VerdictView("open")
    entries: tuple[EntryView, ...] = ()
    message: str = ""
    """What the last entry did, or what keeps the job from going on."""
    computing: bool = False
    """True while the expected readings are not computed yet; suspects and suggestion are then empty."""
    cautions: tuple[CautionView, ...] = ()
    drawing: str = ""
    """The board drawn as text."""
    read_only: str = ""
    """Empty, or who has the job open and since when."""
    waits_for: tuple[str, ...] = ()
    """What must be done before a live reading is proposed, in order."""
    looks: tuple[LookView, ...] = ()
    """Everything to look at or to measure before the board is judged."""
    retest: tuple[RetestView, ...] = ()
    """What must hold after the repair, in the order to be done."""


@dataclass(frozen=True, slots=True)
class ReadingExpected:
    """What one reading should show on the healthy board or under a named fault."""

    function: str
    plus: str
    minus: str
    condition: str
    unit: str
    low: float
    """5th percentile over the tolerances [SI]"""
    median: float
    high: float
    """95th percentile [SI]"""
    text: str
    """The median in engineering form."""
