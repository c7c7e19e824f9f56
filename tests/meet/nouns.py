"""Lifters, attempts and equipment as literals, for rules that need no meet around them."""

from __future__ import annotations

from fractions import Fraction

from app.loading.equipment import Collar, Equipment, Implement, Plate
from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn

STEP = Fraction("2.5")


def lifter(lot: int, flight_id: int = 1) -> Lifter:
    """Lifter number ``lot`` with that lot."""
    return Lifter(id=lot, name=f"Lifter {lot}", lot=lot, flight_id=flight_id, body_weight=None)


def attempt(
    lot: int,
    number: int,
    weight: str | int | Fraction | None = None,
    result: Result = Result.OPEN,
    lift_id: int = 1,
) -> Attempt:
    """An attempt of lifter ``lot``; its id is read as lift, lot, number: 1, 7, 2 is 172."""
    exact = None if weight is None else Fraction(weight)
    return Attempt(lift_id * 10_000 + lot * 10 + number, lot, lift_id, number, exact, result, version=0)


def turn(lot: int, number: int, weight: str | int | Fraction, *, assumed: bool = False) -> Turn:
    """A turn of lifter ``lot``."""
    return Turn(attempt(lot, number, None if assumed else weight), lifter(lot), Fraction(weight), assumed)


def short(turns: object) -> list[tuple[int, int, str]]:
    """Turns as (lot, number, weight), easy to read in a test."""
    return [(one.lifter.lot, one.attempt.number, str(one.weight)) for one in turns]  # type: ignore[attr-defined]


def bar(*plates: tuple[str, int], mass: str = "20", collar: str | None = "2.5", ends: int = 2) -> Equipment:
    """A bar (20 kg, collars 2.5 kg each unless said otherwise) and these plates."""
    rows = tuple(Plate(Fraction(face), count) for face, count in plates)
    ring = None if collar is None else Collar(Fraction(collar))
    return Equipment(Implement(Fraction(mass), ends), ring, rows)


KG_SET = bar(("25", 12), ("20", 2), ("15", 2), ("10", 2), ("5", 2), ("2.5", 2), ("1.25", 2))
