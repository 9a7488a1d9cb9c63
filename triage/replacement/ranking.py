"""Which of the parts that may be fitted to fit: margin, closeness to the original, body, stock, price.

Only parts that pass every hard rule are ranked. A margin counts up to half again the demand and no further, and
over-rating that does harm elsewhere (forward voltage, gate charge, inrush) costs points and is said.
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from triage.errors import CatalogError
from triage.replacement.bodies import PinFit, body_fit, group_of, pin_fit
from triage.replacement.catalog import Catalog, plain_number
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.demand import Demand
from triage.replacement.drawers import Drawers, StockItem
from triage.replacement.rules import READING_SETTLES, Refusal, check, value_of
from triage.replacement.supplier import SupplierList
from triage.replacement.wording import figure

ENOUGH = 1.5
"""A rating this many times the demand has all the margin that counts."""
_CHEAP = 0.03
"""What a part that costs nothing would gain: price decides between equals."""
PLENTY = 3.0
"""Above this many times the demand a part is bigger and dearer than needed."""

TOO_MUCH = {
    ("schottky", "vrrm_V"): (1.7, "a higher reverse voltage brings more forward voltage and heat"),
    ("mosfet", "id_A"): (2.5, "a bigger die brings more gate charge and switching loss"),
    ("bipolar_transistor", "ic_A"): (4.0, "a bigger die switches slower"),
    ("electrolytic", "vr_Vdc"): (2.5, "far above the working voltage: bigger can, more ESR"),
    ("optocoupler", "ctr_min_percent"): (1.5, "more transfer ratio raises the loop gain"),
    ("tvs", "ppp_W"): (3.0, "a bigger die brings more capacitance"),
}
"""(class, field) -> multiple of the demand above which over-rating does harm, and which harm."""


@dataclass(frozen=True, slots=True)
class Candidate:
    """One part judged for a position."""

    part: CatalogPart
    score: float
    """0 to 1, higher is better; 0 for a refused part."""
    margins: tuple[str, ...]
    """Each figure next to the demand: ``reverse voltage 1000 V for 949 V``."""
    notes: tuple[str, ...]
    """What to watch when it is fitted."""
    refusals: tuple[Refusal, ...]
    """Rules it fails; a part that fails one is never offered."""
    drawing: str = ""
    """Old and new pin order drawn as text, where they differ."""
    stock: StockItem | None = None
    """Where it lies in the drawers."""
    price: float | None = None
    """Price of one, from the drawers or the cheapest supplier's line."""

    @property
    def accepted(self) -> bool:
        """Whether it may be offered."""
        return not self.refusals

    @property
    def to_confirm(self) -> bool:
        """Whether a look at the sheet, or at the print on either body, would settle all that stands against it."""
        return bool(self.refusals) and all(refusal.rule in READING_SETTLES for refusal in self.refusals)


def candidates(
    catalog: Catalog, demand: Demand, drawers: Drawers | None = None, limit: int = 20, suppliers: Sequence[SupplierList] = ()
) -> tuple[Candidate, ...]:
    """Parts that pass every rule of the position, best first, at most ``limit``.

    ``drawers`` move what is in stock up; ``suppliers`` only tell a price: they say nothing on ratings.
    """
    judged = (judge(part, demand, drawers, suppliers) for part in possible_parts(catalog, demand))
    return tuple(sorted((c for c in judged if c.accepted), key=_order)[:limit])


def to_confirm(
    catalog: Catalog, demand: Demand, drawers: Drawers | None = None, limit: int = 20, suppliers: Sequence[SupplierList] = ()
) -> tuple[Candidate, ...]:
    """Parts that would pass once their values from memory are read in the sheet or on the body, best first."""
    judged = (judge(part, demand, drawers, suppliers) for part in possible_parts(catalog, demand))
    return tuple(sorted((c for c in judged if c.to_confirm), key=_order)[:limit])


def ask(
    catalog: Catalog, demand: Demand, type_number: str, drawers: Drawers | None = None, suppliers: Sequence[SupplierList] = ()
) -> Candidate:
    """The judgement on any part one asks about, with every rule it fails. Raises CatalogError for an unknown type."""
    part = catalog.find(type_number)
    if part is None:
        raise CatalogError(
            f"part {type_number!r}", "not in the catalog", "a type number or a generic name",
            "search its marking, or look its ratings up and compare them with the demand",
        )
    return judge(part, demand, drawers, suppliers)


def possible_parts(catalog: Catalog, demand: Demand) -> Iterator[CatalogPart]:
    """Every part of the classes of the position; of parts without type number those inside the value window."""
    for name in demand.classes:
        yield from catalog.parts(name)
        file = catalog.file(name)
        window = demand.window(file.value_key) if file.sizes else None
        if window is not None:
            yield from catalog.near(name, *window)


def judge(
    part: CatalogPart, demand: Demand, drawers: Drawers | None = None, suppliers: Sequence[SupplierList] = ()
) -> Candidate:
    """A part with its refusals, margins, notes and score for a position."""
    stock = drawers.item(part.type) if drawers else None
    if drawers:
        part = drawers.as_read(part)
    refusals = check(part, demand)
    pins = pin_fit(part, demand.original)
    settled = all(refusal.rule in READING_SETTLES for refusal in refusals)
    score, notes = _score(part, demand, pins, stock) if settled else (0.0, [])
    price, told = _price(part, stock, suppliers)
    if settled and price is not None:
        score = min(1.0, score + _CHEAP / (1.0 + price))
    return Candidate(
        part, score, tuple(_margins(part, demand)), (*notes, *told), refusals,
        "" if pins.verdict in ("same", "unknown") else pins.drawing, stock, price,
    )


def _price(
    part: CatalogPart, stock: StockItem | None, suppliers: Sequence[SupplierList]
) -> tuple[float | None, tuple[str, ...]]:
    """The price of one, out of the drawers before any list, and where it is sold."""
    if stock is not None and stock.quantity > 0 and stock.price is not None:
        return stock.price, ()
    lines = [(line, one.name) for one in suppliers if (line := one.line(part.type)) and line.price is not None]
    if not lines:
        return None, ()
    line, name = min(lines, key=lambda found: found[0].price or 0.0)
    order = f", order {line.order}" if line.order else ""
    return line.price, (f"{line.price:g} in {name}{order}",)


def _order(candidate: Candidate) -> tuple[float, float, str]:
    return -round(candidate.score, 6), math.inf if candidate.price is None else candidate.price, candidate.part.type


def _margins(part: CatalogPart, demand: Demand) -> Iterator[str]:
    for requirement in demand.requirements:
        if requirement.words or requirement.rule or requirement.undecided:
            continue
        found = value_of(part, requirement, demand.original)
        if found is None:
            continue
        if requirement.minimum is not None and requirement.maximum is not None:
            yield f"{requirement.text} {figure(found[1], requirement.unit)}"
            continue
        bound = requirement.minimum if requirement.minimum is not None else requirement.maximum
        if bound is not None:
            word = "for" if requirement.minimum is not None else "of at most"
            yield f"{requirement.text} {figure(found[1], requirement.unit)} {word} {figure(bound, requirement.unit)}"


def _score(part: CatalogPart, demand: Demand, pins: PinFit, stock: StockItem | None) -> tuple[float, list[str]]:
    notes: list[str] = []
    score = 0.35 * _margin(part, demand) + 0.15 * _closeness(part, demand) - _excess(part, demand, notes)
    score += 0.25 - _misfit(part, demand, pins, notes)
    if demand.original is not None and plain_number(part.type) == plain_number(demand.original.type):
        score += 0.12
    score -= 0.04 * _place(part.part_class, demand.classes)
    score -= sum(0.02 * _place(part.text(r.key), r.words) for r in demand.requirements if r.words)
    if stock is not None and stock.quantity > 0:
        score += 0.15
        notes.append(f"{stock.quantity} in stock{', ' + stock.where if stock.where else ''}")
    if part.confidence == "memory":
        score -= 0.02
        notes.append("ratings from memory: compare with the sheet")
    elif part.from_memory:
        notes.append("from memory: " + ", ".join(sorted(part.from_memory)))
    notes.extend(text for text in (part.text("note"), part.text("pin_note")) if text)
    return min(1.0, max(0.0, score)), notes


def _place(word: str, words: tuple[str, ...]) -> int:
    """How far down a list of what is allowed, the usual first, a word stands."""
    return words.index(word) if word in words else 0


def _margin(part: CatalogPart, demand: Demand) -> float:
    """Mean margin over the computed stresses (else over the least value), 0 to 1."""
    margins = []
    for requirement in demand.requirements:
        if requirement.rule or requirement.undecided or requirement.maximum is not None or not requirement.minimum:
            continue
        found = value_of(part, requirement, demand.original)
        if found is not None:
            bound = requirement.stressed or requirement.minimum
            margins.append(min(1.0, (abs(found[1]) / bound - 1.0) / (ENOUGH - 1.0)))
    return sum(margins) / len(margins) if margins else 0.5


def _closeness(part: CatalogPart, demand: Demand) -> float:
    """How near the values with a window lie to the old part's, 0 to 1."""
    near = []
    for requirement in demand.requirements:
        if requirement.rule or requirement.minimum is None or requirement.maximum is None:
            continue
        found, old = value_of(part, requirement, demand.original), requirement.offered
        if found is not None and isinstance(old, float) and old:
            width = max(requirement.maximum - old, old - requirement.minimum, 1e-12)
            near.append(max(0.0, 1.0 - abs(found[1] - old) / width))
    return sum(near) / len(near) if near else 0.5


def _excess(part: CatalogPart, demand: Demand, notes: list[str]) -> float:
    """Points off for ratings far above the demand, with the harm named where there is one."""
    lost = 0.0
    for requirement in demand.requirements:
        if requirement.rule or not requirement.minimum or requirement.maximum is not None:
            continue
        found = value_of(part, requirement, demand.original)
        if found is None:
            continue
        times = abs(found[1]) / requirement.minimum
        most, harm = TOO_MUCH.get((part.part_class, requirement.key), (PLENTY, ""))
        if times > most:
            lost += (0.08 if harm else 0.02) * math.log2(times / most) + (0.04 if harm else 0.0)
            if harm:
                notes.append(harm)
    return lost


def _misfit(part: CatalogPart, demand: Demand, pins: PinFit, notes: list[str]) -> float:
    """Points off for body and pins, with what to watch."""
    lost = 0.0
    fit = body_fit(part, demand.original)
    if fit.text:
        notes.append(fit.text)
        lost += 0.05
    original = demand.original
    if original is not None and part.text("case") != original.text("case"):
        lost += 0.05
        if group_of(part.text("case")).name == group_of(original.text("case")).name == "axial":
            notes.append(f"body {part.text('case')} in place of {original.text('case')}")
    if pins.verdict in ("turned", "unsure"):
        lost += 0.1
    if pins.text:
        notes.append(pins.text)
    return lost
