"""The loading chart on the wall, and the weights that can be made at all."""

from __future__ import annotations

from fractions import Fraction
from functools import lru_cache
from math import gcd, lcm

from app.loading.equipment import Equipment, Plate, Stack

MOST_SUMS = 300_000


class TooManyWeights(ValueError):
    """The plates make more different weights than can be listed."""


def chart_stack(equipment: Equipment, target: Fraction) -> Stack | None:
    """As many of the heaviest plate as still lets the rest be made, then the next; heaviest inside.

    That is the greatest vector of counts in dictionary order among those that make the weight from the
    stock. ``None`` when no stack of the stock makes it, or when this one does not fit the sleeve.
    """
    return Chart(equipment).stack(target)


class Chart:
    """The loading chart of some equipment: one for many weights, since what has failed once is remembered."""

    def __init__(self, equipment: Equipment) -> None:
        self.equipment = equipment
        self.plates = _heaviest_first(equipment)
        self.scale, self.faces, self.counts = _whole(equipment)
        kinds = len(self.faces)
        self.most, self.step = [0] * (kinds + 1), [0] * (kinds + 1)
        for kind in reversed(range(kinds)):
            face, count = self.faces[kind], self.counts[kind]
            self.most[kind] = self.most[kind + 1] + face * count
            self.step[kind] = gcd(self.step[kind + 1], face if count else 0)
        self.failed: set[tuple[int, int]] = set()

    def stack(self, target: Fraction) -> Stack | None:
        """The chart's stack for a weight; see :func:`chart_stack`."""
        share = (target - self.equipment.base_mass) / self.equipment.implement.ends * self.scale
        if share < 0 or share.denominator != 1:
            return None
        counts = self._fill(0, share.numerator)
        if counts is None or not self._fits(counts):
            return None
        return tuple(
            plate.face for plate, count in zip(self.plates, counts, strict=True) for _ in range(count)
        )

    def _fits(self, counts: list[int]) -> bool:
        room = self.equipment.room_mm
        taken = [
            (plate.thickness_mm or Fraction(0)) * n for plate, n in zip(self.plates, counts, strict=True) if n
        ]
        return room is None or sum(taken, Fraction(0)) <= room

    def _fill(self, kind: int, rest: int) -> list[int] | None:
        """Depth first, most plates first."""
        if rest == 0:
            return [0] * (len(self.faces) - kind)
        if rest > self.most[kind] or rest % self.step[kind] or (kind, rest) in self.failed:
            return None
        for count in range(min(self.counts[kind], rest // self.faces[kind]), -1, -1):
            tail = self._fill(kind + 1, rest - count * self.faces[kind])
            if tail is not None:
                return [count, *tail]
        self.failed.add((kind, rest))
        if len(self.failed) > MOST_SUMS:
            raise TooManyWeights("These plates make more different weights than can be searched.")
        return None


def _heaviest_first(equipment: Equipment) -> list[Plate]:
    return sorted(equipment.plates, key=lambda plate: -plate.face)


def _whole(equipment: Equipment) -> tuple[int, list[int], list[int]]:
    """Faces as whole numbers of one common step, heaviest first, and the pieces for one end."""
    plates = _heaviest_first(equipment)
    scale = lcm(*(plate.face.denominator for plate in plates))
    faces = [int(plate.face * scale) for plate in plates]
    return scale, faces, [equipment.pieces_per_end(plate) for plate in plates]


def loadable(equipment: Equipment, target: Fraction) -> bool:
    """Whether some stack of the stock makes the weight and fits the sleeve."""
    return target in _weights(equipment)


def nearest(equipment: Equipment, target: Fraction) -> tuple[Fraction | None, Fraction | None]:
    """The nearest weights below and above that can be made; the target itself counts for neither."""
    weights = _weights(equipment)
    below = max((weight for weight in weights if weight < target), default=None)
    above = min((weight for weight in weights if weight > target), default=None)
    return below, above


@lru_cache(maxsize=64)
def _weights(equipment: Equipment) -> frozenset[Fraction]:
    """Every weight that can be made, bare bar included."""
    scale, faces, counts = _whole(equipment)
    room = equipment.room_mm
    widths, most = _whole_widths(equipment) if room is not None else ([0] * len(faces), 0)
    thinnest = {0: 0}  # thinnest[m] = least width that makes the mass m at one end
    for face, count, width in zip(faces, counts, widths, strict=True):
        for mass, taken in list(thinnest.items()):
            for pieces in range(1, count + 1):
                made, wide = mass + pieces * face, taken + pieces * width
                if made not in thinnest or thinnest[made] > wide:
                    thinnest[made] = wide
        if len(thinnest) > MOST_SUMS:
            raise TooManyWeights("These plates make more different weights than can be searched.")
    ends = equipment.implement.ends
    return frozenset(
        equipment.base_mass + ends * Fraction(mass, scale) for mass, wide in thinnest.items() if wide <= most
    )


def _whole_widths(equipment: Equipment) -> tuple[list[int], int]:
    """The plates' thicknesses, heaviest plate first, and the room, as whole numbers of one common step."""
    room = equipment.room_mm or Fraction(0)
    widths = [plate.thickness_mm or Fraction(0) for plate in _heaviest_first(equipment)]
    parts = lcm(room.denominator, *(width.denominator for width in widths))
    return [int(width * parts) for width in widths], int(room * parts)
