"""The second belt: what is made up on it while a lifter has the first, once more summed against what is left."""

from __future__ import annotations

from app.desk.board import Board
from app.desk.planned import less
from app.loading.change import hand_list
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.meet.platform import Condition, Hand
from app.web.views import ChangeView, OtherBeltView
from app.web.words import end_view, plate_views, side_words, where_words


def other_belt_view(one: Board) -> OtherBeltView | None:
    """What the crew makes up meanwhile; None when nothing. Raises WrongLoad rather than show a wrong load."""
    hand, ahead = one.now.bar.hand, one.now.bar.ahead
    if hand is None or ahead is None or one.now.bar.condition is not Condition.LIFTING:
        return None
    attempt = next((a for a in one.programme.attempts if a.id == ahead.attempt_id), None)
    lifter = next((x for x in one.programme.lifters if attempt and x.id == attempt.lifter_id), None)
    if attempt is None or lifter is None:
        return None
    # The lifter has the first belt's plates: the second must do with the rest.
    check_stack(less(one.equipment, hand.stack), ahead.stack, ahead.weight, one.wish.order)
    coming = next((turn for turn in one.order if turn.attempt.id != hand.attempt_id), None)
    still = coming is not None and (coming.attempt.id, coming.weight) == (ahead.attempt_id, ahead.weight)
    return OtherBeltView(
        weight=show_mass(ahead.weight),
        lifter=lifter.name,
        change=_change(one, ahead),
        warning="" if still else "Stop: the next weight has changed. Wait for this lift to end.",
    )


def _change(one: Board, ahead: Hand) -> ChangeView:
    before = ahead.before or ()
    hands = hand_list(before, ahead.stack, one.wish.access)
    return ChangeView(
        off=() if ahead.before is None else plate_views(hands.off, one.now),
        on=plate_views(hands.on, one.now),
        side=side_words(one.tool),
        from_empty=ahead.before is None,
        end=end_view(one, ahead.stack, ahead.weight, hands.on_at),
        how=where_words(hands, before, ahead.stack, one.wish.access),
        why=ahead.why,
    )
