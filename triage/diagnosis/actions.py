"""The repairs that the hypotheses ask for, and how the belief is spread over them."""

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from triage.board.fault import Hypothesis


@dataclass(frozen=True, slots=True)
class Actions:
    """The different repairs of a list of hypotheses, in a fixed order."""

    repairs: tuple[frozenset[str], ...]
    """Refs to replace; the empty set is the repair outside the board."""
    of: NDArray[np.int64]
    """Repair of each hypothesis, shape (H,)."""
    _cured: dict[int, NDArray[np.bool_]] = field(default_factory=dict, repr=False, compare=False)

    @classmethod
    def of_hypotheses(cls, hypotheses: Sequence[Hypothesis]) -> "Actions":
        """The repairs, in the order in which they first occur."""
        place: dict[frozenset[str], int] = {}
        of = [place.setdefault(hypothesis.repair, len(place)) for hypothesis in hypotheses]
        return cls(tuple(place), np.asarray(of, dtype=np.int64))

    def chances(self, belief: NDArray[np.floating]) -> NDArray[np.float64]:
        """Chance that each repair is exactly what is needed, shape (repairs,) [-]."""
        return np.bincount(self.of, weights=belief, minlength=len(self.repairs)).astype(np.float64)

    def joint(self, bins: NDArray[np.floating], belief: NDArray[np.floating]) -> NDArray[np.float64]:
        """P(outcome and repair) of one reading, shape (outcomes, repairs) [-]; bins: p(outcome | hypothesis).
        """
        return np.stack([self.chances(row.astype(np.float64) * belief) for row in bins])

    def cures(self, action: int) -> NDArray[np.bool_]:
        """Hypotheses that a repair cures: those whose parts are all replaced by it. Shape (H,)."""
        if action not in self._cured:
            wanted = self.repairs[action]
            good = np.array([repair <= wanted and bool(repair) == bool(wanted) for repair in self.repairs])
            self._cured[action] = good[self.of]
        return self._cured[action]

    def cure_chance(self, belief: NDArray[np.floating], action: int) -> float:
        """Chance that a repair cures [-]: also when it replaces more than is needed."""
        return float(belief[self.cures(action)].sum())
