"""How often a part fails by itself, by the published handbook models.

For ranking the parts of one board against each other: the absolute figures are those of 1995 and of military
    and unscreened parts, and are not a field life. Wear-out of electrolytic capacitors is in
    ``electrolytic_life``; which way a part fails is in ``failure_modes``. Rates are in failures per 1e6 h,
    temperatures in degC, stress is applied over rated. Every ``quality`` is a key of the table in
    failure_rate.toml, or the factor itself.

Source of all models: MIL-HDBK-217F, Reliability Prediction of Electronic Equipment, with Notice 2 (28 Feb
    1995).
"""

import numpy as np

from triage.physics.failure_factors import (
    TABLE,
    arrhenius_factor,
    bipolar_power_factor,
    bipolar_stress_factor,
    capacitance_factor,
    capacitor_voltage_factor,
    diode_stress_factor,
    environment_factor,
    learning_factor,
    mating_factor,
    microcircuit_package_factor,
    microcircuit_temperature_factor,
    quality_factor,
    resistor_power_factor,
    resistor_stress_factor,
    slope_temperature_factor,
    thyristor_current_factor,
    thyristor_stress_factor,
)
from triage.physics.values import Values


def capacitor_rate(style: str, capacitance: Values, stress: Values, temperature: Values,
                   quality: str | float = "commercial", environment: str = "GB") -> Values:
    """Failure rate of a capacitor.

    style [key]: row of the capacitor table: CE aluminium electrolytic, CQR film, CK ceramic, CDR chip ceramic
        ...
    capacitance [F]: capacitance.
    stress [-]: applied over rated voltage, see capacitor_stress.
    temperature [degC]: ambient of the capacitor.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code; GB is an adapter indoors.

    Returns [1e-6/h]: lambda_b pi_T pi_C pi_V pi_Q pi_E; the series resistance factor of tantalum types is
        apart.
    Valid: S up to 1.
    Source: MIL-HDBK-217F Notice 2, section 10.1; the example is section 10.2, which prints 0.049 from rounded
        factors.

    >>> round(float(capacitor_rate("CQR", 0.015e-6, 0.68, 50.0, "non_er", "GF")), 3)
    0.047
    """
    row = TABLE["capacitor"][style]
    return (row["base_rate"] * arrhenius_factor(temperature, row["activation_eV"])
            * capacitance_factor(capacitance, row["capacitance_exponent"])
            * capacitor_voltage_factor(stress, row["voltage_divisor"], row["voltage_exponent"])
            * quality_factor("capacitor", quality) * environment_factor("capacitor", environment))


def diode_rate(type: str, stress: Values, temperature: Values,
               quality: str | float = "plastic", environment: str = "GB") -> Values:
    """Failure rate of a diode, zener or suppressor with a bonded contact.

    type [key]: row of the diode table: switching, power_rectifier_or_schottky, zener_regulator_or_reference
        ...
    stress [-]: applied reverse voltage over rated; without effect on zeners and suppressors.
    temperature [degC]: junction temperature.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_S pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 6.1; the example is the generic rate of Appendix A.

    >>> round(float(diode_rate("general_purpose_analog", 0.7, 50.0, 1.0)), 4)
    0.0036
    """
    row = TABLE["diode"][type]
    voltage = diode_stress_factor(stress) if row["stress_applies"] else np.ones(np.shape(stress))
    return (row["base_rate"] * slope_temperature_factor(temperature, row["slope_K"]) * voltage
            * quality_factor("semiconductor", quality) * environment_factor("semiconductor", environment))


def bipolar_rate(power_rating: Values, stress: Values, temperature: Values, application: str = "switching",
                 quality: str | float = "plastic", environment: str = "GB") -> Values:
    """Failure rate of a bipolar transistor below 200 MHz.

    power_rating [W]: rated dissipation.
    stress [-]: applied collector-emitter voltage over rated V_CEO.
    temperature [degC]: junction temperature.
    application [key]: switching or linear.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_A pi_R pi_S pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 6.3; the example is the generic rate of Appendix A.

    >>> round(float(bipolar_rate(0.5, 0.5, 50.0, quality=1.0)), 5)
    0.00015
    """
    row = TABLE["bipolar"]
    return (row["base_rate"] * row["application"][application]
            * slope_temperature_factor(temperature, row["slope_K"])
            * bipolar_power_factor(power_rating) * bipolar_stress_factor(stress)
            * quality_factor("semiconductor", quality) * environment_factor("semiconductor", environment))


def fet_rate(power_rating: Values, temperature: Values, type: str = "mosfet", application: str = "switching",
             quality: str | float = "plastic", environment: str = "GB") -> Values:
    """Failure rate of a field-effect transistor below 400 MHz.

    power_rating [W]: rated dissipation; from 2 W on it alone sets the application factor.
    temperature [degC]: junction temperature.
    type [key]: mosfet or jfet.
    application [key]: switching or linear, of parts below 2 W.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_A pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 6.4.

    >>> round(float(fet_rate(40.0, 90.0)), 2)
    1.22
    """
    row = TABLE["fet"]
    factors = np.array([row["signal"][application], *row["power_factor"]])
    chosen = factors[np.searchsorted(row["power_from_W"], np.asarray(power_rating, float), side="right")]
    return (row["base_rate"][type] * slope_temperature_factor(temperature, row["slope_K"]) * chosen
            * quality_factor("semiconductor", quality) * environment_factor("semiconductor", environment))


def optoelectronic_rate(type: str, temperature: Values,
                        quality: str | float = "plastic", environment: str = "GB") -> Values:
    """Failure rate of an optocoupler, light-emitting diode or light detector.

    type [key]: row of the optoelectronic table: isolator_phototransistor_single, led ...
    temperature [degC]: junction temperature.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_Q pi_E; the slow loss of transfer ratio is not in it.
    Source: MIL-HDBK-217F Notice 2, section 6.11.

    >>> round(float(optoelectronic_rate("isolator_phototransistor_single", 60.0)), 3)
    0.278
    """
    row = TABLE["optoelectronic"]
    return (row["base_rate"][type] * slope_temperature_factor(temperature, row["slope_K"])
            * quality_factor("semiconductor", quality) * environment_factor("optoelectronic", environment))


def microcircuit_rate(transistors: Values, pins: Values, temperature: Values, technology: str = "linear",
                      years: Values = 2.0, quality: str | float = "commercial",
                      environment: str = "GB") -> Values:
    """Failure rate of a linear microcircuit: controller, regulator, shunt reference.

    transistors [-]: number of transistors on the die, up to 10 000.
    pins [-]: number of working pins of a plastic package.
    temperature [degC]: junction temperature.
    technology [key]: linear, bipolar_digital or mos_digital, for the temperature factor.
    years [y]: years the type has been in production.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: (C1 pi_T + C2 pi_E) pi_Q pi_L.
    Source: MIL-HDBK-217F Notice 2, sections 5.1, 5.8 to 5.10.

    >>> round(float(microcircuit_rate(300.0, 8.0, 70.0)), 3)
    0.571
    """
    row = TABLE["microcircuit"]
    die = np.array(row["die_complexity"])[np.searchsorted(row["transistors_up_to"], transistors)]
    return ((die * microcircuit_temperature_factor(temperature, technology)
             + microcircuit_package_factor(pins) * environment_factor("microcircuit", environment))
            * quality_factor("microcircuit", quality) * learning_factor(years))


def thyristor_rate(rms_current_rating: Values, stress: Values, temperature: Values,
                   quality: str | float = "plastic", environment: str = "GB") -> Values:
    """Failure rate of a thyristor.

    rms_current_rating [A]: rated rms forward current.
    stress [-]: applied blocking voltage over rated.
    temperature [degC]: junction temperature.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_R pi_S pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 6.10.

    >>> round(float(thyristor_rate(1.0, 1.0, 25.0, 1.0)), 4)
    0.0022
    """
    row = TABLE["thyristor"]
    return (row["base_rate"] * slope_temperature_factor(temperature, row["slope_K"])
            * thyristor_current_factor(rms_current_rating) * thyristor_stress_factor(stress)
            * quality_factor("semiconductor", quality) * environment_factor("semiconductor", environment))


def resistor_rate(style: str, power_rating: Values, stress: Values, temperature: Values,
                  quality: str | float = "commercial", environment: str = "GB") -> Values:
    """Failure rate of a resistor.

    style [key]: row of the resistor table: RL film, RW wirewound, RC composition, RTH thermistor ...
    power_rating [W]: rated dissipation.
    stress [-]: actual over rated power.
    temperature [degC]: temperature of the body.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_P pi_S pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 9.1; the example is the generic rate of Appendix A.

    >>> round(float(resistor_rate("RC", 0.5, 0.5, 30.0, 1.0)), 4)
    0.0022
    """
    row = TABLE["resistor"][style]
    return (row["base_rate"] * arrhenius_factor(temperature, row["activation_eV"])
            * resistor_power_factor(power_rating) * resistor_stress_factor(stress, style)
            * quality_factor("resistor", quality) * environment_factor("resistor", environment))


def transformer_rate(type: str, hot_spot: Values, quality: str | float = "lower",
                     environment: str = "GB") -> Values:
    """Failure rate of a transformer.

    type [key]: row of the transformer table: low_power_pulse, audio_15Hz_to_20kHz ...
    hot_spot [degC]: hot-spot temperature, see thermal.hot_spot_temperature.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 11.1; the example is the generic rate of Appendix A.

    >>> round(float(transformer_rate("audio_15Hz_to_20kHz", 30.0, 1.0)), 3)
    0.015
    """
    row = TABLE["inductive"]
    return (row["transformer"][type] * arrhenius_factor(hot_spot, row["activation_eV"])
            * quality_factor("transformer", quality) * environment_factor("inductive", environment))


def inductor_rate(type: str, hot_spot: Values, quality: str | float = "lower",
                  environment: str = "GB") -> Values:
    """Failure rate of a coil.

    type [key]: fixed or variable.
    hot_spot [degC]: hot-spot temperature.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_Q pi_E.
    Source: MIL-HDBK-217F Notice 2, section 11.2; the example is the generic rate of Appendix A.

    >>> round(float(inductor_rate("fixed", 30.0, 1.0)), 6)
    3.2e-05
    """
    row = TABLE["inductive"]
    return (row["inductor"][type] * arrhenius_factor(hot_spot, row["activation_eV"])
            * quality_factor("inductor", quality) * environment_factor("inductive", environment))


def fuse_rate(environment: str = "GB") -> float:
    """Failure rate of a fuse by itself, not of fuses blown by something else.

    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_E.
    Source: MIL-HDBK-217F Notice 2, section 22.1.

    >>> fuse_rate()
    0.01
    """
    return float(TABLE["fuse"]["base_rate"]) * environment_factor("fuse", environment)


def connection_rate(type: str, environment: str = "GB") -> float:
    """Failure rate of one joint.

    type [key]: row of the connection table: reflow_solder, hand_solder_without_wrapping, spring_contact ...
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_E.
    Source: MIL-HDBK-217F Notice 2, section 17.1.

    >>> connection_rate("reflow_solder", "GM")
    0.000483
    """
    return float(TABLE["connection"]["base_rate"][type]) * environment_factor("connection", environment)


def connector_rate(type: str, contact_temperature: Values, matings_per_1000h: Values = 1.0,
                   quality: str | float = "lower", environment: str = "GB") -> Values:
    """Failure rate of a mated plug and socket.

    type [key]: row of the connector table: power, telephone, rectangular ...
    contact_temperature [degC]: ambient and the rise of the contacts.
    matings_per_1000h [-]: plug and unplug cycles in 1000 h.
    quality [key]: pi_Q key or the factor itself.
    environment [key]: environment code.

    Returns [1e-6/h]: lambda_b pi_T pi_K pi_Q pi_E; one half carries half of it.
    Source: MIL-HDBK-217F Notice 2, section 15.1.

    >>> round(float(connector_rate("power", 25.0, 0.01, 1.0)), 4)
    0.007
    """
    row = TABLE["connector"]
    return (row["base_rate"][type] * arrhenius_factor(contact_temperature, row["activation_eV"])
            * mating_factor(matings_per_1000h)
            * quality_factor("connector", quality) * environment_factor("connector", environment))


def part_rate(kind: str, role: str = "", *, temperature: Values = 60.0, stress: Values = 0.5,
              power_rating: Values = 0.25, capacitance: Values = 1e-6, environment: str = "GB") -> Values:
    """Failure rate of a part of an adapter, by the model that stands for its kind and role.

    kind [key]: part kind of the board: resistor, electrolytic, bipolar_transistor ...
    role [key]: what the part does; it decides between film and ceramic, rectifier and signal diode.
    temperature [degC]: junction, hot spot or ambient, as the model asks.
    stress [-]: voltage over rating (power over rating of a resistor).
    power_rating [W]: rated dissipation of a resistor or transistor.
    capacitance [F]: capacitance of a capacitor.
    environment [key]: environment code.

    Returns [1e-6/h]: the rate with the quality factor of over-the-counter parts.
    Raises KeyError for a kind without a model.
    Source: MIL-HDBK-217F Notice 2; which row stands for which part is a choice of this project, in
        failure_rate.toml.

    >>> round(float(part_rate("electrolytic", "bulk capacitor", stress=0.8125, capacitance=10e-6)), 4)
    0.0474
    """
    row = next((row for row in TABLE["part_kind"] if row["kind"] == kind
                and any(word in role for word in row.get("roles", [role]))), None)
    if row is None:
        raise KeyError(kind)
    style = row.get("style", "")
    models = {
        "capacitor": lambda: capacitor_rate(style, capacitance, stress, temperature, environment=environment),
        "diode": lambda: diode_rate(style, stress, temperature, environment=environment),
        "bipolar": lambda: bipolar_rate(power_rating, stress, temperature, style, environment=environment),
        "fet": lambda: fet_rate(power_rating, temperature, style, environment=environment),
        "optoelectronic": lambda: optoelectronic_rate(style, temperature, environment=environment),
        "microcircuit": lambda: microcircuit_rate(row["transistors"], row["pins"], temperature, style,
                                                  environment=environment),
        "resistor": lambda: resistor_rate(style, power_rating, stress, temperature, environment=environment),
        "transformer": lambda: transformer_rate(style, temperature, environment=environment),
        "inductor": lambda: inductor_rate(style, temperature, environment=environment),
        "fuse": lambda: fuse_rate(environment),
        "stated": lambda: row["rate"],
    }
    return row.get("junctions", 1.0) * models[row["model"]]()
