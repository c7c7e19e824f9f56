"""Every setting of :class:`~app.meet.rules.Rules` in the words of the Rules page, in the order of the page."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from app.meet.rules import (
    Changeable,
    Default,
    Granted,
    OpenerDeadline,
    OrderSystem,
    RetakePlace,
    Ties,
    Until,
)


class Kind(StrEnum):
    """How a setting is entered."""

    MASS = "mass"
    SECONDS = "seconds"
    COUNT = "count"
    CHOICE = "choice"
    YES_NO = "yes/no"


@dataclass(frozen=True, slots=True)
class Setting:
    """One field: ``unit`` is ``mass`` for the meet's own unit, else the word after the number.

    ``choices`` are value and words. ``any_number``: the count may also be the word ``any``.
    """

    key: str
    label: str
    kind: Kind
    help: str
    group: str
    unit: str = ""
    choices: tuple[tuple[StrEnum, str], ...] = ()
    least: int = 0
    most: int = 0
    any_number: bool = False


ORDER, WEIGHTS, TIMES, CHANGES = "The order", "Weights", "Clocks and flights", "Handing in and changing"
MISLOADS, LOADING = "After an error in loading", "How the bar or belt is loaded"

IF_GOOD = (
    (Granted.COUNTS, "the lift counts"),
    (Granted.KEEP_OR_RETAKE, "the lifter keeps it or takes it again"),
    (Granted.RETAKE, "the lifter takes it again"),
)
IF_MISSED = (
    (Granted.RETAKE, "the lifter takes it again"),
    (Granted.STANDS, "the miss stands"),
)
PLACES = (
    (RetakePlace.END_OF_ROUND, "at the end of the same round"),
    (RetakePlace.AT_ONCE, "at once, the lifter following himself or herself"),
)


def _choice(
    key: str, label: str, help_: str, group: str, choices: tuple[tuple[StrEnum, str], ...]
) -> Setting:
    return Setting(key, label, Kind.CHOICE, help_, group, choices=choices)


def _mass(key: str, label: str, help_: str, group: str = WEIGHTS) -> Setting:
    return Setting(key, label, Kind.MASS, help_, group, unit="mass")


def _seconds(key: str, label: str, help_: str, group: str = TIMES) -> Setting:
    return Setting(key, label, Kind.SECONDS, help_, group, unit="seconds", most=3600)


def _yes_no(key: str, label: str, help_: str, group: str = LOADING) -> Setting:
    return Setting(key, label, Kind.YES_NO, help_, group)


def _changes(key: str, label: str, help_: str) -> Setting:
    return Setting(key, label, Kind.COUNT, help_, CHANGES, unit="changes", most=99, any_number=True)


SETTINGS = (
    _choice(
        "order_system",
        "Order of lifting",
        "Rounds: everybody takes the first attempt, lightest bar first, then everybody the second. Rising bar: "
        "whoever wants the lightest weight is next, whatever attempt it is, and the bar does not go down.",
        ORDER,
        ((OrderSystem.ROUNDS, "in rounds"), (OrderSystem.RISING, "rising bar")),
    ),
    _choice(
        "ties",
        "Two at the same weight",
        "In a rising-bar meet the lower attempt number comes before either of these.",
        ORDER,
        (
            (Ties.LOT, "the lower lot number goes first"),
            (Ties.SEQUENCE, "whoever took the attempt before earlier goes first, then the lower lot number"),
        ),
    ),
    _yes_no("fourth_for_record", "Fourth attempt for a record", "Only to break a record.", ORDER),
    _mass("step", "Step", "Every weight is a multiple of this."),
    _mass(
        "record_step",
        "Step of a record attempt",
        "A weight marked as a record attempt is a multiple of this instead.",
    ),
    _mass(
        "least_rise",
        "Least rise after a good lift",
        "The next weight is at least this much more; 0 lets a lifter take the same weight again.",
    ),
    _yes_no(
        "below_missed",
        "May go below a missed weight",
        "Whether a lifter may come down after a miss.",
        WEIGHTS,
    ),
    _choice(
        "default",
        "When nobody hands in",
        "What holds when the time to hand in has run out.",
        CHANGES,
        (
            (Default.REPEAT_OR_STEP, "the same weight after a miss, a step more after a good lift"),
            (Default.STEP, "a step more"),
            (Default.FORFEITED, "the attempt is forfeited"),
        ),
    ),
    _seconds(
        "seconds_to_hand_in",
        "Time to hand in the next weight",
        "From the end of the lifter's attempt. 0 means no limit.",
        CHANGES,
    ),
    _changes(
        "opener_changes", "Changes of an opener", "How often an opener may be changed; “any” for no limit."
    ),
    _choice(
        "opener_deadline",
        "Openers may be changed until",
        "The first flight of a session goes by minutes also when later flights go by attempts.",
        CHANGES,
        (
            (OpenerDeadline.MINUTES, "so many minutes before the flight starts"),
            (OpenerDeadline.ATTEMPTS_LEFT, "so many attempts are left in the flight before"),
            (OpenerDeadline.AS_LATER, "the same moment as any other attempt"),
        ),
    ),
    Setting(
        "opener_minutes",
        "Minutes before the flight",
        Kind.COUNT,
        "The last change of an opener, when it goes by minutes.",
        CHANGES,
        unit="minutes",
        most=240,
    ),
    Setting(
        "opener_attempts_left",
        "Attempts left in the flight before",
        Kind.COUNT,
        "An opener of a later flight may be changed while at least this many are still to be lifted.",
        CHANGES,
        unit="attempts",
        most=99,
    ),
    _choice(
        "changeable",
        "Later attempts that may be changed",
        "Which weights may be changed after they were handed in.",
        CHANGES,
        (
            (Changeable.LAST_LIFT_THIRD, "the third attempt of the session's last lift"),
            (Changeable.THIRDS, "third attempts"),
            (Changeable.ALL, "every attempt"),
        ),
    ),
    _changes("changes_each", "Changes of a later attempt", "How often each of them; “any” for no limit."),
    _choice(
        "change_until",
        "Later attempts may be changed until",
        "After this moment the weight stands.",
        CHANGES,
        (
            (Until.NEVER, "never: what is handed in stands"),
            (Until.CALLED, "the bar is called for the lifter"),
            (Until.LOADED, "the bar is loaded"),
            (Until.WARNING, "the warning before the time to start runs out"),
        ),
    ),
    _seconds(
        "seconds_to_start", "Time to start", "From the call, or from “the bar is loaded” if that is later."
    ),
    _seconds(
        "seconds_following",
        "Time to start when following oneself",
        "When the same lifter is up twice running.",
    ),
    _seconds(
        "warning_seconds", "Warning before the time runs out", "So many seconds before the end of the time."
    ),
    _seconds(
        "least_rest_seconds",
        "Least rest between a lifter's own attempts",
        "The table is warned before a lifter is called sooner. 0 means no rule.",
    ),
    Setting(
        "most_in_flight",
        "Most lifters in a flight",
        Kind.COUNT,
        "More is allowed, with a warning.",
        TIMES,
        unit="lifters",
        least=1,
        most=200,
    ),
    _choice(
        "lighter_good", "Bar too light, good lift", "The bar was lighter than called.", MISLOADS, IF_GOOD
    ),
    _choice(
        "lighter_missed", "Bar too light, no lift", "The bar was lighter than called.", MISLOADS, IF_MISSED
    ),
    _choice(
        "heavier_good",
        "Bar too heavy, good lift",
        "The bar may be lowered afterwards for others who need it.",
        MISLOADS,
        IF_GOOD,
    ),
    _choice(
        "heavier_missed", "Bar too heavy, no lift", "The bar was heavier than called.", MISLOADS, IF_MISSED
    ),
    _choice(
        "unequal_good",
        "Ends unequal or lift disturbed, good lift",
        "Also when the bar or its plates moved during the lift, or the platform was disturbed.",
        MISLOADS,
        IF_GOOD,
    ),
    _choice(
        "unequal_missed",
        "Ends unequal or lift disturbed, no lift",
        "Also when the bar or its plates moved during the lift, or the platform was disturbed.",
        MISLOADS,
        IF_MISSED,
    ),
    _choice(
        "spoiled_missed",
        "A loader or spotter spoiled the lift",
        "The referees decide whether it was so.",
        MISLOADS,
        IF_MISSED,
    ),
    _mass(
        "misload_rounding",
        "A misloaded weight is recorded as the next lower multiple of",
        "108.75 kg is recorded as 107.5 kg when this is 2.5 kg. 0 records it as it was.",
        MISLOADS,
    ),
    _choice(
        "retake_place", "A retake is taken", "Where the extra attempt goes in the order.", MISLOADS, PLACES
    ),
    _choice(
        "record_retake_place",
        "A retake of a record attempt is taken",
        "Where the extra attempt goes when the weight called was a record.",
        MISLOADS,
        PLACES,
    ),
    _yes_no("collars_counted", "Collars count in the weight", "The called weight includes both collars."),
    _yes_no(
        "belt_counted",
        "Belt and chain count in the weight",
        "The called weight includes belt, chain and hook.",
    ),
    _yes_no(
        "first_face_in", "First plate face in", "The innermost plate is turned face in, the others face out."
    ),
    _yes_no(
        "outside_collar", "Plates allowed outside the collar", "Small plates may be put outside the collar."
    ),
    _yes_no(
        "full_diameter",
        "Full-diameter plate when the lift starts from the floor",
        "The innermost plate is one of the largest diameter, so that the bar has its right height.",
    ),
)

BY_KEY = {setting.key: setting for setting in SETTINGS}
