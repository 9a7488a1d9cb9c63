"""Cables, connectors, common-mode chokes and varistors as the circuit sees them."""

import math

import pytest

from triage.board.circuit import circuit
from triage.board.fault import Fault
from triage.board.part import Board, Label, Mains, Part
from triage.board.probe import Probe
from triage.families.cold import read_cold
from triage.physics.netlist import Netlist, compile_netlist
from triage.physics.transient import I_MAX, I_RMS, V_MAX, initial_state, run_stretch

PINS = {"a_in": "mains_l", "a_out": "out", "b_in": "mains_n", "b_out": "back"}


def _board(part, *more):
    nodes = {node for one in (part, *more) for node in one.pins.values()}
    return Board("wire", "a cord", "linear_unregulated", Label("230 V~", 12.0, 1.0), Mains(50.0, 207.0, 230.0, 253.0),
                 (part, *more), {"primary": tuple(sorted(nodes))}, {"primary": "back"})


def _ohms(board, plus, minus, *faults):
    return float(read_cold(board, tuple(map(Fault.parse, faults)), (Probe("ohms", plus, minus),))[0, 0])


VARISTOR = Part("RV1", "varistor", "varistor", {"a": "out", "b": "back"}, {"varistor_voltage": 470.0}, ratings={"voltage": 385.0})
WIRE = Part("R1", "resistor", "inrush resistor", {"a": "mains_l", "b": "out"}, {"resistance": 2.0})
CORD = _board(Part("W1", "cable", "mains cord", PINS, {"resistance": 0.1}))


@pytest.mark.parametrize(("fault", "pair", "low", "high"), [
    ((), ("mains_l", "out"), 0.05, 0.2), ((), ("mains_l", "mains_n"), 1e8, math.inf),
    (("W1.open",), ("mains_l", "out"), 1e8, math.inf), (("W1.open",), ("mains_n", "back"), 0.05, 0.2),
    (("W1.return_open",), ("mains_n", "back"), 1e8, math.inf),
    (("W1.high",), ("mains_l", "out"), 19.0, 22.0), (("W1.short",), ("mains_l", "mains_n"), 0.1, 1.0),
])  # fmt: skip
def test_cold_readings_along_and_across_a_cord(fault, pair, low, high):
    """Reasoned: each conductor by itself, none to the other but for a short."""
    assert low <= _ohms(CORD, *pair, *fault) <= high


def _choke_inductance(returns: bool) -> float:
    """Inductance of a choke [H] for a current that comes back through the other winding, or for one through both alike."""
    net = Netlist(reference="0")
    part = Part("L1", "common_mode_choke", "common-mode choke", {"a_in": "l", "a_out": "x", "b_in": "n" if returns else "l",
                                                               "b_out": "y" if returns else "x"},
                {"inductance": 0.01, "leakage_inductance": 1e-4, "resistance": 1e-3})
    from triage.board.kinds import State, kinds

    kinds()["common_mode_choke"].place(net, part, State())
    net.resistor("load", "x", "y" if returns else "0", 1e-3)
    net.sine("mains", "l", "n" if returns else "0", 1.0, 1e4, math.pi / 2.0, 1e-3)
    net.resistor("tie", "n" if returns else "l", "0", 1e6 if not returns else 1e-3)
    net.port("mains", "", "l", "n" if returns else "0", 3, "mains")
    compiled = compile_netlist(net)
    stretch = run_stretch(compiled, initial_state(compiled), 0.0, 5e-3, skip=4e-3)
    return 1.0 / math.sqrt(2.0) / float(stretch.statistics[-1, I_RMS]) / (2.0 * math.pi * 1e4)


def test_a_common_mode_choke_has_its_inductance_only_for_common_currents():
    """Reasoned: fluxes of going and returning current cancel but for the stray; two windings side by side have the whole."""
    assert _choke_inductance(returns=True) == pytest.approx(1e-4, rel=0.03)
    assert _choke_inductance(returns=False) == pytest.approx(0.01, rel=0.1), "the core loss lies across it"


def _varistor_surge(volts: float, mode: str = "") -> tuple[float, float]:
    """(highest voltage [V], highest current [A]) of a 470 V varistor behind 2 ohm from a sine of this crest."""
    board = _board(VARISTOR, WIRE)
    net = circuit(board, (Fault("RV1", mode),) if mode else (), mains=volts / math.sqrt(2.0), load=1e6)
    compiled = compile_netlist(net)
    row = next(k for k, port in enumerate(net.ports) if port.ref == "RV1")
    stretch = run_stretch(compiled, initial_state(compiled), 0.0, 0.02)
    return float(stretch.statistics[row, V_MAX]), float(stretch.statistics[row, I_MAX])


def test_a_varistor_is_nothing_at_the_mains_and_clamps_a_surge():
    """Makers' sheets of 470 V discs (from memory): microamperes at 300 V rms, 775 V at 10 to 25 A for discs of 7 and 10 mm."""
    assert _varistor_surge(253.0 * math.sqrt(2.0))[1] < 2e-3
    volts, amperes = _varistor_surge(1000.0)
    assert 470.0 < volts < 775.0 and amperes > 50.0
    assert _varistor_surge(1000.0, "open")[0] == pytest.approx(1000.0, rel=0.01)
    assert _varistor_surge(325.0, "short")[0] < 5.0


def test_a_varistor_reads_open_on_the_meter_until_it_is_short_or_leaky():
    varistor = _board(VARISTOR, WIRE)
    assert _ohms(varistor, "out", "back") > 1e7
    assert _ohms(varistor, "out", "back", "RV1.short") < 1.0
    assert _ohms(varistor, "out", "back", "RV1.leaky") == pytest.approx(47e3, rel=0.02)
