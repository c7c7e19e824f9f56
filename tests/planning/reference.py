"""The slow, obvious planner: lists every stack, prices every pair, and is right by inspection.

It shares nothing with ``app.planning`` but the request's dataclasses. Use it on small requests only.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from fractions import Fraction
from functools import lru_cache
from itertools import combinations, pairwise, product

from app.planning import Access, Aim, ComfortBy, Measure, Order, PlanRequest

Stack = tuple[Fraction, ...]
Pair = tuple[Fraction, Fraction]
NEVER: Pair = (Fraction(10**12), Fraction(0))


def row(request: PlanRequest, face: Fraction):
    return next(plate for plate in request.equipment.plates if plate.face == face)


def arrangements(faces: tuple[Fraction, ...]) -> Iterator[Stack]:
    if not faces:
        yield ()
    for face in sorted(set(faces)):
        rest = list(faces)
        rest.remove(face)
        for tail in arrangements(tuple(rest)):
            yield (face, *tail)


def keeps_order(request: PlanRequest, stack: Stack) -> bool:
    if request.order is Order.ANY:
        return True
    if request.order is Order.HEAVIEST_INSIDE:
        return list(stack) == sorted(stack, reverse=True)
    wide = [row(request, face).diameter_mm for face in stack]
    if request.order is Order.WIDEST_INSIDE:
        return wide == sorted(wide, reverse=True)
    return not any(wide[a] > wide[b] < wide[c] for a, b, c in combinations(range(len(wide)), 3))


def fits(request: PlanRequest, stack: Stack) -> bool:
    bar, collar = request.equipment.implement, request.equipment.collar
    if bar.usable_mm is None:
        return True
    width = collar.width_mm if collar else Fraction(0)
    return width + sum(row(request, face).thickness_mm for face in stack) <= bar.usable_mm


def misaligned(request: PlanRequest, stack: Stack) -> int:
    """Each plate stands on its rim, so its hole is half its diameter above the floor."""
    holes = [row(request, face).diameter_mm / 2 for face in stack]
    return sum(abs(a - b) > request.finger_mm for a, b in pairwise(holes))


def comfort_value(request: PlanRequest, by: ComfortBy, stack: Stack) -> Fraction:
    if by is ComfortBy.THREADING:
        return Fraction(misaligned(request, stack))
    if by is ComfortBy.RIMS:
        return sum(
            (abs(row(request, a).diameter_mm - row(request, b).diameter_mm) / 2 for a, b in pairwise(stack)),
            Fraction(0),
        )
    widths = [row(request, face).thickness_mm for face in stack]
    if by is ComfortBy.THICKNESS:
        return sum(widths, Fraction(0))
    if not stack:
        return Fraction(0)
    middles = [sum(widths[:place], Fraction(0)) + width / 2 for place, width in enumerate(widths)]
    centre = sum(face * middle for face, middle in zip(stack, middles, strict=True)) / sum(stack)
    return abs(centre - sum(widths) / 2)


def all_stacks(request: PlanRequest, target: Fraction) -> list[Stack]:
    equipment = request.equipment
    ends = equipment.implement.ends
    share = (target - equipment.base_mass) / ends
    plates = equipment.plates
    found = []
    for counts in product(*(range(plate.count // ends + 1) for plate in plates)):
        if sum((plate.face * n for plate, n in zip(plates, counts, strict=True)), Fraction(0)) != share:
            continue
        faces = tuple(plate.face for plate, n in zip(plates, counts, strict=True) for _ in range(n))
        found += [stack for stack in arrangements(faces) if keeps_order(request, stack)]
    found = [stack for stack in found if fits(request, stack)]
    fewest = min((len(stack) for stack in found), default=0)
    found = [stack for stack in found if len(stack) <= fewest + request.extra_plates]
    for rule in request.comfort:
        values = {stack: comfort_value(request, rule.by, stack) for stack in found}
        best = min(values.values(), default=Fraction(0))
        found = [stack for stack in found if values[stack] <= best + rule.slack]
    return found


def price_of_plate(request: PlanRequest, face: Fraction, *, off: bool) -> Pair:
    plate = row(request, face)
    if request.measure is Measure.PLATES:
        return Fraction(1), face
    if request.measure is Measure.MASS:
        return face, Fraction(1)
    return (plate.off_s if off else plate.on_s), Fraction(1)


def add(*pairs: Pair) -> Pair:
    return sum((p[0] for p in pairs), Fraction(0)), sum((p[1] for p in pairs), Fraction(0))


def untouched(access: Access, before: Stack, after: Stack) -> set[tuple[tuple[int, ...], tuple[int, ...]]]:
    """Every way to leave plates alone: their places before and after."""
    ways = set()
    for size in range(min(len(before), len(after)) + 1):
        for left in combinations(range(len(before)), size):
            for right in combinations(range(len(after)), size):
                if [before[i] for i in left] != [after[i] for i in right]:
                    continue
                inside = left == right == tuple(range(size))
                run = all(list(w) == list(range(w[0], w[0] + size)) for w in (left, right) if w)
                if access is Access.ANYWHERE or (access is Access.BOTH_ENDS and run) or inside:
                    ways.add((left, right))
    return ways


def change_price(request: PlanRequest, before: Stack, after: Stack) -> Pair:
    """(measure, tie-break) of the cheapest change, threading included."""
    prices = []
    for left, right in untouched(request.access, before, after):
        off = [price_of_plate(request, f, off=True) for i, f in enumerate(before) if i not in left]
        on = [price_of_plate(request, f, off=False) for i, f in enumerate(after) if i not in right]
        prices.append(add(*off, *on))
    threading = Fraction(0)
    if request.measure is Measure.TIME and request.thread_s:
        threading = request.thread_s * misaligned(request, after)
    return add(min(prices), (threading, Fraction(0)))


def best(request: PlanRequest) -> tuple[Pair, Fraction, bool | None] | None:
    """(measure, tie-break) summed, slowest change, whether the limit is kept; None if it cannot be made."""
    layers = [[request.start], *(all_stacks(request, target) for target in request.targets)]
    if not all(layers):
        return None
    price = lru_cache(maxsize=None)(lambda a, b: change_price(request, a, b))
    limits = sorted({price(a, b)[0] for one, two in pairwise(layers) for a in one for b in two}) or [
        Fraction(0)
    ]
    limit = chart_worst(request) if request.limit == "chart" else request.limit
    if request.aim is Aim.TOTAL and limit is None:
        total = _within(layers, price, limits[-1])
        return (total, Fraction(-1), None) if total else None
    if request.aim is Aim.TOTAL:
        total = _within(layers, price, limit)
        if total:
            return total, Fraction(-1), True
    least = next(limit for limit in limits if _within(layers, price, limit))
    return _within(layers, price, least), least, None if request.aim is Aim.WORST else False


def chart_worst(request: PlanRequest) -> Fraction | None:
    """The slowest change of the wall chart; None if it has no stack for some target."""
    charts = []
    ends, heaviest_first = request.equipment.implement.ends, -1
    for target in request.targets:
        share, made = (target - request.equipment.base_mass) / ends, []
        rows = sorted(request.equipment.plates, key=lambda plate: plate.face * heaviest_first)
        for counts in product(*(range(plate.count // ends, -1, -1) for plate in rows)):
            stack = tuple(plate.face for plate, n in zip(rows, counts, strict=True) for _ in range(n))
            if sum(stack) == share:
                made.append(stack)
        if not made or not fits(request, made[0]) or not keeps_order(request, made[0]):
            return None
        charts.append(made[0])
    sleeve = replace(request, access=Access.OUTER_END)
    steps = pairwise([request.start, *charts])
    return max((change_price(sleeve, before, after)[0] for before, after in steps), default=Fraction(0))


def _within(layers, price, limit: Fraction) -> Pair | None:
    reached = {layers[0][0]: (Fraction(0), Fraction(0))}
    for layer in layers[1:]:
        found = {}
        for after in layer:
            ways = [
                add(so_far, price(before, after))
                for before, so_far in reached.items()
                if price(before, after)[0] <= limit
            ]
            if ways:
                found[after] = min(ways)
        reached = found
    return min(reached.values()) if reached else None
