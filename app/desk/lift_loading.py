"""How a lift is to be loaded: the settings as the director types them, checked before they are kept."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from enum import StrEnum
from fractions import Fraction
from typing import TypeVar

from app.desk.entry import Desk, Work, platform_entry
from app.desk.equipment import Form
from app.desk.errors import NotAllowedNow
from app.desk.planned import wish_of
from app.desk.wish import Wish, plan_request, ready_made, wish_document
from app.loading.chart import loadable
from app.loading.equipment import Access, Order
from app.loading.mass import show_mass
from app.meet.model import Result
from app.planning import Aim, Budget, ComfortBy, Frontier, Measure, Refusal, frontier
from app.planning.belts import BELT_COMFORT
from app.store.engine import reading
from app.store.picture import Picture, get, picture
from app.store.tables import LiftRow

COMFORT_ROWS = 4
MOST_EXTRA = 3

WORDS: dict[str, dict[str, str]] = {
    "order": {
        Order.HEAVIEST_INSIDE: "heaviest inside, lighter outward",
        Order.WIDEST_INSIDE: "widest inside, narrower outward",
        Order.NO_VALLEY: "no plate between two wider ones",
        Order.ANY: "in any order",
    },
    "access": {
        Access.OUTER_END: "from the outer end only (a sleeve, a pin, a chain opened at one end)",
        Access.BOTH_ENDS: "from both ends (a chain that opens at either side)",
        Access.ANYWHERE: "any plate (they stand in a cradle)",
    },
    "measure": {
        Measure.PLATES: "fewest plates",
        Measure.MASS: "least kilograms",
        Measure.TIME: "least time",
    },
    "aim": {Aim.TOTAL: "in total", Aim.WORST: "at the slowest change, then in total"},
    "extra_plates": {"0": "the fewest only", "1": "one more", "2": "two more", "3": "three more"},
    "by": {
        "": "–",
        ComfortBy.THICKNESS: "thinnest",
        ComfortBy.BALANCE: "best balanced",
        ComfortBy.RIMS: "smoothest rims",
        ComfortBy.THREADING: "easiest to thread",
    },
}

Kind = TypeVar("Kind", bound=StrEnum)


def save_loading(desk: Desk, platform_id: int, lift_id: int, typed: Mapping[str, str], *, who: str) -> None:
    """Keep the settings of a lift, if the planner can work with them and with this platform's plates."""
    wish, wrong = read_form(typed)
    if wrong:
        raise NotAllowedNow(" ".join(wrong))
    keep_wish(desk, platform_id, lift_id, wish, who=who)


def keep_wish(desk: Desk, platform_id: int, lift_id: int, wish: Wish, *, who: str) -> None:
    """Keep settings that are complete already: typed, ready-made, or picked from the table of figures."""
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        row = _lift(work, now, lift_id)
        _check_answerable(now, lift_id, wish)
        document = wish_document(wish)
        if wish_of(now, lift_id) != wish:
            row.loading = document
        work.what = f"{row.name}: how it is loaded"


def use_ready_made(desk: Desk, platform_id: int, lift_id: int, name: str, *, who: str) -> None:
    """Order and comfort of a belt lift from the ready-made settings; everything else stays as it is."""
    if name not in BELT_COMFORT:
        raise NotAllowedNow(f"Choose one of the ready-made settings: {', '.join(BELT_COMFORT)}.")
    with reading(desk.engine) as session:
        standing = wish_of(picture(session, platform_id), lift_id)
    made = ready_made(name)
    keep_wish(desk, platform_id, lift_id, replace(standing, order=made.order, comfort=made.comfort), who=who)


def use_choice(
    desk: Desk, platform_id: int, lift_id: int, extra_plates: str, aim: str, measure: str, *, who: str
) -> None:
    """What shall be small, as picked from the table of figures; everything else stays as it is."""
    picked = {"extra_plates": extra_plates, "aim": aim, "measure": measure}
    if any(value not in WORDS[name] for name, value in picked.items()):
        raise NotAllowedNow("Pick a row of the table of figures.")
    with reading(desk.engine) as session:
        standing = wish_of(picture(session, platform_id), lift_id)
    wish = replace(standing, extra_plates=int(extra_plates), aim=Aim(aim), measure=Measure(measure))
    keep_wish(desk, platform_id, lift_id, wish, who=who)


def figures(desk: Desk, platform_id: int, lift_id: int, flight_id: int, budget: Budget) -> Frontier | None:
    """What each choice would cost on everything known of a flight's lift, from an empty bar; None if nothing is.

    Weights nobody has handed in stand in at their default, so that the table can be looked at the day before.
    """
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    programme = now.programme(lift_id)
    equipment = now.equipment(lift_id)
    unlifted = replace(programme, attempts=tuple(replace(a, result=Result.OPEN) for a in programme.attempts))
    targets = [turn.weight for turn in unlifted.order(flight_id, lift_id) if loadable(equipment, turn.weight)]
    if not targets:
        return None
    return frontier(plan_request(now.unit, equipment, wish_of(now, lift_id), (), targets), budget)


def _lift(work: Work, now: Picture, lift_id: int) -> LiftRow:
    if lift_id not in now.loading:
        raise NotAllowedNow("This lift is not on this platform. Go back and choose it again.")
    return get(work.session, LiftRow, lift_id, "lift")


def _check_answerable(now: Picture, lift_id: int, wish: Wish) -> None:
    """The planner's own reader says what is missing, for instance the diameter of a plate."""
    try:
        plan_request(now.unit, now.equipment(lift_id), wish, (), ())
    except Refusal as refused:
        raise NotAllowedNow(refused.because) from refused


def read_form(typed: Mapping[str, str]) -> tuple[Wish, list[str]]:
    """The typed settings; what is wrong with them as sentences (then the settings are not to be used)."""
    form = Form(typed, "Settings")
    extra = typed.get("extra_plates", "1")
    if extra not in WORDS["extra_plates"]:
        form.wrong.append("Settings: choose how many plates over the fewest.")
    wish = Wish(
        order=_choice(form, "order", Order.HEAVIEST_INSIDE),
        access=_choice(form, "access", Access.OUTER_END),
        extra_plates=int(extra) if extra in WORDS["extra_plates"] else 1,
        measure=_choice(form, "measure", Measure.PLATES),
        aim=_choice(form, "aim", Aim.TOTAL),
        comfort=_comfort(form),
        plate_s=form.mass("plate_s", "seconds a plate", needed=False, zero=True) or Fraction(0),
        thread_s=form.mass("thread_s", "seconds to thread", needed=False, zero=True) or Fraction(0),
        finger_mm=_or_default(form, "finger_mm", "distance for the finger", Wish().finger_mm),
        chart_limit=typed.get("chart_limit") == "yes",
        chart_only=typed.get("chart_only") == "yes",
        least_plates=_whole(form, "least_plates"),
        least_mass=form.mass("least_mass", "least saving", needed=False, zero=True) or Fraction(0),
    )
    return wish, form.wrong


def _or_default(form: Form, column: str, what: str, default: Fraction) -> Fraction:
    value = form.mass(column, what, needed=False, zero=True)
    return default if value is None else value


def _choice(form: Form, name: str, default: Kind) -> Kind:
    text = form.row.get(name, default.value)
    if text not in WORDS[name]:
        form.wrong.append(
            f"Settings: “{text}” is not a choice. Choose one of: {', '.join(WORDS[name].values())}."
        )
        return default
    return type(default)(text)


def _comfort(form: Form) -> tuple[tuple[str, str], ...]:
    rules = []
    for place in range(1, COMFORT_ROWS + 1):
        by = form.row.get(f"by_{place}", "")
        if by not in WORDS["by"]:
            form.wrong.append(f"Settings: comfort rule {place} is not one of the choices.")
        elif by:
            slack = form.mass(f"slack_{place}", f"slack of rule {place}", needed=False, zero=True)
            rules.append((str(by), show_mass(slack or Fraction(0))))
    return tuple(rules)


def _whole(form: Form, column: str) -> int:
    text = form.row.get(column, "").strip() or "0"
    if text.isascii() and text.isdigit() and len(text) <= 3:
        return int(text)
    form.wrong.append(f"Settings: “{text}” is not a whole number of plates.")
    return 0


def summary(wish: Wish, unit: str) -> str:
    """The settings in a line, for a list of lifts."""
    measure = {Measure.MASS: f"least {unit}"}.get(wish.measure, WORDS["measure"][wish.measure])
    parts: Sequence[str] = (
        "chart stacks only" if wish.chart_only else f"{measure} {WORDS['aim'][wish.aim]}",
        WORDS["order"][wish.order],
    )
    return "; ".join(parts)
