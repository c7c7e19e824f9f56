"""The question put to the planner, as frozen data."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction
from typing import Literal

from app.loading.equipment import Access, Equipment, Order, Stack

__all__ = ["Access", "Aim", "Comfort", "ComfortBy", "Measure", "Order", "PlanRequest", "Unit"]


class Unit(StrEnum):
    """The unit of every mass in the request; kilograms and pounds are never mixed."""

    KG = "kg"
    LB = "lb"


class Measure(StrEnum):
    """What a change costs, at one end."""

    PLATES = "plates"
    MASS = "mass"
    TIME = "time"


class Aim(StrEnum):
    """Least sum over all changes, or least largest change and then least sum."""

    TOTAL = "total"
    WORST = "worst"


class ComfortBy(StrEnum):
    """What makes a bundle comfortable to lift with; less is better."""

    THICKNESS = "thickness"
    BALANCE = "balance"
    RIMS = "rims"
    THREADING = "threading"


@dataclass(frozen=True, slots=True)
class Comfort:
    """Keep the stacks within ``slack`` of the best ``by``."""

    by: ComfortBy
    slack: Fraction = Fraction(0)


@dataclass(frozen=True, slots=True)
class PlanRequest:
    """Equipment, what is on the bar now, the weights in lifting order, and what counts as little work.

    ``start`` must be plates that are at the platform, but need not obey ``order``: it is what stands there.
    """

    equipment: Equipment
    targets: tuple[Fraction, ...]
    start: Stack = ()
    unit: Unit = Unit.KG
    order: Order = Order.HEAVIEST_INSIDE
    access: Access = Access.OUTER_END
    extra_plates: int = 1
    comfort: tuple[Comfort, ...] = ()
    finger_mm: Fraction = Fraction(15)
    thread_s: Fraction = Fraction(0)
    measure: Measure = Measure.PLATES
    aim: Aim = Aim.TOTAL
    limit: Fraction | Literal["chart"] | None = None
