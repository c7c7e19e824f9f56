"""Rules from text and back: the Rules page's form, and what is stored, are the same plain words."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import fields
from enum import StrEnum
from fractions import Fraction
from typing import Any

from app.loading.mass import parse_mass, show_mass
from app.meet.rule_presets import ROUNDS_BAR, RULE_PRESETS, rule_preset
from app.meet.rule_settings import BY_KEY, SETTINGS, Kind, Setting
from app.meet.rules import OrderSystem, Rules, Until

ANY = "any"
HEAVIEST_STEP = Fraction(50)


class Unreadable(ValueError):
    """A value that the setting does not take; the message is one plain sentence."""


def read_rules(values: Mapping[str, str], unit: str = "kg") -> Rules | list[str]:
    """The rules that these texts give, or every reason why they give none, one sentence each.

    ``preset`` names what a missing setting is taken from (the rounds meet with a bar if it is missing too).
    A key that is no setting is named, never ignored.
    """
    wrong = [f"“{key}” is not a setting of the rules." for key in values if key not in {"preset", *BY_KEY}]
    preset_key = values.get("preset", ROUNDS_BAR.key)
    if preset_key not in {one.key for one in RULE_PRESETS}:
        names = ", ".join(one.key for one in RULE_PRESETS)
        return [*wrong, f"“{preset_key}” is no set of rules to start from. There are: {names}."]
    preset = rule_preset(preset_key)
    read: dict[str, Any] = {}
    for setting in SETTINGS:
        try:
            read[setting.key] = read_value(setting, values.get(setting.key, preset.value(setting.key, unit)))
        except Unreadable as refusal:
            wrong.append(str(refusal))
    if wrong:
        return wrong
    rules = Rules(preset=preset_key, **read)
    return together(rules) or rules


def preset_rules(key: str, unit: str = "kg") -> Rules:
    """The rules of a preset as they stand; KeyError if there is no such preset."""
    rules = read_rules({"preset": rule_preset(key).key}, unit)
    if isinstance(rules, list):
        raise AssertionError(" ".join(rules))  # noqa: TRY004 - a test reads every preset: a slip of ours
    return rules


def rules_document(rules: Rules) -> dict[str, str]:
    """The rules as plain texts, for storage and for the form; :func:`read_rules` reads them back."""
    return {one.name: show_value(getattr(rules, one.name)) for one in fields(rules)}


def read_value(setting: Setting, text: str) -> Any:
    """One value from its text; raises :class:`Unreadable` with what would be right."""
    text = text.strip()
    if setting.kind is Kind.MASS:
        return _mass(setting, text)
    if setting.kind is Kind.YES_NO:
        if text not in {"yes", "no"}:
            raise Unreadable(f"{setting.label}: “{text}” is neither yes nor no.")
        return text == "yes"
    if setting.kind is Kind.CHOICE:
        found = {str(value): value for value, _ in setting.choices}
        if text not in found:
            raise Unreadable(f"{setting.label}: “{text}” is none of {', '.join(found)}.")
        return found[text]
    return _number(setting, text)


def show_value(value: object) -> str:
    """A value as text."""
    if value is None:
        return ANY
    if isinstance(value, bool):
        return "yes" if value else "no"
    return show_mass(value) if isinstance(value, Fraction) else str(value)


def say_value(setting: Setting, value: object, unit: str) -> str:
    """A value as the Rules page and a printed sheet say it: ``2.5 kg``, ``in rounds``, ``any number``."""
    if isinstance(value, StrEnum):
        return dict(setting.choices)[value]
    if value is None:
        return "any number"
    word = unit if setting.kind is Kind.MASS else setting.unit
    return f"{show_value(value)} {word}".strip()


def together(rules: Rules) -> list[str]:
    """What is wrong with settings that must fit each other."""
    wrong = []
    if not rules.step or not rules.record_step:
        wrong.append("A step must be more than 0.")
    elif rules.step % rules.record_step:
        wrong.append(
            f"The step {show_mass(rules.step)} is not a multiple of the record step {show_mass(rules.record_step)}."
        )
    if rules.change_until is Until.WARNING and rules.warning_seconds > rules.seconds_to_start:
        wrong.append("The warning would come before the time to start begins.")
    if rules.seconds_following < rules.seconds_to_start:
        wrong.append("A lifter following himself or herself cannot have less time than others.")
    if rules.order_system is OrderSystem.RISING and rules.below_missed:
        wrong.append("A rising bar does not go down, so nobody can go below a missed weight.")
    return wrong


def _mass(setting: Setting, text: str) -> Fraction:
    try:
        mass = parse_mass(text.replace(",", "."))
    except ValueError as reason:
        raise Unreadable(f"{setting.label}: “{text}” is not a weight. Type a number such as 2.5.") from reason
    if not 0 <= mass <= HEAVIEST_STEP:
        raise Unreadable(f"{setting.label}: {text} must be from 0 to {show_mass(HEAVIEST_STEP)}.")
    return mass


def _number(setting: Setting, text: str) -> int | None:
    if setting.any_number and text == ANY:
        return None
    allowed = f"a whole number from {setting.least} to {setting.most}" + (
        " or “any”" if setting.any_number else ""
    )
    if not (
        text.isascii() and text.isdigit() and len(text) < 9 and setting.least <= int(text) <= setting.most
    ):
        raise Unreadable(f"{setting.label}: “{text}” must be {allowed}.")
    return int(text)
