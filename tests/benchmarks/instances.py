"""What the benchmarks plan: invented rounds, and the hard belt round."""

from __future__ import annotations

import random
from collections.abc import Callable
from fractions import Fraction

from app.loading.equipment import Access, Collar, Equipment, Implement, Order, Plate
from app.planning import Aim, Measure, PlanRequest

BELT_WEIGHTS = [
    "97.5", "100", "102.5", "105", "106.25", "107.5", "110", "112.5", "115", "117.5", "118.75", "120",
    "121.25", "122.5", "125", "126.25", "127.5", "128.75", "130", "131.25", "132.5", "133.75", "135",
    "136.25", "137.5", "138", "138.75", "140", "141.25", "142.5", "143.25", "145", "146.25", "147.5",
    "148.75", "150", "150.5", "152.5", "155", "157.5", "158", "160",
]  # fmt: skip
BELT_PLATES = ["25", "20", "15", "10", "5", "2.5", "1.25", "0.5", "0.25"]
BAR_PLATES = ["50", "25", "20", "15", "10", "5", "2.5", "2", "1.5", "1", "0.5", "0.25"]


def belt_round(access: Access, **rules) -> PlanRequest:
    """Forty-two weights on a belt in any order: six 25s and two of every other plate, 1.9 million stacks."""
    plates = tuple(Plate(Fraction(face), 6 if face == "25" else 2) for face in BELT_PLATES)
    belt = Equipment(Implement(Fraction(0), 1), None, plates)
    targets = tuple(map(Fraction, BELT_WEIGHTS))
    return PlanRequest(equipment=belt, targets=targets, order=Order.ANY, access=access, **rules)


def bar() -> Equipment:
    """A 20 kg bar with collars, twelve kinds of plates, two pairs of each and eight of the 25s."""
    plates = tuple(Plate(Fraction(face), 16 if face == "25" else 4) for face in BAR_PLATES)
    return Equipment(Implement(Fraction(20), 2), Collar(Fraction("2.5")), plates)


def flight(lifters: int = 14, rounds: int = 3, seed: int = 5) -> PlanRequest:
    """One lift of a flight: ascending rounds, each lifter a little heavier every time."""
    dice = random.Random(seed)
    openers = [dice.randrange(40, 110) * Fraction("2.5") for _ in range(lifters)]
    targets: list[Fraction] = []
    for attempt in range(rounds):
        targets += sorted(opener + attempt * Fraction("2.5") * dice.choice([1, 2, 3]) for opener in openers)
    return PlanRequest(equipment=bar(), targets=tuple(targets))


def wide_round(attempts: int = 20, extra_plates: int = 5) -> PlanRequest:
    """Few attempts with about 500 stacks each."""
    targets = tuple(Fraction("186.5") + 6 * step for step in range(attempts))
    return PlanRequest(equipment=bar(), targets=targets, extra_plates=extra_plates)


CASES: dict[str, Callable[[], PlanRequest]] = {
    "flight, 14 lifters, three rounds, 12 kinds": flight,
    **{f"hard belt round, {access.value}": lambda a=access: belt_round(a) for access in Access},
    **{
        f"hard belt round, {a.value}, by mass": lambda a=a: belt_round(a, measure=Measure.MASS)
        for a in Access
    },
    **{f"hard belt round, {a.value}, worst": lambda a=a: belt_round(a, aim=Aim.WORST) for a in Access},
}
