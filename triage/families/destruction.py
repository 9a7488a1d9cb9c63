"""Which parts an operating point destroys, and in which order: the collateral of a fault.

Thresholds are factors on the ratings that a part survives for seconds: common practice, no source; the same that the
reference circuits were made with, so that the two can be compared. Slow heat destroys one part at a time, the worst first.
What lies in the path of a blowing fuse does not wait for that: until the fuse has cleared, its melting integral goes through it.
"""

from collections.abc import Callable, Iterable, Mapping

from triage.board.fault import Fault
from triage.board.part import Board, Part
from triage.families.steady import Settled
from triage.physics.transient import I_MEAN, I_RMS, POWER, V_MAX, V_MEAN, V_MIN

FUSE_CURRENT = 2.0
RESISTOR_POWER = 10.0
SWITCH_VOLTAGE, SWITCH_POWER = 1.5, 6.0
ZENER_POWER = 4.0
DIODE_CURRENT, DIODE_VOLTAGE = 4.0, 1.5
FIELD_EFFECT_VOLTAGE, FIELD_EFFECT_POWER = 1.1, 4.0
"""A field-effect transistor is lost by its avalanche, soon above its rating."""
LED_CURRENT = 4.0
CAPACITOR_VOLTAGE, SUSTAINED_VOLTAGE, REVERSE_VOLTS = 1.5, 1.4, 3.0
WINDING_LOSS = 4.0
"""Loss of a mains transformer's windings over its rated one at which the thermal fuse in it opens."""
LET_THROUGH = 5.0
"""Energy per rated watt that a resistor survives while a fuse clears [s]."""
DRIVE_VOLTAGE = 1.5
"""Voltage at a controller's drive pin over its supply rating that destroys it: a shorted switch puts the bulk on it."""
FAST_KINDS = ("fuse", "fusible_resistor", "thermal_fuse")
"""Kinds that open before the heat elsewhere does its work."""


def _over(value: float, rating: float | None, factor: float) -> float:
    """Share of what destroys the part, 0 where the rating is unknown."""
    return abs(value) / (factor * rating) if rating else 0.0


def _fuse(part: Part, at: Settled) -> tuple[float, str]:
    return _over(at.row(part.ref)[I_RMS], part.ratings.get("current"), FUSE_CURRENT), "open"


def _resistor(part: Part, at: Settled) -> tuple[float, str]:
    return _over(at.row(part.ref)[POWER], part.ratings.get("power"), RESISTOR_POWER), "open"


def _transistor(part: Part, at: Settled) -> tuple[float, str]:
    main, base = at.row(part.ref), at.row(part.ref, "_be")
    peak = max(abs(main[V_MIN]), abs(main[V_MAX]))
    rated = part.ratings.get("voltage", 0.0)
    volts = _over(peak, rated, SWITCH_VOLTAGE) if rated >= 250.0 else 0.0
    return max(volts, _over(main[POWER] + base[POWER], part.ratings.get("power"), SWITCH_POWER)), "ce_short"


def _field_effect(part: Part, at: Settled) -> tuple[float, str]:
    row = at.row(part.ref)
    return max(_over(max(row[V_MAX], 0.0), part.ratings.get("voltage"), FIELD_EFFECT_VOLTAGE),
               _over(row[POWER], part.ratings.get("power"), FIELD_EFFECT_POWER)), "short_dgs"


def _switcher(part: Part, at: Settled) -> tuple[float, str]:
    return _field_effect(part, at)[0], "short"


def _bridge(part: Part, at: Settled) -> tuple[float, str]:
    legs = [at.row(part.ref, f"_{leg}") for leg in "abcd"]
    return max(_over(leg[I_MEAN], part.ratings.get("current"), DIODE_CURRENT) for leg in legs), "d_short"


def _optocoupler(part: Part, at: Settled) -> tuple[float, str]:
    return _over(at.row(part.ref, "_led")[I_MEAN], part.ratings.get("current"), LED_CURRENT), "led_open"


def _zener(part: Part, at: Settled) -> tuple[float, str]:
    return _over(at.row(part.ref)[POWER], part.ratings.get("power"), ZENER_POWER), "short"


def _diode(part: Part, at: Settled) -> tuple[float, str]:
    row = at.row(part.ref)
    return max(_over(row[I_MEAN], part.ratings.get("current"), DIODE_CURRENT),
               _over(max(-row[V_MIN], 0.0), part.ratings.get("voltage"), DIODE_VOLTAGE)), "short"


def _led(part: Part, at: Settled) -> tuple[float, str]:
    return _over(at.row(part.ref)[I_MEAN], part.ratings.get("current"), LED_CURRENT), "open"


def _capacitor(part: Part, at: Settled) -> tuple[float, str]:
    row = at.row(part.ref)
    return _over(max(abs(row[V_MIN]), abs(row[V_MAX])), part.ratings.get("voltage"), CAPACITOR_VOLTAGE), "short"


RULES: Mapping[str, Callable[[Part, Settled], tuple[float, str]]] = {
    "fuse": _fuse, "fusible_resistor": _resistor, "resistor": _resistor, "bipolar_transistor": _transistor,
    "zener": _zener, "diode": _diode, "led": _led, "capacitor": _capacitor,
    "x_capacitor": _capacitor, "y_capacitor": _capacitor, "varistor": _zener, "mosfet": _field_effect,
    "primary_side_switcher": _switcher, "buck_switcher": _switcher, "bridge": _bridge,
    "optocoupler": _optocoupler,
}


def _thermal_fuse(board: Board, part: Part, at: Settled) -> tuple[float, str]:
    """A thermal fuse sits in the transformer: it opens by the heat of the windings, or by its own current."""
    share = _over(at.row(part.ref)[I_RMS], part.ratings.get("current"), FUSE_CURRENT)
    for other in board.parts:
        if other.kind == "transformer":
            loss = sum(float(at.row(ref, suffix)[I_RMS]) ** 2 * other.value.get(f"{suffix[1:]}_resistance", 0.0)
                       for ref, suffix in at.rows if ref == other.ref)
            share = max(share, _over(loss, other.ratings.get("power"), WINDING_LOSS))
    return share, "open"


def _controller(board: Board, part: Part, at: Settled) -> tuple[float, str]:
    drive = at.row(part.pins["drive"], "node") if (part.pins["drive"], "node") in at.rows else None
    return _over(max(drive[V_MAX], 0.0), part.ratings.get("voltage"), DRIVE_VOLTAGE) if drive is not None else 0.0, "vcc_short"


def _electrolytic(board: Board, part: Part, at: Settled) -> tuple[float, str]:
    """Over its voltage an electrolytic breaks down. A converter that goes on feeding it boils it until it vents and stands open;
    one that its controller stops leaves it shorted."""
    row, rated = at.row(part.ref), part.ratings.get("voltage")
    if any("start_voltage" in other.value for other in board.parts):
        share, mode, reverse = _over(max(row[V_MEAN], 0.0), rated, SUSTAINED_VOLTAGE), "short", -row[V_MEAN] / REVERSE_VOLTS
    else:
        share, mode, reverse = _over(max(row[V_MAX], 0.0), rated, CAPACITOR_VOLTAGE), "open", -row[V_MIN] / REVERSE_VOLTS
    return (share, mode) if share > reverse else (float(reverse), "open")


NEAR_RULES: Mapping[str, Callable[[Board, Part, Settled], tuple[float, str]]] = {
    "thermal_fuse": _thermal_fuse, "pwm_controller": _controller, "electrolytic": _electrolytic}
"""Rules that ask what else is on the board."""


def destroyed(board: Board, at: Settled, hurt: Iterable[str]) -> tuple[Fault, ...]:
    """What this operating point destroys next, leaving out the refs already at fault; nothing when all survive.

    One part, the worst, fuses first; with a fuse all that its melting integral destroys in its path.
    """
    left = set(hurt)
    hits = []
    for part in board.parts:
        if part.ref in left or part.kind not in {*RULES, *NEAR_RULES}:
            continue
        near = NEAR_RULES.get(part.kind)
        share, mode = near(board, part, at) if near else RULES[part.kind](part, at)
        if share > 1.0:
            hits.append((part.kind in FAST_KINDS, share, Fault(part.ref, mode)))
    if not hits:
        return ()
    first = max(hits)[2]
    return (first, *_swept_along(board, at, board.part(first.ref), {*left, first.ref}))


def _swept_along(board: Board, at: Settled, fuse: Part, left: set[str]) -> list[Fault]:
    """What goes before a fuse has cleared: resistors in its path, and a controller whose drive pin the switch pulls up."""
    if fuse.kind != "fuse":
        return []
    melting, current, swept = fuse.ratings.get("i2t", 0.0), float(at.row(fuse.ref)[I_RMS]), []
    for part in board.parts:
        if part.ref in left:
            continue
        if part.kind == "resistor" and "power" in part.ratings:
            share = float(at.row(part.ref)[I_RMS]) / current
            if melting * share * share * part.value["resistance"] > LET_THROUGH * part.ratings["power"]:
                swept.append(Fault(part.ref, "open"))
        elif part.kind == "pwm_controller":
            share, mode = _controller(board, part, at)
            if share > 1.0:
                swept.append(Fault(part.ref, mode))
    return swept
