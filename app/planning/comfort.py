"""What makes a bundle comfortable to lift with, measured on many stacks at once."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.kit import Kit
from app.planning.request import Comfort, ComfortBy

Rows = NDArray[Any]
"""Stacks as rows of digits: kind + 1, innermost first, padded with 0."""


def keep_comfortable(kit: Kit, rows: Rows, rule: Comfort) -> NDArray[np.bool_]:
    """Which of one weight's stacks are within the rule's slack of the best of them.

    Values are whole numbers (of the part of a millimetre that all sizes share), so nothing is rounded.
    """
    if not len(rows):
        return np.zeros(0, np.bool_)
    values, unit = comfort_values(kit, rows, rule.by)
    return np.asarray(values <= values.min() + int(rule.slack // unit))


def comfort_values(kit: Kit, rows: Rows, by: ComfortBy) -> tuple[NDArray[Any], Fraction]:
    """The value of every stack in whole units, and the unit (in millimetres, or 1 for a count).

    Balance is the distance between the centre of mass and the middle. With masses f, widths t and inner
    faces at x that is the absolute value of Σ f (2x + t) − M T over 2 M, where M = Σ f and T = Σ t. All
    stacks of one weight share M, so the numerators compare.
    """
    if by is ComfortBy.THREADING:
        return misaligned(kit, rows), Fraction(1)
    if by is ComfortBy.RIMS:
        wide = np.array([0, *kit.diameter])[rows]
        both = (rows[:, 1:] > 0) & (rows[:, :-1] > 0)
        return (np.abs(wide[:, 1:] - wide[:, :-1]) * both).sum(axis=1), kit.rim / 2
    if by is ComfortBy.THICKNESS:
        return np.array([0, *kit.thickness])[rows].sum(axis=1), kit.mm
    return _off_balance(kit, rows)


def misaligned(kit: Kit, rows: Rows) -> NDArray[np.int64]:
    """Neighbours whose holes do not line up when both stand on their rims."""
    wide = np.array([0, *kit.diameter])[rows]
    both = (rows[:, 1:] > 0) & (rows[:, :-1] > 0)
    apart = np.abs(wide[:, 1:] - wide[:, :-1]) > kit.finger
    return np.asarray((apart & both).sum(axis=1))


def _off_balance(kit: Kit, rows: Rows) -> tuple[NDArray[Any], Fraction]:
    longest = rows.shape[1]
    reach = longest * max(kit.mass, default=0) * longest * max(kit.thickness, default=0) * 2
    dtype: Any = np.int64 if reach < 2**62 else object  # Python integers where int64 might overflow
    mass = np.array([0, *kit.mass], dtype)[rows]
    width = np.array([0, *kit.thickness], dtype)[rows]
    inside = np.cumsum(width, axis=1) - width
    total = mass.sum(axis=1)
    moment = (mass * (2 * inside + width)).sum(axis=1) - total * width.sum(axis=1)
    heaviest = int(total.max(initial=0))
    return np.abs(moment), kit.mm / (2 * heaviest) if heaviest else Fraction(1)
