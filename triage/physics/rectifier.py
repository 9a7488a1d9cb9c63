"""Mains rectifier with a capacitor behind it, solved exactly: when it conducts, peak, valley and currents.

Two closed solutions for ideal diodes and no source resistance (load of constant power, such as a converter,
or a resistor), and a stepped one with source resistance. ``peak`` is the crest of the mains less the diode
drops. The textbook shortcuts are in ``rectifier_estimates``; they miss these solutions by 2 to 30 %. Load
current is drawn all the time.

Method: conduction ends where the capacitor would have to fall faster than the mains; it begins again where
    the discharging capacitor meets the next half wave (D. W. Hart, Power Electronics, sections 3.8 and 4.4).
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from triage.physics.values import Values


@dataclass(frozen=True, slots=True)
class Rectified:
    """One charging period of the capacitor in steady state; fields are floats or arrays."""

    peak: Values
    """Highest capacitor voltage [V]."""
    valley: Values
    """Lowest capacitor voltage [V]; 0: the load pulls it down before the next crest, nothing else here is
    valid."""
    average: Values
    """Mean capacitor voltage [V]."""
    on_angle: Values
    """Mains angle at which conduction begins, counted from the zero crossing [rad]."""
    off_angle: Values
    """Mains angle at which it ends [rad]."""
    conduction_time: Values
    """[s]"""
    rectifier_peak: Values
    """Peak current out of the rectifier [A]; a diode carries the same."""
    rectifier_average: Values
    """Mean current out of the rectifier over a charging period [A]; a bridge diode carries half."""
    rectifier_rms: Values
    """Rms current out of the rectifier [A]; a bridge diode carries 1/sqrt(2) of it, the mains all of it."""
    capacitor_rms: Values
    """Ripple current of the capacitor at mains frequency and its multiples [A]."""

    @property
    def ripple(self) -> Values:
        """Peak-to-peak ripple voltage [V]."""
        return self.peak - self.valley


def _bisect(above: Callable[[Values], Values], low: Values, high: Values) -> Values:
    """Root of an increasing function between two bounds; ``above`` says where it is positive."""
    low, high = np.broadcast_arrays(np.asarray(low, float), np.asarray(high, float))
    for _ in range(60):
        middle = 0.5 * (low + high)
        over = above(middle)
        low, high = np.where(over, low, middle), np.where(over, middle, high)
    return 0.5 * (low + high)


def with_power_load(peak: Values, frequency: Values, capacitance: Values, power: Values,
                    pulses: Values = 2) -> Rectified:
    """Rectifier that feeds a converter of constant power through no resistance.

    peak [V]: crest of the mains less the diode drops.
    frequency [Hz]: mains frequency.
    capacitance [F]: bulk capacitance.
    power [W]: power drawn from the capacitor, above 0.
    pulses [-]: charging pulses a mains period: 2 for a bridge, 1 for a single diode.

    Returns [SI]: the steady state.
    Valid: valley above 0, that is a capacitor large enough to hold over.
    Source: closed solution of C dv/dt = i - P/v; discharge v^2 = V0^2 - 2 P t/C.

    >>> bulk = with_power_load(2**0.5 * 230, 50.0, 10e-6, 12.0)
    >>> round(float(bulk.valley), 1), round(float(bulk.rectifier_rms), 3)
    (292.2, 0.113)
    """
    w = 2.0 * np.pi * np.asarray(frequency, float)
    span = 2.0 * np.pi / np.asarray(pulses, float)
    slope = 2.0 * power / (w * capacitance)
    off = 0.5 * (np.pi + np.arcsin(np.minimum(slope / np.asarray(peak, float) ** 2, 1.0)))
    start = peak * np.sin(off)

    def squared(angle: Values) -> Values:
        return start ** 2 - slope * (angle + span - off)

    on = _bisect(lambda a: (peak * np.sin(a)) ** 2 >= squared(a), 0.0, np.pi / 2.0 + 0.0 * off)
    valley = np.sqrt(np.maximum(squared(on), 0.0))
    period = span / w
    swing = w * capacitance * peak
    load = power / np.asarray(peak, float)
    with np.errstate(divide="ignore", invalid="ignore"):
        charged = peak * (np.cos(on) - np.cos(off)) / w
        average = (charged + capacitance / (3.0 * power) * (start ** 3 - valley ** 3)) / period
        half_angles = np.log(np.tan(off / 2.0) / np.tan(on / 2.0))
        mean = (swing * (np.sin(off) - np.sin(on)) + load * half_angles) / span
        cosine = 0.5 * (off - on) + 0.25 * (np.sin(2.0 * off) - np.sin(2.0 * on))
        square = (swing ** 2 * cosine + 2.0 * swing * load * np.log(np.sin(off) / np.sin(on))
                  + load ** 2 * (1.0 / np.tan(on) - 1.0 / np.tan(off))) / span
        discharge = 0.5 * power * capacitance * np.log(start ** 2 / valley ** 2) * w
        capacitor = (swing ** 2 * cosine + discharge) / span
        first = swing * np.cos(on) + load / np.sin(on)
    return Rectified(peak + 0.0 * on, valley, average, on, off, (off - on) / w,
                     first, mean, np.sqrt(square), np.sqrt(capacitor))


def with_resistive_load(peak: Values, frequency: Values, capacitance: Values, resistance: Values,
                        pulses: Values = 2) -> Rectified:
    """Rectifier that feeds a resistor through no resistance.

    peak [V]: crest of the mains less the diode drops.
    frequency [Hz]: mains frequency.
    capacitance [F]: reservoir capacitance.
    resistance [ohm]: load.
    pulses [-]: charging pulses a mains period: 2 for a bridge or centre tap, 1 for a single diode.

    Returns [SI]: the steady state.
    Source: D. W. Hart, Power Electronics, sections 3.8 and 4.4 (transcendental equation for the turn-on
        angle); its half-wave example has a turn-on angle of 0.843 rad and 43 V ripple.

    >>> out = with_resistive_load(2**0.5 * 120, 60.0, 100e-6, 500.0, pulses=1)
    >>> round(float(out.on_angle), 2), round(float(out.ripple), 1)
    (0.84, 43.1)
    """
    w = 2.0 * np.pi * np.asarray(frequency, float)
    span = 2.0 * np.pi / np.asarray(pulses, float)
    wrc = w * resistance * capacitance
    off = np.pi - np.arctan(wrc)
    start = peak * np.sin(off)

    def held(angle: Values) -> Values:
        return start * np.exp(-(angle + span - off) / wrc)

    on = _bisect(lambda a: peak * np.sin(a) >= held(a), 0.0, np.pi / 2.0 + 0.0 * off)
    valley = held(on)
    swing, load = w * capacitance * peak, np.asarray(peak, float) / resistance
    sines = 0.5 * (off - on) - 0.25 * (np.sin(2.0 * off) - np.sin(2.0 * on))
    cosines = 0.5 * (off - on) + 0.25 * (np.sin(2.0 * off) - np.sin(2.0 * on))
    mixed = 0.5 * (np.sin(off) ** 2 - np.sin(on) ** 2)
    mean = (swing * (np.sin(off) - np.sin(on)) + load * (np.cos(on) - np.cos(off))) / span
    square = (swing ** 2 * cosines + 2.0 * swing * load * mixed + load ** 2 * sines) / span
    discharge = 0.5 * wrc * (start ** 2 - valley ** 2) / resistance ** 2
    top = np.maximum(on, np.arctan2(load, swing))
    average = (peak * (np.cos(on) - np.cos(off)) + wrc * (start - valley)) / span
    return Rectified(peak + 0.0 * on, valley, average, on, off, (off - on) / w,
                     swing * np.cos(top) + load * np.sin(top), mean, np.sqrt(square),
                     np.sqrt((swing ** 2 * cosines + discharge) / span))


def with_source_resistance(peak: Values, frequency: Values, capacitance: Values, source_resistance: Values,
                           load: Callable[[Values], Values], pulses: int = 2, steps: int = 4000) -> Rectified:
    """Rectifier fed through a resistance, with any load.

    peak [V]: crest of the mains less the diode drops.
    frequency [Hz]: mains frequency.
    capacitance [F]: capacitance.
    source_resistance [ohm]: mains, cord, fusible resistor, thermistor and diode slope together, above 0.
    load [A]: function from capacitor voltage to load current: ``lambda v: power / v``.
    pulses [-]: charging pulses a mains period: 2 or 1.
    steps [-]: steps a charging period; the error falls with it.

    Returns [SI]: the steady state; on_angle and off_angle are the first and last conducting step.
    Valid: loads that leave a valley above 0.
    Source: backward Euler steps of C dv/dt = (|e| - v)/R - i(v), started anew by the secant rule until the
        voltage repeats; against O. H. Schade, Analysis of rectifier operation, Proc. IRE, July 1943 as
        computed independently.

    >>> out = with_source_resistance(1.0, 50.0, 1.59155e-3, 5.0, lambda v: v / 100.0)
    >>> round(float(out.average), 3)
    0.832
    """
    angles = (np.arange(steps) + 1.0) / steps * (2.0 * np.pi / pulses)
    wave = np.abs(np.sin(angles)) if pulses == 2 else np.sin(angles)
    step = 1.0 / (np.asarray(frequency, float) * pulses * steps)
    rate, drain = step / (capacitance * source_resistance), step / capacitance

    def period(v: Values, seen: Callable[[int, Values, Values], None] | None = None) -> Values:
        for k, height in enumerate(wave):
            idle = v - drain * load(v)
            source = peak * height
            v = np.maximum(np.where(source > idle, (idle + rate * source) / (1.0 + rate), idle), 1e-6 * peak)
            if seen is not None:
                seen(k, v, np.maximum(source - v, 0.0) / source_resistance)
        return v

    v0 = 0.9 * np.asarray(peak, float) + 0.0 * rate
    v1 = period(v0)
    e0 = v1 - v0
    for _ in range(12):
        e1 = period(v1) - v1
        bend = np.where(np.abs(e0 - e1) > 1e-12 * peak, e0 - e1, np.inf)
        change = np.where(np.isinf(bend), e1, e1 * (v1 - v0) / bend)
        v0, e0, v1 = v1, e1, np.clip(v1 + change, 0.05 * peak, peak)
        if np.all(np.abs(change) < 1e-7 * peak):
            break
    volts, amps = np.empty((2, steps, *np.shape(v1)))

    def keep(k: int, v: Values, i: Values) -> None:
        volts[k], amps[k] = v, i

    period(v1, keep)
    on_steps = amps > 0.0
    first = np.argmax(on_steps, axis=0)
    last = steps - 1 - np.argmax(on_steps[::-1], axis=0)
    width = on_steps.sum(axis=0)
    return Rectified(volts.max(axis=0), volts.min(axis=0), volts.mean(axis=0), angles[first], angles[last],
                     width * step, amps.max(axis=0), amps.mean(axis=0), np.sqrt((amps ** 2).mean(axis=0)),
                     np.sqrt(((amps - load(volts)) ** 2).mean(axis=0)))


def capacitance_for_valley(peak: Values, frequency: Values, power: Values, valley: Values,
                           pulses: Values = 2) -> Values:
    """Bulk capacitance that keeps the valley at a wanted voltage; the design equation backwards.

    peak [V]: crest of the mains less the diode drops.
    frequency [Hz]: mains frequency.
    power [W]: power drawn from the capacitor.
    valley [V]: wanted valley, between 0 and peak.
    pulses [-]: charging pulses a mains period: 2 or 1.

    Returns [F]: capacitance between 0.01 and 1000 uF per watt.
    Source: with_power_load solved for the capacitance by bisection.

    >>> c = capacitance_for_valley(2**0.5 * 230, 50.0, 12.0, 292.25)
    >>> round(float(c) * 1e6, 2)
    10.0
    """
    scale = np.asarray(power, float)

    def enough(exponent: Values) -> Values:
        return with_power_load(peak, frequency, scale * 10.0 ** exponent, power, pulses).valley >= valley

    return scale * 10.0 ** _bisect(enough, -8.0, -3.0 + 0.0 * (scale + valley + peak))
