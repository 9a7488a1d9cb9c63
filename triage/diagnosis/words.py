"""Readings, complaints, signs and suspects as a person would say them."""

from triage.board.evidence import Evidence, Reading, Symptom
from triage.board.fault import Hypothesis
from triage.board.probe import Probe
from triage.diagnosis.costs import PLUG_FUNCTIONS
from triage.quantities import engineering

NO_PART_FAULT = "no part fault"
"""Mode of the suspect that no part of the board is at fault; its ref is empty."""
FUNCTION_WORDS = {
    "ohms": "resistance",
    "diode": "diode test",
    "esr": "ESR",
    "capacitance": "capacitance",
    "volts_dc": "dc voltage",
    "volts_ac": "ac voltage",
    "volts_pp": "peak-to-peak voltage",
    "watts": "input power",
    "amps_ac": "input current",
    "hertz": "frequency",
}
"""Meter function -> its name in a sentence."""


def probe_words(probe: Probe) -> str:
    """A reading to be taken: ``diode test a to b``, ``input power (full)``, ``ESR of C1 with one leg lifted``."""
    if probe.lifted:
        pins = f", red to {probe.plus.partition('.')[2]}" if probe.function == "diode" else ""
        return f"{FUNCTION_WORDS[probe.function]} of {probe.lifted} with one leg lifted{pins}"
    where = "" if probe.function in PLUG_FUNCTIONS else f" {probe.plus} to {probe.minus}"
    return FUNCTION_WORDS[probe.function] + where + (f" ({probe.condition})" if probe.live else "")


def entry_words(entry: Evidence) -> str:
    """An entry of the job: ``ESR out to sgnd 4.1 ohm``, ``complaint dead (full)``, ``bulging at C1``."""
    if isinstance(entry, Reading):
        return f"{probe_words(entry.probe)} {engineering(entry.value, entry.probe.unit)}"
    if isinstance(entry, Symptom):
        return f"complaint {entry.state} ({entry.condition})"
    return f"{entry.sign} at {entry.ref}" if entry.ref else f"{entry.sign} (adapter)"


def suspect_name(hypothesis: Hypothesis) -> str:
    """Root of a hypothesis in words: ``C1 short``, ``R1 open and C4 leaky``."""
    return " and ".join(f"{f.ref} {f.mode.replace('_', ' ')}" for f in hypothesis.root) or NO_PART_FAULT


def percent_words(chance: float) -> str:
    """A chance in whole percent; never 0 or 100, which no reading can prove."""
    percent = 100 * chance
    return "over 99 %" if percent >= 99.5 else "under 1 %" if percent <= 0.5 else f"{percent:.0f} %"
