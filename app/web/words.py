"""Numbers and loads as people read them; a stack passes the independent re-sum before it becomes words."""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping, Sequence
from datetime import datetime
from fractions import Fraction

from app.desk.board import Board
from app.loading.change import HandList
from app.loading.equipment import Access, Equipment, Stack
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.store.picture import Picture, PlateStock, Tool
from app.web.views import EndView, PlateView

# How an unknown plate is drawn: not to scale with anything, but its number is on it all the same.
UNKNOWN_DIAMETER_MM = 300.0
UNKNOWN_THICKNESS_MM = 20.0


def plate_view(
    face: Fraction, stock: Mapping[Fraction, PlateStock], *, fresh: bool = False, face_in: bool = False
) -> PlateView:
    """A plate to be drawn."""
    item = stock.get(face)
    plate = item.plate if item else None
    return PlateView(
        face=show_mass(face),
        colour=item.colour if item else "#777777",
        diameter_mm=float(plate.diameter_mm) if plate and plate.diameter_mm else UNKNOWN_DIAMETER_MM,
        thickness_mm=float(plate.thickness_mm) if plate and plate.thickness_mm else UNKNOWN_THICKNESS_MM,
        fresh=fresh,
        face_in=face_in,
    )


def plate_views(faces: Iterable[Fraction], now: Picture) -> tuple[PlateView, ...]:
    """Plates in the order given."""
    stock = {item.plate.face: item for item in now.stock}
    return tuple(plate_view(face, stock) for face in faces)


def end_view(one: Board, stack: Stack, target: Fraction, fresh: Collection[int]) -> EndView:
    """The finished end, after the independent re-sum: raises WrongLoad rather than show a wrong load.

    ``fresh`` are the places of the plates that go on in this change.
    """
    check_stack(one.equipment, stack, target, one.wish.order)
    stock = {item.plate.face: item for item in one.now.stock}
    faces_in = one.tool.implement.ends == 2 and one.programme.rules.first_face_in
    plates = tuple(
        plate_view(face, stock, fresh=place in fresh, face_in=faces_in and place == 0)
        for place, face in enumerate(stack)
    )
    collar = show_mass(one.tool.collar.mass) if one.tool.collar else None
    usable = one.tool.implement.usable_mm
    return EndView(
        implement="bar" if one.tool.implement.ends == 2 else "belt",
        plates=plates,
        collar=collar,
        usable_mm=float(usable) if usable is not None else None,
        count=count_words(len(plates), collar is not None),
        sum=sum_words(stack, one.tool),
        whole=whole_words(one.equipment, stack, one.tool),
    )


def where_words(hands: HandList, before: Stack, after: Stack, access: Access) -> str:
    """From where plates come off and whereto they go, when a stack can be opened elsewhere than outside."""
    if access is Access.OUTER_END:
        return ""
    off = [
        f"{show_mass(face)} ({_place(at, len(before))})"
        for face, at in zip(hands.off, hands.off_at, strict=True)
    ]
    on = [
        f"{show_mass(face)} ({_place(at, len(after))})"
        for face, at in zip(hands.on, hands.on_at, strict=True)
    ]
    parts = [f"{word} {', '.join(plates)}" for word, plates in (("Off:", off), ("On:", on)) if plates]
    return ". ".join(parts)


def _place(at: int, length: int) -> str:
    if length == 1:
        return "alone"
    if at in (0, length - 1):
        return "innermost" if at == 0 else "outermost"
    return f"{at + 1} of {length} from inside"


def clock_words(at: datetime) -> str:
    """A moment as the hall's clock shows it: ``10:42:17`` in the time zone of the machine."""
    return at.astimezone().strftime("%H:%M:%S")


def now_words(at: datetime) -> str:
    """A moment as paper names it: ``2027-03-06 10:42`` in the time zone of the machine."""
    return at.astimezone().strftime("%Y-%m-%d %H:%M")


def count_words(plates: int, collar: bool) -> str:  # noqa: FBT001 - a count and its companion
    """``4 plates + collar``."""
    words = "no plates" if plates == 0 else "1 plate" if plates == 1 else f"{plates} plates"
    return f"{words} + collar" if collar else words


def side_words(tool: Tool) -> str:
    """What the numbers are for: one end of a bar, or the only stack of a belt."""
    return "a side" if tool.implement.ends == 2 else "the stack"


def sum_words(stack: Stack, tool: Tool) -> str:
    """``25 + 15 + 2.5 = 42.5 a side``."""
    side = " a side" if tool.implement.ends == 2 else ""
    if not stack:
        return f"nothing{side}"
    total = show_mass(sum(stack, Fraction(0)))
    parts = " + ".join(show_mass(face) for face in stack)
    return f"{total}{side}" if len(stack) == 1 else f"{parts} = {total}{side}"


def whole_words(equipment: Equipment, stack: Stack, tool: Tool) -> str:
    """``2 × 42.5 + 25 = 110``: the sum that a referee can check."""
    side, base = sum(stack, Fraction(0)), equipment.base_mass
    whole = show_mass(base + tool.implement.ends * side)
    if tool.implement.ends == 1:
        return (
            f"{show_mass(side)} + {show_mass(base)} = {whole}" if base else ""
        )  # the stack's sum is all of it
    return f"2 × {show_mass(side)} + {show_mass(base)} = {whole}"


def tool_words(tool: Tool, unit: str) -> str:
    """``Power bar 20 + collars 2 × 2.5 = 25 kg``."""
    implement, collar = tool.implement, tool.collar
    if collar is None or not collar.mass:
        return (
            f"{tool.name} {show_mass(implement.mass)} {unit}"
            if implement.mass
            else f"{tool.name}, not counted"
        )
    base = implement.mass + implement.ends * collar.mass
    collars = (
        f"collars 2 × {show_mass(collar.mass)}"
        if implement.ends == 2
        else f"closure {show_mass(collar.mass)}"
    )
    return f"{tool.name} {show_mass(implement.mass)} + {collars} = {show_mass(base)} {unit}"


def stack_words(stack: Sequence[Fraction] | None) -> str:
    """``25 + 15 + 2.5``; an empty end is ``empty``, an unknown one ``unknown``."""
    if stack is None:
        return "unknown"
    return " + ".join(show_mass(face) for face in stack) or "empty"
