"""The plan as data: what stands on the bar at every attempt and what hands do between."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from app.loading.equipment import Stack
from app.loading.mass import show_mass


@dataclass(frozen=True, slots=True)
class Figures:
    """Plates handled, mass moved and seconds, all for one end."""

    plates: int
    mass: Fraction
    time_s: Fraction


@dataclass(frozen=True, slots=True)
class Change:
    """One attempt: its stack, and the plates that come off and go on to reach it.

    ``off`` is outermost first with the places in the stack before, ``on`` innermost first with the places in
    the stack after; place 0 is the innermost. Figures are for one end; ``time_s`` includes the threading.
    """

    target: Fraction
    stack: Stack
    off: Stack
    off_at: tuple[int, ...]
    on: Stack
    on_at: tuple[int, ...]
    plates: int
    mass: Fraction
    time_s: Fraction


@dataclass(frozen=True, slots=True)
class ChartFigures:
    """The same weights loaded as the wall chart does."""

    total: Figures
    worst: Figures


@dataclass(frozen=True, slots=True)
class Bound:
    """No plan can be better than this: the sum of the measure with aim total, the largest change with aim
    worst."""

    value: Fraction


@dataclass(frozen=True, slots=True)
class Plan:
    """The answer. ``limit_kept`` is ``None`` when no limit was asked for."""

    changes: tuple[Change, ...]
    total: Figures
    worst: Figures
    chart: ChartFigures | None
    proof: Literal["optimal"] | Bound
    limit_kept: bool | None = None


def summed(changes: tuple[Change, ...]) -> Figures:
    """The sums over all changes."""
    return Figures(
        plates=sum(change.plates for change in changes),
        mass=sum((change.mass for change in changes), Fraction(0)),
        time_s=sum((change.time_s for change in changes), Fraction(0)),
    )


def slowest(changes: tuple[Change, ...]) -> Figures:
    """The largest of each figure over all changes (not always of one and the same change)."""
    return Figures(
        plates=max((change.plates for change in changes), default=0),
        mass=max((change.mass for change in changes), default=Fraction(0)),
        time_s=max((change.time_s for change in changes), default=Fraction(0)),
    )


def answer_document(plan: Plan) -> dict[str, object]:
    """The plan as the contract shows it, ready for JSON: masses and seconds as decimal strings."""
    document: dict[str, object] = {
        "changes": [_change(change) for change in plan.changes],
        "total": _figures(plan.total),
        "worst": _figures(plan.worst),
        "chart": plan.chart and {"total": _figures(plan.chart.total), "worst": _figures(plan.chart.worst)},
        "proof": plan.proof if isinstance(plan.proof, str) else {"bound": show_mass(plan.proof.value)},
    }
    if plan.limit_kept is not None:
        document["limit_kept"] = plan.limit_kept
    return document


def _change(change: Change) -> dict[str, object]:
    return {
        "target": show_mass(change.target),
        "stack": [show_mass(face) for face in change.stack],
        "off": [show_mass(face) for face in change.off],
        "off_at": list(change.off_at),
        "on": [show_mass(face) for face in change.on],
        "on_at": list(change.on_at),
        "plates": change.plates,
        "mass": show_mass(change.mass),
        "time_s": show_mass(change.time_s),
    }


def _figures(figures: Figures) -> dict[str, object]:
    return {
        "plates": figures.plates,
        "mass": show_mass(figures.mass),
        "time_s": show_mass(figures.time_s),
    }
