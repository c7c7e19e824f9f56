"""A whole round as a constraint programme: positions, and booleans for an inside that two stacks share.

Heaviest inside, outer end, fewest plates handled in all. Shared by the tests and the benchmarks.
"""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from math import lcm

from ortools.sat.python import cp_model

from app.planning import PlanRequest


def fewest_plates_handled(request: PlanRequest, longest: list[int], *, seconds: float = 60.0) -> int | None:
    """The proved least number of plates handled, or None when not proved in time.

    ``longest[t]`` is the most plates a stack of attempt t may have.
    """
    equipment = request.equipment
    ends = equipment.implement.ends
    plates = sorted(equipment.plates, key=lambda plate: plate.face)  # a larger number is a heavier plate
    shares = [(target - equipment.base_mass) / ends for target in request.targets]
    scale = lcm(*(x.denominator for x in [*shares, *(plate.face for plate in plates), Fraction(1)]))
    mass = [0, *(int(plate.face * scale) for plate in plates)]
    model = cp_model.CpModel()
    width = max([*longest, len(request.start)], default=0)
    numbers = {plate.face: index for index, plate in enumerate(plates, start=1)}
    rows = [[numbers[face] for face in request.start] + [0] * (width - len(request.start))]
    lengths: list = [len(request.start)]
    for share, most in zip(shares, longest, strict=True):
        row = [model.new_int_var(0, len(plates) if p < most else 0, "") for p in range(width)]
        is_kind = [[model.new_bool_var("") for _ in range(len(plates) + 1)] for _ in row]
        for position, kinds in zip(row, is_kind, strict=True):
            model.add_exactly_one(kinds)
            model.add(position == sum(k * kind for k, kind in enumerate(kinds)))
        for inner, outer in pairwise(row):
            model.add(inner >= outer)
        model.add(
            sum(mass[k] * kind for kinds in is_kind for k, kind in enumerate(kinds)) == int(share * scale)
        )
        for k, plate in enumerate(plates, start=1):
            model.add(sum(kinds[k] for kinds in is_kind) <= plate.count // ends)
        rows.append(row)
        lengths.append(sum(1 - kinds[0] for kinds in is_kind))
    shared = []
    for before, after in pairwise(rows):
        inside = None
        for a, b in zip(before, after, strict=True):
            same = model.new_bool_var("")
            model.add(a == b).only_enforce_if(same)
            model.add(b >= 1).only_enforce_if(same)
            if inside is not None:
                model.add_implication(same, inside)
            inside = same
            shared.append(same)
    model.minimize(sum(lengths[:-1]) + sum(lengths[1:]) - 2 * sum(shared))
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    solver.parameters.max_time_in_seconds = seconds
    if solver.solve(model) != cp_model.OPTIMAL:
        return None
    return round(solver.objective_value)
