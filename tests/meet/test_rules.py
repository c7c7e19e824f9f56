"""The rules as settings: three presets with their sources, read from text and written back."""

from dataclasses import fields
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.meet.rule_presets import RULE_PRESETS, departures, rule_preset
from app.meet.rule_reading import preset_rules, read_rules, rules_document, say_value
from app.meet.rule_settings import BY_KEY, SETTINGS, Kind, Setting
from app.meet.rules import Changeable, Default, OpenerDeadline, OrderSystem, Rules, Ties, Until

UNITS = ["kg", "lb"]
KEYS = [preset.key for preset in RULE_PRESETS]


def test_the_rules_page_describes_every_rule_and_nothing_else() -> None:
    assert set(BY_KEY) == {one.name for one in fields(Rules)} - {"preset"}
    assert len(BY_KEY) == len(SETTINGS)


@pytest.mark.parametrize("preset", RULE_PRESETS, ids=KEYS)
def test_every_value_of_a_preset_names_its_source_or_says_that_it_has_none(preset) -> None:
    assert set(preset.given) == set(BY_KEY)
    honest = (
        "common practice",
        "from memory",
        "second-hand",
        "Rulebook",
        "Rule Book",
        "rulebook",
        "IWF rules",
    )
    honest += ("RPS rules", "Technical Rules", "Federation")
    without = [
        (key, unit)
        for key in BY_KEY
        for unit in UNITS
        if not any(word in preset.source(key, unit) for word in honest)
    ]
    assert without == []


@pytest.mark.parametrize("unit", UNITS)
@pytest.mark.parametrize("key", KEYS)
def test_a_preset_can_be_stored_and_read_back(key: str, unit: str) -> None:
    rules = preset_rules(key, unit)
    assert read_rules(rules_document(rules), unit) == rules
    assert departures(rules_document(rules), rule_preset(key), unit) == ()


@pytest.mark.parametrize(
    ("key", "name", "value"),
    [
        pytest.param("rounds-bar", "step", Fraction("2.5"), id="IPL Rulebook 2019, 6.1.1"),
        pytest.param("rounds-bar", "seconds_to_hand_in", 60, id="IPL Rulebook 2019, 6.1.1 and WDFPF 2007"),
        pytest.param(
            "rounds-bar", "default", Default.REPEAT_OR_STEP, id="IPL Rulebook 2019, 6.1.1 (silence)"
        ),
        pytest.param("rounds-bar", "below_missed", False, id="IPL Rulebook 2019, 6.1.1 (not below a miss)"),
        pytest.param("rounds-bar", "most_in_flight", 15, id="IPL Rulebook 2019, 6.1.2"),
        pytest.param("rounds-bar", "opener_changes", 1, id="WDFPF 2007: once only"),
        pytest.param("rounds-bar", "opener_attempts_left", 3, id="Irish federation: third-last lifter"),
        pytest.param("rounds-bar", "opener_minutes", 3, id="second-hand: 3 minutes before the flight"),
        pytest.param("rounds-bar", "changes_each", 2, id="WDFPF 2007: five cards for the deadlift"),
        pytest.param("rising-bar", "step", Fraction(1), id="second-hand: 1 kg"),
        pytest.param("rising-bar", "seconds_to_start", 60, id="IWF 6.5.9"),
        pytest.param("rising-bar", "seconds_following", 120, id="IWF 6.5.9, following himself"),
        pytest.param("rising-bar", "warning_seconds", 30, id="IWF 6.5.9, warning"),
        pytest.param("rising-bar", "change_until", Until.WARNING, id="IWF 6.5.11 and 6.5.12"),
        pytest.param("rising-bar", "ties", Ties.SEQUENCE, id="IWF 6.5.8"),
        pytest.param("rounds-belt", "least_rest_seconds", 300, id="Final Rep rulebook (k)"),
        pytest.param("rounds-belt", "seconds_to_start", 60, id="Final Rep rulebook (i)"),
        pytest.param("rounds-belt", "step", Fraction("1.25"), id="common practice"),
        pytest.param("rounds-belt", "belt_counted", False, id="common practice, no rule text"),
    ],
)
def test_the_presets_hold_what_their_sources_say(key: str, name: str, value: object) -> None:
    assert getattr(preset_rules(key), name) == value


def test_a_missing_setting_is_taken_from_the_preset_that_is_named() -> None:
    rules = read_rules({"preset": "rising-bar", "step": "0.5", "record_step": "0,5"})
    assert isinstance(rules, Rules)
    assert (rules.step, rules.record_step) == (Fraction("0.5"), Fraction("0.5"))
    assert rules.order_system is OrderSystem.RISING
    assert departures(rules_document(rules), rule_preset("rising-bar")) == (
        "Step",
        "Step of a record attempt",
    )


def test_without_a_preset_named_the_rest_is_a_rounds_meet_with_a_bar() -> None:
    assert read_rules({}) == preset_rules("rounds-bar")


def test_a_meet_in_pounds_starts_from_pounds() -> None:
    """The smallest step of a pair of 2.5 lb plates is 5 lb (arithmetic; figures V8)."""
    assert preset_rules("rounds-bar", "lb").step == 5
    assert preset_rules("rounds-bar", "lb").misload_rounding == 5


@pytest.mark.parametrize(
    ("values", "sentences"),
    [
        ({"stepp": "2.5"}, ["“stepp” is not a setting of the rules."]),
        ({"preset": "ladder"},
         ["“ladder” is no set of rules to start from. There are: rounds-bar, rising-bar, rounds-belt."]),
        ({"step": "two"}, ["Step: “two” is not a weight. Type a number such as 2.5."]),
        ({"step": "80"}, ["Step: 80 must be from 0 to 50."]),
        ({"step": "0"}, ["A step must be more than 0."]),
        ({"step": "2.5", "record_step": "1"}, ["The step 2.5 is not a multiple of the record step 1."]),
        ({"below_missed": "perhaps"}, ["May go below a missed weight: “perhaps” is neither yes nor no."]),
        ({"ties": "coin"}, ["Two at the same weight: “coin” is none of lot, sequence."]),
        ({"seconds_to_start": "-5"}, ["Time to start: “-5” must be a whole number from 0 to 3600."]),
        ({"most_in_flight": "0"}, ["Most lifters in a flight: “0” must be a whole number from 1 to 200."]),
        ({"opener_changes": "٣"}, ["Changes of an opener: “٣” must be a whole number from 0 to 99 or “any”."]),
        ({"seconds_following": "30"}, ["A lifter following himself or herself cannot have less time than others."]),
        ({"preset": "rising-bar", "warning_seconds": "90"},
         ["The warning would come before the time to start begins."]),
        ({"preset": "rising-bar", "below_missed": "yes"},
         ["A rising bar does not go down, so nobody can go below a missed weight."]),
        ({"step": "x", "ties": "y"},
         ["Two at the same weight: “y” is none of lot, sequence.",
          "Step: “x” is not a weight. Type a number such as 2.5."]),
    ],
)  # fmt: skip
def test_what_cannot_be_a_rule_is_said_in_a_sentence(values: dict[str, str], sentences: list[str]) -> None:
    assert read_rules(values) == sentences


def test_any_number_of_changes_can_be_allowed() -> None:
    """USSF Rules 2012: any number of changes of an opener up to 10 minutes before the flight."""
    rules = read_rules({"opener_changes": "any", "opener_deadline": "minutes", "opener_minutes": "10"})
    assert isinstance(rules, Rules)
    assert (rules.opener_changes, rules.opener_deadline) == (None, OpenerDeadline.MINUTES)


def test_a_lift_in_another_step_takes_its_least_rise_and_rounding_with_it() -> None:
    squat = preset_rules("rounds-belt").for_step(Fraction("2.5"))
    assert (squat.step, squat.least_rise, squat.misload_rounding) == (Fraction("2.5"),) * 3
    kept = read_rules({"preset": "rounds-belt", "least_rise": "0"})
    assert isinstance(kept, Rules)
    assert kept.for_step(Fraction("2.5")).least_rise == 0


def test_values_are_said_in_words() -> None:
    rules = preset_rules("rounds-bar")
    assert say_value(BY_KEY["step"], rules.step, "kg") == "2.5 kg"
    assert say_value(BY_KEY["order_system"], rules.order_system, "kg") == "in rounds"
    assert say_value(BY_KEY["below_missed"], rules.below_missed, "kg") == "no"
    assert say_value(BY_KEY["opener_changes"], None, "kg") == "any number"
    assert say_value(BY_KEY["opener_minutes"], 3, "kg") == "3 minutes"


def texts(setting: Setting) -> st.SearchStrategy[str]:
    """Texts that the setting takes."""
    if setting.kind is Kind.CHOICE:
        return st.sampled_from([str(value) for value, _ in setting.choices])
    if setting.kind is Kind.YES_NO:
        return st.sampled_from(["yes", "no"])
    if setting.kind is Kind.MASS:
        return st.sampled_from(["0", "0.25", "0.5", "1", "2.5", "5"])
    whole = st.integers(setting.least, min(setting.most, 300)).map(str)
    return whole | st.just("any") if setting.any_number else whole


@given(st.fixed_dictionaries({}, optional={setting.key: texts(setting) for setting in SETTINGS}))
def test_any_rules_that_can_be_read_survive_storage(values: dict[str, str]) -> None:
    rules = read_rules(values)
    if isinstance(rules, Rules):
        assert read_rules(rules_document(rules)) == rules
        assert all(rules_document(rules)[key] == text for key, text in values.items())
    else:
        assert all(sentence.endswith(".") for sentence in rules)


def test_the_changes_of_each_preset_differ_as_their_sports_do() -> None:
    """Third deadlift twice (from memory); any attempt (IWF 6.5.11); thirds on belts (common practice)."""
    assert [preset_rules(key).changeable for key in KEYS] == [
        Changeable.LAST_LIFT_THIRD,
        Changeable.ALL,
        Changeable.THIRDS,
    ]
