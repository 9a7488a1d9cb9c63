"""How long an electrolytic capacitor lasts, and what its ESR and leakage should be.

Wear-out: electrolyte leaves through the seal, so capacitance falls and ESR rises, the sooner the hotter the
core is. Life is that of the 10 kelvin rule with corrections for ripple heat and working voltage; it is no
promise, as makers cap it at about 15 years. Chance failures are in ``failure_rate``. Temperatures in degC.
"""

import tomllib
from pathlib import Path
from typing import Any

import numpy as np

from triage.physics.values import Values

TABLE: dict[str, Any] = tomllib.loads(Path(__file__).with_name("electrolytic_life.toml").read_text("utf-8"))
"""Ripple multipliers and loss tangents, as in electrolytic_life.toml."""

LONGEST_CLAIM = 131_400.0
"""15 years [h]: beyond it the rubber seal decides (makers' notes, from memory)."""


def temperature_factor(temperature: Values, rated_temperature: Values = 105.0) -> Values:
    """How many times longer the part lives at a lower temperature.

    temperature [degC]: temperature of the part.
    rated_temperature [degC]: upper category temperature.

    Returns [-]: 2 for each 10 K below the rated temperature.
    Valid: about 40 degC to the rated temperature.
    Source: Cosel, technical information A0057 / 100; A. Albertsen, Electrolytic Capacitor Lifetime Estimation
        (Jianghai).

    >>> float(1000.0 * temperature_factor(45.0))
    64000.0
    """
    return np.exp2((rated_temperature - np.asarray(temperature, float)) / 10.0)


def ripple_factor(ripple: Values, rated_ripple: Values, rated_rise: Values = 5.0,
                  rated_temperature: Values = 105.0) -> Values:
    """How ripple below or above the rated one lengthens or shortens the life.

    ripple [A]: applied ripple current, rms, at the frequency of the rating.
    rated_ripple [A]: rated ripple current, rms.
    rated_rise [K]: rise of the core at rated ripple; 5 K for 105 degC parts, up to 10 K for 85 degC parts.
    rated_temperature [degC]: upper category temperature.

    Returns [-]: Ki^((1 - (I/Ir)^2) rise / 10), Ki = 2, and 4 for overloaded 105 degC parts.
    Source: A. Albertsen, Electrolytic Capacitor Lifetime Estimation (Jianghai), ripple factor.

    >>> round(float(ripple_factor(0.5, 1.0)), 4)
    1.2968
    """
    load = (np.asarray(ripple, float) / rated_ripple) ** 2
    base = np.where((load > 1.0) & (np.asarray(rated_temperature, float) > 95.0), 4.0, 2.0)
    return base ** ((1.0 - load) * rated_rise / 10.0)


def voltage_factor(voltage: Values, rated_voltage: Values, exponent: Values = 2.5) -> Values:
    """How working below the rated voltage lengthens the life.

    voltage [V]: direct voltage and ripple peak.
    rated_voltage [V]: rated voltage.
    exponent [-]: 2.5; 0 for makers of small radial parts who grant no gain.

    Returns [-]: (U/Ur)^-exponent; no more gain below 0.6 of the rated voltage.
    Source: A. Albertsen, Electrolytic Capacitor Lifetime Estimation (Jianghai), voltage factor.

    >>> round(float(voltage_factor(325.0, 400.0)), 4)
    1.6805
    """
    return np.maximum(np.asarray(voltage, float) / rated_voltage, 0.6) ** -exponent


def life(rated_life: Values, temperature: Values, ripple: Values, rated_ripple: Values,
         voltage: Values | None = None, rated_voltage: Values | None = None,
         rated_temperature: Values = 105.0, rated_rise: Values = 5.0) -> Values:
    """Expected life to the end-of-life limits, from ambient, ripple and voltage.

    rated_life [h]: endurance at rated temperature, ripple and voltage.
    temperature [degC]: ambient of the can.
    ripple [A]: applied ripple current, rms, at the frequency of the rating.
    rated_ripple [A]: rated ripple current, rms.
    voltage [V]: working voltage; left out, no gain is counted for it.
    rated_voltage [V]: rated voltage.
    rated_temperature [degC]: upper category temperature.
    rated_rise [K]: rise of the core at rated ripple.

    Returns [h]: the life, not capped (see LONGEST_CLAIM).
    Source: A. Albertsen, Electrolytic Capacitor Lifetime Estimation (Jianghai).

    >>> round(float(life(1000.0, 75.0, 0.5, 1.0, 6.3, 10.0)))
    32933
    """
    gain = 1.0 if voltage is None or rated_voltage is None else voltage_factor(voltage, rated_voltage)
    return (rated_life * temperature_factor(temperature, rated_temperature)
            * ripple_factor(ripple, rated_ripple, rated_rise, rated_temperature) * gain)


def life_rubycon(base_life: Values, temperature: Values, ripple: Values, rated_ripple: Values,
                 rated_temperature: Values = 105.0, rated_rise: Values = 5.0) -> Values:
    """Expected life by the formula in which a hotter core ages faster than the 10 kelvin rule.

    base_life [h]: endurance at rated temperature and ripple.
    temperature [degC]: ambient of the can.
    ripple [A]: applied ripple current, rms, at the frequency of the rating.
    rated_ripple [A]: rated ripple current, rms.
    rated_temperature [degC]: upper category temperature.
    rated_rise [K]: rise of the core at rated ripple.

    Returns [h]: L0 2^((T0 - Ta)/10) 2^(rise0/(10 - rise0/4) - rise/(10 - rise/4)).
    Valid: rise of the core below 40 K, far above any allowed rise.
    Source: Rubycon, engineering division, Lifetime calculation formula of aluminum electrolytic capacitors.

    >>> round(float(life_rubycon(5000.0, 55.0, 0.6, 1.0)))
    208640
    """
    rise = core_rise_by_rating(ripple, rated_ripple, rated_rise)
    return (base_life * temperature_factor(temperature, rated_temperature)
            * np.exp2(rated_rise / (10.0 - 0.25 * rated_rise) - rise / (10.0 - 0.25 * rise)))


def life_by_core(rated_life: Values, core_temperature: Values, rated_temperature: Values = 105.0,
                 rated_rise: Values = 5.0) -> Values:
    """Expected life from the temperature of the core.

    rated_life [h]: endurance at rated temperature and ripple.
    core_temperature [degC]: temperature inside, see core_temperature.
    rated_temperature [degC]: upper category temperature.
    rated_rise [K]: rise of the core at rated ripple.

    Returns [h]: the 10 kelvin rule on the core.
    Source: common practice, no source beyond the rule itself.

    >>> round(float(life_by_core(2000.0, 61.8)))
    56493
    """
    return rated_life * temperature_factor(core_temperature, rated_temperature + rated_rise)


def mixed_life(hours: Values, lives: Values) -> Values:
    """Life under a duty of several temperatures.

    hours [h]: hours of each condition in one cycle; last axis.
    lives [h]: life at each condition alone.

    Returns [h]: sum of hours over sum of shares of life used.
    Source: Cosel, technical information A0057 / 100.

    >>> round(float(mixed_life(np.array([8.0, 8.0, 8.0]), np.array([64e3, 32e3, 16e3]))))
    27429
    """
    return np.sum(hours, axis=-1) / np.sum(np.asarray(hours, float) / lives, axis=-1)


def equivalent_temperature(rated_life: Values, life_reached: Values,
                           rated_temperature: Values = 105.0) -> Values:
    """The steady temperature that would give a life.

    rated_life [h]: endurance at rated temperature.
    life_reached [h]: the life in question.
    rated_temperature [degC]: upper category temperature.

    Returns [degC]: T0 - 10 log2(L/L0).
    Source: Cosel, technical information A0057 / 100.

    >>> round(float(equivalent_temperature(1000.0, 27428.6)), 1)
    57.2
    """
    return rated_temperature - 10.0 * np.log2(np.asarray(life_reached, float) / rated_life)


def core_rise_by_rating(ripple: Values, rated_ripple: Values, rated_rise: Values = 5.0) -> Values:
    """Rise of the core above ambient, from the rating.

    ripple [A]: applied ripple current, rms.
    rated_ripple [A]: rated ripple current, rms.
    rated_rise [K]: rise at rated ripple.

    Returns [K]: rise (I/Ir)^2.
    Source: Rubycon, engineering division, Lifetime calculation formula of aluminum electrolytic capacitors.

    >>> round(float(core_rise_by_rating(0.6, 1.0)), 2)
    1.8
    """
    return rated_rise * (np.asarray(ripple, float) / rated_ripple) ** 2


def core_temperature(ambient: Values, ripple: Values, esr: Values, thermal_resistance: Values) -> Values:
    """Temperature inside the capacitor from its ESR.

    ambient [degC]: ambient of the can.
    ripple [A]: ripple current, rms.
    esr [ohm]: series resistance at that frequency.
    thermal_resistance [K/W]: core to ambient.

    Returns [degC]: ambient + I^2 ESR Rth.
    Source: common practice, makers' technical notes.

    >>> round(core_temperature(60.0, 0.5, 0.12, 60.0), 2)
    61.8
    """
    return ambient + ripple ** 2 * esr * thermal_resistance


def ripple_multiplier(series: str, frequency: Values) -> Values:
    """Allowed ripple at a frequency over that at the rating frequency.

    series [key]: high_voltage, low_impedance_small, low_impedance_large or general_10V ... general_100V.
    frequency [Hz]: frequency of the ripple.

    Returns [-]: interpolated over the logarithm of frequency, flat outside the table.
    Source: the ``source`` of the table in electrolytic_life.toml.

    >>> float(ripple_multiplier("general_25V", 1000.0))
    1.2
    """
    row = TABLE["ripple_multiplier"][series]
    return np.interp(np.log(frequency), np.log(row["frequency_Hz"]), row["factor"])


def equivalent_ripple(currents: Values, multipliers: Values) -> Values:
    """One ripple current at the rating frequency that heats as several do together.

    currents [A]: rms current of each frequency; last axis.
    multipliers [-]: ripple multiplier of each frequency.

    Returns [A]: sqrt(sum((I/k)^2)).
    Source: common practice, makers' technical notes.

    >>> round(float(equivalent_ripple(np.array([0.050, 0.120]), np.array([0.95, 1.48]))), 4)
    0.0967
    """
    return np.sqrt(np.sum((np.asarray(currents, float) / multipliers) ** 2, axis=-1))


def highest_loss_tangent(rated_voltage: Values, capacitance: Values) -> Values:
    """Highest loss tangent that a good new part may have.

    rated_voltage [V]: rated voltage.
    capacitance [F]: marked capacitance.

    Returns [-]: at 120 Hz and 20 degC; the entry of the next lower listed rated voltage.
    Source: RGA series data sheet, general purpose 105 degC.

    >>> float(highest_loss_tangent(16.0, 2200e-6))
    0.184
    """
    row = TABLE["loss_tangent"]
    index = np.clip(np.searchsorted(row["rated_V"], rated_voltage, side="right") - 1, 0, None)
    extra = 0.02 * np.maximum(np.asarray(capacitance, float) * 1e6 - 1000.0, 0.0) / 1000.0
    return np.asarray(row["highest"])[index] + extra


def esr_from_loss_tangent(loss_tangent: Values, capacitance: Values, frequency: Values = 120.0) -> Values:
    """Series resistance that a loss tangent stands for.

    loss_tangent [-]: tan delta.
    capacitance [F]: capacitance.
    frequency [Hz]: frequency at which it was measured.

    Returns [ohm]: tan delta / (2 pi f C).
    Source: definition of the loss tangent.

    >>> round(float(esr_from_loss_tangent(0.20, 470e-6)), 4)
    0.5644
    """
    return loss_tangent / (2.0 * np.pi * frequency * capacitance)


def highest_leakage(capacitance: Values, rated_voltage: Values) -> Values:
    """Highest leakage current of a good part after the makers' waiting time (2 min; 5 min above 100 V).

    capacitance [F]: marked capacitance.
    rated_voltage [V]: rated voltage, applied.

    Returns [A]: max(0.01 C V, 3) uA up to 100 V; above 0.03 C V + 15 uA up to C V = 1000, then 0.02 C V + 25
        uA (C in uF).
    Source: RGA series data sheet.

    >>> round(float(highest_leakage(470e-6, 10.0)) * 1e6, 1)
    47.0
    """
    cv = np.asarray(capacitance, float) * 1e6 * rated_voltage
    low = np.maximum(0.01 * cv, 3.0)
    high = np.where(cv <= 1000.0, 0.03 * cv + 15.0, 0.02 * cv + 25.0)
    return np.where(np.asarray(rated_voltage, float) <= 100.0, low, high) * 1e-6


def aged_esr(new_esr: Values, age: Values, life_expected: Values) -> Values:
    """Series resistance after part of the electrolyte is gone.

    new_esr [ohm]: series resistance of the new part.
    age [h]: hours run.
    life_expected [h]: hours after which the electrolyte would be gone.

    Returns [ohm]: ESR / (1 - age/life)^2, infinite at the end; it doubles at 29 % and triples at 42 %.
    Source: A. Gasperi, Life prediction modeling of bus capacitors, 1996 (volume law; from memory).

    >>> round(float(aged_esr(0.1, 2929.0, 10000.0)), 2)
    0.2
    """
    left = np.maximum(1.0 - np.asarray(age, float) / life_expected, 0.0)
    with np.errstate(divide="ignore"):
        return new_esr / left ** 2
