"""Boxes, and how wide a text is in the one typeface: what all drawings share."""

from __future__ import annotations

from dataclasses import dataclass

FULL_MM = 450.0  # the largest plate of the rulebooks; larger ones make their own drawing smaller

# Atkinson Hyperlegible Next, weight 800, in ems: a tabular figure, a point, a capital, others; cap height.
DIGIT_EM, POINT_EM, CAPITAL_EM, OTHER_EM, CAP_EM = 0.632, 0.33, 0.74, 0.62, 0.668


def width_em(text: str) -> float:
    """Width of ``text`` in ems of the heaviest face, tabular figures."""
    return sum(_advance(character) for character in text)


def _advance(character: str) -> float:
    if character.isdigit():
        return DIGIT_EM
    if character in ".,: ":
        return POINT_EM
    return CAPITAL_EM if character.isupper() else OTHER_EM


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle in whole user units, from its upper left corner."""

    x: int
    y: int
    width: int
    height: int

    @property
    def middle(self) -> int:
        return self.x + self.width // 2

    @property
    def right(self) -> int:
        return self.x + self.width

    @property
    def bottom(self) -> int:
        return self.y + self.height
