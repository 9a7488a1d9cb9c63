"""Catalog fields in words and figures as a person reads them."""

from triage.replacement.catalog_part import CatalogPart

UNITS = {
    "V": "V", "A": "A", "W": "W", "ohm": "ohm", "F": "F", "C": "C", "s": "s", "Hz": "Hz", "J": "J", "K": "K", "h": "h",
    "degC": "degC", "percent": "%", "mm": "mm", "Vac": "V", "Vdc": "V", "Vrms": "V",
}
"""Unit at the end of a catalog key -> unit as shown."""

WORDS = {
    "vrrm_V": "repetitive reverse voltage", "vr_dc_V": "reverse voltage", "if_av_A": "average forward current",
    "ifsm_A": "surge current", "trr_max_s": "recovery time", "tj_max_degC": "junction temperature limit",
    "vf_max_V": "forward voltage", "vcbo_V": "collector-base voltage", "vceo_V": "collector-emitter voltage",
    "ic_A": "collector current", "ptot_W": "power", "hfe_min": "current gain band", "ts_max_s": "storage time",
    "vdss_V": "drain-source voltage", "id_A": "drain current", "rds_on_max_ohm": "on resistance", "qg_max_C": "gate charge",
    "vgs_max_V": "gate-source voltage", "vgs_th_max_V": "gate threshold", "c_F": "capacitance", "vr_Vdc": "rated voltage",
    "vr_Vac": "rated ac voltage", "ripple_120Hz_A": "ripple current at 120 Hz", "ripple_100kHz_A": "ripple current at 100 kHz",
    "z_100kHz_20C_ohm": "impedance at 100 kHz", "t_max_degC": "temperature rating", "r_ohm": "resistance",
    "v_lim_V": "voltage limit", "p_W": "power", "kind": "kind of element", "vz_V": "zener voltage",
    "izt_A": "test current", "tol_percent": "tolerance", "ctr_min_percent": "transfer ratio, lowest",
    "ctr_max_percent": "transfer ratio, highest", "viso_Vrms": "isolation voltage", "if_max_A": "LED current",
    "vref_V": "reference voltage", "vka_max_V": "cathode voltage", "ika_max_A": "cathode current",
    "ika_min_A": "least cathode current", "in_A": "rated current", "breaking_A": "breaking capacity",
    "r25_ohm": "resistance at 25 degC",
    "disc_mm": "disc diameter", "imax_A": "continuous current", "v1mA_V": "voltage at 1 mA", "vac_max_V": "ac voltage",
    "energy_J": "pulse energy", "vout_V": "output voltage", "vin_max_V": "input voltage", "iout_A": "output current",
    "dropout_typ_V": "dropout", "vbr_min_V": "breakdown voltage, lowest", "vbr_max_V": "breakdown voltage, highest",
    "ppp_W": "pulse power", "p_steady_W": "steady power", "vr_max_V": "reverse voltage", "safety_class": "safety class",
    "lead_pitch_mm": "lead pitch", "speed": "speed", "case": "body", "standard": "standard", "grade": "grade",
    "polarity": "polarity", "channel": "channel",
}
"""Catalog field -> the words for it on screen and in reports."""


def unit_of(key: str) -> str:
    """The unit at the end of a catalog key, empty when there is none."""
    words = key.split("_")
    if words[-1] == "W" and "K" in words and "per" in words:
        return "K/W"
    return UNITS.get(words[-1], "")


def figure(value: float, unit: str) -> str:
    """A figure of a demand as read aloud, four digits at most: ``0.15 A``, ``4.7 uF``, ``75 ns``."""
    if unit in ("F", "s", "C") and value != 0:
        for scale, letter in ((1.0, ""), (1e-3, "m"), (1e-6, "u"), (1e-9, "n"), (1e-12, "p")):
            if abs(value) >= scale * 0.9999999:
                return f"{value / scale:.4g} {letter}{unit}"
    if unit == "ohm" and abs(value) >= 1e3:
        return f"{value / 1e6:.4g} Mohm" if abs(value) >= 1e6 else f"{value / 1e3:.4g} kohm"
    return f"{value:.4g} {unit}".strip()


def words_of(key: str) -> str:
    """The words for a catalog field."""
    return WORDS.get(key, key.rpartition("_")[0].replace("_", " ") or key)


def fit_of(part: CatalogPart) -> str:
    """What a part is to the holes of the board: ``DO-41, 2.7 x 5.2 mm, leads 0.8 mm, pins E C B``; empty when unknown."""
    numbers, words = part.numbers, [part.text("case")]
    if "body_dia_mm" in numbers and "body_len_mm" in numbers:
        words.append(f"{numbers['body_dia_mm']:g} x {numbers['body_len_mm']:g} mm")
    if "disc_mm" in numbers:
        words.append(f"disc {numbers['disc_mm']:g} mm")
    if "lead_dia_mm" in numbers:
        words.append(f"leads {numbers['lead_dia_mm']:g} mm")
    if "lead_pitch_mm" in numbers:
        words.append(f"pitch {numbers['lead_pitch_mm']:g} mm")
    elif "lead_pitch_min_mm" in numbers:
        words.append(f"holes at least {numbers['lead_pitch_min_mm']:g} mm apart")
    if part.text("pins"):
        words.append(f"pins {part.text('pins')}")
    return ", ".join(word for word in words if word)
