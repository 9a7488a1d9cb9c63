"""What a position demands of the part fitted there, in figures.

The computed worst-case stress over its derating factor is the minimum, not the dead part's rating: the dead part may have
been the mistake, and then the demand says so. Beside that stand the window around the value, what the dead part offered,
and the rules of ``positions.toml``. What a candidate does with the demand is judged in ``triage.replacement.rules``.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from triage.board.part import Board, Part
from triage.board.stress import QUANTITIES, Stress
from triage.errors import EntryError
from triage.replacement.catalog import Catalog
from triage.replacement.catalog_part import CatalogPart
from triage.replacement.original import KIND_CLASSES, original_part
from triage.replacement.positions import Need, Position, plain_role, position_of
from triage.replacement.wording import figure, fit_of, unit_of, words_of

_HALF_WAVE = 8.3e-3
"""Duration of the surge that a rectifier's IFSM is given for [s]."""


@dataclass(frozen=True, slots=True)
class Requirement:
    """One figure or word that a candidate must meet."""

    key: str
    """Catalog field."""
    text: str
    """The field in words."""
    unit: str
    """Unit as shown, empty for a word."""
    reason: str
    """How the figure came about: ``460 V at 253 V, full load / 0.8``."""
    source: str
    """Where the fraction or the rule is from."""
    minimum: float | None = None
    maximum: float | None = None
    words: tuple[str, ...] = ()
    """Words allowed; empty for a figure."""
    alternatives: tuple[str, ...] = ()
    """Fields that may stand for ``key``."""
    stressed: float | None = None
    """The computed stress over its factor alone, where there is one: the minimum may be the old part's own rating."""
    offered: float | str | None = None
    """What the dead part offered."""
    mistake: str = ""
    """Says that the dead part was itself below the demand, with figures; empty when it was not."""
    if_known: bool = False
    """A candidate that leaves the figure out passes with a note."""
    rule: str = ""
    """Name of a rule with a shape of its own: ``gain near`` a known gain, or ``gain band`` of the old type."""
    undecided: bool = False
    """The place itself is not known well enough, so that nothing can be promised: neither the stress nor the dead part's
    rating, nor what must equal the dead part's."""
    readable: bool = False
    """Undecided, but a look at the dead part's body or sheet would tell."""


@dataclass(frozen=True, slots=True)
class Demand:
    """Everything a position asks of the part fitted there."""

    ref: str
    role: str
    kind: str
    classes: tuple[str, ...]
    """Catalog classes that may be fitted; empty: only the very same part."""
    requirements: tuple[Requirement, ...]
    safety: bool
    """A safety part: like for like, no combination, nothing from memory alone."""
    original: CatalogPart | None
    """The dead part as the catalog knows it."""
    original_type: str
    """Type or marking read off the dead part."""
    same_pins: bool = False
    never: tuple[str, ...] = ()
    together: tuple[str, ...] = ()
    """Parts to replace or check with it."""
    note: str = ""
    misplaced: str = ""
    """Says that the dead part is of a class that does not belong here; its own figures then ask nothing."""

    @property
    def mistakes(self) -> tuple[str, ...]:
        """Where the dead part was itself the mistake: of the wrong class, or rated below the demand."""
        rated = tuple(requirement.mistake for requirement in self.requirements if requirement.mistake)
        return (self.misplaced, *rated) if self.misplaced else rated

    def window(self, key: str) -> tuple[float, float] | None:
        """Lowest and highest allowed value of a field that has both bounds, or None."""
        for requirement in self.requirements:
            if requirement.key == key and requirement.minimum is not None and requirement.maximum is not None:
                return requirement.minimum, requirement.maximum
        return None


def demand(board: Board, ref: str, stresses: Sequence[Stress], catalog: Catalog) -> Demand:
    """The demand of the position ``ref``.

    ``stresses`` are the worst-case stresses of the board (other refs are passed over). Raises EntryError when the board
    has no such part.
    """
    try:
        part = board.part(ref)
    except KeyError:
        raise EntryError(f"part {ref!r}", "not on this board", "one of " + ", ".join(p.ref for p in board.parts)) from None
    original = original_part(part, catalog)
    dead_class = original.part_class if original else KIND_CLASSES.get(part.kind, "")
    position = position_of(board, part, dead_class) or position_of(board, part)
    if position is None:
        return Demand(
            ref=ref, role=part.role, kind=part.kind, classes=(), requirements=(), safety=False, original=original,
            original_type=part.type, note="no rule for this position: fit the very same type",
        )
    if original is not None and not _is_of_kind(original, part, catalog):
        original = None
    misplaced = original is not None and bool(position.classes) and original.part_class not in position.classes + position.was
    own = tuple(stress for stress in stresses if stress.ref == ref)
    figures = _Figures(board, part, own, None if misplaced else original, position.safety)
    requirements = tuple(found for need in position.needs if (found := figures.requirement(need)))
    return Demand(
        ref=ref, role=plain_role(part.role), kind=part.kind, classes=position.classes, requirements=requirements,
        safety=position.safety, original=original, original_type=part.type, same_pins=position.same_pins,
        never=position.never, together=position.together, note=_notes(position, part, original),
        misplaced=_misplaced(original, position) if misplaced and original else "",
    )


def _is_of_kind(original: CatalogPart, part: Part, catalog: Catalog) -> bool:
    """Whether a type read off the dead part is a part of its kind at all: 1N60 is a diode and a MOSFET."""
    if original.part_class not in catalog.classes:
        return True
    return part.kind in catalog.file(original.part_class).kinds or part.kind == original.part_class


def _misplaced(original: CatalogPart, position: Position) -> str:
    allowed = " or ".join(name.replace("_", " ") for name in position.classes)
    return f"{original.type} is a {original.part_class.replace('_', ' ')}: the place takes {allowed}"


def _notes(position: Position, part: Part, original: CatalogPart | None) -> str:
    words = [position.note] if position.note else []
    if original is not None and (fit := fit_of(original)):
        words.append(f"place: {fit}")
    if part.origin == "estimated" and position.classes:
        words.append("the old value is only estimated: read or measure it before ordering")
    return "; ".join(words)


@dataclass(frozen=True, slots=True)
class _Figures:
    """Turns the needs of a position into requirements for one part of one board."""

    board: Board
    part: Part
    stresses: tuple[Stress, ...]
    original: CatalogPart | None
    safety: bool

    def requirement(self, need: Need) -> Requirement | None:
        """The requirement of one need, or None where nothing is known that it could ask."""
        if need.rule:
            return self._gain(need)
        if need.words or (need.like == "equal" and unit_of(need.key) == ""):
            return self._word(need)
        if need.value or need.value_at_most:
            return self._window(need)
        if need.like_rating:
            return self._same_rating(need)
        return self._bounds(need)

    def _word(self, need: Need) -> Requirement | None:
        had = self.original.text(need.key) if self.original else ""
        words, reason = need.words, "the position takes " + " or ".join(need.words)
        if need.like == "equal":
            if had:
                words, reason = (had,), f"the old part: {had}"
            else:
                return Requirement(
                    need.key, words_of(need.key), "", "the old part's is not known: read it off the body", need.source,
                    words=words, undecided=True, readable=True,
                )
        if not words:
            return None
        return Requirement(need.key, words_of(need.key), "", reason, need.source, words=words, offered=had or None)

    def _gain(self, need: Need) -> Requirement | None:
        """The gain may lie 30 % off the old one; where only the old type is known, the bands must lie alike."""
        gain = next((self.part.value[key] for key in need.value if key in self.part.value), None)
        low = self.original.number("hfe_min") if self.original else None
        high = self.original.number("hfe_max") if self.original else None
        if gain is not None:
            low, high = gain * (1 - need.low), gain * (1 + need.high)
            rule, reason = "gain near", f"gain {gain:.3g} of the old part, {need.high:.0%} either way"
        elif low is not None and high is not None:
            rule, reason = "gain band", "band of the old part"
        else:
            return None
        return Requirement(
            need.key, words_of(need.key), "", reason, need.source, minimum=low, maximum=high, rule=rule, offered=gain or low,
        )

    def _window(self, need: Need) -> Requirement | None:
        unit = unit_of(need.key)
        if need.value_at_most:
            value = self.part.value.get(need.value_at_most)
            if value is None:
                return None
            return Requirement(
                need.key, words_of(need.key), unit, f"old part {figure(value, unit)} x {need.share:g}", need.source,
                maximum=value * need.share, offered=value,
            )
        value = next((self.part.value[key] for key in need.value if key in self.part.value), None)
        if value is None and self.original is not None:
            value = self.original.number(need.key)
        if value is None:
            return Requirement(
                need.key, words_of(need.key), unit, "the old value is not known: read or measure it", need.source,
                undecided=True,
            )
        ends = (value * (1 - need.low), value * (1 + need.high))
        slack = 1e-9 * abs(value)
        return Requirement(
            need.key, words_of(need.key), unit, f"{figure(value, unit)}, -{need.low:.0%} to +{need.high:.0%}", need.source,
            minimum=min(ends) - slack, maximum=max(ends) + slack, offered=value,
        )

    def _same_rating(self, need: Need) -> Requirement:
        unit = unit_of(need.key)
        value = self.part.ratings.get(need.like_rating)
        if value is None and self.original is not None:
            value = self.original.number(need.key)
        if value is None:
            return Requirement(
                need.key, words_of(need.key), unit, "the old rating is not known: read it off the body", need.source,
                undecided=True,
            )
        return Requirement(
            need.key, words_of(need.key), unit, f"equal to the old part, {figure(value, unit)}", need.source,
            minimum=value * 0.999, maximum=value * 1.001, offered=value,
        )

    def _bounds(self, need: Need) -> Requirement | None:
        """Minimum and maximum from stress, mains, floor, the dead part's rating and its catalog figures."""
        unit = unit_of(need.key)
        stressed, reason = self._stressed(need)
        offered = self._offered(need)
        lows = [(stressed, reason), (self._floor(need), "least rating for the place")]
        if need.own and need.like != "at_most":
            lows.append((offered if need.rating else None, "rating of the old part"))
        highs: list[tuple[float | None, str]] = []
        had = self._had(need)
        if had is not None:
            bound, words = had * need.share + need.plus, "as the old part"
            if need.share != 1.0:
                words += f", x {need.share:g}"
            if need.plus:
                words += f", + {need.plus:g}"
            if need.like in ("at_least", "equal"):
                lows.append((bound * (0.999 if need.like == "equal" else 1.0), words))
            if need.like in ("at_most", "equal"):
                highs.append((bound * (1.001 if need.like == "equal" else 1.0), words))
        highs.append(self._ceiling(need, had))
        low = max(((value, text) for value, text in lows if value is not None), default=(None, ""), key=lambda low: low[0])
        high = self._highest(need, highs)
        if low[0] is None and high[0] is None:
            return self._undecided(need, unit)
        return Requirement(
            need.key, words_of(need.key), unit, "; ".join(text for text in (low[1], high[1]) if text), need.source,
            minimum=low[0], maximum=high[0], stressed=stressed, alternatives=need.alternatives, offered=offered,
            mistake=self._mistake(need, stressed, offered), if_known=need.if_known,
        )

    def _undecided(self, need: Need, unit: str) -> Requirement | None:
        """What to say where neither bound is known: nothing, unless the place would be left open by that."""
        if need.if_known:
            return None
        if need.rating and (need.stress or need.of):
            return Requirement(
                need.key, words_of(need.key), unit, "neither its stress nor the old rating is known", need.source,
                alternatives=need.alternatives, undecided=True,
            )
        if self.safety and need.like:
            return Requirement(
                need.key, words_of(need.key), unit, "the old part's is not known: read it off the body or its sheet",
                need.source, undecided=True, readable=True,
            )
        return None

    def _highest(self, need: Need, highs: list[tuple[float | None, str]]) -> tuple[float | None, str]:
        known = [(value, text) for value, text in highs if value is not None]
        if not known:
            return None, ""
        return max(known, key=lambda high: high[0]) if need.ceiling_stress else min(known, key=lambda high: high[0])

    def _ceiling(self, need: Need, had: float | None) -> tuple[float | None, str]:
        if need.ceiling_stress:
            flowing = self._flowing(need)
            if flowing is None:
                return None, ""
            return flowing * need.times, f"{need.times:g} x {figure(flowing, unit_of(need.key))} flowing there"
        if had is not None and need.like == "at_most":
            return None, ""
        return need.ceiling, "limit of the position" if need.ceiling is not None else ""

    def _flowing(self, need: Need) -> float | None:
        """The stress that sets a ceiling; a current also from the power at the part's voltage."""
        worst = self._worst(need.ceiling_stress)
        if worst is not None:
            return abs(worst.value)
        power, voltage = self._worst(("power",)), self.part.value.get(need.power_over)
        return abs(power.value) / voltage if power is not None and voltage else None

    def _worst(self, quantities: Sequence[str]) -> Stress | None:
        known = [s for s in self.stresses if s.quantity in quantities and math.isfinite(s.value) and s.value]
        return max(known, key=lambda stress: abs(stress.value), default=None)

    def _stressed(self, need: Need) -> tuple[float | None, str]:
        """Stress over factor, and how it was reached."""
        factor = need.factor or 1.0
        if need.of:
            value = self.board.mains.high * (math.sqrt(2) if need.of == "mains_peak" else 1.0)
            words = f"{value:.4g} V of {'mains peak' if need.of == 'mains_peak' else 'mains'}"
            return value / factor, words + (f" / {factor:g}" if factor != 1.0 else "")
        worst = self._worst(need.stress)
        if worst is None:
            return None, ""
        value = abs(worst.value)
        words = f"{figure(value, QUANTITIES[worst.quantity])}"
        if worst.condition:
            words += f" at {worst.condition}"
        if need.as_ == "half_wave_surge":
            value = math.sqrt(2 * value / _HALF_WAVE)
            words += f" = {value:.3g} A for {_HALF_WAVE * 1e3:g} ms"
        return value / factor, words + (f" / {factor:g}" if factor != 1.0 else "")

    def _floor(self, need: Need) -> float | None:
        floors = [need.floor]
        if (need.floor_230 is not None or need.floor_120 is not None) and not self._is_secondary():
            floors.append(need.floor_230 if self.board.mains.high > 150.0 else need.floor_120)
        return max((floor for floor in floors if floor is not None), default=None)

    def _is_secondary(self) -> bool:
        return any(self.board.side_of(node) == "secondary" for node in self.part.pins.values())

    def _offered(self, need: Need) -> float | None:
        own = self.part.ratings.get(need.rating) if need.rating else None
        return own if own is not None else self._had(need)

    def _had(self, need: Need) -> float | None:
        return self.original.number(need.key, *need.alternatives) if self.original else None

    def _mistake(self, need: Need, stressed: float | None, offered: float | None) -> str:
        """Tells when the dead part was below the computed demand, with both figures."""
        if stressed is None or offered is None or abs(offered) >= stressed or need.of:
            return ""
        worst = self._worst(need.stress)
        if worst is None:
            return ""
        unit = unit_of(need.key)
        word = worst.quantity.replace("_", " ")
        carried = f"carried {figure(abs(worst.value), worst.unit)} {word} against a rating of {figure(offered, unit)}"
        if need.as_:
            return ""
        if abs(worst.value) > abs(offered):
            return carried + ": it was past its rating"
        return carried + f", of which {need.factor:.2g} is the recommended share"
