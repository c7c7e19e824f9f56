"""What stands at the platform: a bar or a belt, its collars, and the plates."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction

Stack = tuple[Fraction, ...]
"""The faces on one end, inside to outside."""


class Order(StrEnum):
    """Which plate may stand where in a stack, read from inside to outside."""

    HEAVIEST_INSIDE = "heaviest-inside"
    WIDEST_INSIDE = "widest-inside"
    NO_VALLEY = "no-valley"
    ANY = "any"


class Access(StrEnum):
    """Which plate can be moved without touching another."""

    OUTER_END = "outer-end"
    BOTH_ENDS = "both-ends"
    ANYWHERE = "anywhere"


@dataclass(frozen=True, slots=True)
class Plate:
    """One kind of plate. ``count`` is every piece at the platform; seconds are for one end."""

    face: Fraction
    count: int
    thickness_mm: Fraction | None = None
    diameter_mm: Fraction | None = None
    off_s: Fraction = Fraction(1)
    on_s: Fraction = Fraction(1)

    def __post_init__(self) -> None:
        if self.face <= 0:
            raise ValueError("A plate must weigh something.")
        if self.count < 0:
            raise ValueError("There cannot be fewer than no plates.")
        if min(self.off_s, self.on_s) < 0:
            raise ValueError("Taking a plate off or putting it on cannot take less than no time.")
        if any(size is not None and size <= 0 for size in (self.thickness_mm, self.diameter_mm)):
            raise ValueError("A plate's thickness and diameter must be more than 0 mm.")


@dataclass(frozen=True, slots=True)
class Collar:
    """One collar; every end carries one, outermost, and it counts in the weight."""

    mass: Fraction
    width_mm: Fraction | None = None

    def __post_init__(self) -> None:
        if self.mass < 0 or (self.width_mm is not None and self.width_mm < 0):
            raise ValueError("A collar's mass and width cannot be less than 0.")


@dataclass(frozen=True, slots=True)
class Implement:
    """A bar (two ends, loaded alike) or a belt, chain or pin (one stack)."""

    mass: Fraction
    ends: int
    usable_mm: Fraction | None = None

    def __post_init__(self) -> None:
        if self.ends not in (1, 2):
            raise ValueError("A bar has 2 ends, a belt, chain or pin has 1.")
        if self.mass < 0 or (self.usable_mm is not None and self.usable_mm < 0):
            raise ValueError("A bar's mass and its room for plates cannot be less than 0.")


@dataclass(frozen=True, slots=True)
class Equipment:
    """Everything that decides which weights can be made; every face stands in one row only."""

    implement: Implement
    collar: Collar | None
    plates: tuple[Plate, ...]

    def __post_init__(self) -> None:
        if len({plate.face for plate in self.plates}) < len(self.plates):
            raise ValueError("A plate's face stands in two rows; give each face one row.")

    @property
    def base_mass(self) -> Fraction:
        """The weight with no plate on: the implement and a collar for each end."""
        collar = self.collar.mass if self.collar else Fraction(0)
        return self.implement.mass + self.implement.ends * collar

    @property
    def room_mm(self) -> Fraction | None:
        """Room for plates at one end once its collar is on; ``None`` when nothing limits it."""
        if self.implement.usable_mm is None:
            return None
        width = self.collar.width_mm if self.collar and self.collar.width_mm else Fraction(0)
        return self.implement.usable_mm - width

    def pieces_per_end(self, plate: Plate) -> int:
        """How many of these can stand at one end when every end is loaded alike."""
        return plate.count // self.implement.ends

    def plate(self, face: Fraction) -> Plate | None:
        """The row of this face, if it is owned."""
        return next((plate for plate in self.plates if plate.face == face), None)
