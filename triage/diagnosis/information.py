"""How much a reading is expected to tell: entropy, information and impurity over joint tables of outcome and
class.

All functions take P(outcome and class) of one or more readings, whatever the classes are (hypotheses or
repairs).
"""

import numpy as np
from numpy.typing import NDArray

_LEAST = 1e-30


def entropy(chances: NDArray[np.floating]) -> float:
    """Entropy of chances that add up to 1 [bit] (Shannon 1948)."""
    known = chances[chances > 0]
    return float(-(known * np.log2(known)).sum())


def expected_entropy(joint: NDArray[np.floating]) -> float:
    """Entropy of the class that is left on average after the reading [bit]; joint: shape (outcomes, classes).
    """
    chance = joint.sum(axis=1)
    split = np.divide(joint, chance[:, None], out=np.zeros_like(joint), where=chance[:, None] > 0)
    return float(sum(p * entropy(row) for p, row in zip(chance, split, strict=True)))


def information(joint: NDArray[np.floating]) -> float:
    """Expected information of the reading about the class [bit] (Lindley, Ann. Math. Stat. 27 (1956)
    986-1005).
    """
    return entropy(joint.sum(axis=0)) - expected_entropy(joint)


def joint_table(bins: NDArray[np.floating], belief: NDArray[np.floating], action: NDArray[np.int64]) -> NDArray[np.floating]:
    """P(outcome and class), shape (outcomes, classes that occur) [-].

    Parameters
    ----------
    bins: p(outcome | hypothesis), shape (outcomes, H).
    belief: shape (H,), adds up to 1.
    action: class of each hypothesis, shape (H,), in rising order.
    """
    starts = np.flatnonzero(np.diff(action, prepend=-1))
    return np.add.reduceat(bins * belief, starts, axis=1)


def impurity(chances: NDArray[np.floating]) -> float:
    """Gini impurity: chance that two draws differ [-]; twice the edge weight of equivalence class edge
    cutting.
    """
    return float(1.0 - (chances**2).sum())


def gini_gain(joint: NDArray[np.floating], owner: NDArray[np.int64]) -> NDArray[np.float64]:
    """Expected fall of the impurity of the class for each reading, shape (readings,) [-].

    Parameters
    ----------
    joint: P(outcome and class) of all outcomes of all readings, shape (outcomes, classes).
    owner: reading of each outcome, 0 .. readings - 1, in rising order.
    """
    chance = joint.sum(axis=1)
    purity = np.einsum("ka,ka->k", joint, joint) / np.maximum(chance, _LEAST)
    starts = np.flatnonzero(np.diff(owner, prepend=-1))
    before = np.add.reduceat(joint, starts, axis=0)
    return np.add.reduceat(purity, starts).astype(float) - np.einsum("ra,ra->r", before, before)
