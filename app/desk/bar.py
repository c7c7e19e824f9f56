"""What the crew and the table say about the platform itself: which flight is on, and what is on the bar."""

from __future__ import annotations

from collections.abc import Callable

from app.desk.entry import Desk, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.equipment import Stack
from app.loading.mass import show_mass
from app.meet.platform import Bar, BarRefused, Condition, found, hold, loaded, not_loaded, resume
from app.store.picture import store_bar

ANSWERS_ALWAYS: dict[str, Stack | None] = {"empty": (), "unknown": None}


def bring_flight(desk: Desk, platform_id: int, flight_id: int, lift_id: int, *, who: str) -> None:
    """This flight lifts this lift from now on."""
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        programmes = [p for _, _, p in now.sessions if any(one.id == flight_id for one in p.flights)]
        if not programmes or all(lift.id != lift_id for lift in programmes[0].lifts):
            raise NotAllowedNow("This flight does not lift that lift on this platform.")
        row = work.platform
        row.flight_id, row.lift_id = flight_id, lift_id
        flight, lift = programmes[0].flight(flight_id), programmes[0].lift(lift_id)
        work.what = f"{now.platform}: {flight.name}, {lift.name}"


def bar_is_loaded(desk: Desk, platform_id: int, shown: str | None, *, who: str) -> None:
    """The crew says that the bar is as shown. ``shown`` names the instruction their screen was for."""
    _move(desk, platform_id, who, loaded, "bar is loaded", shown)


def bar_is_not_loaded(desk: Desk, platform_id: int, *, who: str) -> None:
    """Takes that back."""
    _move(desk, platform_id, who, not_loaded, "bar is not loaded yet")


def hold_platform(desk: Desk, platform_id: int, *, who: str) -> None:
    """Nothing moves until :func:`end_hold`."""
    _move(desk, platform_id, who, hold, "hold")


def end_hold(desk: Desk, platform_id: int, *, who: str) -> None:
    """The platform goes on with the same change."""
    _move(desk, platform_id, who, resume, "hold ended")


def bar_carries(desk: Desk, platform_id: int, answer: str, shown: str | None = None, *, who: str) -> None:
    """Somebody has looked at the bar: ``before`` (nothing moved yet), ``shown`` (as instructed), ``empty``, or
    ``unknown`` (strip it). The next instruction is the difference from there.
    """

    def moved(bar: Bar) -> Bar:
        if bar.condition is Condition.LIFTING:
            raise BarRefused(
                "The bar is loaded and somebody is about to lift. Take “bar is loaded” back first."
            )
        if answer == "before" and bar.hand is not None:
            return found(bar, bar.hand.before)
        if answer == "shown" and bar.hand is not None:
            return found(bar, bar.hand.stack)
        if answer in ANSWERS_ALWAYS:
            return found(bar, ANSWERS_ALWAYS[answer])
        raise BarRefused("There is no change out to compare the bar with.")

    words = {
        "before": "bar is as it was before the change",
        "shown": "bar is as shown",
        "empty": "bar is empty",
        "unknown": "bar is unknown, build from empty",
    }
    _move(desk, platform_id, who, moved, words.get(answer, answer), shown)


def _move(
    desk: Desk, platform_id: int, who: str, moved: Callable[[Bar], Bar], words: str, shown: str | None = None
) -> None:
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        _check_same_instruction(now.bar, shown)
        try:
            bar = moved(now.bar)
        except BarRefused as refused:
            raise NotAllowedNow(str(refused)) from refused
        work.what = f"{now.platform}: {words}{_weight(now.bar)}"
        store_bar(work.platform, bar)
        if bar.condition is Condition.LIFTING and now.bar.condition is not Condition.LIFTING:
            work.platform.loaded_at = work.now


def _weight(bar: Bar) -> str:
    return f" ({show_mass(bar.hand.weight)})" if bar.hand else ""


def _check_same_instruction(bar: Bar, shown: str | None) -> None:
    """A screen that was late may not answer for a change it has not shown."""
    if shown is not None and shown != instruction_name(bar):
        raise SomebodyWasFirst("This screen was showing an earlier change. Look at the new one, then answer.")


def instruction_name(bar: Bar) -> str:
    """Names the instruction that is out, so that a late answer can be told from a timely one."""
    if bar.hand is None:
        return "none"
    return f"{bar.hand.attempt_id}:{show_mass(bar.hand.weight)}:{'+'.join(map(show_mass, bar.hand.stack))}"
