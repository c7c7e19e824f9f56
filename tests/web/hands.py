"""What hands can do to a stack, written the slow and obvious way; it shares nothing with the planner."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from fractions import Fraction
from itertools import combinations
from typing import Any

Faces = tuple[Fraction, ...]


def stands_well(stack: Faces, order: str, diameters: Mapping[Fraction, Fraction]) -> bool:
    """Whether the order rule of the lift (the contract's ``order``) holds, inside to outside."""
    wide = [diameters[face] for face in stack]
    match order:
        case "heaviest-inside":
            return list(stack) == sorted(stack, reverse=True)
        case "widest-inside":
            return wide == sorted(wide, reverse=True)
        case "no-valley":
            return not any(max(wide[:i]) > wide[i] < max(wide[i + 1 :]) for i in range(1, len(wide) - 1))
    return order == "any"


def can_be_done(before: Faces, after: Faces, off: Faces, on: Faces, access: str) -> bool:
    """Whether taking ``off`` from ``before`` and putting ``on`` on can give ``after``, the rest untouched.

    ``outer-end``: what stays is the innermost part. ``both-ends``: one unbroken run. ``anywhere``: any plates.
    """
    stay = len(before) - len(off)
    if stay < 0 or stay != len(after) - len(on):
        return False
    return any(
        _without(before, a) == Counter(off)
        and _without(after, b) == Counter(on)
        and [before[i] for i in a] == [after[i] for i in b]
        for a in _places(len(before), stay, access)
        for b in _places(len(after), stay, access)
    )


def _without(stack: Faces, places: tuple[int, ...]) -> Counter[Fraction]:
    return Counter(face for place, face in enumerate(stack) if place not in places)


def _places(length: int, stay: int, access: str) -> list[tuple[int, ...]]:
    if access == "outer-end":
        return [tuple(range(stay))]
    if access == "both-ends":
        return [tuple(range(first, first + stay)) for first in range(length - stay + 1)]
    return list(combinations(range(length), stay))


def wish(loading: Mapping[str, Any]) -> tuple[str, str]:
    """The order and access of a lift's settings; a lift without any is a sleeve loaded as rulebooks say."""
    return loading.get("order", "heaviest-inside"), loading.get("access", "outer-end")
