"""When to leave the loading chart that everybody knows by sight."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from app.planning.answer import Figures, Plan
from app.planning.request import Aim, Measure, PlanRequest


@dataclass(frozen=True, slots=True)
class Departure:
    """Chart stacks only; or leave the chart only if that saves at least so many plates or so much mass.

    Savings are over the whole list of weights, for one end, against the chart's stacks handled with the same
    access. With both thresholds, either is reason enough.
    """

    chart_only: bool = False
    least_saving_plates: int | None = None
    least_saving_mass: Fraction | None = None

    def worth_it(self, best: Figures, chart: Figures) -> bool:
        """Whether a plan saves enough to leave the chart."""
        if self.least_saving_plates is None and self.least_saving_mass is None:
            return True
        plates, mass = self.least_saving_plates, self.least_saving_mass
        return (plates is not None and chart.plates - best.plates >= plates) or (
            mass is not None and chart.mass - best.mass >= mass
        )


def aimed(request: PlanRequest, plan: Plan) -> Fraction:
    """The figure that the request wants least: the sum or the slowest change, in its measure."""
    figures = plan.worst if request.aim is Aim.WORST else plan.total
    by = {
        Measure.PLATES: Fraction(figures.plates),
        Measure.MASS: figures.mass,
        Measure.TIME: figures.time_s,
    }
    return by[request.measure]
