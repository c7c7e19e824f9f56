"""What the crew would be shown next, and next but one: in the page already, should the network go.

Made from the plan as it stands, every stack summed again; nothing here is an instruction while the page is connected.
"""

from __future__ import annotations

import logging
from dataclasses import replace

from app.desk.board import Board, Step
from app.loading.mass import show_mass
from app.loading.stack import WrongLoad
from app.web.crew_view import (
    CANNOT_BE_MADE,
    change_view,
    coming,
    crew_view,
    keep_out,
    rack_views,
    then_views,
    up_view,
)
from app.web.languages import Say
from app.web.views import CrewView

AHEAD = 10

log = logging.getLogger("platewright.wrong_load")


def ahead_views(one: Board, say: Say = str) -> tuple[CrewView, ...]:
    """The next ten changes as whole screens. They end before the first that cannot be vouched for."""
    now = crew_view(one, say)
    if not one.here or now.state in ("changed", "hold"):
        return ()  # what is on the bar has to be settled first
    steps = coming(one)
    if one.up is None:
        return ()
    views = []
    for at, step in enumerate(steps[:AHEAD]):
        before = one.up if at == 0 else steps[at - 1].turn
        try:
            change = change_view(one, step)
        except WrongLoad:
            log.exception("a stack ahead failed its re-sum on platform %s", one.now.platform)
            break
        views.append(
            replace(
                now,
                state="waiting" if change is None else "changing",
                up=up_view(one, step.turn, say),
                change=change,
                rack=rack_views(one, step.turn, before.lifter.id, say),
                then=then_views(step.turn, steps[at + 1 :], say),
                keep_out=keep_out(steps[at:]),
                message=_message(step, say),
                shown="",
                new_weight="",
                bar_now="",
                fall=None,
            )
        )
    return tuple(views)


def _message(step: Step, say: Say) -> str:
    return "" if step.stack else say(CANNOT_BE_MADE).format(weight=show_mass(step.turn.weight))
