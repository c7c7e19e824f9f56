"""One entry after another: Bo's second squat, changed as often as a test likes."""

from __future__ import annotations

from tests.cast import BO, Hall


def enter(hall: Hall, weight: str) -> str:
    """Bo wants another weight; the table allows it each time."""
    return hall.declare(BO, 2, weight, reason="to and fro")
