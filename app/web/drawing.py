"""Where every line of a drawing lies: plates to scale, numbers as large as their place allows.

Pure geometry in whole SVG user units. Edges are rounded, never widths, so neighbouring plates always touch
and nothing creeps. Heights keep one scale for every drawing (``HEIGHT_UNITS`` for ``FULL_MM``), so that a
small plate looks small beside nothing too. Thicknesses keep one scale within a drawing, wider than that
of the heights: a number must be readable on a plate seen edge-on.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from app.web.geometry import CAP_EM, FULL_MM, Box, width_em
from app.web.rows import chip_rim, fit_text, line_up
from app.web.views import EndView, PlateView

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

TURN_WHEN = 1.9  # a number is turned on its side only if that makes it so many times larger
LABEL_MAX = 118


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
    mirrored: bool = False  # the other end of the bar, as seen from the same side


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


def mirrored(drawing: Drawing) -> Drawing:
    """The other end of the bar: everything from right to left, the numbers still to be read."""

    def turned(box: Box | None) -> Box | None:
        return None if box is None else _turned(box, drawing.width)

    return replace(
        drawing,
        plates=tuple(_turned_plate(plate, drawing.width) for plate in drawing.plates),
        shaft=turned(drawing.shaft),
        shoulder=turned(drawing.shoulder),
        sleeve=turned(drawing.sleeve),
        collar=turned(drawing.collar),
        chain=tuple((drawing.width - x, y) for x, y in drawing.chain),
        words=f"The other end, alike. {drawing.words}",
        mirrored=True,
    )


def _turned(box: Box, width: int) -> Box:
    return replace(box, x=width - box.right)


def _turned_plate(plate: DrawnPlate, width: int) -> DrawnPlate:
    label = replace(plate.label, x=width - plate.label.x, patch=_turned(plate.label.patch, width))
    return replace(plate, box=_turned(plate.box, width), label=label)


TEMPLATE_GLOBALS: dict[str, Callable[..., object]] = {
    "draw": draw,
    "mirrored": mirrored,
    "line_up": line_up,
    "fit_text": fit_text,
    "chip_rim": chip_rim,
}
