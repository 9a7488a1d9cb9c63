"""Well-known good and bad substitutions of the trade: what is offered and what is refused, and by which rule.

Common practice, no source, unless the note says otherwise; stresses are of the size that a small charger has.
"""

import pytest

from tests.replacement.boards import SECOND, TWO, board, part, stress
from triage.board.part import Part
from triage.board.stress import Stress
from triage.replacement.catalog import Catalog
from triage.replacement.demand import demand
from triage.replacement.drawers import Drawers, StockItem
from triage.replacement.ranking import judge

CATALOG = Catalog()

_PLACES: dict[str, tuple[Part, tuple[Stress, ...], dict[str, float | str]]] = {}


def _place(
    name: str,
    kind: str,
    role: str,
    type_number: str = "",
    secondary: bool = False,
    stresses: tuple[Stress, ...] = (),
    family: str = "ringing_choke_zener",
    **figures: float,
) -> None:
    _PLACES[name] = (part("X1", kind, role, type_number, SECOND if secondary else TWO, **figures), stresses, {"family": family})


def _on(**values: float) -> tuple[Stress, ...]:
    return stress("X1", **values)


_place(
    "half-wave 1N4007",
    "diode",
    "mains rectifier",
    "1N4007",
    stresses=_on(reverse_voltage=711.0, average_current=0.016),
    rated_voltage=1000.0,
    rated_current=1.0,
)
_place("clamp FR107", "diode", "clamp diode", "FR107", stresses=_on(reverse_voltage=439.0, average_current=0.0004))
_place("clamp UF4007", "diode", "clamp diode", "UF4007", stresses=_on(reverse_voltage=439.0, average_current=0.0004))
_place("clamp 1N4007", "diode", "clamp diode", "1N4007", stresses=_on(reverse_voltage=439.0, average_current=0.0004))
_place("bridge DB107", "bridge", "mains bridge", "DB107", stresses=_on(reverse_voltage=358.0, average_current=0.1))
_place(
    "switch 13003",
    "bipolar_transistor",
    "main switch",
    "MJE13003",
    stresses=_on(peak_voltage=461.0, peak_current=0.15, power=0.66),
    gain=25.0,
)
_place("switch 4N60", "mosfet", "power switch", "4N60", stresses=_on(peak_voltage=470.0, peak_current=1.0, power=1.0))
_place("switch 4N60, 520 V", "mosfet", "power switch", "4N60", stresses=_on(peak_voltage=520.0, peak_current=1.0, power=1.0))
_place("output SB260", "diode", "output rectifier", "SB260", True, _on(reverse_voltage=35.5, average_current=0.61))
_place("output SB560", "diode", "output rectifier", "SB560", True, _on(reverse_voltage=40.0, average_current=2.0))
_place("output HER303", "diode", "output rectifier", "HER303", True, _on(reverse_voltage=50.0, average_current=1.0))
_place("aux, 39 V", "diode", "auxiliary rectifier", "1N4148", stresses=_on(reverse_voltage=39.0, average_current=0.002))
_place("aux, 90 V", "diode", "auxiliary rectifier", "1N4148", stresses=_on(reverse_voltage=90.0, average_current=0.002))
_place("zener 6.2", "zener", "regulation zener", stresses=_on(power=0.0104), zener_voltage=6.2, rated_power=0.5)
_place("zener 5.6", "zener", "output voltage reference zener", "BZX55C5V6", True, _on(power=0.01), zener_voltage=5.6)
_place("opto PC817B", "optocoupler", "optocoupler", "PC817B", stresses=_on(peak_voltage=12.0, average_current=0.004))
_place("opto PC817A", "optocoupler", "optocoupler", "PC817A", stresses=_on(peak_voltage=12.0, average_current=0.004))
_place("reference TL431", "shunt_reference", "shunt reference", "TL431", True, _on(peak_voltage=12.0, average_current=0.004))
_place("reference TLV431", "shunt_reference", "shunt reference", "TLV431", True, _on(peak_voltage=3.0, average_current=0.004))
_place("fuse T1A L", "fuse", "mains fuse", "T 1A 5x20 L", rated_current=1.0)
_place("fuse T1A H", "fuse", "mains fuse", "T 1A 5x20 H", rated_current=1.0)
_place("fusible 10 ohm", "fusible_resistor", "fusible input resistor", resistance=10.0, rated_power=1.0)
_place("varistor 471", "varistor", "varistor", "07D471K")
_place("X2 100 nF", "x_capacitor", "X2 capacitor", "X2 104 275Vac P10", capacitance=100e-9)
_place("Y1 2.2 nF", "y_capacitor", "Y1 capacitor", "Y1 222 400Vac", capacitance=2.2e-9)
_place(
    "bulk 4.7 uF",
    "electrolytic",
    "bulk capacitor",
    stresses=_on(peak_voltage=357.0, ripple_current=0.05),
    capacitance=4.7e-6,
    rated_voltage=400.0,
    rated_temperature=105.0,
)
_place(
    "output 470 uF",
    "electrolytic",
    "output capacitor",
    "",
    True,
    _on(peak_voltage=5.5, ripple_current=0.45),
    capacitance=470e-6,
    esr=0.1,
    rated_voltage=10.0,
    rated_temperature=105.0,
)
_place("startup 1 M", "resistor", "startup resistor", stresses=_on(peak_voltage=358.0, power=0.125), resistance=1e6)
_place("startup 330 k", "resistor", "startup resistor", stresses=_on(peak_voltage=375.0, power=0.426), resistance=330e3)
_place("sense 1 ohm", "resistor", "current sense resistor", stresses=_on(power=0.1), resistance=1.0, rated_power=0.5)
_place(
    "snubber 22 ohm", "resistor", "snubber resistor", stresses=_on(power=0.1, peak_voltage=40.0), resistance=22.0, rated_power=0.5
)
_place("clamp C 1 nF", "capacitor", "clamp capacitor", stresses=_on(peak_voltage=106.0), capacitance=1e-9, rated_voltage=1000.0)
_place(
    "regulator 7809",
    "regulator",
    "three-terminal regulator",
    "7809",
    True,
    _on(peak_voltage=20.0, average_current=0.5),
    "linear_regulated",
)
_place(
    "regulator 78L05",
    "regulator",
    "three-terminal regulator",
    "78L05",
    True,
    _on(peak_voltage=12.0, average_current=0.05),
    "linear_regulated",
)
_place(
    "small 2SC945",
    "bipolar_transistor",
    "turn-off transistor",
    "2SC945",
    stresses=_on(peak_voltage=9.0, peak_current=0.01, power=0.01),
    gain=200.0,
)
_place("NTC 5D-9", "ntc", "inrush NTC", "5D-9", stresses=_on(rms_current=0.8), cold_resistance=5.0)
_place("bleeder 1 M", "resistor", "X discharge resistor", stresses=_on(power=0.06), resistance=1e6)

OFFERED, REFUSED = True, False
TABLE = [
    # place, candidate, offered?, rule that refuses it
    ("half-wave 1N4007", "1N4007", OFFERED, ""),
    ("half-wave 1N4007", "BY133", OFFERED, ""),
    ("half-wave 1N4007", "UF4007", OFFERED, ""),
    ("half-wave 1N4007", "1N4004", REFUSED, "rating"),
    ("half-wave 1N4007", "1N4005", REFUSED, "rating"),
    ("half-wave 1N4007", "1N5408", REFUSED, "body"),
    ("half-wave 1N4007", "1N4148", REFUSED, "class"),
    ("half-wave 1N4007", "SB1100", REFUSED, "class"),
    ("half-wave 1N4007", "B340", REFUSED, "body"),
    ("clamp FR107", "FR107", OFFERED, ""),
    ("clamp FR107", "UF4007", OFFERED, ""),
    ("clamp FR107", "1N4007", REFUSED, "class"),
    ("clamp FR107", "UF4004", REFUSED, "rating"),
    ("clamp UF4007", "FR107", REFUSED, "rating"),
    ("clamp 1N4007", "1N4007", OFFERED, ""),
    ("clamp 1N4007", "UF4007", OFFERED, ""),
    ("clamp 1N4007", "1N4148", REFUSED, "class"),
    ("bridge DB107", "DB107", OFFERED, ""),
    ("bridge DB107", "DB105", REFUSED, "rating"),
    ("bridge DB107", "KBP210", REFUSED, "body"),
    ("switch 13003", "MJE13003", OFFERED, ""),
    ("switch 13003", "MJE13001", REFUSED, "body"),
    ("switch 13003", "MJE13007", REFUSED, "body"),
    ("switch 13003", "MJE13002", REFUSED, "rating"),
    ("switch 13003", "BD139", REFUSED, "rating"),
    ("switch 13003", "4N60", REFUSED, "class"),
    ("switch 13003", "2SC1815", REFUSED, "rating"),
    ("switch 4N60", "4N60", OFFERED, ""),
    ("switch 4N60", "4N65", OFFERED, ""),
    ("switch 4N60", "2N60", REFUSED, "rating"),
    ("switch 4N60", "IRF740", REFUSED, "rating"),
    ("switch 4N60", "10N60", REFUSED, "rating"),
    ("switch 4N60", "2N7000", REFUSED, "rating"),
    ("switch 4N60", "IRF840", REFUSED, "rating"),
    ("switch 4N60, 520 V", "4N60", REFUSED, "rating"),
    ("switch 4N60, 520 V", "4N65", OFFERED, ""),
    ("output SB260", "SB260", OFFERED, ""),
    ("output SB260", "SB240", REFUSED, "rating"),
    ("output SB260", "SB2100", REFUSED, "rating"),
    ("output SB260", "FR107", REFUSED, "class"),
    ("output SB260", "1N5819", REFUSED, "rating"),
    ("output SB260", "1N5822", REFUSED, "body"),
    ("output SB260", "UF4007", REFUSED, "class"),
    ("output SB560", "SB560", OFFERED, ""),
    ("output SB560", "SB360", REFUSED, "rating"),
    ("output HER303", "HER303", OFFERED, ""),
    ("output HER303", "SB5100", OFFERED, ""),
    ("output HER303", "FR303", REFUSED, "word"),
    ("output HER303", "1N5408", REFUSED, "class"),
    ("output HER303", "SB340", REFUSED, "rating"),
    ("aux, 39 V", "1N4148", OFFERED, ""),
    ("aux, 39 V", "BAV21", OFFERED, ""),
    ("aux, 39 V", "1N4007", REFUSED, "class"),
    ("aux, 90 V", "1N4148", REFUSED, "rating"),
    ("aux, 90 V", "BAV21", OFFERED, ""),
    ("zener 6.2", "BZX55C6V2", OFFERED, ""),
    ("zener 6.2", "BZX55C5V6", REFUSED, "value"),
    ("zener 6.2", "BZX55C6V8", REFUSED, "value"),
    ("zener 6.2", "1N4735A", REFUSED, "rating"),
    ("zener 5.6", "BZX55C5V1", REFUSED, "value"),
    ("zener 5.6", "1N4734A", REFUSED, "rating"),
    ("opto PC817B", "PC817B", OFFERED, ""),
    ("opto PC817B", "PC817D", REFUSED, "rating"),
    ("opto PC817A", "PC817D", REFUSED, "rating"),
    ("opto PC817B", "PC817A", REFUSED, "rating"),
    ("opto PC817B", "TLP521-1", REFUSED, "rating"),
    ("opto PC817B", "4N35", REFUSED, "body"),
    ("opto PC817B", "EL817B", REFUSED, "from memory"),
    ("reference TL431", "TL431A", OFFERED, ""),
    ("reference TL431", "TLV431", REFUSED, "value"),
    ("reference TLV431", "TL431", REFUSED, "value"),
    ("reference TL431", "TL432", REFUSED, "body"),
    ("reference TL431", "TL431 SOT-23", REFUSED, "body"),
    ("fuse T1A L", "T 1.6A 5x20 L", REFUSED, "value"),
    ("fuse T1A L", "F 1A 5x20 L", REFUSED, "word"),
    ("fuse T1A L", "T 1A TR5", REFUSED, "body"),
    ("fuse T1A H", "T 1A 5x20 L", REFUSED, "rating"),
    ("fuse T1A L", "T 1A 5x20 L", REFUSED, "from memory"),
    ("fusible 10 ohm", "10 metal film 1 W 500 V", REFUSED, "class"),
    ("fusible 10 ohm", "10 fusible 2 W 300 V", REFUSED, "value"),
    ("fusible 10 ohm", "4.7 fusible 1 W 300 V", REFUSED, "value"),
    ("fusible 10 ohm", "10 wirewound 1 W", REFUSED, "class"),
    ("fusible 10 ohm", "10 fusible 1 W 300 V", REFUSED, "from memory"),
    ("varistor 471", "07D431K", REFUSED, "value"),
    ("varistor 471", "05D471K", REFUSED, "rating"),
    ("varistor 471", "07D471K", REFUSED, "from memory"),
    ("X2 100 nF", "104J 630V", REFUSED, "class"),
    ("X2 100 nF", "X2 474 275Vac P15", REFUSED, "value"),
    ("X2 100 nF", "X2 104 275Vac P15", REFUSED, "value"),
    ("X2 100 nF", "Y2 222 250Vac", REFUSED, "class"),
    ("Y1 2.2 nF", "Y1 332 400Vac", REFUSED, "value"),
    ("Y1 2.2 nF", "Y2 222 250Vac", REFUSED, "word"),
    ("Y1 2.2 nF", "disc 222 2kV", REFUSED, "class"),
    ("Y1 2.2 nF", "X2 103 275Vac P10", REFUSED, "class"),
    ("bulk 4.7 uF", "6.8u 400V bulk 10x16", OFFERED, ""),
    ("bulk 4.7 uF", "10u 400V bulk 10x20", REFUSED, "value"),
    ("bulk 4.7 uF", "22u 200V bulk 10x16", REFUSED, "rating"),
    ("bulk 4.7 uF", "10u 50V general 5x11", REFUSED, "rating"),
    ("output 470 uF", "470u 10V low impedance 8x11.5", OFFERED, ""),
    ("output 470 uF", "470u 16V low impedance 8x15", OFFERED, ""),
    ("output 470 uF", "470u 16V general 8x11.5", REFUSED, "word"),
    ("output 470 uF", "2200u 16V low impedance 12.5x25", REFUSED, "value"),
    ("startup 1 M", "1M high voltage glaze 0.5 W 3500 V", OFFERED, ""),
    ("startup 1 M", "1M metal film 1 W 500 V", OFFERED, ""),
    ("startup 1 M", "1M metal film 0.25 W 250 V", REFUSED, "rating"),
    ("startup 1 M", "1M carbon film 2 W 500 V", REFUSED, "word"),
    ("startup 330 k", "330k metal film 0.25 W 250 V", REFUSED, "rating"),
    ("sense 1 ohm", "1 metal oxide film 1 W 350 V", OFFERED, ""),
    ("sense 1 ohm", "1 wirewound 1 W", REFUSED, "word"),
    ("sense 1 ohm", "1.2 metal oxide film 1 W 350 V", REFUSED, "value"),
    ("snubber 22 ohm", "22 wirewound 2 W", REFUSED, "word"),
    ("snubber 22 ohm", "22 metal oxide film 1 W 350 V", OFFERED, ""),
    ("clamp C 1 nF", "disc 102 1kV", OFFERED, ""),
    ("clamp C 1 nF", "disc 222 1kV", REFUSED, "value"),
    ("clamp C 1 nF", "1n multilayer X7R 100 V", REFUSED, "class"),
    ("regulator 7809", "7809", OFFERED, ""),
    ("regulator 7809", "7909", REFUSED, "value"),
    ("regulator 7809", "7812", REFUSED, "value"),
    ("regulator 7809", "78L09", REFUSED, "rating"),
    ("regulator 7809", "LM317", REFUSED, "unknown"),
    ("regulator 78L05", "7805", REFUSED, "body"),
    ("small 2SC945", "2SC1815", OFFERED, ""),
    ("small 2SC945", "BC547", REFUSED, "pins"),
    ("small 2SC945", "2SA733", REFUSED, "word"),
    ("small 2SC945", "MJE13001", REFUSED, "gain"),
    ("NTC 5D-9", "10D-9", REFUSED, "value"),
    ("NTC 5D-9", "5D-7", REFUSED, "rating"),
    ("bleeder 1 M", "1M carbon film 1 W 500 V", OFFERED, ""),
    ("bleeder 1 M", "1.1M carbon film 1 W 500 V", REFUSED, "value"),
    ("bleeder 1 M", "1M carbon film 0.25 W 250 V", REFUSED, "rating"),
]

CHECKED = [
    # safety parts whose values their owner has compared with the sheet
    ("fuse T1A L", "T 1A 5x20 L", OFFERED),
    ("fuse T1A L", "F 1A 5x20 L", REFUSED),
    ("fuse T1A L", "T 1A 5x20 H", REFUSED),
    ("fuse T1A H", "T 1A 5x20 L", REFUSED),
    ("fuse T1A H", "T 1A 5x20 H", OFFERED),
    ("fusible 10 ohm", "10 fusible 1 W 300 V", OFFERED),
    ("fusible 10 ohm", "10 fusible 0.5 W 250 V", REFUSED),
    ("varistor 471", "07D471K", OFFERED),
    ("varistor 471", "10D471K", OFFERED),
    ("varistor 471", "07D431K", REFUSED),
    ("varistor 471", "07D511K", REFUSED),
    ("X2 100 nF", "X2 104 275Vac P10", OFFERED),
    ("X2 100 nF", "X2 104 275Vac P15", REFUSED),
    ("Y1 2.2 nF", "Y1 222 400Vac", OFFERED),
    ("Y1 2.2 nF", "Y1 332 400Vac", REFUSED),
    ("Y1 2.2 nF", "Y2 222 250Vac", REFUSED),
    ("NTC 5D-9", "5D-9", OFFERED),
    ("NTC 5D-9", "5D-11", OFFERED),
    ("NTC 5D-9", "5D-7", REFUSED),
    ("opto PC817B", "EL817B", OFFERED),
    ("opto PC817B", "EL817D", REFUSED),
]


def _judge(place: str, candidate: str, drawers: Drawers | None = None):
    dead, stresses, how = _PLACES[place]
    found = CATALOG.find(candidate)
    assert found is not None, candidate
    return judge(found, demand(board(dead, **how), "X1", stresses, CATALOG), drawers)


@pytest.mark.parametrize(("place", "candidate", "offered", "rule"), TABLE, ids=lambda value: str(value))
def test_known_substitution(place: str, candidate: str, offered: bool, rule: str) -> None:
    """Offered or refused as the trade has it, and refused for the reason the trade gives."""
    judged = _judge(place, candidate)
    assert judged.accepted is offered, [refusal.text for refusal in judged.refusals]
    if not offered:
        assert rule in {refusal.rule for refusal in judged.refusals}, [refusal.text for refusal in judged.refusals]
        assert all(refusal.text for refusal in judged.refusals)


@pytest.mark.parametrize(("place", "candidate", "offered"), CHECKED, ids=lambda value: str(value))
def test_known_substitution_with_values_read_in_the_sheet(place: str, candidate: str, offered: bool) -> None:
    """Once the owner has read the sheet, the like-for-like safety part passes and no other does."""
    found = CATALOG.find(candidate)
    assert found is not None
    judged = _judge(place, candidate, Drawers([StockItem(found.type, 3, checked=True)]))
    assert judged.accepted is offered, [refusal.text for refusal in judged.refusals]


def test_the_table_is_as_long_as_promised() -> None:
    """At least 40 substitutions, good and bad."""
    assert len(TABLE) >= 40
    assert sum(row[2] for row in TABLE) >= 20


def test_a_refusal_gives_both_figures() -> None:
    """Asking about a part answers which rule it fails, with numbers."""
    texts = [refusal.text for refusal in _judge("half-wave 1N4007", "1N4004").refusals]
    assert texts == ["repetitive reverse voltage 400 V; needs at least 1000 V (least rating for the place)"]
