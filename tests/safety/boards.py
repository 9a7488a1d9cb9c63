"""Small boards built by hand for the tests of this room: a charger cube, a laptop brick, an iron-transformer
adapter."""

from triage.board.part import Board, Label, Mains, Part

EUROPE = Mains(frequency=50.0, low=207.0, nominal=230.0, high=253.0)
WIDE = Mains(frequency=50.0, low=90.0, nominal=230.0, high=264.0)


def two(ref: str, kind: str, role: str, a: str, b: str, **value: float) -> Part:
    """A two-pin part with the pin names of its kind."""
    names = {
        "diode": ("anode", "cathode"),
        "zener": ("anode", "cathode"),
        "led": ("anode", "cathode"),
        "electrolytic": ("plus", "minus"),
    }.get(kind, ("a", "b"))
    return Part(ref, kind, role, dict(zip(names, (a, b), strict=True)), value)


def charger(marked_year: int | None = 2014, startup: float = 1e6) -> Board:
    """A 5 V 0.6 A ringing-choke cube, half-wave input, 4.7 uF bulk, two grounds."""
    parts = (
        two("RF1", "fusible_resistor", "fusible input resistor", "mains_l", "rect", resistance=10.0),
        two("D1", "diode", "mains rectifier", "rect", "bulk"),
        Part(
            "C1",
            "electrolytic",
            "bulk capacitor",
            {"plus": "bulk", "minus": "pgnd"},
            {"capacitance": 4.7e-6, "esr": 1.5, "leakage_resistance": 1.8e7},
            {"capacitance": 0.2},
            {"voltage": 400.0},
        ),
        two("R1", "resistor", "startup resistor", "bulk", "base", resistance=startup),
        Part(
            "T1",
            "transformer",
            "flyback transformer",
            {"pri_s": "bulk", "pri_e": "coll", "fb_s": "fb", "fb_e": "pgnd", "sec_s": "sgnd", "sec_e": "sec"},
        ),
        Part(
            "Q1",
            "bipolar_transistor",
            "main switch",
            {"collector": "coll", "base": "base", "emitter": "pgnd"},
        ),
        two("D3", "diode", "base reset diode", "pgnd", "base"),
        two("D5", "diode", "output rectifier", "sec", "out"),
        two("C5", "electrolytic", "output capacitor", "out", "sgnd", capacitance=470e-6),
    )
    return Board(
        "cube",
        "5 V 0.6 A charger",
        "ringing_choke_zener",
        Label("220-240 V~ 50 Hz", 5.0, 0.6, "II", marked_year),
        EUROPE,
        parts,
        {"primary": ("mains_l", "rect", "bulk", "coll", "base", "pgnd"), "secondary": ("sec", "out", "sgnd")},
        {"primary": "pgnd", "secondary": "sgnd"},
    )


def brick(discharge_resistance: float | None = 1e6, year: int | None = 2019) -> Board:
    """A 19 V 3.42 A laptop brick: fuse, varistor, X and Y capacitor, bridge, 120 uF bulk, optocoupler."""
    parts = [
        two("F1", "fuse", "mains fuse", "mains_l", "line", resistance=0.05),
        two("RV1", "varistor", "varistor", "line", "mains_n"),
        Part(
            "CX1",
            "capacitor",
            "X capacitor",
            {"a": "line", "b": "mains_n"},
            {"capacitance": 0.47e-6},
            {"capacitance": 0.0},
        ),
        Part(
            "BD1",
            "bridge",
            "mains bridge",
            {"ac1": "line", "ac2": "mains_n", "plus": "bulk", "minus": "pgnd"},
        ),
        Part(
            "C1",
            "electrolytic",
            "bulk capacitor",
            {"plus": "bulk", "minus": "pgnd"},
            {"capacitance": 120e-6, "esr": 0.5},
            {"capacitance": 0.0},
        ),
        Part(
            "T1",
            "transformer",
            "flyback transformer",
            {"pri_s": "bulk", "pri_e": "drain", "sec_s": "sgnd", "sec_e": "sec"},
        ),
        Part("Q1", "mosfet", "main switch", {"drain": "drain", "gate": "gate", "source": "pgnd"}),
        two("D2", "diode", "output rectifier", "sec", "out"),
        two("C5", "electrolytic", "output capacitor", "out", "sgnd", capacitance=1000e-6),
        Part(
            "OC1",
            "optocoupler",
            "optocoupler",
            {"anode": "out", "cathode": "sgnd", "collector": "gate", "emitter": "pgnd"},
        ),
        two("CY1", "capacitor", "Y capacitor", "pgnd", "sgnd", capacitance=2.2e-9),
    ]
    if discharge_resistance is not None:
        parts.append(two("R9", "resistor", "X discharge resistor", "line", "mains_n", resistance=discharge_resistance))
    return Board(
        "brick",
        "19 V 3.42 A laptop supply",
        "pwm_flyback",
        Label("100-240 V~ 50/60 Hz", 19.0, 3.42, "II", year),
        WIDE,
        tuple(parts),
        {
            "primary": ("mains_l", "mains_n", "line", "bulk", "drain", "gate", "pgnd"),
            "secondary": ("sec", "out", "sgnd"),
        },
        {"primary": "pgnd", "secondary": "sgnd"},
    )


def iron(year: int | None = None) -> Board:
    """A 9 V 0.5 A adapter with mains transformer, bridge and reservoir, no regulator."""
    parts = (
        Part(
            "T1",
            "transformer",
            "mains transformer",
            {"pri_s": "mains_l", "pri_e": "mains_n", "sec_s": "ac1", "sec_e": "ac2"},
        ),
        Part("BD1", "bridge", "bridge", {"ac1": "ac1", "ac2": "ac2", "plus": "out", "minus": "sgnd"}),
        two("C1", "electrolytic", "reservoir capacitor", "out", "sgnd", capacitance=1000e-6),
    )
    return Board(
        "iron",
        "9 V 0.5 A adapter",
        "linear_unregulated",
        Label("230 V~ 50 Hz", 9.0, 0.5, "II", year),
        EUROPE,
        parts,
        {"primary": ("mains_l", "mains_n"), "secondary": ("ac1", "ac2", "out", "sgnd")},
        {"primary": "mains_n", "secondary": "sgnd"},
    )
