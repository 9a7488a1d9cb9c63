"""The shop's own meters as the computing rooms take them: what they put on the board, and how truly they show it.

Without a file of its own a shop has the hand meter of ``triage.physics.network`` and the errors of diagnosis/instruments.toml.
"""

import math
from collections.abc import Mapping
from dataclasses import replace

from triage.diagnosis.settings import Instrument
from triage.diagnosis.settings import instruments as usual_instruments
from triage.physics.network import HAND_METER, Meter
from triage.safety.instruments import Function, Instruments

BELOW_OPEN = 0.3
"""A diode test begins to limit this far below its open-circuit voltage [V]; common practice, no source."""


def meter_of(own: Instruments | None) -> Meter:
    """What the shop's meters put on an unpowered board; what its file does not tell is as with an ordinary hand meter."""
    meter = HAND_METER
    if own is None:
        return meter
    ohms, diode, esr, farads = (own.best(key, value) for key, value in _USUAL)
    if ohms is not None:
        volts = ohms.test_voltage
        meter = replace(meter, ohms_most=ohms.ranges[-1].full_scale)
        if ohms.constant_current:
            currents = tuple(one.test_current for one in ohms.ranges if one.test_current is not None)
            meter = replace(meter, ohms_currents=currents, range_voltage=volts or meter.range_voltage)
        else:
            meter = replace(meter, ohms_voltage=volts or meter.ohms_voltage)
    if diode is not None:
        most, volts = diode.ranges[-1].full_scale, diode.test_voltage
        limit = (volts - BELOW_OPEN) if volts and volts > BELOW_OPEN else most
        current = diode.ranges[-1].test_current or meter.diode_current
        meter = replace(meter, diode_current=current, diode_limit=limit, diode_most=min(most, volts or most))
    if esr is not None:
        meter = replace(meter, bridge_esr_frequency=esr.frequency or meter.bridge_esr_frequency)
    if farads is not None:
        frequency = farads.frequency or meter.bridge_capacitance_frequency
        meter = replace(
            meter,
            bridge_capacitance_frequency=frequency,
            bridge_series=farads.series_value,
            capacitance_most=farads.ranges[-1].full_scale,
        )
    return meter


_USUAL = (("ohms", 1e3), ("diode", 0.6), ("esr", 1.0), ("capacitance", 1e-6))
"""Function -> reading for which the truest meter is chosen [SI]."""


def instruments_of(own: Instruments | None) -> Mapping[str, Instrument]:
    """How truly every meter function shows, the model's own error included."""
    usual = usual_instruments()
    if own is None:
        return usual
    found = dict(usual)
    for key, row in usual.items():
        able = [function for function in own.functions if function.key == key]
        if able:
            best = min(able, key=lambda function: (_relative(function), function.instrument))
            over = best.ranges[-1].full_scale if math.isfinite(row.over) or key == "capacitance" else row.over
            smallest = best.ranges[0]
            absolute = (smallest.counts * smallest.count_size + best.offset) / math.sqrt(3.0)
            found[key] = row.read_with(_relative(best), absolute, over, smallest.count_size)
    return found


def _relative(function: Function) -> float:
    """Standard error proportional to the reading [-]: of the worst range, in its middle on a logarithmic scale.

    A limit of error E counts as E / sqrt(3) (JCGM 100:2008, 4.3.7). A range is taken to begin at a tenth of its full scale.
    """
    worst = max(one.share + one.counts * one.count_size / (one.full_scale / math.sqrt(10.0)) for one in function.ranges)
    return worst / math.sqrt(3.0)
