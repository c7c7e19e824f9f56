"""Does a racked bar turn over with more on one end than on the other? Moments about the nearer support.

A check of what is safe to ask of a crew, and no licence: a hand, an elbow or a spring of the rack removes the
margin, and the meet's own people decide. Method and numbers: ``figures.md`` 7, V43 to V48.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction

from app.loading.equipment import Collar, Equipment, Stack

SHOULDER_MM = Fraction(685)  # middle of the bar to the first plate: 1310 / 2 + 30 (IWF bar, second-hand)
LITTLE_MARGIN = Fraction(9, 10)  # of the moment that turns it; a judgement, no published figure


class Balance(StrEnum):
    """What the bar does."""

    STAYS = "stays"
    LITTLE_MARGIN = "little margin"
    TIPS = "tips"


@dataclass(frozen=True, slots=True)
class Rests:
    """What the bar lies on: ``apart_mm`` between the supports, ``first_mm`` from its middle to the first plate."""

    apart_mm: Fraction
    first_mm: Fraction = SHOULDER_MM


Hung = Sequence[tuple[Fraction, Fraction]]
"""Masses and their distances from the middle of the bar in mm."""


def moments(
    bar_mass: Fraction, half_apart_mm: Fraction, heavy: Hung, light: Hung = ()
) -> tuple[Fraction, Fraction]:
    """What turns the bar over the heavy side's support, and what holds it down, in mass times mm.

    The bar stays while Σ m(x − a) of the heavy side is less than mb·a + Σ m(x + a) of the light side, with a
    the half distance between the supports; the bar is symmetric, so its mass acts at its middle.
    """
    turning = sum((mass * (at - half_apart_mm) for mass, at in heavy), Fraction(0))
    holding = bar_mass * half_apart_mm + sum((mass * (at + half_apart_mm) for mass, at in light), Fraction(0))
    return turning, holding


def balance_of(turning: Fraction, holding: Fraction) -> Balance:
    """Even moments count as tipping."""
    if turning >= holding:
        return Balance.TIPS
    return Balance.LITTLE_MARGIN if turning > holding * LITTLE_MARGIN else Balance.STAYS


def balance(
    equipment: Equipment, rests: Rests, left: Stack, right: Stack, collars: tuple[bool, bool] = (False, False)
) -> Balance | None:
    """What the bar does with these stacks on its ends; None where a plate's thickness is not known.

    ``collars``: whether each end carries its collar.
    """
    ends = [
        hung(equipment, rests, stack, equipment.collar if on else None)
        for stack, on in zip((left, right), collars, strict=True)
    ]
    if ends[0] is None or ends[1] is None:
        return None
    half = rests.apart_mm / 2
    found = [
        balance_of(*moments(equipment.implement.mass, half, heavy, light))
        for heavy, light in ((ends[0], ends[1]), (ends[1], ends[0]))
    ]
    return max(found, key=list(Balance).index)


def hung(equipment: Equipment, rests: Rests, stack: Stack, collar: Collar | None = None) -> Hung | None:
    """Each plate's mass and the distance of its middle; the collar outermost. None: a thickness is unknown."""
    at, found = rests.first_mm, []
    for face in stack:
        plate = equipment.plate(face)
        if plate is None or plate.thickness_mm is None:
            return None
        found.append((face, at + plate.thickness_mm / 2))
        at += plate.thickness_mm
    if collar is not None:
        found.append((collar.mass, at + (collar.width_mm or Fraction(0)) / 2))
    return found
