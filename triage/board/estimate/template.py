"""Templates: which parts the adapters of a family have and how they are joined, and what such adapters look like."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

from triage.board.check import Check
from triage.board.estimate.roles import roles
from triage.board.estimate.seen import COUNTS, FEATURES
from triage.board.kinds import kinds
from triage.board.profile import MAX_PARTS, RATING_UNITS
from triage.data import data_folder
from triage.errors import ProfileError
from triage.toml_guard import read_toml


@dataclass(frozen=True, slots=True)
class Place:
    """One part of a template."""

    ref: str
    role: str
    pins: Mapping[str, str]
    kind: str
    value: Mapping[str, str]
    """Value key -> quantity."""
    ratings: Mapping[str, str | float]
    """Rating key -> figure [SI] or quantity."""
    when: str = ""
    """Feature the part is there with; empty: always."""
    link: bool = False
    precise: bool = False
    fault_modes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Look:
    """What adapters of a family show: shares of the family, common practice, no source."""

    power: float
    """Middle of the rated outputs [W]."""
    power_spread: float
    """Nine of ten lie between power / power_spread and power * power_spread [-]."""
    features: Mapping[str, float] = field(default_factory=dict)
    """Feature -> share of the adapters that show it [-]."""
    counts: Mapping[str, Mapping[int, float]] = field(default_factory=dict)
    """What is counted -> number -> share [-]."""


@dataclass(frozen=True, slots=True)
class Template:
    """One family as a board without values."""

    family: str
    title: str
    usual: frozenset[str]
    """Features taken as there where nobody has looked."""
    drawing: str
    sides: Mapping[str, tuple[str, ...]]
    ground: Mapping[str, str]
    places: tuple[Place, ...]
    look: Look


@cache
def templates() -> Mapping[str, Template]:
    """The shipped templates by family. Raises ProfileError for a template with faults."""
    found = [read_template(path) for path in template_files()]
    return {template.family: template for template in found}


def template_files() -> list[Path]:
    """Files of the shipped templates."""
    return sorted((data_folder("profiles") / "templates").glob("*.toml"))


def template_of(family: str) -> Template:
    """The template of a family. Raises ProfileError naming the known ones."""
    if family not in templates():
        raise ProfileError("family", repr(family)[:60], "one of " + ", ".join(sorted(templates())))
    return templates()[family]


def read_template(path: Path) -> Template:
    """One template file. Raises ProfileError with every fault found."""
    content, _ = read_toml(path, ProfileError, path.name)
    return template_from_dict(content, path.name)


def template_from_dict(content: Mapping[str, Any], where: str) -> Template:
    """Template from the content of its file. Raises ProfileError that lists each fault; ``where`` names the file."""
    check = Check(where)
    if content.get("template") is not True:
        check.fault("template", content.get("template"), "true")
    usual = _features(check, content.get("usual", []), "usual")
    places = tuple(_place(check, row, number) for number, row in enumerate(check.rows(content, "part", MAX_PARTS), 1))
    template = Template(
        check.text(content, "family"), check.text(content, "title"), usual, check.text(content, "drawing", default=""),
        {str(side): _nodes(check, nodes, f"sides {side}") for side, nodes in check.table(content, "sides").items()},
        {str(side): str(node) for side, node in check.table(content, "ground").items()}, places,
        _look(check, check.table(content, "look")))
    _cross_checks(check, template)
    check.finish()
    return template


def _nodes(check: Check, found: object, at: str) -> tuple[str, ...]:
    if isinstance(found, list) and all(isinstance(node, str) for node in found):
        return tuple(found)
    check.fault(at, found, "a list of nodes")
    return ()


def _place(check: Check, row: Mapping[str, Any], number: int) -> Place:
    ref = check.text(row, "ref", at=f"part {number}")
    at = f"part {ref or number}"
    name = check.text(row, "role", at=at)
    role = roles().get(name)
    kind = kinds().get(str(row.get("kind", role.kind if role else "")))
    if kind is None:
        check.fault(f"{at} role", name, "a role of roles.toml, or a kind beside it")
        return Place(ref, name, {}, "", {}, {})
    pins = check.table(row, "pins", at)
    if missing := [pin for pin in kind.pins if not isinstance(pins.get(pin), str)]:
        check.fault(f"{at} pins", sorted(map(str, pins)), "nodes for " + ", ".join(missing))
    value = {**(role.value if role else {}), **(check.table(row, "value", at) if "value" in row else {})}
    ratings = {**(role.ratings if role else {}), **(check.table(row, "ratings", at) if "ratings" in row else {})}
    for key in value:
        if key not in kind.values:
            check.fault(f"{at} value {key}", key, "one of " + ", ".join(kind.values))
    for key in kind.required:
        if key not in value:
            check.fault(f"{at} value", sorted(value), f"{key} among them")
    for key in ratings:
        if key not in RATING_UNITS:
            check.fault(f"{at} ratings {key}", key, "one of " + ", ".join(RATING_UNITS))
    modes = row.get("fault_modes", [])
    if not isinstance(modes, list) or any(mode not in kind.fault_modes for mode in modes):
        check.fault(f"{at} fault_modes", modes, "a list out of " + ", ".join(kind.fault_modes))
        modes = []
    when = row.get("when", "")
    if not isinstance(when, str) or (when and when not in FEATURES):
        check.fault(f"{at} when", when, "one of " + ", ".join(FEATURES))
    return Place(ref, name, {str(k): str(v) for k, v in pins.items()}, kind.key, value, ratings, str(when),
                 bool(row.get("link", role.link if role else False)), bool(role and role.precise), tuple(modes))


def _features(check: Check, names: object, at: str) -> frozenset[str]:
    if not isinstance(names, list) or any(name not in FEATURES for name in names):
        check.fault(at, names, "a list out of " + ", ".join(FEATURES))
        return frozenset()
    return frozenset(names)


def _look(check: Check, table: Mapping[str, Any]) -> Look:
    features = check.table(table, "features", "look") if "features" in table else {}
    _features(check, list(features), "look features")
    counts = {}
    for name in COUNTS:
        shares = table.get(name, {})
        try:
            counts[name] = {int(number): float(share) for number, share in shares.items()}
        except (AttributeError, TypeError, ValueError):
            check.fault(f"look {name}", shares, "a table of shares by number")
    shares = {str(key): check.quantity(features, key, "", "look features") for key in features}
    power, spread = check.quantity(table, "power", "W", "look"), check.quantity(table, "power_spread", "", "look", lowest=1.0)
    return Look(power, spread, shares, counts)


def _cross_checks(check: Check, template: Template) -> None:
    refs = [place.ref for place in template.places]
    for ref in sorted({ref for ref in refs if refs.count(ref) > 1}):
        check.fault("part ref", ref, "each ref once")
    placed = {node for place in template.places for node in place.pins.values()}
    for side, nodes in template.sides.items():
        if template.ground.get(side) not in nodes:
            check.fault(f"ground {side}", template.ground.get(side), f"a node of the side {side}")
        for node in nodes:
            if node not in placed:
                check.fault(f"sides {side}", node, "a node that a part is connected to")
