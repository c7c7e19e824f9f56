"""Sheets of paper as PDF: A4 or Letter, one typeface, every page numbered "page 1 of 2", made without a browser.

Lengths are in millimetres from the upper left corner, sizes of text in points. What is drawn is kept until
:meth:`Paper.pdf` is called, because only then is the number of pages known.
"""

from __future__ import annotations

import io
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path

from reportlab.lib.pagesizes import A4, LETTER
from reportlab.lib.units import mm
from reportlab.pdfbase.pdfmetrics import registerFont, stringWidth
from reportlab.pdfbase.ttfonts import TTFont
from reportlab.pdfgen.canvas import Canvas

FONTS = Path(__file__).resolve().parents[2] / "static" / "vendored" / "fonts"
PLAIN, BOLD = "Platewright-400", "Platewright-800"
SIZES = {"a4": A4, "letter": LETTER}
MARGIN = 10.0
TEXT_PT = 14.0  # nothing on a card is smaller: read at an arm's length, sweating
LINE = 5.6  # mm from one line of 14 pt to the next
FOOT_GAP = 3.0

Draw = Callable[[Canvas], None]


@cache
def _register() -> None:
    for name in (PLAIN, BOLD):
        registerFont(TTFont(name, FONTS / f"atkinson-hyperlegible-next-{name[-3:]}.ttf"))


@cache
def _letters() -> frozenset[int]:
    """Every character that the typeface can draw."""
    _register()
    return frozenset(TTFont("letters", FONTS / "atkinson-hyperlegible-next-400.ttf").face.charToGlyph)


def drawable(words: str) -> str:
    """The words with a question mark for each letter that the typeface lacks."""
    return "".join(one if ord(one) in _letters() else "?" for one in words)


def width_of(words: str, size: float, *, bold: bool = False) -> float:
    """Width in millimetres."""
    _register()
    return float(stringWidth(words, BOLD if bold else PLAIN, size)) / mm


def wrapped(words: str, width: float, size: float = TEXT_PT, *, bold: bool = False) -> list[str]:
    """The words in lines no wider than ``width``; a single word that is wider is cut with an ellipsis."""
    lines: list[str] = []
    for word in words.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and width_of(longer, size, bold=bold) <= width:
            lines[-1] = longer
        else:
            lines.append(_cut(word, width, size, bold=bold))
    return lines


def _cut(word: str, width: float, size: float, *, bold: bool) -> str:
    if width_of(word, size, bold=bold) <= width:
        return word
    while word and width_of(f"{word}…", size, bold=bold) > width:
        word = word[:-1]
    return f"{word}…"


def in_lines(words: str, width: float, most: int, *, bold: bool = False) -> list[str]:
    """At most ``most`` lines; what does not fit ends in an ellipsis."""
    lines = wrapped(words, width, bold=bold)
    if len(lines) <= most:
        return lines
    return [*lines[: most - 1], _cut(" ".join(lines[most - 1 :]), width, TEXT_PT, bold=bold)]


@dataclass
class Paper:
    """A document being drawn from top to bottom. ``foot`` are the lines that every page ends with."""

    title: str
    size: str  # "a4" or "letter"
    foot: Sequence[str]
    y: float = MARGIN
    pages: list[list[Draw]] = field(default_factory=lambda: [[]])
    lacks_letters: bool = False

    @property
    def width(self) -> float:
        """Room between the margins."""
        return float(SIZES[self.size][0]) / mm - 2 * MARGIN

    @property
    def bottom(self) -> float:
        """Where the foot begins."""
        lines = sum(len(wrapped(line, self.width)) for line in self.foot) + 1
        return float(SIZES[self.size][1]) / mm - MARGIN - lines * LINE - FOOT_GAP

    def new_page(self) -> None:
        """Go on at the top of another sheet."""
        self.pages.append([])
        self.y = MARGIN

    def text(self, x: float, y: float, words: str, size: float = TEXT_PT, *, bold: bool = False) -> None:
        """Words with their baseline at ``y``, starting ``x`` mm right of the margin."""
        shown = drawable(words)
        self.lacks_letters = self.lacks_letters or shown != words
        high = float(SIZES[self.size][1])

        def draw(canvas: Canvas) -> None:
            canvas.setFont(BOLD if bold else PLAIN, size)
            canvas.drawString((MARGIN + x) * mm, high - y * mm, shown)

        self.pages[-1].append(draw)

    def line(self, x1: float, y1: float, x2: float, y2: float, thick: float = 0.3) -> None:
        """A straight line, ``thick`` mm."""
        high = float(SIZES[self.size][1])

        def draw(canvas: Canvas) -> None:
            canvas.setLineWidth(thick * mm)
            canvas.line((MARGIN + x1) * mm, high - y1 * mm, (MARGIN + x2) * mm, high - y2 * mm)

        self.pages[-1].append(draw)

    def box(self, x: float, y: float, side: float, mark: str = "") -> None:
        """A box to tick, its upper edge at ``y``."""
        high = float(SIZES[self.size][1])

        def draw(canvas: Canvas) -> None:
            canvas.setLineWidth(0.5 * mm)
            canvas.rect((MARGIN + x) * mm, high - (y + side) * mm, side * mm, side * mm)

        self.pages[-1].append(draw)
        if mark:
            self.text(x + side / 2 - width_of(mark, TEXT_PT) / 2, y + side * 0.82, mark)

    def paragraph(
        self, words: str, size: float = TEXT_PT, *, bold: bool = False, indent: float = 0.0
    ) -> None:
        """Words in as many lines as they need, below what is there."""
        for line in wrapped(words, self.width - indent, size, bold=bold):
            self.y += LINE * size / TEXT_PT
            self.text(indent, self.y, line, size, bold=bold)

    def pdf(self) -> bytes:
        """The finished document."""
        _register()
        out = io.BytesIO()
        canvas = Canvas(out, pagesize=SIZES[self.size], invariant=1, pageCompression=1)
        canvas.setTitle(self.title)
        canvas.setCreator("Platewright")
        for number, draws in enumerate(self.pages, start=1):
            for draw in draws:
                draw(canvas)
            self._draw_foot(canvas, number)
            canvas.showPage()
        canvas.save()
        return out.getvalue()

    def _draw_foot(self, canvas: Canvas, number: int) -> None:
        canvas.setFont(PLAIN, TEXT_PT)
        y = self.bottom + FOOT_GAP
        high = float(SIZES[self.size][1])
        lines = [one for line in self.foot for one in wrapped(drawable(line), self.width)]
        missing = (
            "   ? stands for a letter that this typeface lacks: print from the browser." * self.lacks_letters
        )
        for words in (*lines, f"page {number} of {len(self.pages)}{missing}"):
            y += LINE
            canvas.drawString(MARGIN * mm, high - y * mm, words)


def paper_size(asked: str) -> str:
    """``letter`` where it is asked for, otherwise A4."""
    return "letter" if asked == "letter" else "a4"
