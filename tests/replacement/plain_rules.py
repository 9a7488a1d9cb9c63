"""The hard rules once more, written plainly and apart from the program, to check what it offers.

Nothing of ``triage.replacement`` but the part record is used: fractions, floors and classes are typed here again from the
table of positions of the replacement rules (fractions from memory in the range of MIL-HDBK-338B and MIL-STD-975M; the rest
common practice, no source). A rule returns what is wrong with a part; an empty list: nothing.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from triage.replacement.catalog_part import CatalogPart

MAINS_HIGH = 253.0
MAINS_PEAK = MAINS_HIGH * math.sqrt(2)


@dataclass
class Place:
    """One position as the plain rules see it."""

    stress: Mapping[str, float]
    ratings: Mapping[str, float]
    values: Mapping[str, float]
    old: CatalogPart | None
    wrong: list[str] = field(default_factory=list)

    def old_number(self, *keys: str) -> float | None:
        return next((self.old.numbers[key] for key in keys if self.old and key in self.old.numbers), None)


def _at_least(place: Place, part: CatalogPart, keys: tuple[str, ...], *bounds: float | None) -> None:
    value = next((part.numbers[key] for key in keys if key in part.numbers), None)
    known = [bound for bound in bounds if bound is not None]
    if known and (value is None or abs(value) < max(known) * (1 - 1e-9)):
        place.wrong.append(f"{keys[0]} {value} below {max(known)}")


def _at_most(place: Place, part: CatalogPart, key: str, bound: float | None) -> None:
    value = part.numbers.get(key)
    if bound is not None and (value is None or value > bound * (1 + 1e-9)):
        place.wrong.append(f"{key} {value} above {bound}")


def _within(place: Place, part: CatalogPart, key: str, old: float | None, low: float, high: float) -> None:
    value = part.numbers.get(key)
    if old is None or value is None:
        place.wrong.append(f"{key} unknown")
        return
    ends = sorted((old * (1 - low), old * (1 + high)))
    if not ends[0] - 1e-6 * abs(old) <= value <= ends[1] + 1e-6 * abs(old):
        place.wrong.append(f"{key} {value} off {old}")


def _class(place: Place, part: CatalogPart, *classes: str) -> None:
    if part.part_class not in classes:
        place.wrong.append(f"class {part.part_class}")


def _safety(place: Place, part: CatalogPart, *keys: str) -> None:
    for key in keys:
        if (key in part.numbers or key in part.texts) and (part.confidence == "memory" or key in part.from_memory):
            place.wrong.append(f"{key} from memory")


def _over(place: Place, quantity: str, factor: float) -> float | None:
    value = place.stress.get(quantity)
    return None if value is None else value / factor


def _rating(place: Place, name: str, *keys: str) -> float | None:
    return place.ratings.get(name, place.old_number(*keys))


def _half_wave(place: Place, part: CatalogPart) -> None:
    _class(place, part, "rectifier", "fast_rectifier")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.75), _rating(place, "voltage", "vrrm_V"), 1000.0)
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))


def _bridge_diode(place: Place, part: CatalogPart) -> None:
    _class(place, part, "rectifier", "fast_rectifier")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.5), _rating(place, "voltage", "vrrm_V"), 800.0)
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))


def _bridge(place: Place, part: CatalogPart) -> None:
    _class(place, part, "bridge")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.5), _rating(place, "voltage", "vrrm_V"), 800.0)
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))


def _clamp_diode(place: Place, part: CatalogPart) -> None:
    slow_was_fitted = place.old is not None and place.old.part_class == "rectifier"
    _class(place, part, "fast_rectifier", *(["rectifier"] if slow_was_fitted else []))
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.8), _rating(place, "voltage", "vrrm_V"))
    if not slow_was_fitted:
        _at_most(place, part, "trr_max_s", place.old_number("trr_max_s") or 500e-9)


def _bipolar_switch(place: Place, part: CatalogPart) -> None:
    _class(place, part, "bipolar_transistor")
    if part.texts.get("polarity") != "NPN":
        place.wrong.append("polarity")
    _at_least(place, part, ("vcbo_V",), _over(place, "peak_voltage", 0.8), _rating(place, "voltage", "vcbo_V"))
    _at_least(place, part, ("vceo_V",), MAINS_PEAK, _rating(place, "collector_emitter_voltage", "vceo_V"))
    _at_least(place, part, ("ic_A",), _over(place, "peak_current", 0.6), _rating(place, "current", "ic_A"))
    _at_least(place, part, ("ptot_W",), _over(place, "power", 0.5))
    gain = place.values.get("gain")
    if gain is not None and (part.numbers["hfe_min"] > 1.3 * gain or part.numbers["hfe_max"] < 0.7 * gain):
        place.wrong.append("gain")


def _mosfet_switch(place: Place, part: CatalogPart) -> None:
    _class(place, part, "mosfet")
    if part.texts.get("channel") != "N":
        place.wrong.append("channel")
    _at_least(place, part, ("vdss_V",), _over(place, "peak_voltage", 0.8), _rating(place, "voltage", "vdss_V"))
    _at_least(place, part, ("id_A",), _over(place, "peak_current", 0.5), _rating(place, "current", "id_A"))
    _at_most(place, part, "rds_on_max_ohm", place.old_number("rds_on_max_ohm"))
    key = next((key for key in ("qg_max_C", "qg_typ_C") if place.old_number(key) is not None), "")
    if key:
        _at_most(place, part, key, 1.3 * (place.old_number(key) or 0.0))
    _at_least(place, part, ("vgs_max_V",), place.old_number("vgs_max_V"), 20.0)


def _schottky_output(place: Place, part: CatalogPart) -> None:
    _class(place, part, "schottky")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.8), _rating(place, "voltage", "vrrm_V"))
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))
    old = place.old_number("vf_max_V")
    _at_most(place, part, "vf_max_V", None if old is None else old + 0.05)


def _pn_output(place: Place, part: CatalogPart) -> None:
    _class(place, part, "schottky", "fast_rectifier")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.7))
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))
    if part.texts.get("speed") not in ("ultrafast", "superfast", "schottky"):
        place.wrong.append("speed")


def _aux_rectifier(place: Place, part: CatalogPart) -> None:
    _class(place, part, "small_signal_diode", "fast_rectifier", "schottky")
    keys = ("vr_dc_V", "vrrm_V")
    _at_least(place, part, keys, _over(place, "reverse_voltage", 0.7), _rating(place, "voltage", *keys))
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.5), _rating(place, "current", "if_av_A"))


def _zener(place: Place, part: CatalogPart) -> None:
    _class(place, part, "zener")
    _within(place, part, "vz_V", place.values.get("zener_voltage", place.old_number("vz_V")), 0.02, 0.02)
    _at_least(place, part, ("ptot_W",), _over(place, "power", 0.5), _rating(place, "power", "ptot_W"))
    current = place.stress.get("average_current")
    if current is not None:
        bounds = [5 * current] + ([old] if (old := place.old_number("izt_A")) is not None else [])
        _at_most(place, part, "izt_A", max(bounds))


def _optocoupler(place: Place, part: CatalogPart) -> None:
    _class(place, part, "optocoupler")
    _at_least(place, part, ("viso_Vrms",), 5000.0, place.old_number("viso_Vrms"))
    _at_least(place, part, ("ctr_min_percent",), place.old_number("ctr_min_percent"))
    old = place.old_number("ctr_max_percent")
    _at_most(place, part, "ctr_max_percent", None if old is None else 2 * old)
    _at_least(place, part, ("vceo_V",), _over(place, "peak_voltage", 0.7), _rating(place, "voltage", "vceo_V"))
    if place.old is None or part.texts.get("case") != place.old.texts.get("case"):
        place.wrong.append("case")
    _safety(place, part, "viso_Vrms", "ctr_min_percent", "ctr_max_percent", "vceo_V", "if_max_A", "case")


def _reference(place: Place, part: CatalogPart) -> None:
    _class(place, part, "shunt_reference")
    _within(place, part, "vref_V", place.old_number("vref_V") or place.values.get("reference_voltage"), 0.01, 0.01)
    _at_least(place, part, ("vka_max_V",), _over(place, "peak_voltage", 0.7), _rating(place, "voltage", "vka_max_V"))


def _fuse(place: Place, part: CatalogPart) -> None:
    _class(place, part, "fuse")
    _within(place, part, "in_A", place.ratings.get("current", place.old_number("in_A")), 0.001, 0.001)
    for key in ("speed", "case", "standard"):
        if place.old is None or part.texts.get(key) != place.old.texts.get(key):
            place.wrong.append(key)
    _at_least(place, part, ("breaking_A",), place.old_number("breaking_A"))
    _safety(place, part, "in_A", "vr_Vac", "speed", "case", "standard", "breaking_A")


def _fusible(place: Place, part: CatalogPart) -> None:
    _class(place, part, "fusible_resistor")
    _within(place, part, "r_ohm", place.values.get("resistance"), 0.01, 0.01)
    _within(place, part, "p_W", place.ratings.get("power"), 0.001, 0.001)
    _at_least(place, part, ("v_lim_V",), MAINS_HIGH)
    _safety(place, part, "r_ohm", "p_W", "v_lim_V")


def _varistor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "varistor")
    _within(place, part, "v1mA_V", place.old_number("v1mA_V"), 0.03, 0.03)
    _at_least(place, part, ("disc_mm",), place.old_number("disc_mm"))
    _at_least(place, part, ("energy_J",), place.old_number("energy_J"))
    _safety(place, part, "v1mA_V", "vac_max_V", "disc_mm", "energy_J")


def _ntc(place: Place, part: CatalogPart) -> None:
    _class(place, part, "ntc")
    cold = place.values.get("cold_resistance", place.values.get("resistance", place.old_number("r25_ohm")))
    _within(place, part, "r25_ohm", cold, 0.2, 0.2)
    _at_least(place, part, ("disc_mm",), place.old_number("disc_mm"))
    _at_least(place, part, ("imax_A",), _over(place, "rms_current", 0.8), _rating(place, "current", "imax_A"))
    _safety(place, part, "r25_ohm", "disc_mm", "imax_A")


def _x_capacitor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "x_capacitor")
    _within(place, part, "c_F", place.values.get("capacitance", place.old_number("c_F")), 0.2, 0.2)
    _at_least(place, part, ("vr_Vac",), MAINS_HIGH)
    _safety(place, part, "c_F", "vr_Vac", "safety_class", "lead_pitch_mm")


def _dropper_capacitor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "x_capacitor")
    _within(place, part, "c_F", place.values.get("capacitance", place.old_number("c_F")), 0.05, 0.1)
    _at_least(place, part, ("vr_Vac",), MAINS_HIGH)
    if part.texts.get("safety_class") not in ("X1", "X2"):
        place.wrong.append("safety class")
    _safety(place, part, "c_F", "vr_Vac", "safety_class", "lead_pitch_mm")


def _low_rectifier(place: Place, part: CatalogPart) -> None:
    _class(place, part, "rectifier", "fast_rectifier")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.7), _over(place, "peak_voltage", 0.7), 50.0)
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))


def _fast_high_voltage(place: Place, part: CatalogPart) -> None:
    _class(place, part, "fast_rectifier")
    _at_least(place, part, ("vrrm_V",), _over(place, "reverse_voltage", 0.75), _over(place, "peak_voltage", 0.75), 600.0)
    _at_least(place, part, ("if_av_A",), _over(place, "average_current", 0.6), _rating(place, "current", "if_av_A"))
    if part.texts.get("speed") not in ("ultrafast", "superfast"):
        place.wrong.append("speed")


def _inrush_resistor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "fusible_resistor")
    _within(place, part, "r_ohm", place.values.get("resistance", place.old_number("r_ohm")), 0.1, 0.1)


def _shunt_zener(place: Place, part: CatalogPart) -> None:
    _class(place, part, "zener")
    _within(place, part, "vz_V", place.values.get("zener_voltage", place.old_number("vz_V")), 0.03, 0.03)
    _at_least(place, part, ("ptot_W",), _over(place, "power", 0.5), _rating(place, "power", "ptot_W"))


def _y1_capacitor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "y_capacitor")
    _within(place, part, "c_F", place.values.get("capacitance", place.old_number("c_F")), 0.2, 0.0)
    if part.texts.get("safety_class") != "Y1":
        place.wrong.append("safety class")
    _safety(place, part, "c_F", "vr_Vac", "safety_class")


def _discharge(place: Place, part: CatalogPart) -> None:
    _class(place, part, "resistor")
    _within(place, part, "r_ohm", place.values.get("resistance"), 0.05, 0.0)
    _at_least(place, part, ("v_lim_V",), MAINS_PEAK / 0.75)
    _at_least(place, part, ("p_W",), _over(place, "power", 0.5), place.ratings.get("power"))
    _safety(place, part, "r_ohm", "v_lim_V", "p_W")


def _bulk(place: Place, part: CatalogPart) -> None:
    _class(place, part, "electrolytic")
    _within(place, part, "c_F", place.values.get("capacitance"), 0.0, 0.5)
    _at_least(place, part, ("vr_Vdc",), 400.0, _over(place, "peak_voltage", 0.95), place.ratings.get("voltage"))
    _at_least(place, part, ("ripple_120Hz_A",), _over(place, "ripple_current", 0.8), place.ratings.get("ripple_current"))
    _at_least(place, part, ("t_max_degC",), 105.0)


def _output_capacitor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "electrolytic")
    _within(place, part, "c_F", place.values.get("capacitance"), 0.2, 0.5)
    _at_least(place, part, ("vr_Vdc",), _over(place, "peak_voltage", 0.8), place.ratings.get("voltage"))
    _at_least(place, part, ("ripple_100kHz_A",), _over(place, "ripple_current", 0.8), place.ratings.get("ripple_current"))
    if part.texts.get("grade") not in ("low impedance", "very low ESR"):
        place.wrong.append("grade")


def _resistor(low: float, high: float, factor: float = 0.5) -> Callable[[Place, CatalogPart], None]:
    def rule(place: Place, part: CatalogPart) -> None:
        _class(place, part, "resistor")
        _within(place, part, "r_ohm", place.values.get("resistance"), low, high)
        _at_least(place, part, ("p_W",), _over(place, "power", factor), place.ratings.get("power"))
        if part.texts.get("kind") == "wirewound":
            place.wrong.append("wire-wound")

    return rule


def _startup(place: Place, part: CatalogPart) -> None:
    _resistor(0.1, 0.1)(place, part)
    _at_least(place, part, ("v_lim_V",), _over(place, "peak_voltage", 0.75), place.ratings.get("voltage"))
    if part.texts.get("kind") == "carbon film":
        place.wrong.append("carbon film")


def _hv_capacitor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "ceramic_capacitor", "film_capacitor")
    _within(place, part, "c_F", place.values.get("capacitance"), 0.2, 0.2)
    _at_least(place, part, ("vr_Vdc",), _over(place, "peak_voltage", 0.6), place.ratings.get("voltage"))


def _regulator(place: Place, part: CatalogPart) -> None:
    _class(place, part, "linear_regulator")
    _within(place, part, "vout_V", place.values.get("output_voltage", place.old_number("vout_V")), 0.01, 0.01)
    _at_least(place, part, ("vin_max_V",), _over(place, "peak_voltage", 0.8))
    _at_least(place, part, ("iout_A",), _over(place, "average_current", 0.8))


def _small_transistor(place: Place, part: CatalogPart) -> None:
    _class(place, part, "bipolar_transistor")
    if place.old is None or part.texts.get("polarity") != place.old.texts.get("polarity"):
        place.wrong.append("polarity")
    _at_least(place, part, ("vceo_V",), _over(place, "peak_voltage", 0.7), place.old_number("vceo_V"))
    _at_least(place, part, ("ic_A",), _over(place, "peak_current", 0.5), place.old_number("ic_A"))


def _nothing(place: Place, part: CatalogPart) -> None:
    place.wrong.append("only the very same part")


RULES: dict[str, Callable[[Place, CatalogPart], None]] = {
    "mains rectifier": _half_wave, "bridge diode": _bridge_diode, "mains bridge": _bridge, "clamp diode": _clamp_diode,
    "main switch": _bipolar_switch, "power switch": _mosfet_switch, "output rectifier": _schottky_output,
    "output rectifier, pn": _pn_output, "auxiliary rectifier": _aux_rectifier, "regulation zener": _zener,
    "optocoupler": _optocoupler, "shunt reference": _reference, "mains fuse": _fuse, "fusible input resistor": _fusible,
    "free-wheeling diode": _fast_high_voltage, "inrush resistor": _inrush_resistor, "integrated switch": _nothing,
    "dropper capacitor": _dropper_capacitor, "secondary rectifier": _low_rectifier, "shunt zener": _shunt_zener,
    "bleeder of the dropper capacitor": _discharge, "mains cord": _nothing, "common-mode choke": _nothing,
    "varistor": _varistor, "inrush NTC": _ntc, "X2 capacitor": _x_capacitor, "Y1 capacitor": _y1_capacitor,
    "X discharge resistor": _discharge, "bulk capacitor": _bulk, "output capacitor": _output_capacitor,
    "startup resistor": _startup, "base drive resistor": _resistor(0.05, 0.05), "clamp resistor": _resistor(0.2, 0.2),
    "current sense resistor": _resistor(0.02, 0.02), "clamp capacitor": _hv_capacitor, "three-terminal regulator": _regulator,
    "turn-off transistor": _small_transistor, "flyback transformer": _nothing, "current-mode PWM controller": _nothing,
}
"""Role -> its rules; a role after a comma is the same role with another kind of dead part."""


def violations(role: str, place: Place, part: CatalogPart) -> list[str]:
    """What is wrong with a part in a place."""
    place.wrong.clear()
    RULES[role](place, part)
    return list(place.wrong)
