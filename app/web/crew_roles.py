"""What a screen shows that is meant for one pair of hands: here one loader alone."""

from __future__ import annotations

from dataclasses import dataclass

from app.desk.board import Board
from app.loading.equipment import Access
from app.loading.mass import show_mass
from app.meet.hands_alternate import Move, alternate
from app.web.views import CrewView


@dataclass(frozen=True, slots=True)
class Turn:
    """One thing to do at one end; ``face`` "" is the collar."""

    side: str  # "left", "right"
    off: bool
    face: str


@dataclass(frozen=True, slots=True)
class AloneView:
    """The whole change for one loader, the ends in turns."""

    turns: tuple[Turn, ...]
    apart: str  # the greatest difference between the ends on the way
    within: bool  # never more than one big plate


def alone_view(one: Board, view: CrewView) -> AloneView | None:
    """The change that is out, end by end; None where nothing moves, on a belt, or when the bar is unknown.

    An unknown bar is stripped first, by eye: nobody can say in which turns what nobody knows comes off.
    """
    hand = one.now.bar.hand
    if view.state != "changing" or view.change is None or hand is None or hand.before is None:
        return None
    if one.equipment.implement.ends != 2 or one.wish.access is not Access.OUTER_END:
        return None
    order = alternate(one.equipment, (hand.before, hand.before), hand.stack)
    if not order.steps:
        return None
    return AloneView(
        turns=tuple(
            Turn(step.side, step.move is Move.OFF, "" if step.face is None else show_mass(step.face))
            for step in order.steps
        ),
        apart=show_mass(order.apart),
        within=order.within,
    )
