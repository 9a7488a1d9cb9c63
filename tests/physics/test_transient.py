"""The time-domain solver against closed solutions, against the stepped rectifier of this package, and against itself."""

import math

import numpy as np
import pytest

from triage.board.circuit import circuit
from triage.board.profile import load_profile
from triage.physics.netlist import PORT_CAPACITOR, PORT_NONE, PORT_RESISTOR, PORT_SOURCE, PORT_WINDING, Netlist, compile_netlist
from triage.physics.rectifier import with_source_resistance
from triage.physics.transient import (
    FINE,
    I_MAX,
    I_MEAN,
    I_RMS,
    POWER,
    QUICK,
    V_MAX,
    V_MEAN,
    V_MIN,
    V_RMS,
    Quality,
    Stretch,
    Watch,
    initial_state,
    joined,
    rest_state,
    run_stretch,
)

QUALITIES = pytest.mark.parametrize(("quality", "most"), [(FINE, 0.002), (QUICK, 0.01)], ids=["fine", "quick"])
NEAR_IDEAL = {"saturation_current": 1e-6, "emission": 0.05, "series_resistance": 1e-3}


@QUALITIES
def test_rc_discharges_exponentially(quality: Quality, most: float) -> None:
    """v = V exp(-t/RC), elementary circuit theory; the meeting point of two parts of different speed as well."""
    net = Netlist("0")
    net.resistor("R", "a", "0", 1e3)
    net.capacitor("C", "a", "0", 1e-7, 0.0, 10.0)
    compiled = compile_netlist(net)
    watch = Watch(nodes=(compiled.index("a"),), start=1e-6, interval=5e-6, rows=100)
    rows = run_stretch(compiled, initial_state(compiled), 0.0, 5e-4, watch, quality).trace
    assert len(rows) > 50
    expected = 10.0 * np.exp(-rows[:, 0] / 1e-4)
    assert np.max(np.abs(rows[:, 1] - expected)) < most * 10.0


@QUALITIES
def test_lc_rings_at_its_frequency_and_decays_by_its_resistance(quality: Quality, most: float) -> None:
    """f = sqrt(1/LC - (R/2L)^2) / 2 pi and the envelope exp(-R t / 2L) of a series circuit, elementary circuit theory.

    The method's truncation error on a sine of w h radians a step is 0.04 (w h)^3, its error of phase 0.04 (w h)^2 (Hosea and
    Shampine 1996): the tolerance of a step therefore bounds the error of the period.
    """
    inductance, capacitance, resistance = 1e-4, 1e-8, 4.0
    net = Netlist("0")
    net.coupled([("L", "a", "0", inductance, resistance)])
    net.capacitor("C", "a", "0", capacitance, 0.0, 400.0)
    compiled = compile_netlist(net)
    watch = Watch(nodes=(compiled.index("a"),), rows=20000, interval=0.0)
    rows = run_stretch(compiled, initial_state(compiled), 0.0, 1e-4, watch, quality).trace
    damping = resistance / (2.0 * inductance)
    omega = math.sqrt(1.0 / (inductance * capacitance) - damping**2)
    t, v = rows[:, 0], rows[:, 1]
    up = np.nonzero((v[:-1] < 0.0) & (v[1:] >= 0.0))[0]
    crossings = t[up] - v[up] * (t[up + 1] - t[up]) / (v[up + 1] - v[up])
    period = np.mean(np.diff(crossings))
    assert period == pytest.approx(2.0 * math.pi / omega, rel=0.04 * (quality.step_relative / 0.04) ** (2.0 / 3.0))
    late = (t > 4e-5) & (t < 6e-5)
    envelope = np.max(np.abs(v[late]) * np.exp(damping * t[late]))
    assert envelope == pytest.approx(400.0, rel=15.0 * most)


def test_two_stretches_joined_are_the_whole() -> None:
    """Means, rms values and extremes of a charging capacitor over 0.1 ms and the next 0.4 ms are those of 0.5 ms."""
    net = Netlist("0")
    net.resistor("R", "a", "0", 1e3)
    net.capacitor("C", "a", "0", 1e-7, 0.0, 10.0)
    net.port("R", "", "a", "0", PORT_RESISTOR, "R")
    compiled = compile_netlist(net)
    whole = run_stretch(compiled, initial_state(compiled), 0.0, 5e-4, skip=0.0)
    state = initial_state(compiled)
    first = run_stretch(compiled, state, 0.0, 1e-4, skip=0.0)
    second = run_stretch(compiled, state, 1e-4, 5e-4, skip=0.0)
    both = joined(first, first.reached, second, second.reached - first.reached)
    assert second.reached == pytest.approx(5e-4)
    assert np.allclose(both.statistics, whole.statistics, rtol=5e-3, atol=1e-6)


def mains_rectifier(capacitance: float = 1e-5, load: float = 5e3, esr: float = 1e-6) -> Netlist:
    """Half-wave rectifier from 230 V mains through 10 ohm with a nearly ideal diode."""
    net = Netlist("0")
    net.sine("mains", "l", "0", 325.0, 50.0, math.pi / 2.0, 1e-3)
    net.resistor("R", "l", "d", 10.0)
    net.diode("D", "d", "bulk", NEAR_IDEAL)
    net.capacitor("C", "bulk", "0", capacitance, esr, 320.0)
    net.resistor("load", "bulk", "0", load)
    net.port("mains", "", "l", "0", PORT_SOURCE, "mains")
    net.port("R", "", "l", "d", PORT_RESISTOR, "R")
    net.port("D", "", "d", "bulk", PORT_RESISTOR, "D")
    net.port("C", "", "bulk", "0", PORT_CAPACITOR, "C")
    net.port("load", "", "bulk", "0", PORT_RESISTOR, "load")
    return net


def settled_rectifier(quality: Quality) -> Stretch:
    """Second mains period of the rectifier, from crest to crest."""
    compiled = compile_netlist(mains_rectifier())
    state = initial_state(compiled)
    run_stretch(compiled, state, 0.0, 0.02, None, quality)
    return run_stretch(compiled, state, 0.0, 0.02, None, quality)


@QUALITIES
def test_half_wave_rectifier_agrees_with_the_stepped_solution(quality: Quality, most: float) -> None:
    """Against triage.physics.rectifier.with_source_resistance, itself checked against Schade 1943."""
    expected = with_source_resistance(325.0, 50.0, 1e-5, 10.001, lambda v: v / 5e3, pulses=1, steps=8000)
    source, _, diode, capacitor, load = settled_rectifier(quality).statistics
    assert load[V_MEAN] == pytest.approx(float(expected.average), rel=most)
    assert load[V_MAX] - load[V_MIN] == pytest.approx(float(expected.ripple), rel=5.0 * most)
    assert diode[I_MAX] == pytest.approx(float(expected.rectifier_peak), rel=10.0 * most)
    assert capacitor[I_RMS] == pytest.approx(float(expected.capacitor_rms), rel=10.0 * most)
    assert source[I_RMS] == pytest.approx(float(expected.rectifier_rms), rel=10.0 * most)


@QUALITIES
def test_energy_of_a_settled_period_balances(quality: Quality, most: float) -> None:
    """What the source gives is what resistances and the junction turn to heat, when the capacitor ends as it began."""
    source, resistor, diode, capacitor, load = settled_rectifier(quality).statistics
    heat = resistor[POWER] + diode[POWER] + capacitor[POWER] + load[POWER]
    assert source[POWER] == pytest.approx(heat, rel=1e-6)
    assert load[POWER] == pytest.approx(load[V_RMS] ** 2 / 5e3, rel=1e-6)
    assert abs(capacitor[POWER]) < most * load[POWER]


@QUALITIES
def test_charge_is_conserved_over_abrupt_changes(quality: Quality, most: float) -> None:
    """The mean current of a capacitor times the time is the change of its charge, however hard the diodes switch."""
    recovery = {"saturation_current": 5e-9, "emission": 1.8, "series_resistance": 0.06, "zero_bias_capacitance": 1.5e-11,
                "transit_time": 3e-7}
    net = Netlist("0")
    net.sine("drive", "l", "0", 100.0, 100e3, 0.0, 1.0)
    net.coupled([("L", "l", "d", 1e-5, 0.5)])
    net.diode("D", "d", "bulk", recovery)
    net.capacitor("C", "bulk", "0", 1e-7, 1e-9, 30.0)
    net.resistor("load", "bulk", "0", 500.0)
    net.port("C", "", "bulk", "0", PORT_CAPACITOR, "C")
    net.port("D", "", "d", "bulk", PORT_RESISTOR, "D")
    net.port("load", "", "bulk", "0", PORT_RESISTOR, "load")
    compiled = compile_netlist(net)
    state, span = initial_state(compiled), 2e-4
    watch = Watch(nodes=(compiled.index("bulk"),), start=0.1 * span, rows=1)
    stretch = run_stretch(compiled, state, 0.0, span, watch, quality)
    capacitor, diode, load = stretch.statistics
    counted = span - stretch.trace[0, 0]
    passed = capacitor[I_MEAN] * 0.9 * span
    assert passed == pytest.approx(1e-7 * (state.capacitors[0] - stretch.trace[0, 1]), rel=1e-4, abs=1e-12)
    assert diode[I_MEAN] == pytest.approx(capacitor[I_MEAN] + load[I_MEAN], rel=1e-6)
    assert counted == pytest.approx(0.9 * span, rel=0.02)


@QUALITIES
def test_windings_transform_by_their_turns(quality: Quality, most: float) -> None:
    """v2 / v1 = k sqrt(L2 / L1) of an unloaded pair (definition of mutual inductance); the load's current the other way."""
    net = Netlist("0")
    net.sine("drive", "p", "0", 10.0, 50e3, math.pi / 2.0, 1e-3)
    net.coupled([("prim", "p", "0", 1e-2, 0.0), ("sec", "s", "0", 1e-4, 0.0)], {("prim", "sec"): 0.999})
    net.resistor("load", "s", "0", 1e3)
    net.port("prim", "", "p", "0", PORT_WINDING, "prim")
    net.port("sec", "", "s", "0", PORT_WINDING, "sec")
    net.port("s", "node", "s", "0", PORT_NONE)
    compiled = compile_netlist(net)
    state = initial_state(compiled)
    primary, secondary, node = run_stretch(compiled, state, 0.0, 2e-4, None, quality).statistics
    assert node[V_RMS] / primary[V_RMS] == pytest.approx(0.0999, rel=most)
    assert secondary[I_RMS] == pytest.approx(node[V_RMS] / 1e3, rel=1e-3)


def charger(load: float, quality: Quality, span: float = 1.2e-3) -> tuple[Stretch, dict[tuple[str, str], int]]:
    """A stretch of the shipped charger running, after 0.6 ms."""
    net = circuit(load_profile("harbour-handset-charger"), load=load)
    compiled = compile_netlist(net)
    idle = load > 1e3
    state = initial_state(compiled, {"C1": 320.4, "C5": 5.5 if idle else 5.0, "C4": 5.5, "C2": 66.5 if idle else 97.0})
    watch = Watch((compiled.index("coll"), -1, compiled.index("bulk"), -1))
    run_stretch(compiled, state, 0.0, 6e-4, watch, quality)
    stretch = run_stretch(compiled, state, 6e-4, 6e-4 + span, watch, quality)
    return stretch, {(port.ref, port.suffix): row for row, port in enumerate(net.ports)}


@pytest.mark.parametrize("load", [8.3333, 1e6], ids=["full", "noload"])
def test_quick_keeps_what_fine_shows(load: float) -> None:
    """The bounds the readings under faults are worth: 1 % of the output, 2 % of the collector, 5 % of the clamp."""
    fine, rows = charger(load, FINE)
    quick, _ = charger(load, QUICK)
    assert quick.steps < 0.85 * fine.steps

    def ratio(ref: str, suffix: str, column: int) -> float:
        row = rows[ref, suffix]
        return float(quick.statistics[row, column] / fine.statistics[row, column])

    assert quick.frequency == pytest.approx(fine.frequency, rel=0.03)
    assert ratio("out", "node", V_MEAN) == pytest.approx(1.0, abs=0.01)
    assert ratio("coll", "node", V_MAX) == pytest.approx(1.0, abs=0.02)
    assert ratio("C2", "", V_MEAN) == pytest.approx(1.0, abs=0.05)
    assert ratio("Q1", "", POWER) == pytest.approx(1.0, abs=0.05)


def test_the_charger_agrees_with_a_general_circuit_simulator() -> None:
    """Full load, 0.6 to 1.8 ms: ngspice at a relative tolerance of 1e-4 and steps of 50 ns at most, run by hand on the same
    circuit over 2 to 4 ms: clamp 97 V over the bulk voltage, secondary peak 2.33 A, output 5.054 V."""
    stretch, rows = charger(8.3333, FINE)
    assert stretch.statistics[rows["C2", ""], V_MEAN] == pytest.approx(97.0, rel=0.02)
    assert stretch.statistics[rows["T1", "_secondary"], I_MAX] == pytest.approx(2.33, rel=0.02)
    assert stretch.statistics[rows["out", "node"], V_MEAN] == pytest.approx(5.054, rel=0.005)


def test_an_oscillator_leaves_its_equilibrium() -> None:
    """From the direct-current solution of the charger nothing but its own instability makes it swing."""
    net = circuit(load_profile("harbour-handset-charger"), load=1e6)
    compiled = compile_netlist(net)
    watch = Watch((compiled.index("coll"), -1, compiled.index("bulk"), -1))
    stretch = run_stretch(compiled, rest_state(compiled), 0.0, 2e-3, watch, QUICK)
    assert stretch.frequency > 1e3


def test_the_same_run_twice_is_the_same_to_the_last_bit() -> None:
    """Nothing in the solver depends on anything but its input."""
    first, _ = charger(8.3333, QUICK, 3e-4)
    second, _ = charger(8.3333, QUICK, 3e-4)
    assert first.steps == second.steps
    assert first.statistics.tobytes() == second.statistics.tobytes()
