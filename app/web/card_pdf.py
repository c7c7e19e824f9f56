"""The loading card as PDF: nothing under 14 pt, weights 23 pt, a row never split, good enough to finish the day."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from app.web.paper import LINE, TEXT_PT, Paper, in_lines, width_of, wrapped
from app.web.views import CardRow, CardView

WEIGHT_PT, TITLE_PT = 23.0, 19.0
ROW = 12.6
TICK, WEIGHT, WHO, OFF, ON = 0.0, 14.0, 41.0, 87.0, 111.0  # where the columns begin, mm
STACK = 135.0
PAD = 1.2
LEAST_BLANK = 2
CAUTION = (
    "The meet's rules, the referee and trained crew decide. Both ends alike, collars on and tight, one big plate at "
    "most between the ends on a rack; nobody loads while a lifter is under the bar."
)


def card_pdf(view: CardView, size: str) -> bytes:
    """The card of one flight's round, or a blank one for lifters who have not handed in."""
    foot = [f"Revision {view.revision}, printed {view.printed}. {view.total}".strip(), CAUTION]
    paper = Paper(f"{view.title}, {view.meet}", size, [*_notes(view), *foot])
    _head(paper, view)
    rows = [*view.rows, *view.undeclared]
    for row in rows:
        _add(paper, view, row)
    for _ in range(_blanks(paper)):
        _add(paper, view, None)
    return paper.pdf()


def _add(paper: Paper, view: CardView, row: CardRow | None) -> None:
    """One row, on the next sheet under the same head if this one has no room for the whole of it."""
    cells = _cells(paper, row)
    if paper.y + cells.height > paper.bottom:
        paper.new_page()
        _head(paper, view)
    _row(paper, view, row, cells)


def _blanks(paper: Paper) -> int:
    """As many blank lines as the page still takes, for changes by hand."""
    return max(LEAST_BLANK, int((paper.bottom - paper.y) / ROW))


@dataclass(frozen=True, slots=True)
class Cells:
    """The columns of plates of one row, in lines; the row is as high as the longest needs."""

    off: list[str]
    on: list[str]
    stack: list[str]
    sum: list[str]

    @property
    def height(self) -> float:
        """In millimetres."""
        lines = max(len(self.off), len(self.on), len(self.stack) + len(self.sum))
        return max(ROW, lines * LINE + 1.5)


BLANK = Cells([], [], [], [])


def _cells(paper: Paper, row: CardRow | None) -> Cells:
    if row is None or not row.weight or _says_only(row):
        return BLANK
    narrow, wide = ON - OFF - 2 * PAD, paper.width - STACK - PAD
    return Cells(
        off=wrapped(" ".join(row.off) or "–", narrow),
        on=wrapped(" ".join(row.on) or "–", narrow, bold=True),
        stack=wrapped(" ".join(row.stack) or "empty", wide, bold=True),
        sum=wrapped(row.sum, wide),
    )


def _head(paper: Paper, view: CardView) -> None:
    paper.y += 5.5
    paper.text(0, paper.y, view.title, TITLE_PT, bold=True)
    place = f"{view.meet}, {view.platform}"
    free = paper.width - width_of(view.title, TITLE_PT, bold=True) - 4
    for line in in_lines(place, free, 1) if free > 20 else []:
        paper.text(paper.width - width_of(line, TEXT_PT), paper.y, line)
    paper.paragraph(f"{view.implement}. Before line 1: {view.start} {view.side}.")
    paper.y += 2.2
    paper.line(0, paper.y, paper.width, paper.y, 0.9)
    paper.y += LINE
    words = ((WEIGHT, view.unit), (WHO, "Lifter"), (OFF, "Off"), (ON, "On"), (STACK, _stack_word(view)))
    for x, word in words:
        paper.text(x + PAD, paper.y, word)
    paper.y += 1.6
    paper.line(0, paper.y, paper.width, paper.y, 0.6)


def _stack_word(view: CardView) -> str:
    return "Each end, inside first" if view.side == "a side" else "The stack, inside first"


def _row(paper: Paper, view: CardView, row: CardRow | None, cells: Cells) -> None:
    top = paper.y
    first, second = top + 5.2, top + 5.2 + LINE
    paper.box(TICK, top + 3.4, 5.6, "×" if row and row.order == "–" else "")
    if row is None:
        paper.text(WHO + PAD, first, "change")
    else:
        paper.text(TICK + 6.6, top + 8.1, "" if row.order == "–" else row.order)
        star = "*" * (_notes_of(view).index(row.note) + 1) if row.stack and row.note else ""
        paper.text(
            WEIGHT + PAD, top + 9.2, f"{row.weight}{star}", _weight_size(row.weight + star), bold=not star
        )
        paper.text(WHO + PAD, first, in_lines(row.lifter, OFF - WHO - 2 * PAD, 1, bold=True)[0], bold=True)
        paper.text(WHO + PAD, second, " · ".join(filter(None, (_rack(row), f"lot {row.lot}"))))
        _hands(paper, row, cells, first)
    paper.y = top + cells.height
    _columns(paper, row, top)
    paper.line(0, paper.y, paper.width, paper.y)


def _columns(paper: Paper, row: CardRow | None, top: float) -> None:
    """The lines between the columns, but none through a word that crosses them."""
    paper.line(OFF, top, OFF, paper.y)
    if row is not None and _says_only(row):
        return
    if row is None or not _nothing_moves(row):
        paper.line(ON, top, ON, paper.y)
    paper.line(STACK, top, STACK, paper.y, 0.9)


def _says_only(row: CardRow) -> bool:
    """A line with a note in the place of plates: lifted already, or cannot be made."""
    return bool(row.weight and not row.stack and row.note and not row.sum)


def _nothing_moves(row: CardRow) -> bool:
    return bool(row.stack) and not row.off and not row.on


def _weight_size(words: str) -> float:
    """23 pt; 22 where a long weight with its star would leave its column."""
    return WEIGHT_PT if width_of(words, WEIGHT_PT, bold=True) <= WHO - WEIGHT - PAD else 22.0


def _rack(row: CardRow) -> str:
    return f"rack {row.rack}" if row.rack else ""


def _hands(paper: Paper, row: CardRow, cells: Cells, first: float) -> None:
    if not row.weight:
        return
    if _says_only(row):
        _lines(paper, OFF, first, in_lines(row.note, paper.width - OFF - PAD, 2))
        return
    if _nothing_moves(row):
        wide = width_of("NO CHANGE", TEXT_PT, bold=True)
        paper.text((OFF + STACK - wide) / 2, first + LINE / 2, "NO CHANGE", bold=True)
    else:
        _lines(paper, OFF, first, cells.off)
        _lines(paper, ON, first, cells.on, bold=True)
    _lines(paper, STACK, first, cells.stack, bold=True)
    _lines(paper, STACK, first + LINE * len(cells.stack), cells.sum)


def _lines(paper: Paper, x: float, y: float, lines: Sequence[str], *, bold: bool = False) -> None:
    for at, words in enumerate(lines):
        paper.text(x + PAD, y + LINE * at, words, bold=bold)


def _notes_of(view: CardView) -> list[str]:
    return list(dict.fromkeys(row.note for row in view.rows if row.stack and row.note))


def _notes(view: CardView) -> list[str]:
    """What the stars say."""
    return [f"{'*' * at} {note}" for at, note in enumerate(_notes_of(view), start=1)]
