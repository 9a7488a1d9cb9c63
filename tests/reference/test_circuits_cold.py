"""Cold readings of the program against the reference circuits: every node pair under every fault.

Source: the reference circuits, adapters designed for this project and simulated with ngspice 39 by an independent deck in
which the meter is part of the circuit.
"""

import math

import pytest

from tests.reference.reference_circuits import PROFILES, SOURCE, cold_table, draw_of, fault_of, lifted_table, meter_of
from triage.board.fault import Fault
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families.cold import lifted_probes, read_cold, read_lifted

OHMS_RELATIVE, METER_COUNT, DIODE_VOLTS = 0.02, 0.1, 0.03
"""The owner's bounds: 2 % or one count of a hand meter (0.1 ohm) for ohms, 30 mV for the diode test."""
ESR_COUNT, FARAD_COUNT = 0.01, 1e-12
"""One count of a capacitor bridge."""
ESR_MOST = 100.0
"""What an ESR meter shows at most [ohm]; common practice, no source."""


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


@pytest.mark.parametrize("circuit", PROFILES)
def test_readings_with_one_leg_lifted_agree_with_the_simulated_part(circuit, outside_check):
    """Every part of two legs alone, sound and under each of its faults: at least 99 % of all rows; every reading is there."""
    board = load_profile(PROFILES[circuit])
    table, right, misses = lifted_table(circuit), 0, []
    shown = {probe for rows in table.values() for probe in rows}
    assert {probe for probe in lifted_probes(board) if any(probe.lifted == ref for ref, _ in table)} <= shown
    for (ref, mode), rows in table.items():
        faults = () if mode == "sound" else (Fault(ref, mode),)
        draw = (draw_of(circuit, board),)
        got = read_lifted(board, board.part(ref), faults, tuple(rows), draw, meter_of(circuit))[:, 0]
        for (probe, want), value in zip(rows.items(), got, strict=True):
            beyond = probe.function == "esr" and min(value, want) > ESR_MOST
            right += (agrees := beyond or within(probe, float(value), want))
            misses += [] if agrees else [f"{ref}.{mode} {probe}: {value:.4g}, reference {want:.4g}"]
    print(f"\n{circuit} lifted rows: {right} of {right + len(misses)}\n" + "\n".join(misses[:20]))
    outside_check.at_least(f"readings with one leg lifted on {circuit}", SOURCE, right / (right + len(misses)), 0.99)
