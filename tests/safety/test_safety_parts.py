"""X and Y classes and fuses: what may take whose place."""

import pytest

from triage.safety.safety_parts import SafetyPartError, bridges_reinforced, fuse_fits, may_replace, parse_fuse


@pytest.mark.parametrize(
    ("new", "old", "allowed"),
    [
        ("X2", "X2", True),
        ("X1", "X2", True),
        ("X2", "X1", False),
        ("Y1", "Y2", True),
        ("Y2", "Y1", False),
        ("Y2", "X2", True),
        ("X1", "Y2", False),
        ("X2", "Y4", False),
        ("Y4", "X1", False),
    ],
)
def test_class_may_replace(new, old, allowed) -> None:
    assert may_replace(new, old) is allowed


def test_only_y1_bridges_the_barrier_alone() -> None:
    assert [c for c in ("Y1", "Y2", "Y4", "X1") if bridges_reinforced(c)] == ["Y1"]


def test_unknown_class_lists_the_known() -> None:
    with pytest.raises(SafetyPartError, match="'Z9'; expected X1, X2"):
        may_replace("Z9", "X2")


@pytest.mark.parametrize("text", ["T1AL250V", "t 1 A L 250 V", "T1.0AL/250V~"])
def test_marking_is_read_in_its_usual_spellings(text) -> None:
    fuse = parse_fuse(text)
    assert (fuse.speed, fuse.current, fuse.breaking, fuse.voltage) == ("T", 1.0, "L", 250.0)


@pytest.mark.parametrize("text", ["", "1", "XA", "T1AL250V; rm", "\x1b[31mT1A"])
def test_other_text_is_refused(text) -> None:
    with pytest.raises(SafetyPartError):
        parse_fuse(text)


def test_why_a_fuse_does_not_fit() -> None:
    old = parse_fuse("T2AH250V")
    assert fuse_fits(old, old) == ()
    assert fuse_fits(parse_fuse("F4AL125V"), old) == (
        "4 A is not 2 A",
        "speed F is not T",
        "breaks 40 A, not 1500 A",
        "125 V is below 250 V",
    )
