"""The independent sum: run on every stack before anybody is shown it.

Nothing here is shared with the search that chose the stack: a mistake there must not hide here.
"""

from __future__ import annotations

from collections import Counter
from fractions import Fraction
from itertools import pairwise

from app.loading.equipment import Equipment, Order, Stack
from app.loading.mass import show_mass


class WrongLoad(ValueError):
    """A stack that must not be shown; the message is one plain sentence."""


def total_mass(equipment: Equipment, stack: Stack) -> Fraction:
    """The weight on the platform with this stack on every end, collars counted."""
    return equipment.base_mass + equipment.implement.ends * sum(stack, Fraction(0))


def check_stack(
    equipment: Equipment, stack: Stack, target: Fraction, order: Order = Order.HEAVIEST_INSIDE
) -> None:
    """Raise :class:`WrongLoad` unless the stack makes the weight, by the stock, the sleeve and the order."""
    _check_stock(equipment, stack)
    made = total_mass(equipment, stack)
    if made != target:
        raise WrongLoad(f"The stack makes {show_mass(made)}, not the {show_mass(target)} asked for.")
    _check_room(equipment, stack)
    if not obeys(equipment, stack, order):
        raise WrongLoad(f"The stack {_words(stack)} breaks the order {order.value}.")


def _check_stock(equipment: Equipment, stack: Stack) -> None:
    for face, wanted in Counter(stack).items():
        plate = equipment.plate(face)
        if plate is None:
            raise WrongLoad(f"The stack uses a {show_mass(face)}, which is not at the platform.")
        if wanted * equipment.implement.ends > plate.count:
            needed = wanted * equipment.implement.ends
            raise WrongLoad(f"The stack needs {needed} of the {show_mass(face)}; there are {plate.count}.")


def _check_room(equipment: Equipment, stack: Stack) -> None:
    usable = equipment.implement.usable_mm
    if usable is None:
        return
    taken = equipment.collar.width_mm or Fraction(0) if equipment.collar else Fraction(0)
    for face in stack:
        plate = equipment.plate(face)
        if plate is None or plate.thickness_mm is None:
            raise WrongLoad(
                f"The thickness of the {show_mass(face)} is not known, so its room is not either."
            )
        taken += plate.thickness_mm
    if taken > usable:
        raise WrongLoad(f"The stack takes {show_mass(taken)} mm; the sleeve has {show_mass(usable)} mm.")


def obeys(equipment: Equipment, stack: Stack, order: Order) -> bool:
    """Whether the stack keeps to the order rule."""
    if order is Order.ANY:
        return True
    if order is Order.HEAVIEST_INSIDE:
        return all(inner >= outer for inner, outer in pairwise(stack))
    widths = [_diameter(equipment, face) for face in stack]
    if order is Order.WIDEST_INSIDE:
        return all(inner >= outer for inner, outer in pairwise(widths))
    return not any(
        max(widths[:place], default=width) > width < max(widths[place + 1 :], default=width)
        for place, width in enumerate(widths)
    )


def _diameter(equipment: Equipment, face: Fraction) -> Fraction:
    plate = equipment.plate(face)
    if plate is None or plate.diameter_mm is None:
        raise WrongLoad(f"The diameter of the {show_mass(face)} is not known, so its place is not either.")
    return plate.diameter_mm


def _words(stack: Stack) -> str:
    return ", ".join(show_mass(face) for face in stack) or "with no plates"
