"""The figures of settings.toml and instruments.toml as records, checked when they are loaded."""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, fields, replace
from functools import cache
from pathlib import Path
from typing import Any

from triage.errors import EntryError

HERE = Path(__file__).resolve().parent


def load_table(path: Path) -> dict[str, Any]:
    """Contents of a TOML file. Raises EntryError, naming the file, when it cannot be read."""
    try:
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except (OSError, tomllib.TOMLDecodeError, UnicodeDecodeError) as problem:
        raise EntryError(path.name, str(problem), "a readable TOML file") from problem


def number(where: str, table: Mapping[str, Any], key: str, low: float, high: float) -> float:
    """``table[key]`` as a float between ``low`` and ``high``. Raises EntryError that names the place
    otherwise.
    """
    value = table.get(key)
    if isinstance(value, bool) or not isinstance(value, int | float) or not low <= value <= high:
        raise EntryError(f"{where}, {key}", repr(value), f"a number from {low:g} to {high:g}")
    return float(value)


@dataclass(frozen=True, slots=True)
class Settings:
    """How the diagnosis decides; settings.toml says what each figure trades."""

    stop_target: float
    careful_target: float
    least_worth_per_minute: float
    least_worth_when_sound_per_minute: float
    gross_error: float
    gross_open_line: float
    gross_zero: float
    careless_word: float
    failed_repair_minutes: float
    hunch_factor: float
    bad_repair: float
    fails_again: float
    misfit_tail: float

    @classmethod
    def load(cls, path: Path = HERE / "settings.toml") -> "Settings":
        """Settings from a file; all keys must be there. Raises EntryError."""
        table = load_table(path)
        unbounded = {"failed_repair_minutes": 1e4, "hunch_factor": 1e3}
        return cls(**{f.name: number(path.name, table, f.name, 0.0, unbounded.get(f.name, 1.0)) for f in fields(cls)})


@dataclass(frozen=True, slots=True)
class Instrument:
    """One function of a meter with its error and that of the model it is compared with."""

    meter: str
    """What the shop must own: a key of ``meters`` in costs.toml."""
    relative: float
    """Standard error proportional to the reading, instrument and model together [-]."""
    absolute: float
    """Standard error near zero, instrument and model together [SI]."""
    over: float
    """Above this the display shows OL [SI]; ``inf`` when it never does."""
    step: float
    """Smallest difference shown [SI]."""
    signed: bool = False
    """False for a display that never shows less than zero."""
    knee: float = float("inf")
    """Above this the reading is uncertain for other reasons than the meter [SI]."""
    relative_above_knee: float = 0.0
    """Standard error proportional to the reading above the knee [-]."""
    model_relative: float = 0.0
    """Part of ``relative`` that is the model's [-]."""
    model_absolute: float = 0.0
    """Part of ``absolute`` that is the model's [SI]."""

    def read_with(self, relative: float, absolute: float, over: float, step: float) -> "Instrument":
        """The same function of another meter: its own standard errors, limit and step in place of these.

        Below a thousandth of the step nothing is told apart, however true the meter claims to be.
        """
        return replace(
            self,
            relative=max((relative**2 + self.model_relative**2) ** 0.5, 1e-3),
            absolute=max((absolute**2 + self.model_absolute**2) ** 0.5, 1e-3 * step),
            over=over,
            step=step,
        )


@cache
def instruments(path: Path = HERE / "instruments.toml") -> Mapping[str, Instrument]:
    """Meter function -> Instrument. Independent errors add by root-sum-square (JCGM 100:2008, 5.1.2). Raises
    EntryError.
    """
    table = load_table(path)
    found = {}
    for group in ("cold", "live"):
        for function, row in table.get(group, {}).items():
            where = f"{path.name}, {group}.{function}"
            error = {
                key: number(where, row, key, 0.0, 1e9) for key in ("relative", "model_relative", "absolute", "model_absolute")
            }
            found[function] = Instrument(
                str(row.get("meter", "multimeter")),
                (error["relative"] ** 2 + error["model_relative"] ** 2) ** 0.5,
                (error["absolute"] ** 2 + error["model_absolute"] ** 2) ** 0.5,
                number(where, row, "over", 0.0, 1e12) if "over" in row else float("inf"),
                number(where, row, "step", 0.0, 1e9),
                row.get("signed") is True,
                number(where, row, "knee", 0.0, 1e12) if "knee" in row else float("inf"),
                number(where, row, "relative_above_knee", 0.0, 1.0) if "knee" in row else 0.0,
                error["model_relative"],
                error["model_absolute"],
            )
    return found
