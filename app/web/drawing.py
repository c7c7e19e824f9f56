"""Where every line of a drawing lies: plates to scale, numbers as large as their place allows.

Pure geometry in whole SVG user units. Edges are rounded, never widths, so neighbouring plates always touch
and nothing creeps. Heights keep one scale for every drawing (``HEIGHT_UNITS`` for ``FULL_MM``), so that a
small plate looks small beside nothing too. Thicknesses keep one scale within a drawing, wider than that
of the heights: a number must be readable on a plate seen edge-on.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from app.web.views import EndView, PlateView

FULL_MM = 450.0  # the largest plate of the rulebooks; larger ones make their own drawing smaller
HEIGHT_UNITS = 440
STRETCH = (1.6, 6.0)  # units a mm across: the least that still shows a number, the most that looks right
ACROSS_UNITS = 760  # what plates and collar share before the scale across has to shrink
TOP, BELOW = 58, 6  # room above for "face in"
BELT_TOP = 120  # room above for the chain up to the belt
SHAFT_UNITS, STUB_UNITS, MARGIN = 70, 46, 6
COLLAR_WORD = 236  # "collar 2.5" as it stands over the collar
SHOULDER_MM, SHOULDER_HEIGHT, SLEEVE_HEIGHT, SHAFT_HEIGHT = 14.0, 96, 50, 28
COLLAR_MM, COLLAR_HEIGHT = 34.0, 110
SLIM = 26  # a plate narrower than this is drawn this wide: a number needs a place to stand

# Atkinson Hyperlegible Next, weight 800, in ems: a tabular figure, a point, a capital, others; cap height.
DIGIT_EM, POINT_EM, CAPITAL_EM, OTHER_EM, CAP_EM = 0.632, 0.33, 0.74, 0.62, 0.668
TURN_WHEN = 1.9  # a number is turned on its side only if that makes it so many times larger
LABEL_MAX = 118


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


@dataclass(frozen=True, slots=True)
class Label:
    """A number on a patch of its own; ``turned`` reads from bottom to top."""

    text: str
    x: int  # centre of the number
    y: int
    size: int
    turned: bool
    patch: Box

    @property
    def baseline(self) -> int:
        """Where the text's baseline lies so that its capitals are centred on ``y``."""
        return self.y + round(self.size * CAP_EM / 2)


@dataclass(frozen=True, slots=True)
class DrawnPlate:
    box: Box
    colour: str
    label: Label
    fresh: bool
    face_in: bool


@dataclass(frozen=True, slots=True)
class Drawing:
    """One finished end, ready to be written down as SVG."""

    width: int
    height: int
    middle: int  # height of the sleeve's, or the chain's, middle line
    plates: tuple[DrawnPlate, ...]
    shaft: Box | None
    shoulder: Box | None
    sleeve: Box | None
    collar: Box | None
    collar_mass: str
    chain: tuple[tuple[int, int], ...]  # corners of the chain's way, empty for a bar
    words: str  # the drawing for those who cannot see it


def draw(end: EndView) -> Drawing:
    """Lay out one end of a bar, or the one bundle of a belt, inside to outside from left to right."""
    return _draw_belt(end) if end.implement == "belt" else _draw_bar(end)


def _draw_bar(end: EndView) -> Drawing:
    middle, left, across = TOP + HEIGHT_UNITS // 2, MARGIN + SHAFT_UNITS, _scale_across(end)
    shoulder = _centred(left, left + round(SHOULDER_MM * across), middle, SHOULDER_HEIGHT)
    boxes = _plate_boxes(end.plates, shoulder.right, middle, across)
    outer = boxes[-1].right if boxes else shoulder.right
    collar, tip = None, outer + STUB_UNITS
    if end.collar is not None:
        collar = _centred(outer, outer + round(COLLAR_MM * across), middle, COLLAR_HEIGHT)
        tip = max(collar.right + STUB_UNITS, outer + COLLAR_WORD)
    return Drawing(
        width=tip + MARGIN,
        height=TOP + HEIGHT_UNITS + BELOW,
        middle=middle,
        plates=_drawn(end.plates, boxes),
        shaft=_centred(0, left, middle, SHAFT_HEIGHT),
        shoulder=shoulder,
        sleeve=_centred(shoulder.right, tip, middle, SLEEVE_HEIGHT),
        collar=collar,
        collar_mass=end.collar or "",
        chain=(),
        words=_words(end),
    )


def _draw_belt(end: EndView) -> Drawing:
    middle, left = BELT_TOP + HEIGHT_UNITS // 2, MARGIN + SHAFT_UNITS
    boxes = _plate_boxes(end.plates, left, middle, _scale_across(end))
    outer = boxes[-1].right if boxes else left
    return Drawing(
        width=outer + SHAFT_UNITS + MARGIN,
        height=BELT_TOP + HEIGHT_UNITS + BELOW,
        middle=middle,
        plates=_drawn(end.plates, boxes),
        shaft=None,
        shoulder=None,
        sleeve=None,
        collar=None,
        collar_mass="",
        chain=_chain(boxes, left, outer, middle),
        words=_words(end),
    )


def _scale_across(end: EndView) -> float:
    total = sum(plate.thickness_mm for plate in end.plates)
    if end.collar is not None and end.implement == "bar":
        total += COLLAR_MM
    least, most = STRETCH
    return most if total <= 0 else min(most, max(least, ACROSS_UNITS / total))


def _centred(left: int, right: int, middle: int, height: int) -> Box:
    return Box(x=left, y=middle - height // 2, width=right - left, height=height)


def _plate_boxes(plates: Sequence[PlateView], start: int, middle: int, across: float) -> list[Box]:
    upright = HEIGHT_UNITS / max([FULL_MM, *(plate.diameter_mm for plate in plates)])
    boxes: list[Box] = []
    edge = float(start)
    for plate in plates:
        left = round(edge)
        edge = max(edge + plate.thickness_mm * across, left + SLIM)
        boxes.append(_centred(left, round(edge), middle, 2 * round(plate.diameter_mm * upright / 2)))
    return boxes


def _drawn(plates: Sequence[PlateView], boxes: Sequence[Box]) -> tuple[DrawnPlate, ...]:
    return tuple(
        DrawnPlate(box, plate.colour, fit_label(plate.face, box), plate.fresh, plate.face_in)
        for plate, box in zip(plates, boxes, strict=True)
    )


def fit_label(text: str, box: Box) -> Label:
    """The number as large as ``box`` allows: upright, or turned if that is much larger."""
    room_w, room_h = max(box.width - 12, 8), max(box.height - 16, 8)
    ems = max(width_em(text), 0.1)
    upright = min(room_w / ems, room_h / CAP_EM, LABEL_MAX)
    turned = min(room_w / (CAP_EM * 1.12), room_h / ems, LABEL_MAX)
    turn = turned > upright * TURN_WHEN
    size = int(turned if turn else upright)
    long_side, short_side = round(size * ems) + 12, round(size * CAP_EM * 1.12) + 10
    width, height = (short_side, long_side) if turn else (long_side, short_side + 6)
    width = min(width, box.width - 4)
    x, y = box.middle, box.y + box.height // 2
    return Label(text, x, y, size, turn, Box(x - width // 2, y - height // 2, width, height))


def _chain(boxes: Sequence[Box], left: int, outer: int, middle: int) -> tuple[tuple[int, int], ...]:
    """From the belt's ring down one side, through the holes, and up the other side to the ring."""
    ring = ((left + outer) // 2, 28)
    if not boxes:
        return (ring, (ring[0], middle))
    near, far, shoulder = left - 34, outer + 34, BELT_TOP - 22
    return (ring, (near, shoulder), (near, middle), (far, middle), (far, shoulder), ring)


def _words(end: EndView) -> str:
    if not end.plates:
        return "Nothing on the belt" if end.implement == "belt" else "An empty sleeve"
    faces = ", ".join(plate.face for plate in end.plates)
    collar = f", then the collar {end.collar}" if end.collar else ""
    return f"From inside to outside: {faces}{collar}"


# Rows of plates to take off or put on.

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


TEMPLATE_GLOBALS: dict[str, Callable[..., object]] = {
    "draw": draw,
    "line_up": line_up,
    "fit_text": fit_text,
    "chip_rim": chip_rim,
}
