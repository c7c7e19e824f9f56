"""How a lift's stacks are to be chosen: the lift's own settings turned into the planner's question."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any

from app.loading.equipment import Equipment, Stack
from app.loading.mass import show_mass
from app.planning import PlanRequest, parse_request

WISHES = ("order", "access", "extra_plates", "measure", "aim")


def plan_request(
    unit: str, equipment: Equipment, wish: Mapping[str, Any], start: Stack, targets: Sequence[Fraction]
) -> PlanRequest:
    """The planner's question for a lift; ``wish`` holds those of the contract's keys that the meet has set."""
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
            for plate in equipment.plates
        ],
        "start": [show_mass(face) for face in start],
        "targets": [show_mass(target) for target in targets],
    }
    if equipment.collar is not None:
        document["collar"] = _present(mass=equipment.collar.mass, width_mm=equipment.collar.width_mm)
    return parse_request(document | dict(wish))


def _present(**values: Fraction | int | None) -> dict[str, Any]:
    """The keys that have a value, masses as exact text."""
    return {
        name: show_mass(value) if isinstance(value, Fraction) else value
        for name, value in values.items()
        if value is not None
    }
