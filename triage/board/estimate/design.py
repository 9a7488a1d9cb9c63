"""Many designs of one adapter that a sensible designer might have made, and what each of them gives for a value.

A quantity is either a choice of the table of practice or follows from others by a rule: a public function of a module in
``rules``, whose name is the quantity and whose first sentence is the reason. Drawing the choices and running the design
equations backwards on all draws at once gives the spread of a value without a guess of its own.
"""

import importlib
import inspect
import pkgutil
from collections.abc import Callable, Mapping
from functools import cache

import numpy as np
from numpy.typing import NDArray

from triage.board.estimate import rules
from triage.board.estimate.practice import choice_of
from triage.board.part import Label, Mains
from triage.errors import ProfileError

DRAWS = 400
"""Designs drawn: enough that the ends of a 90 % spread move by a few percent with another set."""
WIDE_RANGE = 1.7
"""Highest over lowest mains from which an input counts as wide [-]."""

Draws = NDArray[np.float64]
Rule = Callable[["Design"], "Draws | float"]


class Design:
    """The quantities of an adapter, each an array of DRAWS values, worked out when first asked for."""

    def __init__(self, family: str, label: Label, mains: Mains, features: frozenset[str] = frozenset()) -> None:
        """features: what is seen of the board, for instance ``half wave``."""
        self.family = family
        self.label = label
        self.mains = mains
        self.features = features
        self._found: dict[str, Draws] = {}

    def __getitem__(self, name: str) -> Draws:
        """Draws of a quantity [SI]; shape (DRAWS,). Raises ProfileError for a name that no table or rule knows."""
        if name not in self._found:
            rule = _rule(name, self.family)
            choice = choice_of(name, self.family)
            if rule is not None:
                drawn = rule(self)
            elif choice is not None:
                drawn = choice.draws(DRAWS)
            else:
                raise ProfileError(f"quantity {name!r}", f"not known in the family {self.family}", "a rule, or in practice.toml")
            self._found[name] = np.broadcast_to(np.asarray(drawn, float), (DRAWS,))
        return self._found[name]

    def reason(self, name: str) -> str:
        """Why a quantity is what it is, in one sentence."""
        rule = _rule(name, self.family)
        if rule is not None:
            return (inspect.getdoc(rule) or "").partition(".")[0]
        choice = choice_of(name, self.family)
        return choice.why if choice else ""

    @property
    def is_wide_range(self) -> bool:
        """True for an adapter made for 100 to 240 V."""
        return self.mains.high / self.mains.low > WIDE_RANGE


@cache
def _rules() -> tuple[tuple[tuple[str, ...], Mapping[str, Rule]], ...]:
    """(families, rules by name) of each module; no families: for all."""
    found = []
    for entry in pkgutil.iter_modules(rules.__path__, rules.__name__ + "."):
        module = importlib.import_module(entry.name)
        functions = {name: item for name, item in inspect.getmembers(module, inspect.isfunction)
                     if item.__module__ == module.__name__ and not name.startswith("_")}
        found.append((tuple(module.FAMILIES), functions))
    return tuple(found)


def _rule(name: str, family: str) -> Rule | None:
    """The rule for a quantity: that made for the family before the general one."""
    fitting = [(bool(families), functions[name]) for families, functions in _rules()
               if name in functions and (not families or family in families)]
    return max(fitting, key=lambda pair: pair[0])[1] if fitting else None
