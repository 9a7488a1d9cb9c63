"""Parts that are more than a junction, written with the behavioural sources of the SPICE notation.

Each kind of ``triage.physics.transient_behaviour`` has its lines here: a field-effect transistor is the level 1 model, the
others are current sources of an expression (B), and what a controller remembers is a voltage behind a resistor and a capacitor of
some nanoseconds. Source of the notation: ngspice user's manual, non-linear dependent sources.
"""

import math
from collections.abc import Callable, Iterator, Sequence

from triage.physics.netlist import CONTROLLER, MOSFET, OFF_TIME, PLATEAU, REGULATOR, SHUNT_REFERENCE, Netlist

LEADING_EDGE, PLATEAU_FILTER, SLOW_FILTER, BEND, KNEE, NO_PLATEAU = 2.5e-7, 4e-7, 6e-6, 0.98, 0.85, 0.02
"""As in transient_switchers, which is compiled when it is read; a test holds the two together."""
Name = Callable[[str], str]
"""Our name of a node -> its name in the deck."""


def behaviour_lines(net: Netlist, name: Name, awake: bool = False) -> list[str]:
    """Lines of all behaviours of a netlist. ``awake``: controllers begin awake, as in a settled operating point."""
    lines: list[str] = []
    for number, (own, kind, terminals, values, _) in enumerate(net.behaviours):
        writer = WRITERS[kind]
        lines += writer(_Inner(own, number, name, awake), [name(node) for node in terminals], list(values))
    return lines


class _Inner:
    """Names of elements and inner nodes of one behaviour."""

    def __init__(self, own: str, number: int, name: Name, awake: bool) -> None:
        self._own, self._name, self.tag, self.awake = own, name, f"x{number}", awake

    def node(self, suffix: str) -> str:
        """An inner node."""
        return self._name(f"{self._own}:{suffix}")


def _between(plus: str, minus: str) -> str:
    """Voltage between two nodes as an expression."""
    return f"(v({plus})-v({minus}))"


def _step(x: str, width: float) -> str:
    """Smooth step from 0 to 1 about x = 0."""
    return f"(0.5*(1+tanh(({x})/{width:.9g})))"


def _field_effect(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    drain, gate, source = ends
    yield f"M{inner.tag} {drain} {gate} {source} {source} MM{inner.tag} W=1u L=1u"
    yield f".model MM{inner.tag} NMOS(LEVEL=1 KP={p[0]:.9g} VTO={p[1]:.9g} LAMBDA={p[2]:.9g} IS=1e-20)"


def _shunt_reference(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    cathode, anode, sense = ends
    sink = f"min(max(({_between(sense, anode)}-{p[0]:.9g})*{p[1]:.9g},0),{p[2]:.9g})+{p[3]:.9g}"
    yield f"B{inner.tag} {cathode} {anode} I=({sink})*{_step(f'{_between(cathode, anode)}-{p[4]:.9g}', p[5])}"


def _regulator(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    """The chip's temperature is the voltage of an inner node."""
    entry, output, ground = ends
    heat, chip = inner.node("heat"), inner.node("chip")
    drop = _between(entry, output)
    most = f"{p[2]:.9g}*(1-min(max(({drop}-12)/25,0),0.7))*(1-{_step(f'v({chip})-{p[5]:.9g}', 4.0)})"
    passed = f"min(max(({p[0]:.9g}-{_between(output, ground)})*{p[1]:.9g},0),{most})*{_step(f'{drop}-{p[3]:.9g}', 0.12)}"
    yield f"B{inner.tag}p {entry} {output} I={passed}"
    yield f"B{inner.tag}q {entry} {ground} I={p[4]:.9g}*tanh(max({_between(entry, ground)},0)/3)"
    yield f"B{inner.tag}h {heat} 0 V=25+max({drop}*({passed})+{_between(entry, ground)}*{p[4]:.9g},0)*{p[6]:.9g}"
    yield f"R{inner.tag}h {heat} {chip} 1k"
    yield f"C{inner.tag}h {chip} 0 {p[7] / 1e3:.9g} ic=25"


class _Logic:
    """Memories and timers of a controller, in nodes of their own: a memory is 0 or 1 V, a timer a volt for its unit of time."""

    def __init__(self, inner: _Inner) -> None:
        self._inner, self.lines, self._count = inner, list[str](), 0

    def __call__(self, suffix: str) -> str:
        """Voltage of an inner node as an expression."""
        return f"v({self._inner.node(suffix)})"

    def _tag(self) -> str:
        self._count += 1
        return f"{self._inner.tag}n{self._count}"

    def memory(self, name: str, set_by: str, reset_by: str, first: bool = False) -> None:
        """A memory that follows within some nanoseconds; reset comes before set."""
        node, wish, tag = self._inner.node(name), self._inner.node(f"{name} wish"), self._tag()
        self.lines += [f"B{tag} {wish} 0 V=({reset_by}) ? 0 : (({set_by}) ? 1 : (v({node})>0.5 ? 1 : 0))",
                       f"R{tag} {wish} {node} 1k", f"C{tag} {node} 0 5p ic={int(first)}"]

    def timer(self, name: str, runs: str, zero: str, unit: float = 1e-6, first: float = 0.0) -> None:
        """A timer that runs while one condition holds and is emptied while the other does; in ``unit`` [s] a volt."""
        node, tag = self._inner.node(name), self._tag()
        self.lines += [f"B{tag} 0 {node} I=({zero}) ? -v({node})/2 : (({runs}) ? {1e-9 / unit:.9g} : 0)",
                       f"C{tag} {node} 0 1n ic={first:.9g}"]

    def follower(self, name: str, of: str, fast: str, slow: str = "0>1", lag: str = "1", first: float = 0.0) -> None:
        """A voltage that follows another at once, or with a lag (an expression in seconds), or holds."""
        node, tag = self._inner.node(name), self._tag()
        rate = f"({fast}) ? 0.1 : (({slow}) ? 1e-9/({lag}) : 0)"
        self.lines += [f"B{tag} 0 {node} I=(({of})-v({node}))*({rate})", f"C{tag} {node} 0 1n ic={first:.9g}"]


def _pins(inner: _Inner, ends: Sequence[str], p: Sequence[float], logic: _Logic) -> Iterator[str]:
    """Supply current and gate driver, the same in all controllers."""
    supply, drive, _, _, ground = ends
    awake, high = logic("awake"), logic("high")
    yield f"B{inner.tag}s {supply} {drive} I={high}>0.5 ? {_between(supply, drive)}/{p[9]:.9g} : 0"
    yield f"B{inner.tag}d {drive} {ground} I=({awake}>0.5 && {high}<0.5) ? {_between(drive, ground)}/{p[10]:.9g} : 0"
    yield f"B{inner.tag}q {supply} {ground} I=({awake}>0.5 ? {p[8]:.9g} : 0)+{_between(supply, ground)}/{p[11]:.9g}"


def _lockout(logic: _Logic, supply: str, p: Sequence[float], awake: bool) -> None:
    logic.memory("awake", f"{supply}>{p[0]:.9g}", f"{supply}<{p[1]:.9g}", awake)


def _controller(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    """Clock and ramp run all the time; the solver's begin when the chip wakes."""
    supply, feedback, sense = (_between(ends[k], ends[4]) for k in (0, 2, 3))
    logic, clock, ramp = _Logic(inner), inner.node("clock"), inner.node("ramp")
    peak = f"min(max(({feedback}-{p[3]:.9g})/3,0),{p[4]:.9g})"
    awake, latched = logic("awake"), logic("latched")
    yield f"V{inner.tag}c {clock} 0 PULSE(0 1 0 1n 1n 60n {p[6]:.9g})"
    yield f"V{inner.tag}r {ramp} 0 PULSE(0 1 0 {p[6] - 2e-9:.9g} 1n 1n {p[6]:.9g})"
    _lockout(logic, supply, p, inner.awake)
    logic.memory("latched", f"{supply}>{p[2]:.9g}", f"{awake}<0.5")
    ended = f"v({ramp})>{p[14]:.9g} && {sense}>{peak}-{p[5]:.9g}*v({ramp})"
    logic.memory("high", f"v({clock})>0.5 && v({ramp})<0.1 && {peak}>0.03",
                 f"{awake}<0.5 || {latched}>0.5 || {peak}<=0.03 || v({ramp})>{p[13]:.9g} || ({ended})")
    pull = f"({feedback}-({awake}>0.5 ? {p[12]:.9g} : 0))/{p[7]:.9g}"
    yield f"B{inner.tag}f {ends[2]} {ends[4]} I={pull}"
    yield from logic.lines
    yield from _pins(inner, ends, p, logic)


def _plateau(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    """Times are microseconds; see transient_switchers for what is done."""
    supply, feedback, sense = (_between(ends[k], ends[4]) for k in (0, 2, 3))
    logic = _Logic(inner)
    awake, high, latched, knee, held = (logic(name) for name in ("awake", "high", "latched", "knee", "held"))
    off, on = f"{high}<0.5", f"{high}>0.5"
    hard = f"min(max(({p[3]:.9g}-{logic('sample')})/{p[12]:.9g}+0.5,0),1)"
    wait = f"max({p[6] * 1e6:.9g}*exp({math.log(p[7] / p[6]):.9g}*(1-{hard})),{logic('spent')}/{p[15]:.9g})"
    blank = f"{logic('off time')}<{p[14] * 1e6:.9g}"
    _lockout(logic, supply, p, inner.awake)
    logic.memory("latched", f"{supply}>{p[2]:.9g}", f"{awake}<0.5")
    logic.memory("high", f"{knee}>0.5 && {logic('since off')}+{logic('pulse')}>{wait}",
                 f"{awake}<0.5 || {latched}>0.5 || {logic('on time')}>{p[13] * 1e6:.9g} || "
                 f"({logic('on time')}>{LEADING_EDGE * 1e6:.9g} && {sense}>{p[4]:.9g}*({p[5]:.9g}+{1.0 - p[5]:.9g}*{hard}))")
    logic.timer("since off", "1>0", on)
    logic.follower("pulse", logic("on time"), on)
    logic.timer("on time", on, off)
    logic.timer("off time", f"{knee}<0.5", on)
    logic.follower("held", feedback, f"{off} && {blank} && {knee}<0.5", f"{off} && {knee}<0.5",
                   f"{feedback}>{BEND}*{held} ? {PLATEAU_FILTER:g} : {SLOW_FILTER:g}", p[3])
    logic.memory("knee", f"{off} && !({blank}) && ({feedback}<{KNEE}*{held} || {feedback}<{NO_PLATEAU * p[3]:.9g})", on, True)
    logic.follower("before", logic("sample"), on, first=p[3])
    logic.follower("sample", f"0.5*({logic('before')}+{held})", f"{off} && {knee}>0.5", first=p[3])
    logic.follower("spent", logic("off time"), f"{off} && {knee}>0.5")
    yield from logic.lines
    yield from _pins(inner, ends, p, logic)


def _off_time(inner: _Inner, ends: Sequence[str], p: Sequence[float]) -> Iterator[str]:
    """Pulses are counted in microseconds, the rest in milliseconds."""
    supply, feedback, sense = (_between(ends[k], ends[4]) for k in (0, 2, 3))
    logic = _Logic(inner)
    awake, high, resting = (logic(name) for name in ("awake", "high", "resting"))
    _lockout(logic, supply, p, inner.awake)
    logic.timer("unfed", "1>0", f"{feedback}>={p[3]:.9g} || {resting}>0.5", 1e-3)
    logic.timer("rest", "1>0", f"{resting}<0.5", 1e-3)
    logic.memory("resting", f"{logic('unfed')}>{p[12] * 1e3:.9g}", f"{logic('rest')}>{p[15] * 1e3:.9g}")
    logic.timer("on time", f"{high}>0.5", f"{high}<0.5")
    logic.timer("off time", f"{high}<0.5", f"{high}>0.5")
    logic.memory("high", f"{feedback}<{p[3]:.9g} && {logic('off time')}>{p[6] * 1e6:.9g}",
                 f"{awake}<0.5 || {resting}>0.5 || {logic('on time')}>{p[13] * 1e6:.9g} || "
                 f"({logic('on time')}>{LEADING_EDGE * 1e6:.9g} && {sense}>{p[4]:.9g})")
    yield from logic.lines
    yield from _pins(inner, ends, p, logic)


WRITERS: dict[int, Callable[[_Inner, Sequence[str], Sequence[float]], Iterator[str]]] = {
    MOSFET: _field_effect, SHUNT_REFERENCE: _shunt_reference, REGULATOR: _regulator, CONTROLLER: _controller, PLATEAU: _plateau,
    OFF_TIME: _off_time,
}
