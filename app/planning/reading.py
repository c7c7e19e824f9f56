"""From a JSON document to a :class:`PlanRequest`, or a refusal that names the key.

Settled here, where the contract is silent: rows of one face that are alike are one row with their counts
added, rows of one face that differ are refused; a count of 0 and an empty list of plates are allowed (the
bare bar can still be made); an empty list of targets has an empty answer; ``null`` stands for a
collar, a limit or a size left out.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import fields, replace
from enum import StrEnum
from fractions import Fraction
from typing import Literal, TypeVar

from app.loading.equipment import Collar, Equipment, Implement, Plate, Stack
from app.loading.mass import parse_mass, show_mass
from app.planning.checking import check_request
from app.planning.refusal import Refusal, bad_request
from app.planning.request import Access, Aim, Comfort, ComfortBy, Measure, Order, PlanRequest, Unit

MOST_TARGETS, MOST_KINDS, MOST_PIECES, MOST_EXTRA = 1000, 60, 1000, 60

_KEYS = [field.name for field in fields(PlanRequest) if field.name != "equipment"]
_KEYS += ["implement", "collar", "plates"]

Choice = TypeVar("Choice", bound=StrEnum)


def parse_request(document: object) -> PlanRequest:
    """Read a request. Raises :class:`Refusal` (``bad-request``) with a plain sentence naming the key."""
    found = _object(document, "request", "The request", _KEYS)
    request = PlanRequest(
        unit=_choice(found, "unit", Unit, Unit.KG),
        equipment=_equipment(found),
        order=_choice(found, "order", Order, Order.HEAVIEST_INSIDE),
        access=_choice(found, "access", Access, Access.OUTER_END),
        extra_plates=_whole(found.get("extra_plates", 1), "extra_plates", MOST_EXTRA),
        comfort=_comfort(found),
        finger_mm=_amount(found.get("finger_mm", 15), "finger_mm"),
        thread_s=_amount(found.get("thread_s", 0), "thread_s"),
        measure=_choice(found, "measure", Measure, Measure.PLATES),
        aim=_choice(found, "aim", Aim, Aim.TOTAL),
        limit=_limit(found.get("limit")),
        start=_faces(found.get("start", []), "start"),
        targets=_faces(_needed(found, "targets"), "targets"),
    )
    check_request(request)
    return request


def _object(value: object, key: str, name: str, allowed: list[str]) -> Mapping[str, object]:
    if not isinstance(value, dict):
        raise bad_request(key, f"{name} must be an object with keys and values.")
    for unknown in value:
        if unknown not in allowed:
            raise bad_request(str(unknown)[:60], f"{name} has no key {str(unknown)[:60]!r}.")
    return value


def _needed(found: Mapping[str, object], key: str, name: str = "The request") -> object:
    if found.get(key) is None:
        raise bad_request(key, f"{name} needs {key!r}.")
    return found[key]


def _choice(found: Mapping[str, object], key: str, kind: type[Choice], usual: Choice) -> Choice:
    value = found.get(key, usual)
    words = [choice.value for choice in kind]
    if not isinstance(value, str) or value not in words:
        raise bad_request(key, f"{key!r} must be one of {', '.join(words)}.")
    return kind(value)


def _number(value: object, key: str) -> Fraction:
    try:
        return parse_mass(value)
    except ValueError as wrong:
        raise bad_request(key, f"{key!r}: {wrong}") from None


def _amount(value: object, key: str) -> Fraction:
    number = _number(value, key)
    if number < 0:
        raise bad_request(key, f"{key!r} cannot be less than 0; it is {show_mass(number)}.")
    return number


def _size(value: object, key: str) -> Fraction:
    number = _number(value, key)
    if number <= 0:
        raise bad_request(key, f"{key!r} must be more than 0; it is {show_mass(number)}.")
    return number


def _whole(value: object, key: str, most: int) -> int:
    number = _amount(value, key)
    if number.denominator != 1 or number > most or isinstance(value, str):
        raise bad_request(key, f"{key!r} must be a whole number from 0 to {most}.")
    return int(number)


def _optional(value: object, key: str, read: Callable[[object, str], Fraction]) -> Fraction | None:
    return None if value is None else read(value, key)


def _list(value: object, key: str, most: int) -> list[object]:
    if not isinstance(value, list):
        raise bad_request(key, f"{key!r} must be a list.")
    if len(value) > most:
        raise bad_request(key, f"{key!r} has {len(value)} entries; at most {most} can be planned at once.")
    return value


def _faces(value: object, key: str) -> Stack:
    return tuple(_amount(entry, key) for entry in _list(value, key, MOST_TARGETS))


def _limit(value: object) -> Fraction | Literal["chart"] | None:
    if value is None:
        return None
    return "chart" if value == "chart" else _amount(value, "limit")


def _comfort(found: Mapping[str, object]) -> tuple[Comfort, ...]:
    rules = []
    for entry in _list(found.get("comfort", []), "comfort", 20):
        row = _object(entry, "comfort", "A row of 'comfort'", ["by", "slack"])
        _needed(row, "by", "A row of 'comfort'")
        by = _choice(row, "by", ComfortBy, ComfortBy.THICKNESS)
        rules.append(Comfort(by, _amount(row.get("slack", 0), "slack")))
    return tuple(rules)


def _equipment(found: Mapping[str, object]) -> Equipment:
    bar = _object(_needed(found, "implement"), "implement", "'implement'", ["mass", "ends", "usable_mm"])
    ends = _whole(_needed(bar, "ends", "'implement'"), "ends", 2)
    if ends == 0:
        raise bad_request("ends", "'ends' must be 2 for a bar or 1 for a belt, chain or pin.")
    implement = Implement(
        mass=_amount(_needed(bar, "mass", "'implement'"), "mass"),
        ends=ends,
        usable_mm=_optional(bar.get("usable_mm"), "usable_mm", _amount),
    )
    rows = [_plate(entry) for entry in _list(_needed(found, "plates"), "plates", MOST_KINDS)]
    return Equipment(implement, _collar(found.get("collar")), merge_rows(rows))


def _collar(value: object) -> Collar | None:
    if value is None:
        return None
    collar = _object(value, "collar", "'collar'", ["mass", "width_mm"])
    return Collar(
        mass=_amount(_needed(collar, "mass", "'collar'"), "mass"),
        width_mm=_optional(collar.get("width_mm"), "width_mm", _amount),
    )


def _plate(value: object) -> Plate:
    name = "A row of 'plates'"
    row = _object(value, "plates", name, list(Plate.__slots__))
    return Plate(
        face=_size(_needed(row, "face", name), "face"),
        count=_whole(_needed(row, "count", name), "count", MOST_PIECES),
        thickness_mm=_optional(row.get("thickness_mm"), "thickness_mm", _size),
        diameter_mm=_optional(row.get("diameter_mm"), "diameter_mm", _size),
        off_s=_amount(row.get("off_s", 1), "off_s"),
        on_s=_amount(row.get("on_s", 1), "on_s"),
    )


def merge_rows(rows: list[Plate]) -> tuple[Plate, ...]:
    """Alike rows of one face become one; differing ones are refused, since a face alone names a plate."""
    merged: dict[Fraction, Plate] = {}
    for row in rows:
        known = merged.get(row.face)
        if known and replace(known, count=0) != replace(row, count=0):
            raise Refusal(
                "bad-request",
                f"Two rows of 'plates' have the face {show_mass(row.face)} but differ; make them alike.",
                key="plates",
            )
        merged[row.face] = replace(row, count=row.count + (known.count if known else 0))
    return tuple(merged.values())
