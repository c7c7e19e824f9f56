"""The request in whole numbers: every mass a count of one common step, every plate kind an index."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import gcd, lcm

from app.loading.equipment import Plate
from app.planning.request import PlanRequest


@dataclass(frozen=True, slots=True)
class Kit:
    """Plate kinds with at least one piece at each end, heaviest first.

    ``mass``, ``shares`` are counted in ``step``; ``thickness`` and ``room`` in ``mm``; ``diameter`` and
    ``finger`` (twice ``finger_mm``: a hole stands half a diameter high) in ``rim``. Sizes that are not known
    are 0: the check of the request sees to it that none is missed. ``shares[t]`` is what one end carries at
    attempt t.
    """

    plates: tuple[Plate, ...]
    stock: tuple[int, ...]
    mass: tuple[int, ...]
    step: Fraction
    thickness: tuple[int, ...]
    room: int | None
    mm: Fraction
    diameter: tuple[int, ...]
    finger: int
    rim: Fraction
    start: tuple[int, ...]
    shares: tuple[int, ...]

    @property
    def kinds(self) -> int:
        """How many kinds of plates there are."""
        return len(self.plates)


def make_kit(request: PlanRequest, shares: tuple[Fraction, ...]) -> Kit:
    """The kit of a request whose ``shares`` (one end's part of each target) are already known."""
    equipment = request.equipment
    plates = tuple(
        sorted(
            (plate for plate in equipment.plates if equipment.pieces_per_end(plate)),
            key=lambda plate: -plate.face,
        )
    )
    step = common_step([*(plate.face for plate in plates), *shares])
    thickness = [plate.thickness_mm or Fraction(0) for plate in plates]
    room = equipment.room_mm
    part = common_step([*thickness, *([room] if room else [])])
    diameters = [plate.diameter_mm or Fraction(0) for plate in plates]
    rim = common_step([*diameters, 2 * request.finger_mm])
    place = {plate.face: kind for kind, plate in enumerate(plates)}
    return Kit(
        plates=plates,
        stock=tuple(equipment.pieces_per_end(plate) for plate in plates),
        mass=tuple(int(plate.face / step) for plate in plates),
        step=step,
        thickness=tuple(int(width / part) for width in thickness),
        room=None if room is None else int(room / part),
        mm=part,
        diameter=tuple(int(width / rim) for width in diameters),
        finger=int(2 * request.finger_mm / rim),
        rim=rim,
        start=tuple(place[face] for face in request.start),
        shares=tuple(int(share / step) for share in shares),
    )


def common_step(values: list[Fraction]) -> Fraction:
    """The largest step of which every value is a whole multiple; 1 when all are 0.

    >>> common_step([Fraction(5, 4), Fraction(25)])
    Fraction(5, 4)
    """
    parts = lcm(*(value.denominator for value in values))
    whole = gcd(*(int(value * parts) for value in values))
    return Fraction(whole, parts) if whole else Fraction(1)
