"""Runs a deck that the program wrote in ngspice, and reads from the waveforms what the program's own solver reports.

Only the notation of the deck is used: node names are those of the board, lower case; the current of an element is the drop over
its resistance. Nothing is taken from the program's solution but the capacitor voltages to begin with, which the deck carries.
"""

import re
import subprocess
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from triage.physics.netlist import PORT_CAPACITOR, PORT_NONE, PORT_RESISTOR, PORT_SOURCE, Netlist, Port

LEAST = 1e-6
"""Smallest resistance that a deck holds [ohm]."""
SWITCHING = "reltol=1e-4 abstol=1e-8 vntol=1e-5 chgtol=1e-13 itl4=200 method=gear"
"""For switching boards. The trapezoidal rule rings on the recovery of the clamp diode and doubles its rms current."""
MAINS = "reltol=1e-4 abstol=1e-7 vntol=1e-4 chgtol=1e-12 itl4=100 rshunt=1e11 cshunt=1e-13"
"""For boards of mains frequency, whose regulator is a source that needs a way for the current of the first instant."""


@dataclass(frozen=True, slots=True)
class Waveforms:
    """Voltages of all nodes over a window of time."""

    time: np.ndarray
    """[s]"""
    columns: dict[str, np.ndarray]
    """Name as the simulator has it, lower case -> values [V, A]."""
    reference: str

    def node(self, name: str) -> np.ndarray:
        """Voltage of a node of the board, or of an inner node of a part [V]."""
        if name == self.reference:
            return np.zeros_like(self.time)
        plain = re.sub(r"[^A-Za-z0-9]+", "_", name)[:40].lower()
        return self.columns["n" + plain if plain[0].isdigit() else plain]

    def mean(self, values: np.ndarray) -> float:
        """Mean over the window, steps of unequal length."""
        return float(np.trapezoid(values, self.time) / (self.time[-1] - self.time[0]))

    def rms(self, values: np.ndarray) -> float:
        """Root of the mean square over the window."""
        return float(np.sqrt(self.mean(values**2)))

    def swings(self, values: np.ndarray, level: float) -> float:
        """Upward crossings of a level per second [Hz]."""
        return float(np.sum((values[:-1] < level) & (values[1:] >= level)) / (self.time[-1] - self.time[0]))


def run(program: str, text: str, folder: Path, begin: float, reference: str, options: str) -> Waveforms:
    """Simulate a deck; the window is ``begin`` [s] to the end. Raises AssertionError when the simulator gives up."""
    deck, raw = folder / "deck.cir", folder / "deck.raw"
    deck.write_text(text.replace("\n.end\n", f"\n.options {options}\n.end\n"), "utf-8")
    ended = subprocess.run([program, "-b", "-r", str(raw), str(deck)], capture_output=True, text=True, check=False, timeout=600)
    said = ended.stdout[-500:] + ended.stderr[-500:]
    assert ended.returncode == 0 and raw.is_file(), said
    names, rows = _read(raw.read_bytes())
    raw.unlink()
    keep = rows[:, 0] >= begin
    assert keep.sum() > 10, said
    return Waveforms(rows[keep, 0], {name: rows[keep, k] for k, name in enumerate(names)}, reference)


def _read(content: bytes) -> tuple[list[str], np.ndarray]:
    """Names and values of a raw file: a text head, then rows of doubles."""
    head, _, body = content.partition(b"Binary:\n")
    words = head.decode("latin-1").partition("\nVariables:")[2].split()
    names = [re.sub(r"^v\((.*)\)$", r"\1", word.lower()) for word in words[1::3]]
    count = len(body) // (8 * len(names))
    return names, np.frombuffer(body[: count * 8 * len(names)]).reshape(count, len(names))


def current(net: Netlist, port: Port, seen: Waveforms) -> np.ndarray | None:
    """Current of a port's element [A], sign aside; None where the port has none."""
    if port.kind == PORT_NONE:
        return None
    if port.kind == PORT_RESISTOR:
        _, a, b, ohm = next(one for one in net.resistors if one[0] == port.element)
        return (seen.node(a) - seen.node(b)) / max(ohm, LEAST)
    if port.kind == PORT_CAPACITOR:
        name, _, b, _, ohm, _ = next(one for one in net.capacitors if one[0] == port.element)
        return (seen.node(f"{name}:esr") - seen.node(b)) / max(ohm, LEAST)
    if port.kind == PORT_SOURCE:
        name, plus, _, _, _, _, ohm = next(one for one in net.sources if one[0] == port.element)
        return (seen.node(f"{name}:inner") - seen.node(plus)) / max(ohm, LEAST)
    name, _, b, _, _, ohm = next(one for one in net.windings if one[0] == port.element)
    return (seen.node(f"{name}:dc") - seen.node(b)) / max(ohm, LEAST)
