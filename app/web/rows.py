"""Plates in a line, in the order of the hands: to take off, to put on, or inside a sentence. Pure geometry."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from app.web.geometry import CAP_EM, FULL_MM, Box, width_em
from app.web.views import PlateView

ROW_LINE, ROW_GAP, TOKEN_GAP = 100, 14, 46  # units: one line, between lines, between two plates
NUMBER_SIZE = 143  # its figures fill 96 of a line's 100 units
RIM_STRETCH, RIM_LEAST, RIM_TO_NUMBER = 0.62, 9, 12


@dataclass(frozen=True, slots=True)
class Token:
    """One plate in a row: its rim to scale, and its number."""

    text: str
    rim: Box
    colour: str
    x: int
    baseline: int
    size: int


@dataclass(frozen=True, slots=True)
class Row:
    width: int
    height: int
    tokens: tuple[Token, ...]


def line_up(plates: Sequence[PlateView], lines: int = 1) -> Row:
    """Plates in the order of the hands, broken into at most ``lines`` lines as even in length as can be."""
    groups = _break_evenly([_token_width(plate) for plate in plates], lines)
    tokens: list[Token] = []
    widest = 0
    at = 0
    for line, count in enumerate(groups):
        y = line * (ROW_LINE + ROW_GAP)
        x = 0
        for plate in plates[at : at + count]:
            tokens.append(_token(plate, x, y))
            x += _token_width(plate) + TOKEN_GAP
        widest = max(widest, x - TOKEN_GAP)
        at += count
    height = len(groups) * ROW_LINE + (len(groups) - 1) * ROW_GAP
    return Row(width=max(widest, 1), height=max(height, ROW_LINE), tokens=tuple(tokens))


def _rim_width(plate: PlateView) -> int:
    return max(RIM_LEAST, round(plate.thickness_mm * RIM_STRETCH))


def _token_width(plate: PlateView) -> int:
    return _rim_width(plate) + RIM_TO_NUMBER + round(width_em(plate.face) * NUMBER_SIZE)


def _token(plate: PlateView, x: int, y: int) -> Token:
    width = _rim_width(plate)
    height = max(14, min(96, round(plate.diameter_mm * 96 / FULL_MM)))
    rim = Box(x, y + (ROW_LINE - height) // 2, width, height)
    baseline = y + ROW_LINE // 2 + round(NUMBER_SIZE * CAP_EM / 2)
    return Token(plate.face, rim, plate.colour, rim.right + RIM_TO_NUMBER, baseline, NUMBER_SIZE)


def _break_evenly(widths: Sequence[int], lines: int) -> list[int]:
    """How many go on each line, so that the widest line is as short as can be (two lines at most)."""
    if lines <= 1 or len(widths) < 2:
        return [len(widths)]

    def longer_line(first: int) -> int:
        return max(_line_width(widths[:first]), _line_width(widths[first:]))

    first = min(range(1, len(widths)), key=longer_line)
    return [first, len(widths) - first]


def _line_width(widths: Sequence[int]) -> int:
    return sum(widths) + TOKEN_GAP * (len(widths) - 1)


@dataclass(frozen=True, slots=True)
class FitText:
    """A text whose box is exactly as large as its capitals: SVG scales it to any place."""

    text: str
    width: int
    height: int
    baseline: int
    size: int


def fit_text(text: str) -> FitText:
    """A number or a few capitals, to be shown as large as their place allows."""
    return FitText(text, width=max(round(width_em(text) * 100), 1), height=70, baseline=68, size=100)


# A plate inside a line of text: its rim in a box of 16 by 46 units.

CHIP_WIDTH, CHIP_HEIGHT = 16, 46


def chip_rim(plate: PlateView) -> Box:
    """The rim of a plate beside its number, height by diameter and width by thickness."""
    width = max(4, min(CHIP_WIDTH - 2, round(plate.thickness_mm * 0.4)))
    height = max(8, min(CHIP_HEIGHT - 2, round(plate.diameter_mm * (CHIP_HEIGHT - 2) / FULL_MM)))
    return Box((CHIP_WIDTH - width) // 2, (CHIP_HEIGHT - height) // 2, width, height)
