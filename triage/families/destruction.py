"""Which parts an operating point destroys, and in which order: the collateral of a fault.

Thresholds are factors on the ratings that a part survives for seconds: common practice, no source; the same that the
reference circuits were made with, so that the two can be compared.
"""

from collections.abc import Callable, Iterable, Mapping

from triage.board.fault import Fault
from triage.board.part import Board, Part
from triage.families.steady import Settled
from triage.physics.transient import I_MEAN, I_RMS, POWER, V_MAX, V_MIN

FUSE_CURRENT = 2.0
RESISTOR_POWER = 10.0
SWITCH_VOLTAGE, SWITCH_POWER = 1.5, 6.0
ZENER_POWER = 4.0
DIODE_CURRENT, DIODE_VOLTAGE = 4.0, 1.5
FIELD_EFFECT_VOLTAGE, FIELD_EFFECT_POWER = 1.1, 4.0
"""A field-effect transistor is lost by its avalanche, soon above its rating."""
LED_CURRENT = 4.0
CAPACITOR_VOLTAGE, REVERSE_VOLTS = 1.5, 3.0
WINDING_LOSS = 4.0
"""Loss of a mains transformer's windings over its rated one at which the thermal fuse in it opens."""
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


def _electrolytic(part: Part, at: Settled) -> tuple[float, str]:
    row = at.row(part.ref)
    return max(_over(max(row[V_MAX], 0.0), part.ratings.get("voltage"), CAPACITOR_VOLTAGE),
               max(-row[V_MIN], 0.0) / REVERSE_VOLTS), "open"


def _capacitor(part: Part, at: Settled) -> tuple[float, str]:
    row = at.row(part.ref)
    return _over(max(abs(row[V_MIN]), abs(row[V_MAX])), part.ratings.get("voltage"), CAPACITOR_VOLTAGE), "short"


RULES: Mapping[str, Callable[[Part, Settled], tuple[float, str]]] = {
    "fuse": _fuse, "fusible_resistor": _resistor, "resistor": _resistor, "bipolar_transistor": _transistor,
    "zener": _zener, "diode": _diode, "led": _led, "electrolytic": _electrolytic, "capacitor": _capacitor,
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


NEAR_RULES: Mapping[str, Callable[[Board, Part, Settled], tuple[float, str]]] = {"thermal_fuse": _thermal_fuse}
"""Rules of parts that a neighbour destroys."""


def destroyed(board: Board, at: Settled, hurt: Iterable[str]) -> Fault | None:
    """The part that this operating point destroys first, leaving out the refs already at fault; None when all survive."""
    left = set(hurt)
    hits = []
    for part in board.parts:
        if part.ref in left or part.kind not in {*RULES, *NEAR_RULES}:
            continue
        near = NEAR_RULES.get(part.kind)
        share, mode = near(board, part, at) if near else RULES[part.kind](part, at)
        if share > 1.0:
            hits.append((part.kind in FAST_KINDS, share, Fault(part.ref, mode)))
    return max(hits)[2] if hits else None
