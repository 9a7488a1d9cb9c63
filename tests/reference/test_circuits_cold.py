"""Cold readings of the program against the reference circuits: every node pair under every fault.

Source: the reference circuits, adapters designed for this project and simulated with ngspice 39 by an independent deck in
which the meter is part of the circuit.
"""

import math

import pytest

from tests.reference.reference_circuits import PROFILES, SOURCE, cold_table, draw_of, fault_of, meter_of
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families.cold import read_cold

OHMS_RELATIVE, METER_COUNT, DIODE_VOLTS = 0.02, 0.1, 0.03
"""The owner's bounds: 2 % or one count of a hand meter (0.1 ohm) for ohms, 30 mV for the diode test."""
ESR_COUNT, FARAD_COUNT = 0.01, 1e-12
"""One count of a capacitor bridge."""


def within(probe: Probe, got: float, want: float) -> bool:
    """True when a reading agrees within the bound of its function; OL must be OL."""
    if math.isinf(want) or math.isinf(got):
        return got == want
    if probe.function == "diode":
        return abs(got - want) <= DIODE_VOLTS
    count = {"ohms": METER_COUNT, "esr": ESR_COUNT, "capacitance": FARAD_COUNT}[probe.function]
    return abs(got - want) <= OHMS_RELATIVE * abs(want) + count


@pytest.mark.parametrize("circuit", PROFILES)
def test_cold_readings_agree_with_the_simulated_circuit(circuit, outside_check):
    """At least 99 % of all rows, each function counted by itself as well."""
    board = load_profile(PROFILES[circuit])
    right: dict[str, int] = {}
    total: dict[str, int] = {}
    misses = []
    for fault, rows in cold_table(circuit).items():
        probes = [probe for probe, want in rows.items() if not math.isnan(want)]
        got = read_cold(board, fault_of(fault), probes, (draw_of(circuit, board),), meter_of(circuit))[:, 0]
        for probe, value in zip(probes, got, strict=True):
            total[probe.function] = total.get(probe.function, 0) + 1
            if within(probe, float(value), rows[probe]):
                right[probe.function] = right.get(probe.function, 0) + 1
            else:
                misses.append(f"{fault} {probe}: {value:.4g}, reference {rows[probe]:.4g}")
    print(f"\n{circuit} cold rows: " + ", ".join(f"{f} {right.get(f, 0)}/{n}" for f, n in total.items()))
    print("\n".join(misses[:20]))
    for function, count in total.items():
        outside_check.at_least(f"cold readings of {circuit}: {function}", SOURCE, right.get(function, 0) / count, 0.99)
