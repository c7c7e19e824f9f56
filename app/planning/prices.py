"""What a change costs, as one whole number that compares like (measure, tie-break, distance to the chart)."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.kit import Kit, common_step
from app.planning.request import Measure, PlanRequest

Numbers = NDArray[Any]  # int64, or Python integers (dtype object) where int64 could overflow
LARGEST = 2**61


@dataclass(frozen=True, slots=True)
class Prices:
    """Packed prices of one plate of each kind, and the measure alone.

    A packed price is ``(measure × ties + tie) × charts + chart distance``, where ``ties`` and ``charts``
    exceed every sum of their part over a whole plan: so sums of packed prices compare like the triples of
    sums. ``worth`` is one step of the measure. ``thread`` is the measure of one pair of neighbours whose
    holes do not line up.
    """

    off: Numbers
    on: Numbers
    measure_off: Numbers
    measure_on: Numbers
    thread: int
    fold: int
    charts: int
    worth: Fraction
    never: int

    @property
    def dtype(self) -> Any:
        """The type of every array of packed prices."""
        return self.off.dtype

    def packed_thread(self) -> int:
        """One misaligned pair as a packed price."""
        return self.thread * self.fold


def make_prices(request: PlanRequest, kit: Kit, longest: NDArray[np.int64]) -> Prices:
    """Prices for a plan in which no stack has more than ``longest[k]`` plates of kind k."""
    seconds = [[plate.off_s for plate in kit.plates], [plate.on_s for plate in kit.plates]]
    one = [Fraction(1)] * kit.kinds
    faces = [plate.face for plate in kit.plates]
    table = {Measure.PLATES: [one, one], Measure.MASS: [faces, faces], Measure.TIME: seconds}
    tie = Measure.MASS if request.measure is Measure.PLATES else Measure.PLATES
    thread = request.thread_s if request.measure is Measure.TIME else Fraction(0)
    worth = common_step([*table[request.measure][0], *table[request.measure][1], thread])
    measure = [[int(value / worth) for value in row] for row in table[request.measure]]
    tie_step = common_step(table[tie][0])
    ties = [[int(value / tie_step) for value in row] for row in table[tie]]
    changes = len(request.targets) + 1
    biggest = int(longest.sum())
    tie_fold = 1 + changes * sum((off + on) * int(most) for off, on, most in zip(*ties, longest, strict=True))
    charts = 1 + changes * 2 * biggest
    fold = tie_fold * charts
    off, on = (
        [m * fold + t * charts for m, t in zip(measure[way], ties[way], strict=True)] for way in (0, 1)
    )
    most = changes * (sum((a + b) * int(n) for a, b, n in zip(off, on, longest, strict=True)) + charts)
    most += changes * int(thread / worth) * fold * biggest
    dtype = np.int64 if most < LARGEST else object
    return Prices(
        off=np.array(off, dtype),
        on=np.array(on, dtype),
        measure_off=np.array(measure[0], dtype),
        measure_on=np.array(measure[1], dtype),
        thread=int(thread / worth),
        fold=fold,
        charts=charts,
        worth=worth,
        never=max(most * 4, LARGEST) if dtype is object else LARGEST,
    )
