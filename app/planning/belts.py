"""Ready-made comfort for belt lifts, to be changed at will (common practice, no source)."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction
from types import MappingProxyType

from app.planning.request import Comfort, ComfortBy, Measure, PlanRequest

_PULL_AND_DIP = (
    Comfort(ComfortBy.THICKNESS, Fraction(10)),
    Comfort(ComfortBy.BALANCE, Fraction(10)),
    Comfort(ComfortBy.RIMS, Fraction(60)),
    Comfort(ComfortBy.THREADING, Fraction(1)),
)
# Muscle-up: the load is light and the legs move more, so a smooth bundle comes before a balanced one.
_MUSCLE_UP = (
    Comfort(ComfortBy.THICKNESS, Fraction(0)),
    Comfort(ComfortBy.RIMS, Fraction(30)),
    Comfort(ComfortBy.BALANCE, Fraction(20)),
)

BELT_COMFORT: Mapping[str, tuple[Comfort, ...]] = MappingProxyType(
    {"muscle-up": _MUSCLE_UP, "pull-up": _PULL_AND_DIP, "dip": _PULL_AND_DIP}
)
"""Thinnest, then balance, then rims, then threading; for the muscle-up rims before balance. Slack in mm (a
count for threading). With ``extra_plates`` 0 the fewest plates come before everything."""


def by_the_clock(request: PlanRequest, plate_s: Fraction, thread_s: Fraction) -> PlanRequest:
    """The request measured in seconds: so many for each plate moved, off or on, and so many for each neighbour
    whose holes do not line up, paid at every attempt. Both are entered by the crew (later measured)."""
    plates = tuple(replace(plate, off_s=plate_s, on_s=plate_s) for plate in request.equipment.plates)
    return replace(
        request,
        equipment=replace(request.equipment, plates=plates),
        measure=Measure.TIME,
        thread_s=thread_s,
    )
