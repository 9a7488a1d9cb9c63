"""Transformers and coils: turns, flux density, gap, currents seen from the other winding.

The core is ideal but for its flux limit; the reluctance of the gap alone counts for the inductance.
"""

import numpy as np

from triage.physics.values import Values

VACUUM_PERMEABILITY = 4e-7 * np.pi
"""[H/m]"""


def sine_flux_density(rms_voltage: Values, frequency: Values, turns: Values, area: Values) -> Values:
    """Peak flux density of a mains transformer.

    rms_voltage [V]: rms voltage of the winding.
    frequency [Hz]: mains frequency.
    turns [-]: its turns.
    area [m2]: core cross-section.

    Returns [T]: V / (4.44 f N A).
    Source: D. C. Kulshreshtha, Basic Electrical Engineering, example 13.2 (1.38 T).

    >>> round(float(sine_flux_density(230.0, 50.0, 30.0, 0.025)), 2)
    1.38
    """
    return rms_voltage / (np.sqrt(2.0) * np.pi * frequency * turns * area)


def transformed_voltage(voltage: Values, turns: Values, other_turns: Values) -> Values:
    """Voltage of another winding on the same core.

    voltage [V]: voltage of the first winding.
    turns [-]: its turns.
    other_turns [-]: turns of the other winding.

    Returns [V]: V N2/N1.
    Source: D. C. Kulshreshtha, Basic Electrical Engineering, example 13.2.

    >>> round(transformed_voltage(230.0, 30.0, 350.0), 1)
    2683.3
    """
    return voltage * other_turns / turns


def transformed_current(current: Values, turns: Values, other_turns: Values) -> Values:
    """Current of another winding that balances a load current.

    current [A]: current of the loaded winding.
    turns [-]: its turns.
    other_turns [-]: turns of the other winding.

    Returns [A]: I N1/N2.
    Source: OpenStax, College Physics, step-down transformer example (2.0 A).

    >>> transformed_current(16.0, 25.0, 200.0)
    2.0
    """
    return current * turns / other_turns


def turns_for_voltage(turns: Values, voltage: Values, other_voltage: Values) -> Values:
    """Turns of another winding for a wanted voltage.

    turns [-]: turns of the first winding.
    voltage [V]: its voltage.
    other_voltage [V]: wanted voltage.

    Returns [-]: N V2/V1.
    Source: OpenStax, College Physics, step-down transformer example (25 turns).

    >>> turns_for_voltage(200.0, 120.0, 15.0)
    25.0
    """
    return turns * other_voltage / voltage


def turns_for_flux_swing(volt_seconds: Values, swing: Values, area: Values) -> Values:
    """Turns that keep the flux swing of a switched winding within bounds.

    volt_seconds [Vs]: voltage times time of one stroke.
    swing [T]: allowed change of flux density.
    area [m2]: core cross-section.

    Returns [-]: V t / (dB A).
    Source: Infineon, ICE2HS01G application note, p. 9, section 2.2.7 (33).

    >>> round(turns_for_flux_swing(16.5 * 12.1 / (2 * 30e3), 0.62, 161e-6))
    33
    """
    return volt_seconds / (swing * area)


def turns_for_peak(inductance: Values, peak: Values, flux_density: Values, area: Values) -> Values:
    """Turns of a storage coil for a flux limit.

    inductance [H]: inductance.
    peak [A]: peak current.
    flux_density [T]: highest flux density.
    area [m2]: least core cross-section.

    Returns [-]: L Ip / (B A).
    Source: Infineon, ICE2HS01G application note, p. 9 (19.4); R. W. Erickson, D. Maksimovic, Fundamentals of
        Power Electronics, chapter 14.

    >>> round(turns_for_peak(40e-6, 3.49, 0.08, 90e-6), 1)
    19.4
    """
    return inductance * peak / (flux_density * area)


def storage_flux_density(inductance: Values, peak: Values, turns: Values, area: Values) -> Values:
    """Peak flux density of a storage coil or flyback primary.

    inductance [H]: inductance.
    peak [A]: peak current.
    turns [-]: turns.
    area [m2]: least core cross-section.

    Returns [T]: L Ip / (N A); ferrite saturates above about 0.3 T when hot (common practice, no source).
    Source: definition of flux linkage.

    >>> round(storage_flux_density(1.5e-3, 0.3359, 120.0, 19.2e-6), 3)
    0.219
    """
    return inductance * peak / (turns * area)


def gap_for_energy(inductance: Values, peak: Values, flux_density: Values, area: Values) -> Values:
    """Air gap that stores the energy at a flux density.

    inductance [H]: inductance.
    peak [A]: peak current.
    flux_density [T]: flux density at that current.
    area [m2]: core cross-section.

    Returns [m]: mu0 L Ip^2 / (B^2 A).
    Source: R. W. Erickson, D. Maksimovic, Fundamentals of Power Electronics, chapter 14 (0.44 mm).

    >>> round(gap_for_energy(1.07e-3, 1.5, 0.25, 109e-6) * 1e3, 2)
    0.44
    """
    return VACUUM_PERMEABILITY * inductance * peak ** 2 / (flux_density ** 2 * area)


def gap_for_inductance(turns: Values, area: Values, inductance: Values) -> Values:
    """Air gap that gives an inductance.

    turns [-]: turns.
    area [m2]: core cross-section.
    inductance [H]: wanted inductance.

    Returns [m]: mu0 N^2 A / L.
    Source: reluctance of the gap; that of the core is left out.

    >>> round(gap_for_inductance(120.0, 19.2e-6, 1.5e-3) * 1e3, 3)
    0.232
    """
    return VACUUM_PERMEABILITY * turns ** 2 * area / inductance
