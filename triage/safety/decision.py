"""Repair, replace or scrap: the expected cost of each, with the safety vetoes on top.

A repair costs its parts and minutes and, when the spare cannot be had or the first repair does not hold, the
next best way out. The chance that it holds comes from the diagnosis; a part that runs over its rating even
on the healthy board lowers it unless its upgrade is fitted. A repair that fails more often than it succeeds
is shown but not proposed. A veto bars the repair whatever it would cost. Money is the shop's own unit.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from triage.board.part import Board
from triage.board.stress import Stress
from triage.errors import TriageError
from triage.safety.limits import table
from triage.safety.power_up import rated_power

CHOICES = ("repair", "replace", "scrap")


class DecisionError(TriageError):
    """A cost, chance or kind of work that cannot be reckoned with."""


@dataclass(frozen=True, slots=True)
class Shop:
    """What time and handling cost in a shop; the defaults are the house estimates of decision.toml."""

    rate: float = table("decision")["shop"]["rate_per_hour"]
    """Price of an hour [money/h]; 0 for volunteers."""
    retest_minutes: float = table("decision")["shop"]["retest_minutes"]
    """Work of the retest [min]."""
    open_close_minutes: float = table("decision")["shop"]["open_close_minutes"]
    """Opening and closing the case [min]."""
    order_minutes: float = table("decision")["shop"]["order_minutes"]
    """Getting a new adapter [min]."""
    search_minutes: float = table("decision")["shop"]["search_minutes"]
    """Looking in vain for a spare [min]."""
    disposal: float = table("decision")["shop"]["disposal"]
    """Recycling a dead adapter [money]."""

    def labour(self, minutes: float) -> float:
        """Price of some minutes [money]."""
        return self.rate * minutes / 60.0


@dataclass(frozen=True, slots=True)
class Work:
    """One thing to mend."""

    kind: str
    """Part kind, or ``joint``, ``track``, ``cord``, ``connector``, ``contact``, ``cleaning``,
    ``mechanical``."""
    price: float
    """Of the spare [money]."""
    minutes: float
    available: float
    """Chance that a spare rated for the place can be had [0..1]."""


def work(kind: str, price: float | None = None, available: float | None = None) -> Work:
    """The usual work of a kind; ``price`` [money] and ``available`` [0..1] where the shop knows better.

    Raises DecisionError for a kind that is not in the table.
    """
    row = next((row for row in table("decision")["work"] if row["kind"] == kind), None)
    if row is None:
        known = ", ".join(row["kind"] for row in table("decision")["work"])
        raise DecisionError("kind of work", repr(kind), known)
    return Work(
        kind, row["price"] if price is None else price, row["minutes"], row["available"] if available is None else available
    )


def work_of(board: Board, refs: Iterable[str], in_drawers: Iterable[str] = ()) -> tuple[Work, ...]:
    """The work of replacing parts of a board; a ref among ``in_drawers`` has its spare at hand."""
    at_hand = frozenset(in_drawers)
    return tuple(work(board.part(ref).kind, available=1.0 if ref in at_hand else None) for ref in refs)


def usual_new_price(power: float) -> float:
    """House estimate of the price of a new adapter for a rated power [W] -> [money]; linear between table
    rows."""
    record = table("decision")["new_price"]
    watts, price = record["watts"], record["price"]
    if power <= watts[0]:
        return float(price[0])
    for i in range(1, len(watts)):
        if power <= watts[i]:
            share = (power - watts[i - 1]) / (watts[i] - watts[i - 1])
            return float(price[i - 1] + share * (price[i] - price[i - 1]))
    return float(price[-1] * power / watts[-1])


@dataclass(frozen=True, slots=True)
class Upgrade:
    """A part that the design itself over-stresses, and what would cure it."""

    ref: str
    text: str
    """The stress, and what to fit instead."""
    needed_rating: float | None
    """Rating that covers the stress with its derating [SI, degC]; None where no rating cures it."""
    cost: float
    """Of part and work [money]."""
    over_rating: bool
    """False when only the derated limit is passed."""


def upgrades(board: Board, stresses: Iterable[Stress], shop: Shop) -> tuple[Upgrade, ...]:
    """The over-stressed parts of a healthy board with what would cure them, those over their rating first.

    ``life`` is left out: a low life is cured by the temperature and ripple that it comes from.
    """
    found = []
    for stress in stresses:
        if stress.quantity == "life" or stress.verdict not in ("over rating", "over derated limit"):
            continue
        kind = board.part(stress.ref).kind
        cost = math.nan
        if any(row["kind"] == kind for row in table("decision")["work"]):
            cost = work(kind).price + shop.labour(work(kind).minutes)
        needed = None if stress.quantity == "temperature" else stress.value / (stress.factor or 1.0)
        cure = "needs more cooling or less power" if needed is None else f"fit one rated {needed:.3g} {stress.unit} or more"
        name = stress.quantity.replace("_", " ")
        text = (
            f"{stress.ref} {name} {stress.value:.3g} {stress.unit} of {stress.rating:.3g} {stress.unit} rated"
            f"{f' at {stress.condition}' if stress.condition else ''}: {stress.verdict}; {cure}"
        )
        found.append(Upgrade(stress.ref, text, needed, cost, stress.verdict == "over rating"))
    return tuple(sorted(found, key=lambda upgrade: (not upgrade.over_rating, upgrade.ref)))


def chance_holds(posterior: float, uncured: int = 0) -> float:
    """Chance that the first repair holds [0..1]: the verdict's probability, halved for each part left over
    its rating."""
    return posterior * table("decision")["relapse"]["holds_with_part_over_rating"] ** uncured


@dataclass(frozen=True, slots=True)
class Case:
    """What the decision is about."""

    works: tuple[Work, ...]
    """What is to be mended."""
    holds: float
    """Chance that the first repair holds [0..1]."""
    new_price: float | None
    """Price of a new adapter of the same rating [money]; None: not to be had."""
    vetoes: tuple[str, ...] = ()
    """Why it must not be repaired."""
    worth: float | None = None
    """What a working adapter is worth to its owner [money]; None: twice the new price."""


@dataclass(frozen=True, slots=True)
class Option:
    """One way out with its expected cost."""

    choice: str
    """One of CHOICES."""
    cost: float
    """[money]; ``inf`` when barred."""
    text: str
    """How the cost comes about, or what bars it."""
    proposed: bool = True
    """False for a repair that is barred or fails more often than it succeeds."""


@dataclass(frozen=True, slots=True)
class Decision:
    """The cheapest way out that is allowed, beside the others."""

    choice: str
    options: tuple[Option, ...]
    """In the order of CHOICES."""
    vetoes: tuple[str, ...]
    upgrades: tuple[Upgrade, ...] = field(default=())

    @property
    def reason(self) -> str:
        """One sentence."""
        best = next(option for option in self.options if option.choice == self.choice)
        if self.vetoes:
            return f"{self.choice}: repair is barred by {'; '.join(self.vetoes)}"
        others = ", ".join(f"{o.choice} {o.cost:.2f}" for o in self.options if o is not best and math.isfinite(o.cost))
        return f"{self.choice} costs {best.cost:.2f} ({best.text}) against {others or 'nothing else'}"


def decide(case: Case, shop: Shop, over_stressed: tuple[Upgrade, ...] = ()) -> Decision:
    """The cheapest allowed way out of a case.

    Raises DecisionError for a chance outside 0 to 1, a negative price, or a case with neither price nor
    worth.
    """
    _check(case)
    worth = case.worth if case.worth is not None else table("decision")["worth"]["times_new_price"] * (case.new_price or 0.0)
    scrap = Option("scrap", worth + shop.disposal, f"goes without one worth {worth:.2f}, disposal {shop.disposal:.2f}")
    replace = _replace(case, shop)
    options = (_repair(case, shop, min(scrap.cost, replace.cost)), replace, scrap)
    best = min((option for option in options if option.proposed), key=lambda option: option.cost)
    return Decision(best.choice, options, case.vetoes, over_stressed)


def _check(case: Case) -> None:
    chances: Mapping[str, float] = {"holds": case.holds, **{w.kind: w.available for w in case.works}}
    for name, chance in chances.items():
        if not 0.0 <= chance <= 1.0:
            raise DecisionError(name, f"a chance of {chance:g}", "0 to 1")
    prices = [w.price for w in case.works] + [p for p in (case.new_price, case.worth) if p is not None]
    if any(not price >= 0.0 for price in prices):
        raise DecisionError("price", f"{min(prices):g}", "0 or more")
    if case.new_price is None and case.worth is None:
        raise DecisionError(
            "decision",
            "neither the price of a new adapter nor its worth is known",
            "one of them",
            "ask the owner what a working one is worth",
        )


def _replace(case: Case, shop: Shop) -> Option:
    if case.new_price is None:
        return Option("replace", math.inf, "no new adapter of this rating to be had")
    cost = case.new_price + shop.labour(shop.order_minutes) + shop.disposal
    return Option("replace", cost, f"new {case.new_price:.2f}, {shop.order_minutes:.0f} min, disposal {shop.disposal:.2f}")


def _repair(case: Case, shop: Shop, fallback: float) -> Option:
    """Spare not to be had: the search, then the fallback. Else parts and work, and the fallback where it
    does not hold."""
    if case.vetoes:
        return Option("repair", math.inf, f"barred by {'; '.join(case.vetoes)}", proposed=False)
    if not case.works:
        return Option("repair", math.inf, "nothing has been found to mend", proposed=False)
    parts = sum(w.price for w in case.works)
    minutes = sum(w.minutes for w in case.works) + shop.open_close_minutes + shop.retest_minutes
    available = math.prod(w.available for w in case.works)
    done = parts + shop.labour(minutes) + (1.0 - case.holds) * fallback
    vain = shop.labour(shop.search_minutes) + fallback
    likely = available * case.holds >= table("decision")["likely"]["least_chance"] * (1.0 - 1e-9)
    text = f"parts {parts:.2f}, {minutes:.0f} min, spares to be had {available:.0%}, holds {case.holds:.0%}"
    if not likely:
        text += ", fails more often than it succeeds: make sure of the spare and the fault first"
    return Option("repair", available * done + (1.0 - available) * vain, text, likely)


def board_case(
    board: Board,
    refs: Iterable[str],
    posterior: float,
    over_stressed: Iterable[Upgrade] = (),
    fitted_upgrades: Iterable[str] = (),
    vetoes: tuple[str, ...] = (),
    new_price: float | None = None,
    in_drawers: Iterable[str] = (),
) -> Case:
    """The case of a board with a verdict.

    Parameters: refs to replace, probability of the verdict [0..1], upgrades of the design, refs whose
    upgrade is fitted, vetoes of the inspection, price of a new adapter [money] (None: house estimate by
    power), refs with the spare in the drawers.
    """
    cured = frozenset(fitted_upgrades)
    uncured = len({u.ref for u in over_stressed if u.over_rating and u.ref not in cured})
    wanted = dict.fromkeys([*refs, *sorted(cured)])
    price = usual_new_price(rated_power(board)) if new_price is None else new_price
    return Case(work_of(board, wanted, in_drawers), chance_holds(posterior, uncured), price, vetoes)
