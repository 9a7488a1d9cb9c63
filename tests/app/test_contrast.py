"""Contrast of every text on its background, measured on the drawn screens, in full colour and in 256 colours.

Published: WCAG 2.1, success criterion 1.4.3 (at least 4.5:1) and the definitions of contrast ratio and
relative luminance in its glossary; the pair black on white is 21:1 by definition.
"""

import pytest
from rich.color import Color, ColorSystem
from rich.segment import Segment

from tests.app.screens import TO_BENCH, play, press, settle, strips, type_in
from triage.app.theme import DARK, LIGHT

LEAST = 4.5


def luminance(colour: Color) -> float:
    """Relative luminance (WCAG 2.1 glossary)."""

    def linear(part: int) -> float:
        share = part / 255
        return share / 12.92 if share <= 0.03928 else ((share + 0.055) / 1.055) ** 2.4

    red, green, blue = colour.get_truecolor()
    return 0.2126 * linear(red) + 0.7152 * linear(green) + 0.0722 * linear(blue)


def contrast(one: Color, other: Color) -> float:
    """Contrast ratio (WCAG 2.1 glossary)."""
    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def test_black_on_white_is_21_to_1():
    assert contrast(Color.from_rgb(0, 0, 0), Color.from_rgb(255, 255, 255)) == pytest.approx(21.0)


def pairs_of(app) -> dict[tuple[str, str], str]:
    """Text and background of every drawn cell that is not blank, with a sample of the text."""
    found: dict[tuple[str, str], str] = {}
    for strip in strips(app):
        for segment in strip:
            assert isinstance(segment, Segment)
            style = segment.style
            if style is None or not segment.text.strip():
                continue
            assert style.color is not None and style.bgcolor is not None, segment
            front, back = style.color, style.bgcolor
            if style.reverse:
                front, back = back, front
            found[front.name, back.name] = segment.text
    return found


@pytest.mark.parametrize("theme", [DARK.name, LIGHT.name])
def test_every_text_is_readable(tmp_path, theme):
    found: dict[tuple[str, str], str] = {}

    async def story(pilot):
        async def look(*keys: str) -> None:
            for key in keys:
                await pilot.press(key)
            await settle(pilot)
            found.update(pairs_of(pilot.app))

        pilot.app.theme = theme
        await look()
        await press(pilot, *TO_BENCH[:2])
        await look()
        await press(pilot, *TO_BENCH[2:5])
        await look()
        await press(pilot, "enter", "enter", "enter", "enter")
        await look()
        await look("down", "enter", "down")
        await press(pilot, "f8", "end", "enter")
        await look()
        await type_in(pilot, "12")
        await look("1", "x", "enter")
        for key in ("f3", "f4", "f5", "f6", "f7", "f1"):
            await look(key)
        await look("escape")
        await look("f8", "b", "down")
        await look("escape")
        await look("ctrl+p")

    play(tmp_path, story)
    assert len(found) > 10
    poor = {}
    for (front, back), text in found.items():
        for system in (ColorSystem.TRUECOLOR, ColorSystem.EIGHT_BIT):
            ratio = contrast(Color.parse(front).downgrade(system), Color.parse(back).downgrade(system))
            if ratio < LEAST:
                poor[front, back, system.name] = (round(ratio, 2), text)
    assert poor == {}
