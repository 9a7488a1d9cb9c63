"""The table of what designers usually choose (``practice.toml`` beside this module), and draws from it."""

import tomllib
import zlib
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from triage.errors import CatalogError

_TABLE = Path(__file__).with_name("practice.toml")
COMMON_PRACTICE = "common practice, no source"
NORMAL_90 = 1.645
"""Half-width of the middle 90 % of a normal distribution [standard deviations]."""


@dataclass(frozen=True, slots=True)
class Choice:
    """One figure that a designer is free to choose."""

    name: str
    typical: float
    """Middle of what is met [SI]."""
    spread: float
    """Nine of ten boards lie between typical / spread and typical * spread [-]."""
    unit: str
    why: str
    families: tuple[str, ...] = ()
    """Families it holds for; empty: all."""
    source: str = COMMON_PRACTICE

    def draws(self, count: int) -> NDArray[np.float64]:
        """Log-normal draws, one out of each of ``count`` equally likely steps, the same in every run; shape (count,).

        Taken in random order, so that two choices are independent (Latin hypercube sampling: McKay, Beckman, Conover, 1979).
        """
        steps = np.array([NormalDist().inv_cdf((step + 0.5) / count) for step in range(count)])
        order = np.random.default_rng(zlib.crc32(self.name.encode())).permutation(count)
        return self.typical * self.spread ** (steps[order] / NORMAL_90)


@cache
def choices(path: Path = _TABLE) -> tuple[Choice, ...]:
    """All choices of the table. Raises CatalogError for a record that is not one."""
    found = []
    for record in tomllib.loads(path.read_text(encoding="utf-8"))["choice"]:
        try:
            choice = Choice(**{**record, "families": tuple(record.get("families", ()))})
        except TypeError as error:
            raise CatalogError(f"{path.name}, {record.get('name')}", str(error), ", ".join(Choice.__slots__)) from None
        if choice.typical <= 0.0 or choice.spread <= 1.0:
            raise CatalogError(f"{path.name}, {choice.name}", f"{choice.typical}, {choice.spread}", "typical > 0, spread > 1")
        found.append(choice)
    return tuple(found)


def choice_of(name: str, family: str) -> Choice | None:
    """The choice with this name that fits the family best, or None."""
    fitting = [one for one in choices() if one.name == name and (not one.families or family in one.families)]
    return max(fitting, key=lambda one: bool(one.families), default=None)
