"""What every circuit must obey, on shipped boards with their values moved at random within a third: physics, no source needed.

Energy, charge, reciprocity, units and the sense of dependences. Boards of mains frequency are moved where a powered solution is
needed; the switching boards are taken as they are, at full load.
"""

import itertools
import math
from dataclasses import replace

import numpy as np
import pytest

from triage.board.circuit import NOMINAL, Draw
from triage.board.fault import Fault
from triage.board.kinds import OPEN
from triage.board.part import Board
from triage.board.probe import Probe
from triage.board.profile import load_profile
from triage.families import family_of
from triage.families.cold import cold_probes, read_cold
from triage.families.steady import Settled, rated_start, settle
from triage.physics.transient import FINE, I_MEAN, I_RMS, POWER, QUICK, V_MAX, V_MEAN, V_MIN, V_RMS, Quality

LINEAR = ("choir-keyboard-supply", "mast-lamp-adapter", "harbour-gate-timer")
COLD = ("choir-keyboard-supply", "mast-lamp-adapter", "harbour-gate-timer", "harbour-handset-charger", "weather-display-adapter")
SWITCHING = ("harbour-handset-charger", "fish-dock-ice-controller",
             *(pytest.param(name, marks=pytest.mark.long)
               for name in ("weather-display-adapter", "pilot-boat-handset-charger", "tide-gauge-brick")))
MOVED = 0.33
"""Most a value is moved, as a share of itself."""


def moved(board: Board, seed: int) -> Draw:
    """A specimen with every value of a resistor or capacitor moved."""
    rng = np.random.default_rng(seed)
    values = {(part.ref, key): part.value[key] * float(rng.uniform(1 - MOVED, 1 + MOVED))
              for part in board.parts for key in ("resistance", "capacitance", "esr") if key in part.value}
    return Draw(values, {})


def settled(board: Board, draw: Draw, load: float, mains: float | None = None, quality: Quality = FINE,
            faults: tuple[Fault, ...] = ()) -> Settled:
    """Steady state of a specimen."""
    family = family_of(board.family)
    return settle(board, family, faults, mains=mains or board.mains.nominal, load=load, quality=quality,
                  start=rated_start(board, family), draw=draw)


def output(at: Settled) -> float:
    """Mean output voltage [V]."""
    return float(at.row("out", "node")[V_MEAN])


@pytest.mark.parametrize("name", LINEAR)
@pytest.mark.parametrize("seed", [1, 2])
def test_capacitors_take_no_charge_over_a_settled_period(name: str, seed: int) -> None:
    """Mean current of each capacitor against its own alternating current and that of the output."""
    board = load_profile(name)
    at = settled(board, moved(board, seed), board.full_load)
    carried = abs(output(at)) / board.full_load
    for part in board.parts:
        if "capacitance" in part.value and (part.ref, "") in at.rows:
            row = at.row(part.ref)
            assert abs(row[I_MEAN]) <= 0.01 * max(float(row[I_RMS]), carried), part.ref


def losses(board: Board, at: Settled) -> float:
    """What the parts turn to heat [W], each by its own port; a port at a gate or base shows a voltage only.

    Two have no port that shows all: a regulator passes the direct current of the rectifiers down by its drop, and a step-down
    switcher lives on a small current from its drain.
    """
    refs = {part.ref for part in board.parts}
    heat = sum(float(at.row(ref, suffix)[POWER]) for ref, suffix in at.rows if ref in refs and suffix not in ("_gate", "_base"))
    for part in board.parts:
        if part.kind == "regulator":
            passed = sum(float(at.row(one.ref)[I_MEAN]) for one in board.parts if one.pins.get("cathode") == part.pins["in"])
            heat += passed * float(at.row(part.pins["in"], "node")[V_MEAN] - at.row(part.pins["out"], "node")[V_MEAN])
        elif part.kind == "buck_switcher":
            heat += float(at.row(part.ref)[V_MEAN]) * part.value.get("supply_current", 2.5e-4)
    return heat


@pytest.mark.parametrize("name", LINEAR)
@pytest.mark.parametrize("seed", [3, 4])
def test_what_goes_in_is_what_comes_out_and_what_the_parts_lose(name: str, seed: int) -> None:
    """3 %: the quiet current of a regulator, and what a period that still settles stores."""
    board = load_profile(name)
    at = settled(board, moved(board, seed), board.full_load)
    given, out = float(at.row("ADAPTER")[POWER]), float(at.row("out", "node")[V_RMS]) ** 2 / board.full_load
    assert out + losses(board, at) == pytest.approx(given, rel=0.03)


@pytest.mark.parametrize("name", SWITCHING)
def test_switching_boards_keep_energy_and_charge(name: str) -> None:
    """1 %: the quick solution keeps outputs within half of that. Below a nanoampere there is nothing but rounding."""
    board = load_profile(name)
    at = settled(board, NOMINAL, board.full_load, quality=QUICK)
    given, out = float(at.row("ADAPTER")[POWER]), float(at.row("out", "node")[V_RMS]) ** 2 / board.full_load
    assert out + losses(board, at) == pytest.approx(given, rel=0.01)
    counted = 0
    for part in board.parts:
        if "capacitance" in part.value and (part.ref, "") in at.rows:
            counted += 1
            assert abs(float(at.row(part.ref)[I_MEAN])) <= max(0.02 * float(at.row(part.ref)[I_RMS]), 1e-9), part.ref
    assert counted >= 4


@pytest.mark.parametrize("name", ("mast-lamp-adapter",))
@pytest.mark.parametrize("seed", [5, 6])
def test_more_load_never_raises_the_output_of_an_unregulated_supply(name: str, seed: int) -> None:
    board = load_profile(name)
    volts = [output(settled(board, moved(board, seed), board.full_load * share)) for share in (20.0, 4.0, 2.0, 1.0, 0.5)]
    assert all(later < earlier for earlier, later in itertools.pairwise(volts)), volts


@pytest.mark.parametrize("name", ("mast-lamp-adapter", "harbour-gate-timer", "choir-keyboard-supply"))
def test_more_mains_never_lowers_the_output_nor_the_input_power(name: str) -> None:
    board = load_profile(name)
    at = [settled(board, NOMINAL, board.full_load, mains) for mains in (board.mains.low, board.mains.nominal, board.mains.high)]
    volts, watts = [output(one) for one in at], [float(one.row("ADAPTER")[POWER]) for one in at]
    assert volts == sorted(volts) or max(volts) - min(volts) < 0.01 * max(volts)
    assert watts == sorted(watts)


@pytest.mark.parametrize("name", ("choir-keyboard-supply", "mast-lamp-adapter"))
def test_less_capacitance_means_more_ripple(name: str) -> None:
    board = load_profile(name)
    part = board.by_role("reservoir capacitor")
    assert part is not None
    ripples = []
    for share in (1.0, 0.5, 0.25):
        draw = Draw({(part.ref, "capacitance"): part.value["capacitance"] * share}, {})
        row = settled(board, draw, board.full_load).row(part.ref)
        ripples.append(float(row[V_MAX] - row[V_MIN]))
    assert ripples[0] < ripples[1] < ripples[2]


@pytest.mark.parametrize("name", COLD)
@pytest.mark.parametrize("seed", [7, 8])
def test_ohms_of_the_passive_network_do_not_know_which_lead_is_red(name: str, seed: int) -> None:
    """Reciprocity of a network of resistances: the leads may be turned."""
    board = load_profile(name)
    probes = [probe for probe in cold_probes(board) if probe.function == "ohms"]
    turned = [Probe(probe.function, probe.minus, probe.plus) for probe in probes]
    draw = moved(board, seed)
    here, there = (read_cold(bare(board), (), some, [draw])[:, 0] for some in (probes, turned))
    for probe, a, b in zip(probes, here, there, strict=True):
        assert (math.isinf(a) and math.isinf(b)) or a == pytest.approx(b, rel=1e-6, abs=1e-6), probe


@pytest.mark.parametrize("name", COLD)
def test_a_network_of_ten_times_the_ohms_reads_ten_times_the_ohms(name: str) -> None:
    """Resistance is the only unit in a network of resistances: readings are homogeneous in them, of degree one. Fuses keep their
    fraction of an ohm, and the meter has its own 10 Mohm: readings between are compared."""
    board, kinds = load_profile(name), ("resistor", "fusible_resistor", "fuse", "thermal_fuse")
    board = replace(board, parts=tuple(part for part in board.parts if part.kind in kinds))
    probes = [probe for probe in cold_probes(load_profile(name)) if probe.function == "ohms"]
    before = read_cold(board, (), probes)[:, 0]
    tenfold = {(part.ref, "resistance"): 10.0 * part.value["resistance"] for part in board.parts if "resistance" in part.value}
    after = read_cold(board, (), probes, [Draw(tenfold, {})])[:, 0]
    compared = (before > 5.0) & (after < 1e6)
    assert compared.any() and after[compared] == pytest.approx(10.0 * before[compared], rel=0.01)


def bare(board: Board) -> Board:
    """The board without its semiconductors."""
    passive = ("resistor", "fusible_resistor", "fuse", "thermal_fuse", "capacitor", "electrolytic", "x_capacitor", "y_capacitor",
               "transformer", "inductor", "cable", "connector", "varistor", "ntc")
    return replace(board, parts=tuple(part for part in board.parts if part.kind in passive))


@pytest.mark.parametrize("name", COLD)
def test_a_resistance_more_never_lowers_a_reading_of_the_passive_network(name: str) -> None:
    """Rayleigh's monotonicity law of resistive networks."""
    board = bare(load_profile(name))
    probes = [probe for probe in cold_probes(load_profile(name)) if probe.function == "ohms"]
    before = read_cold(board, (), probes)[:, 0]
    for part in [part for part in board.parts if part.kind in ("resistor", "fusible_resistor")][:6]:
        more = Draw({(part.ref, "resistance"): 3.0 * part.value["resistance"]}, {})
        after = read_cold(board, (), probes, [more])[:, 0]
        assert np.all((after >= before * (1 - 1e-6)) | (np.isinf(before) & np.isinf(after))), part.ref


@pytest.mark.parametrize("name", COLD)
def test_an_open_part_never_lowers_and_a_short_never_raises_a_reading(name: str) -> None:
    """The same law for the two extremes. An open capacitor is the 1e10 ohm that stand for an open part, a sound one has none."""
    board = bare(load_profile(name))
    probes = [probe for probe in cold_probes(load_profile(name)) if probe.function == "ohms"]
    before = read_cold(board, (), probes)[:, 0]
    for part in [part for part in board.parts if part.kind in ("resistor", "electrolytic", "capacitor")][:6]:
        for mode, sense in (("open", 1), ("short", -1)):
            after = read_cold(board, (Fault(part.ref, mode),), probes)[:, 0]
            known, leak = np.isfinite(before) & np.isfinite(after), np.where(np.isfinite(before), before, 0.0) ** 2 / OPEN
            assert np.all(sense * (after[known] - before[known]) >= -(1e-6 * before + leak)[known]), (part.ref, mode)
            assert np.all(np.isinf((after if mode == "open" else before)[~known])), (part.ref, mode)
