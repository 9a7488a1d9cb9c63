"""The factors of the published failure-rate models: temperature, stress, size, screening, surroundings.

``failure_rate`` multiplies them to the rate of a part. Kept apart so that each can be held against the
printed tables. Temperatures are in degC with the handbook's own zero of 273 K; stress is applied over rated.

Source of all: MIL-HDBK-217F, Reliability Prediction of Electronic Equipment, with Notice 2 (28 Feb 1995).
"""

import tomllib
from pathlib import Path
from typing import Any

import numpy as np

from triage.physics.values import Values

TABLE: dict[str, Any] = tomllib.loads(Path(__file__).with_name("failure_rate.toml").read_text("utf-8"))
"""Base rates, slopes and factor tables, as in failure_rate.toml."""


def _inverse_kelvin(temperature: Values) -> Values:
    """1/T - 1/T0 [1/K] with the handbook's rounded zero of temperature."""
    return 1.0 / (np.asarray(temperature, float) + TABLE["kelvin_offset"]) - 1.0 / TABLE["reference_K"]


def environment_factor(part_class: str, code: str = "GB") -> float:
    """Factor of where the part works.

    part_class [key]: row of the environment table: semiconductor, capacitor, resistor, inductive ...
    code [key]: environment code; GB ground benign (indoors), GM ground mobile (carried in a bag).

    Returns [-]: pi_E. Raises ValueError for an unknown code, KeyError for an unknown class.
    Source: MIL-HDBK-217F Notice 2, table 3-2 and the pi_E tables of the part sections.

    >>> environment_factor("capacitor", "GF")
    10.0
    """
    return float(TABLE["environment"][part_class][TABLE["environment"]["codes"].index(code)])


def quality_factor(part_class: str, quality: str | Values) -> Values:
    """Factor of the screening of the part.

    part_class [key]: row of the quality table: semiconductor, microcircuit, resistor, capacitor ...
    quality [key]: level of the table, such as plastic or commercial; a number is taken as the factor itself.

    Returns [-]: pi_Q. Raises KeyError for an unknown class or level.
    Source: MIL-HDBK-217F Notice 2, pi_Q tables.

    >>> quality_factor("semiconductor", "plastic")
    8.0
    """
    return float(TABLE["quality"][part_class][quality]) if isinstance(quality, str) else quality


def slope_temperature_factor(temperature: Values, slope: float) -> Values:
    """Temperature factor of semiconductors, 1 at 25 degC.

    temperature [degC]: junction temperature.
    slope [K]: constant of the part class, 3091 for most diodes, 2114 for bipolar transistors.

    Returns [-]: pi_T = exp(-slope (1/(T + 273) - 1/298)).
    Valid: up to 175 degC, where the printed tables end.
    Source: MIL-HDBK-217F Notice 2, sections 6.1 to 6.11.

    >>> round(float(slope_temperature_factor(100.0, 3091.0)), 1)
    8.0
    """
    return np.exp(-slope * _inverse_kelvin(temperature))


def arrhenius_factor(temperature: Values, activation: float) -> Values:
    """Temperature factor of passive parts and microcircuits, 1 at 25 degC.

    temperature [degC]: temperature of the part.
    activation [eV]: activation energy; 0 makes the factor 1.

    Returns [-]: pi_T = exp(-(Ea/k) (1/(T + 273) - 1/298)).
    Valid: up to 150 degC, where the printed tables end.
    Source: MIL-HDBK-217F Notice 2, sections 9.1, 10.1, 11.1.

    >>> round(float(arrhenius_factor(100.0, 0.15)), 1)
    3.2
    """
    return np.exp(-activation / TABLE["boltzmann_eV_per_K"] * _inverse_kelvin(temperature))


def capacitor_stress(dc: Values, ac_rms: Values, rated: Values) -> Values:
    """Voltage stress ratio of a capacitor.

    dc [V]: direct voltage across it.
    ac_rms [V]: superposed alternating voltage.
    rated [V]: rated direct voltage.

    Returns [-]: S = (V_dc + sqrt(2) V_ac) / V_rated.
    Valid: S up to 1; beyond, the part is outside its rating and outside the model.
    Source: MIL-HDBK-217F Notice 2, section 10.1.

    >>> round(float(capacitor_stress(200.0, 50.0, 400.0)), 2)
    0.68
    """
    return (dc + np.sqrt(2.0) * ac_rms) / rated


def capacitance_factor(capacitance: Values, exponent: float) -> Values:
    """Factor of the size of a capacitor, 1 at 1 uF.

    capacitance [F]: capacitance.
    exponent [-]: 0.09 for film and ceramic, 0.23 for electrolytic types.

    Returns [-]: pi_C.
    Source: MIL-HDBK-217F Notice 2, section 10.1.

    >>> round(float(capacitance_factor(0.015e-6, 0.09)), 2)
    0.69
    """
    return (np.asarray(capacitance, float) * 1e6) ** exponent


def capacitor_voltage_factor(stress: Values, divisor: float = 0.6, exponent: float = 5.0) -> Values:
    """Factor of the voltage stress of a capacitor.

    stress [-]: applied over rated voltage.
    divisor [-]: constant of the style.
    exponent [-]: constant of the style, 5 for aluminium electrolytic and film, 3 for ceramic.

    Returns [-]: pi_V = (S/divisor)^exponent + 1.
    Valid: S up to 1.
    Source: MIL-HDBK-217F Notice 2, section 10.1.

    >>> round(float(capacitor_voltage_factor(0.68)), 1)
    2.9
    """
    return (np.asarray(stress, float) / divisor) ** exponent + 1.0


def series_resistance_factor(ohm_per_volt: Values) -> Values:
    """Factor of a solid tantalum capacitor for the resistance of its circuit.

    ohm_per_volt [ohm/V]: circuit resistance over applied voltage.

    Returns [-]: pi_SR, from 3.3 (stiff source) down to 0.66.
    Valid: solid tantalum styles only; 1 for every other style.
    Source: MIL-HDBK-217F Notice 2, section 10.1.

    >>> float(series_resistance_factor(0.15))
    2.7
    """
    rows = sorted(TABLE["tantalum_series_resistance"], key=lambda row: row["above_ohm_per_volt"])
    edges = np.array([row["above_ohm_per_volt"] for row in rows])
    factors = np.array([row["factor"] for row in rows])
    return factors[np.clip(np.searchsorted(edges, ohm_per_volt, side="left") - 1, 0, len(rows) - 1)]


def diode_stress_factor(stress: Values) -> Values:
    """Factor of the reverse voltage of a diode.

    stress [-]: applied reverse voltage over rated.

    Returns [-]: pi_S = S^2.43, 0.054 at and below S = 0.3.
    Source: MIL-HDBK-217F Notice 2, section 6.1.

    >>> round(float(diode_stress_factor(0.7)), 2)
    0.42
    """
    stress = np.asarray(stress, float)
    return np.where(stress <= 0.3, 0.054, stress ** 2.43)


def bipolar_power_factor(power_rating: Values) -> Values:
    """Factor of the rated power of a bipolar transistor, 1 at 1 W.

    power_rating [W]: rated dissipation.

    Returns [-]: pi_R = P^0.37, 0.43 at and below 0.1 W.
    Source: MIL-HDBK-217F Notice 2, section 6.3.

    >>> round(float(bipolar_power_factor(50.0)), 1)
    4.3
    """
    power = np.asarray(power_rating, float)
    return np.where(power <= 0.1, 0.43, np.maximum(power, 1e-9) ** 0.37)


def bipolar_stress_factor(stress: Values) -> Values:
    """Factor of the collector voltage of a bipolar transistor.

    stress [-]: applied collector-emitter voltage over rated V_CEO.

    Returns [-]: pi_S = 0.045 exp(3.1 S).
    Valid: S above 0 and up to 1.
    Source: MIL-HDBK-217F Notice 2, section 6.3.

    >>> round(float(bipolar_stress_factor(0.8)), 2)
    0.54
    """
    return 0.045 * np.exp(3.1 * np.asarray(stress, float))


def thyristor_current_factor(rms_current_rating: Values) -> Values:
    """Factor of the rated current of a thyristor, 1 at 1 A.

    rms_current_rating [A]: rated rms forward current.

    Returns [-]: pi_R = I^0.40.
    Source: MIL-HDBK-217F Notice 2, section 6.10.

    >>> round(float(thyristor_current_factor(10.0)), 1)
    2.5
    """
    return np.asarray(rms_current_rating, float) ** 0.40


def thyristor_stress_factor(stress: Values) -> Values:
    """Factor of the blocking voltage of a thyristor.

    stress [-]: applied blocking voltage over rated.

    Returns [-]: pi_S = S^1.9, 0.1 at and below S = 0.3.
    Source: MIL-HDBK-217F Notice 2, section 6.10.

    >>> round(float(thyristor_stress_factor(0.6)), 2)
    0.38
    """
    stress = np.asarray(stress, float)
    return np.where(stress <= 0.3, 0.1, stress ** 1.9)


def microcircuit_temperature_factor(temperature: Values, technology: str = "linear") -> Values:
    """Temperature factor of a microcircuit, 0.1 at 25 degC.

    temperature [degC]: junction temperature.
    technology [key]: linear, bipolar_digital or mos_digital.

    Returns [-]: pi_T.
    Source: MIL-HDBK-217F Notice 2, section 5.8; the example is section 5.13.

    >>> round(float(microcircuit_temperature_factor(50.0, "mos_digital")), 2)
    0.29
    """
    return 0.1 * arrhenius_factor(temperature, TABLE["microcircuit"]["activation_eV"][technology])


def microcircuit_package_factor(pins: Values, package: str = "plastic") -> Values:
    """Package failure rate C2 of a microcircuit.

    pins [-]: number of working pins.
    package [key]: plastic (not hermetic) or glass_seal_dip.

    Returns [1e-6/h]: C2, to be multiplied by the environment factor.
    Source: MIL-HDBK-217F Notice 2, section 5.9; the example is section 5.13.

    >>> round(float(microcircuit_package_factor(24.0, "glass_seal_dip")), 3)
    0.011
    """
    row = TABLE["microcircuit"]["package"][package]
    return row["coefficient"] * np.asarray(pins, float) ** row["exponent"]


def learning_factor(years: Values) -> Values:
    """Factor of a microcircuit type that is new in production.

    years [y]: years in production.

    Returns [-]: pi_L = 0.01 exp(5.35 - 0.35 Y), from 2 when new to 1 after two years.
    Source: MIL-HDBK-217F Notice 2, section 5.10.

    >>> round(float(learning_factor(1.0)), 1)
    1.5
    """
    years = np.asarray(years, float)
    return np.select([years <= 0.1, years >= 2.0], [2.0, 1.0], 0.01 * np.exp(5.35 - 0.35 * years))


def resistor_power_factor(power_rating: Values) -> Values:
    """Factor of the rated power of a resistor, 1 at 1 W.

    power_rating [W]: rated dissipation.

    Returns [-]: pi_P = P^0.39.
    Source: MIL-HDBK-217F Notice 2, section 9.1.

    >>> round(float(resistor_power_factor(0.25)), 2)
    0.58
    """
    return np.asarray(power_rating, float) ** 0.39


def resistor_stress_factor(stress: Values, style: str = "RL") -> Values:
    """Factor of the power stress of a resistor.

    stress [-]: actual over rated power.
    style [key]: row of the resistor table; the style decides between the two columns of the handbook.

    Returns [-]: pi_S = a exp(b S).
    Source: MIL-HDBK-217F Notice 2, section 9.1.

    >>> round(float(resistor_stress_factor(0.5)), 1)
    1.2
    """
    scale, slope = TABLE["resistor"][style]["stress"]
    return scale * np.exp(slope * np.asarray(stress, float))


def mating_factor(matings_per_1000h: Values) -> Values:
    """Factor of how often a connector is plugged.

    matings_per_1000h [-]: plug and unplug cycles in 1000 h.

    Returns [-]: pi_K, from 1 (left plugged) to 4.
    Source: MIL-HDBK-217F Notice 2, section 15.1.

    >>> float(mating_factor(40.0))
    3.0
    """
    row = TABLE["connector"]
    return np.array(row["mating_factor"])[np.searchsorted(row["matings_per_1000h_up_to"], matings_per_1000h)]
