"""Three sets of rules to start from, and for every value where it comes from.

Where a rulebook was read, it is named with its year. "Second-hand" is a page that reports a rule and is no
proof of it; "from memory" and "common practice" have no source. None has been verified against the edition in
force: the meet checks its own rulebook and changes the value on the Rules page.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.meet.rule_settings import BY_KEY


@dataclass(frozen=True, slots=True)
class Given:
    """A value as the Rules page would hold it, for a meet in kg and in lb, and its source."""

    value: str
    source: str
    pounds: str = ""
    pounds_source: str = ""

    def in_unit(self, unit: str) -> Given:
        """The value for a meet in this unit; pounds only where they differ."""
        return Given(self.pounds, self.pounds_source) if unit == "lb" and self.pounds else self


@dataclass(frozen=True, slots=True)
class Preset:
    """A name and a value for every setting."""

    key: str
    name: str
    about: str
    given: dict[str, Given]

    def value(self, key: str, unit: str = "kg") -> str:
        """The preset's value of a setting."""
        return self.given[key].in_unit(unit).value

    def source(self, key: str, unit: str = "kg") -> str:
        """Where the value comes from: a published source, "from memory" or "common practice"."""
        return self.given[key].in_unit(unit).source


CP = "common practice"
MEMORY = "from memory"
IPL = "IPL Rulebook 2019, 6.1.1"
WDFPF = "WDFPF Rule Book 2007, Order of competition"
IWF_TIME = "IWF rules 6.5.9, as reprinted in an e-book"
IWF_CHANGE = "IWF rules 6.5.11 and 6.5.12, as reprinted in an e-book"
IWF_ORDER = (
    "IWF rules 6.5.8 (sequence and lot, as reprinted in an e-book); attempt number before them from memory"
)
ERRORS = "second-hand: a page that repeats a rulebook's clause on errors in loading"
FINAL_REP = "Final Rep rulebook (German)"
LESSON = "second-hand: Calisthenics Association, lesson on rules and commands"
NO_TEXT = "common practice; no rule text is known"
NOT_HERE = "common practice; does not arise with this kit"
SMALLEST_LB = "common practice; the smallest step of a pair of {} lb plates"

ROUNDS_BAR = Preset(
    "rounds-bar",
    "Rounds meet with a bar",
    "Three rounds of each lift, lightest bar first, as in powerlifting.",
    {
        "order_system": Given("rounds", WDFPF),
        "ties": Given(
            "lot", "WDFPF Rule Book 2007, Conduct of competition; that the lower lot goes first from memory"
        ),
        "fourth_for_record": Given(
            "no", "from memory; WDFPF 2007 hands out a card for a fourth, so yes there"
        ),
        "step": Given("2.5", IPL, "5", SMALLEST_LB.format("2.5")),
        "record_step": Given("0.5", MEMORY, "1", CP),
        "least_rise": Given("2.5", CP, "5", CP),
        "below_missed": Given("no", IPL),
        "default": Given("repeat-or-step", IPL),
        "seconds_to_hand_in": Given("60", f"{IPL}; {WDFPF}"),
        "opener_changes": Given("1", WDFPF),
        "opener_deadline": Given("attempts-left", WDFPF),
        "opener_minutes": Given(
            "3", "second-hand: USA Powerlifting Arizona, meet preparation; WDFPF 2007 has 5"
        ),
        "opener_attempts_left": Given(
            "3", "Irish Powerlifting Federation, athletes' briefing (third-last lifter); WDFPF 2007 has 5"
        ),
        "changeable": Given(
            "last-lift-third", "from memory; WDFPF 2007 hands out two more cards for the deadlift"
        ),
        "changes_each": Given(
            "2", "WDFPF Rule Book 2007, Order of competition (five cards for the deadlift)"
        ),
        "change_until": Given("called", MEMORY),
        "seconds_to_start": Given("60", "second-hand: USA Powerlifting page, 60 s once the bar is loaded"),
        "seconds_following": Given("60", "from memory: no longer time"),
        "warning_seconds": Given("30", CP),
        "least_rest_seconds": Given("0", "common practice: no rule, the size of the flight gives the rest"),
        "most_in_flight": Given("15", "IPL Rulebook 2019, 6.1.2"),
        "lighter_good": Given("keep-or-retake", ERRORS),
        "lighter_missed": Given("retake", ERRORS),
        "heavier_good": Given("counts", ERRORS),
        "heavier_missed": Given("retake", ERRORS),
        "unequal_good": Given("keep-or-retake", ERRORS),
        "unequal_missed": Given("retake", ERRORS),
        "spoiled_missed": Given(
            "retake", "IPF Technical Rules Book 2013, p. 28 (at the referees' discretion)"
        ),
        "misload_rounding": Given("2.5", ERRORS, "5", CP),
        "retake_place": Given("end-of-round", f"WPA base rules and WPLF Rule Book; {ERRORS}"),
        "record_retake_place": Given(
            "end-of-round", f"{ERRORS}; one provincial examiners' page has it at once"
        ),
        "collars_counted": Given("yes", "WDFPF Rule Book 2007 and WPC (bar and both collars 25 kg)"),
        "belt_counted": Given("no", NOT_HERE),
        "first_face_in": Given("yes", "RPS rules"),
        "outside_collar": Given("no", "RPS rules (collar last)"),
        "full_diameter": Given("yes", MEMORY),
    },
)

RISING_BAR = Preset(
    "rising-bar",
    "Rising-bar meet",
    "The bar goes up with what the lifters ask for, whatever attempt they are at, as in Olympic lifting.",
    {
        "order_system": Given("rising", MEMORY),
        "ties": Given("sequence", IWF_ORDER),
        "fourth_for_record": Given("no", MEMORY),
        "step": Given("1", "second-hand: the Olympic movement's page on weightlifting equipment", "1", CP),
        "record_step": Given("1", "second-hand: questions and answers on the 1 kg rule, 2005", "1", CP),
        "least_rise": Given("1", MEMORY, "1", CP),
        "below_missed": Given("no", "from memory: the bar cannot go below what is on it"),
        "default": Given(
            "repeat-or-step", "second-hand: a coaching page (1 kg more); the same after a miss from memory"
        ),
        "seconds_to_hand_in": Given("30", MEMORY),
        "opener_changes": Given("2", MEMORY),
        "opener_deadline": Given("as-later", IWF_CHANGE),
        "opener_minutes": Given("3", "common practice; not used while openers go by the warning"),
        "opener_attempts_left": Given("3", "common practice; not used while openers go by the warning"),
        "changeable": Given("all", IWF_CHANGE),
        "changes_each": Given("2", "from memory; second-hand: two coaching pages say the same"),
        "change_until": Given("warning", IWF_CHANGE),
        "seconds_to_start": Given("60", IWF_TIME),
        "seconds_following": Given("120", IWF_TIME),
        "warning_seconds": Given("30", IWF_TIME),
        "least_rest_seconds": Given("0", "common practice: no rule, following oneself gives the longer time"),
        "most_in_flight": Given("15", MEMORY),
        "lighter_good": Given("keep-or-retake", "from memory, not certain"),
        "lighter_missed": Given("retake", "from memory, not certain"),
        "heavier_good": Given("keep-or-retake", "from memory, not certain"),
        "heavier_missed": Given("retake", "from memory, not certain"),
        "unequal_good": Given("keep-or-retake", "from memory, not certain"),
        "unequal_missed": Given("retake", "from memory, not certain"),
        "spoiled_missed": Given("retake", "from memory, not certain"),
        "misload_rounding": Given("1", "from memory, not certain", "1", CP),
        "retake_place": Given("at-once", "from memory, not certain"),
        "record_retake_place": Given("at-once", "from memory, not certain"),
        "collars_counted": Given(
            "yes", "second-hand: broadcaster's games page (20 kg bar, two collars of 2.5 kg)"
        ),
        "belt_counted": Given("no", NOT_HERE),
        "first_face_in": Given("no", MEMORY),
        "outside_collar": Given(
            "yes", "second-hand: questions and answers on small plates outside the collar"
        ),
        "full_diameter": Given("yes", "common practice; a bar too light to carry one excepted"),
    },
)

ROUNDS_BELT = Preset(
    "rounds-belt",
    "Rounds meet with belts",
    "Rounds with the weight hung from a belt, as in streetlifting.",
    {
        "order_system": Given("rounds", LESSON),
        "ties": Given("lot", NO_TEXT),
        "fourth_for_record": Given("no", NO_TEXT),
        "step": Given("1.25", "common practice; 2.5 in some meets", "2.5", CP),
        "record_step": Given("0.25", "common practice; 0.5 in some meets", "0.5", CP),
        "least_rise": Given(
            "1.25", f"{LESSON} (that there is a least rise); how much is common practice", "2.5", CP
        ),
        "below_missed": Given("no", NO_TEXT),
        "default": Given("repeat-or-step", NO_TEXT),
        "seconds_to_hand_in": Given("60", NO_TEXT),
        "opener_changes": Given("1", NO_TEXT),
        "opener_deadline": Given("minutes", NO_TEXT),
        "opener_minutes": Given("3", NO_TEXT),
        "opener_attempts_left": Given("3", NO_TEXT),
        "changeable": Given("thirds", NO_TEXT),
        "changes_each": Given("1", f"{LESSON} (changes within limits); how many is common practice"),
        "change_until": Given("called", NO_TEXT),
        "seconds_to_start": Given("60", f"{FINAL_REP}, general rules (i)"),
        "seconds_following": Given("60", NO_TEXT),
        "warning_seconds": Given("30", NO_TEXT),
        "least_rest_seconds": Given("300", f"{FINAL_REP}, general rules (k)"),
        "most_in_flight": Given("12", MEMORY),
        "lighter_good": Given("keep-or-retake", NO_TEXT),
        "lighter_missed": Given("retake", NO_TEXT),
        "heavier_good": Given("counts", NO_TEXT),
        "heavier_missed": Given("retake", NO_TEXT),
        "unequal_good": Given("keep-or-retake", NO_TEXT),
        "unequal_missed": Given("retake", NO_TEXT),
        "spoiled_missed": Given("retake", NO_TEXT),
        "misload_rounding": Given("1.25", NO_TEXT, "2.5", CP),
        "retake_place": Given("end-of-round", NO_TEXT),
        "record_retake_place": Given("end-of-round", NO_TEXT),
        "collars_counted": Given("no", NOT_HERE),
        "belt_counted": Given("no", NO_TEXT),
        "first_face_in": Given("no", NO_TEXT),
        "outside_collar": Given("no", NOT_HERE),
        "full_diameter": Given("no", NOT_HERE),
    },
)

RULE_PRESETS = (ROUNDS_BAR, RISING_BAR, ROUNDS_BELT)


def rule_preset(key: str) -> Preset:
    """The preset with this key; KeyError if there is none."""
    return {one.key: one for one in RULE_PRESETS}[key]


def departures(values: dict[str, str], preset: Preset, unit: str = "kg") -> tuple[str, ...]:
    """The labels of the settings that this meet has otherwise than its preset."""
    return tuple(
        setting.label
        for key, setting in BY_KEY.items()
        if key in values and values[key] != preset.value(key, unit)
    )
