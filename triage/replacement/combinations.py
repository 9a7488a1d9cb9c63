"""When one part will not do or is not in the drawers: several that share the stress.

Resistors in series share the voltage, in parallel the current; capacitors in parallel share the ripple. The sharing is
computed at the worst end of the tolerances, and every part of a combination must pass all hard rules with its share of the
demand. Never for safety parts: they are replaced like for like, one for one.
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import combinations_with_replacement

from triage.board.part import Part
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.demand import Demand, Requirement
from triage.replacement.drawers import Drawers
from triage.replacement.rules import check
from triage.replacement.wording import figure

COUNTS = (2, 3)
"""How many equal parts are tried together."""
UNKNOWN_TOLERANCE = 10.0
"""Tolerance taken where a part gives none [%]; common practice, no source."""
IMPEDANCE_SPREAD = 0.3
"""Spread of impedance between capacitors of one type, either way; common practice, no source."""
WARM = 0.5
"""Resistance of a warm electrolytic over that at 20 degC [-]; common practice, no source."""
MOST_STOCK = 200
"""Kinds of parts from the drawers that are paired with each other."""

_SHARED: dict[str, tuple[str, ...]] = {"series": ("v_lim_V", "p_W"), "parallel": ("p_W",)}
_RIPPLES = ("ripple_100kHz_A", "ripple_120Hz_A")


@dataclass(frozen=True, slots=True)
class SwitchingRipple:
    """The part of a capacitor's ripple current that flows at the switching frequency."""

    share: float
    """Its share of the whole ripple current, 0 to 1; the squares of both parts add up to one."""
    frequency: float
    """[Hz]"""
    resistance: float
    """Lowest ESR the electrolytic may have there [ohm]: the lower, the less a film capacitor beside it helps."""


@dataclass(frozen=True, slots=True)
class Combination:
    """Several parts that together pass every rule of a position."""

    parts: tuple[CatalogPart, ...]
    arrangement: str
    """``series`` or ``parallel``."""
    value: float
    """Resistance or capacitance of the whole [SI]."""
    shares: tuple[float, ...]
    """Greatest share of the stress that each part may carry, tolerances at their worst."""
    text: str
    """The combination in words: ``2 x 510k metal film 0.5 W 350 V in series: 1.02 Mohm``."""
    arithmetic: tuple[str, ...]
    """The sharing, one line a figure."""
    in_stock: bool = False
    """All of it lies in the drawers in sufficient number."""


def combinations(
    catalog: Catalog, demand: Demand, drawers: Drawers | None = None, limit: int = 10, switching: SwitchingRipple | None = None
) -> tuple[Combination, ...]:
    """Combinations that pass every rule of the position, those in the drawers and of fewest parts first.

    With ``switching`` known, a film capacitor beside an electrolytic is tried too.
    """
    if demand.safety:
        return ()
    found: dict[str, Combination] = {}
    films = _with_film(catalog, demand, switching) if switching else ()
    for made in (*_resistors(catalog, demand, drawers), *_capacitors(catalog, demand, drawers), *films):
        found.setdefault(made.text, made)
    return tuple(sorted(found.values(), key=lambda one: _order(one, demand))[:limit])


def series_shares(values: Sequence[float], tolerances: Sequence[float]) -> tuple[float, ...]:
    """Greatest share of voltage and power that each of several resistors in series takes.

    ``values`` [ohm], ``tolerances`` as fractions. The share of one is greatest when it lies at its upper end and the
    others at their lower (voltage divider). Two equal ones of 5 %:

    >>> [round(share, 3) for share in series_shares([100.0, 100.0], [0.05, 0.05])]
    [0.525, 0.525]
    """
    shares = []
    for place, (value, tolerance) in enumerate(zip(values, tolerances, strict=True)):
        high = value * (1 + tolerance)
        others = sum(v * (1 - t) for i, (v, t) in enumerate(zip(values, tolerances, strict=True)) if i != place)
        shares.append(high / (high + others))
    return tuple(shares)


def parallel_shares(admittances: Sequence[float], spreads: Sequence[float]) -> tuple[float, ...]:
    """Greatest share of the current that each of several parts in parallel takes; arguments as ``series_shares``."""
    return series_shares(admittances, spreads)


def film_share(resistance: float, capacitance: float, frequency: float) -> float:
    """Share of a ripple current that an electrolytic keeps when a film capacitor lies beside it.

    ``resistance`` ESR of the electrolytic [ohm] (its capacitance counts as a short), ``capacitance`` of the film [F],
    ``frequency`` of the ripple [Hz]. Current divider of R and 1/(j w C): the electrolytic keeps Xc / sqrt(R² + Xc²).

    >>> round(film_share(10.0, 220e-9, 65e3), 3)
    0.744
    """
    reactance = 1.0 / (2.0 * math.pi * frequency * capacitance)
    return reactance / math.hypot(resistance, reactance)


def lowest_resistance(catalog: Catalog, demand: Demand, old: Part) -> float:
    """Lowest resistance that an electrolytic in this position may have at the switching frequency [ohm].

    The lowest impedance at 100 kHz of any that the catalog has in the window of capacitance, and half the resistance of the old
    part: warm, a good one has about half of what a sheet says for 20 degC (common practice, no source).
    """
    window = demand.window("c_F") or (0.0, math.inf)
    listed = [
        impedance for one in catalog.parts("electrolytic")
        if window[0] <= one.numbers["c_F"] <= window[1] and (impedance := one.number("z_100kHz_20C_ohm"))
    ]
    return min([WARM * impedance for impedance in listed] + [WARM * old.value["esr"]] * ("esr" in old.value), default=0.0)


def _order(made: Combination, demand: Demand) -> tuple[bool, int, float, str]:
    key = "c_F" if demand.window("c_F") else "r_ohm"
    old = next((r.offered for r in demand.requirements if r.key == key and isinstance(r.offered, float)), None)
    off = abs(math.log(made.value / old)) if old else 0.0
    return not made.in_stock, len(made.parts), round(off, 3), made.text


def _sharing(demand: Demand, shares: dict[str, float], dropped: Sequence[str]) -> Demand:
    """The demand on one part of a combination: shared minima scaled, figures of the whole left out."""
    kept: list[Requirement] = []
    for requirement in demand.requirements:
        if requirement.key in dropped:
            continue
        share = shares.get(requirement.key)
        if share is not None and requirement.minimum is not None:
            requirement = replace(requirement, minimum=requirement.minimum * share)
        kept.append(requirement)
    return replace(demand, requirements=tuple(kept))


def _named(demand: Demand, key: str) -> Requirement | None:
    return next((requirement for requirement in demand.requirements if requirement.key == key), None)


def _stock(catalog: Catalog, drawers: Drawers | None, classes: Sequence[str]) -> list[tuple[CatalogPart, int]]:
    if drawers is None:
        return []
    held = [(part, item.quantity) for part, item in drawers.parts(catalog) if part.part_class in classes]
    return held[:MOST_STOCK]


def _groups(
    ordered: Sequence[CatalogPart], stock: Sequence[tuple[CatalogPart, int]]
) -> Iterator[tuple[tuple[CatalogPart, ...], bool]]:
    """What may be combined: equal parts one can order, and pairs of what lies in the drawers."""
    held = {part.type: quantity for part, quantity in stock}
    for count in COUNTS:
        for part in ordered:
            yield (part,) * count, held.get(part.type, 0) >= count
    for first, second in combinations_with_replacement([part for part, _ in stock], 2):
        if first is not second or held[first.type] >= 2:
            yield (first, second), True


def _resistors(catalog: Catalog, demand: Demand, drawers: Drawers | None) -> Iterator[Combination]:
    window = demand.window("r_ohm")
    if "resistor" not in demand.classes or window is None:
        return
    stock = _stock(catalog, drawers, ("resistor",))
    for arrangement in ("series", "parallel"):
        ordered = [
            part for count in COUNTS
            for part in catalog.near("resistor", *(_each(limit, count, arrangement) for limit in window))
        ]
        for parts, in_stock in _groups(ordered, stock):
            made = _resistor_group(parts, arrangement, window, demand, in_stock)
            if made is not None:
                yield made


def _each(limit: float, count: int, arrangement: str) -> float:
    return limit / count if arrangement == "series" else limit * count


def _resistor_group(
    parts: tuple[CatalogPart, ...], arrangement: str, window: tuple[float, float], demand: Demand, in_stock: bool
) -> Combination | None:
    values = [part.numbers["r_ohm"] for part in parts]
    total = sum(values) if arrangement == "series" else 1.0 / sum(1.0 / value for value in values)
    if not window[0] <= total <= window[1]:
        return None
    tolerances = [part.numbers.get("tol_percent", UNKNOWN_TOLERANCE) / 100 for part in parts]
    if arrangement == "series":
        shares = series_shares(values, tolerances)
    else:
        shares = parallel_shares([1.0 / value for value in values], tolerances)
    shared = _SHARED[arrangement]
    for part, share in zip(parts, shares, strict=True):
        if check(part, _sharing(demand, dict.fromkeys(shared, share), ("r_ohm",))):
            return None
    lines = [f"{_sum(values, arrangement)} = {figure(total, 'ohm')}"]
    for key, word in (("v_lim_V", "voltage"), ("p_W", "power")):
        requirement = _named(demand, key)
        if requirement is not None and requirement.minimum is not None and key in shared:
            for part, share in zip(parts, shares, strict=True):
                rated = figure(part.numbers[key], requirement.unit) if key in part.numbers else "unknown"
                whole, carried = (figure(requirement.minimum * part_of, requirement.unit) for part_of in (1.0, share))
                lines.append(f"{word} at most {share:.1%} of {whole} = {carried}, rated {rated}")
    return Combination(
        parts, arrangement, total, shares, f"{_listed(parts)} in {arrangement}: {figure(total, 'ohm')}",
        tuple(dict.fromkeys(lines)), in_stock,
    )


def _capacitors(catalog: Catalog, demand: Demand, drawers: Drawers | None) -> Iterator[Combination]:
    window = demand.window("c_F")
    if "electrolytic" not in demand.classes or window is None:
        return
    stock = _stock(catalog, drawers, ("electrolytic",))
    every = catalog.parts("electrolytic")
    ordered = [part for part in every if any(window[0] <= n * part.numbers["c_F"] <= window[1] for n in COUNTS)]
    for parts, in_stock in _groups(ordered, stock):
        made = _capacitor_group(parts, window, demand, in_stock)
        if made is not None:
            yield made


def _capacitor_group(
    parts: tuple[CatalogPart, ...], window: tuple[float, float], demand: Demand, in_stock: bool
) -> Combination | None:
    total = sum(part.numbers["c_F"] for part in parts)
    if not window[0] <= total <= window[1]:
        return None
    shares = _ripple_shares(parts, demand)
    whole = _named(demand, "z_100kHz_20C_ohm")
    lines = [f"{' + '.join(figure(part.numbers['c_F'], 'F') for part in parts)} = {figure(total, 'F')}"]
    if whole is not None and whole.maximum is not None:
        impedances = [part.number("z_100kHz_20C_ohm") for part in parts]
        known = [impedance for impedance in impedances if impedance]
        if len(known) != len(parts):
            return None
        together = 1.0 / sum(1.0 / impedance for impedance in known)
        if together > whole.maximum:
            return None
        lines.append(f"impedance at 100 kHz together {figure(together, 'ohm')}, at most {figure(whole.maximum, 'ohm')}")
    for part, share in zip(parts, shares, strict=True):
        if check(part, _sharing(demand, dict.fromkeys(_RIPPLES, share), ("c_F", "z_100kHz_20C_ohm"))):
            return None
    ripple = next((r for key in _RIPPLES if (r := _named(demand, key)) and r.minimum is not None), None)
    if ripple is not None and ripple.minimum is not None:
        for part, share in zip(parts, shares, strict=True):
            rated = part.number(ripple.key, *ripple.alternatives)
            lines.append(
                f"ripple at most {share:.1%} of {figure(ripple.minimum, 'A')} = {figure(ripple.minimum * share, 'A')}, "
                f"rated {figure(rated or 0.0, 'A')}"
            )
    return Combination(
        parts, "parallel", total, shares, f"{_listed(parts)} in parallel: {figure(total, 'F')}",
        tuple(dict.fromkeys(lines)), in_stock,
    )


def _with_film(catalog: Catalog, demand: Demand, switching: SwitchingRipple) -> Iterator[Combination]:
    """An electrolytic that lacks ripple current alone, and a film capacitor that takes enough of the switching part."""
    ripple = next((r for key in _RIPPLES if (r := _named(demand, key)) and r.stressed is not None), None)
    voltage, window = _named(demand, "vr_Vdc"), demand.window("c_F")
    if ripple is None or ripple.stressed is None or voltage is None or window is None or "electrolytic" not in demand.classes:
        return
    films = [f for f in catalog.parts("film_capacitor") if f.numbers["vr_Vdc"] >= (voltage.minimum or math.inf)]
    fast = switching.share * ripple.stressed
    slow = math.sqrt(ripple.stressed**2 - fast**2)
    for film in films:
        share = film_share(switching.resistance, film.numbers["c_F"], switching.frequency)
        left = math.hypot(slow, fast * share)
        eased = replace(demand, requirements=tuple(
            replace(r, minimum=left) if r.key == ripple.key else r for r in demand.requirements
        ))
        for part in catalog.parts("electrolytic"):
            if check(part, demand) and not check(part, eased):
                lines = (
                    f"the film keeps {1 - share:.1%} of the switching ripple off the electrolytic "
                    f"({figure(switching.resistance, 'ohm')} against {film.type} at {switching.frequency / 1e3:.3g} kHz)",
                    f"ripple left {figure(left, 'A')} of {figure(ripple.stressed, 'A')}, "
                    f"rated {figure(part.numbers[ripple.key], 'A')}",
                )
                yield Combination(
                    (part, film), "parallel", part.numbers["c_F"] + film.numbers["c_F"], (left / ripple.stressed, 1 - share),
                    f"{part.type} + film {film.type} in parallel", lines,
                )


def _ripple_shares(parts: Sequence[CatalogPart], demand: Demand) -> tuple[float, ...]:
    """At 100 kHz the impedances share the ripple, at twice the mains the capacitances."""
    impedances = [part.number("z_100kHz_20C_ohm") for part in parts]
    if _named(demand, "ripple_100kHz_A") and all(impedances):
        return parallel_shares([1.0 / (z or 1.0) for z in impedances], [IMPEDANCE_SPREAD] * len(parts))
    spreads = [part.numbers.get("c_tol_percent", 20.0) / 100 for part in parts]
    return parallel_shares([part.numbers["c_F"] for part in parts], spreads)


def _listed(parts: Sequence[CatalogPart]) -> str:
    if len({part.type for part in parts}) == 1:
        return f"{len(parts)} x {parts[0].type}"
    return " + ".join(part.type for part in parts)


def _sum(values: Sequence[float], arrangement: str) -> str:
    sign = " + " if arrangement == "series" else " || "
    return sign.join(figure(value, "ohm") for value in values)
