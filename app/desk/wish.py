"""How a lift's stacks are to be chosen: the lift's own settings, and the planner's question made from them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from app.loading.equipment import Access, Equipment, Order, Stack
from app.loading.mass import parse_mass, show_mass
from app.planning import Aim, Departure, Measure, PlanRequest, parse_request
from app.planning.belts import BELT_COMFORT


@dataclass(frozen=True, slots=True)
class Wish:
    """A lift's settings. ``comfort`` is a list of (by, slack in mm) in the order they are applied."""

    order: Order = Order.HEAVIEST_INSIDE
    access: Access = Access.OUTER_END
    extra_plates: int = 1
    measure: Measure = Measure.PLATES
    aim: Aim = Aim.TOTAL
    comfort: tuple[tuple[str, str], ...] = ()
    plate_s: Fraction = Fraction(3)
    thread_s: Fraction = Fraction(0)
    finger_mm: Fraction = Fraction(15)
    chart_limit: bool = False
    chart_only: bool = False
    least_plates: int = 0
    least_mass: Fraction = field(default_factory=Fraction)

    @property
    def departure(self) -> Departure:
        """When the plan may leave the loading chart that everybody knows by sight."""
        return Departure(self.chart_only, self.least_plates or None, self.least_mass or None)


def ready_made(key: str) -> Wish:
    """Settings for a belt lift to start from (common practice): any order, by the comfort of the lift.

    The chain is taken to be opened at one end only, which is right for every belt; where both ends open, the
    director says so.
    """
    comfort = tuple((rule.by.value, show_mass(rule.slack)) for rule in BELT_COMFORT[key])
    return Wish(order=Order.ANY, comfort=comfort)


def read_wish(stored: Mapping[str, Any]) -> Wish:
    """The settings of a lift as stored; what is not there is the default."""
    plain = Wish()
    return Wish(
        order=Order(stored.get("order", plain.order)),
        access=Access(stored.get("access", plain.access)),
        extra_plates=int(stored.get("extra_plates", plain.extra_plates)),
        measure=Measure(stored.get("measure", plain.measure)),
        aim=Aim(stored.get("aim", plain.aim)),
        comfort=tuple((one[0], one[1]) for one in stored.get("comfort", ())),
        plate_s=parse_mass(stored.get("plate_s", plain.plate_s.numerator)),
        thread_s=parse_mass(stored.get("thread_s", 0)),
        finger_mm=parse_mass(stored.get("finger_mm", plain.finger_mm.numerator)),
        chart_limit=bool(stored.get("chart_limit", False)),
        chart_only=bool(stored.get("chart_only", False)),
        least_plates=int(stored.get("least_plates", 0)),
        least_mass=parse_mass(stored.get("least_mass", 0)),
    )


def wish_document(wish: Wish) -> dict[str, Any]:
    """The settings as they are stored; :func:`read_wish` takes them back unchanged."""
    return {
        "order": wish.order.value,
        "access": wish.access.value,
        "extra_plates": wish.extra_plates,
        "measure": wish.measure.value,
        "aim": wish.aim.value,
        "comfort": [list(one) for one in wish.comfort],
        "plate_s": show_mass(wish.plate_s),
        "thread_s": show_mass(wish.thread_s),
        "finger_mm": show_mass(wish.finger_mm),
        "chart_limit": wish.chart_limit,
        "chart_only": wish.chart_only,
        "least_plates": wish.least_plates,
        "least_mass": show_mass(wish.least_mass),
    }


def plan_request(
    unit: str, equipment: Equipment, wish: Wish, start: Stack, targets: Sequence[Fraction]
) -> PlanRequest:
    """The planner's question for a lift, through the contract's own reader, so that it is checked as any other."""
    seconds = show_mass(wish.plate_s)
    document: dict[str, Any] = {
        "unit": unit,
        "implement": _present(
            mass=equipment.implement.mass,
            ends=equipment.implement.ends,
            usable_mm=equipment.implement.usable_mm,
        ),
        "plates": [
            _present(
                face=plate.face,
                count=plate.count,
                thickness_mm=plate.thickness_mm,
                diameter_mm=plate.diameter_mm,
            )
            | {"off_s": seconds, "on_s": seconds}
            for plate in equipment.plates
        ],
        "order": wish.order.value,
        "access": wish.access.value,
        "extra_plates": wish.extra_plates,
        "measure": wish.measure.value,
        "aim": wish.aim.value,
        "comfort": [{"by": by, "slack": slack} for by, slack in wish.comfort],
        "finger_mm": show_mass(wish.finger_mm),
        "start": [show_mass(face) for face in start],
        "targets": [show_mass(target) for target in targets],
    }
    if wish.measure is Measure.TIME:
        document["thread_s"] = show_mass(wish.thread_s)
    if wish.chart_limit and wish.aim is Aim.TOTAL:
        document["limit"] = "chart"
    if equipment.collar is not None:
        document["collar"] = _present(mass=equipment.collar.mass, width_mm=equipment.collar.width_mm)
    return parse_request(document)


def _present(**values: Fraction | int | None) -> dict[str, Any]:
    """The keys that have a value, masses as exact text."""
    return {
        name: show_mass(value) if isinstance(value, Fraction) else value
        for name, value in values.items()
        if value is not None
    }
