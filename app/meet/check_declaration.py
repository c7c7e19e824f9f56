"""May this weight be handed in, by the rules of the meet? Every rule that it breaks, and what would be right.

A breach is data: the table shows it on the lifter's line before Enter, and may override it with a reason if it
is overridable. What cannot be overridden is what no table can decide: a weight that the plates do not make,
and an attempt that has been lifted.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import timedelta
from fractions import Fraction

from app.loading.chart import loadable
from app.loading.equipment import Equipment
from app.loading.mass import show_mass
from app.meet.check_change import change_breaches
from app.meet.model import Attempt, Result
from app.meet.moment import Breach, Moment
from app.meet.rules import OrderSystem, Rules
from app.meet.silence import ruled_default, step_up

LOOK_AROUND = 200  # steps to look up and down for a weight that would be right


@dataclass(frozen=True, slots=True)
class _Case:
    """One declaration with everything that it is judged by."""

    rules: Rules
    weight: Fraction
    attempt: Attempt
    others: Sequence[Attempt]
    moment: Moment
    equipment: Equipment
    unit: str
    record: bool

    @property
    def step(self) -> Fraction:
        return self.rules.step_for(record=self.record)

    @property
    def earlier(self) -> tuple[Attempt, ...]:
        """The lifter's attempts of this lift before this one, in order."""
        before = [one for one in self.others if one.number < self.attempt.number]
        return tuple(sorted(before, key=lambda one: one.number))

    def say(self, mass: Fraction) -> str:
        return f"{show_mass(mass)} {self.unit}"


def check_declaration(
    rules: Rules,
    weight: Fraction,
    attempt: Attempt,
    others: Sequence[Attempt],
    moment: Moment,
    equipment: Equipment,
    unit: str,
    *,
    record: bool = False,
) -> list[Breach]:
    """Every rule that ``weight`` would break, what cannot be overridden first; empty when it may stand.

    ``others`` are the lifter's other attempts of this lift. ``rules`` carry the step of this lift
    (:meth:`~app.meet.rules.Rules.for_step`). ``record``: the weight is marked as a record attempt.
    """
    case = _Case(rules, weight, attempt, others, moment, equipment, unit, record)
    if attempt.result is not Result.OPEN:
        right = "Undo its result first, or correct the result."
        return [Breach("lifted", "This attempt has been lifted.", right, overridable=False)]
    breaches = [*_physical(case), *_weight(case)]
    if weight != attempt.weight:
        breaches += _time(case)
    return breaches


def _physical(case: _Case) -> Iterator[Breach]:
    base = case.equipment.base_mass
    if case.weight < base:
        because = f"{case.say(case.weight)} is lighter than the bare bar or belt, {case.say(base)}."
        yield Breach("under-bar", because, _nearest(case), overridable=False)
    elif not loadable(case.equipment, case.weight):
        because = f"{case.say(case.weight)} cannot be made with the plates at this platform."
        yield Breach("stock", because, _nearest(case), overridable=False)


def _weight(case: _Case) -> Iterator[Breach]:
    rules, weight = case.rules, case.weight
    if case.attempt.number > 3 and not (rules.fourth_for_record and case.record):
        yield _fourth(case)
    if weight % case.step:
        yield Breach(
            "step", f"{case.say(weight)} is not a multiple of {show_mass(case.step)}.", _nearest(case)
        )
    missed = _heaviest(case.earlier, Result.MISSED)
    if missed is not None and weight < missed and not rules.below_missed:
        because = f"{case.say(weight)} is below {case.say(missed)}, which this lifter has missed."
        yield Breach("below_missed", because, _nearest(case))
    yield from _rise(case)
    bar = case.moment.bar_weight
    if rules.order_system is OrderSystem.RISING and bar is not None and weight < bar:
        because = f"The bar is at {case.say(bar)} and does not go down."
        yield Breach("order_system", because, _nearest(case))


def _rise(case: _Case) -> Iterator[Breach]:
    good = _heaviest(case.earlier, Result.GOOD)
    if good is not None and case.weight < good + _least_rise(case):
        if case.weight < good:
            because = f"{case.say(case.weight)} is below {case.say(good)}, which this lifter has lifted."
        else:
            because = (
                f"After a good lift at {case.say(good)} the least rise is {case.say(_least_rise(case))}."
            )
        yield Breach("least_rise", because, _nearest(case))
    waiting = _heaviest(case.earlier, Result.OPEN)
    if waiting is not None and case.weight < waiting:
        because = f"{case.say(case.weight)} is below {case.say(waiting)}, which this lifter has yet to lift."
        yield Breach("least_rise", because, _nearest(case))
    later = [one for one in case.others if one.number > case.attempt.number and one.weight is not None]
    lighter = min((one.weight for one in later if one.weight is not None), default=None)
    if lighter is not None and lighter < case.weight:
        because = f"A later attempt of this lifter has been handed in already, lighter: {case.say(lighter)}."
        yield Breach("least_rise", because, "Change that one too.")


def _fourth(case: _Case) -> Breach:
    if case.rules.fourth_for_record:
        return Breach(
            "fourth_for_record", "A fourth attempt is for a record only.", "Mark it as a record attempt."
        )
    right = "The Rules page can allow a fourth attempt for a record."
    return Breach("fourth_for_record", "This meet has no fourth attempts.", right)


def _time(case: _Case) -> Iterator[Breach]:
    if case.attempt.weight is not None:
        yield from change_breaches(case.rules, case.attempt, case.moment, case.unit)
        return
    since, seconds = case.moment.asked_since, case.rules.seconds_to_hand_in
    if since is None or not seconds or case.moment.now <= since + timedelta(seconds=seconds):
        return
    before = case.earlier[-1] if case.earlier else None
    default = ruled_default(case.rules, before, before.weight if before else None)
    if default == case.weight:
        return
    late = int((case.moment.now - since).total_seconds()) - seconds
    right = "The attempt is forfeited." if default is None else f"The default stands: {case.say(default)}."
    because = f"Handed in {max(late, 1)} s after the {seconds} s had run out."
    yield Breach("seconds_to_hand_in", because, right)


def _heaviest(attempts: Sequence[Attempt], result: Result) -> Fraction | None:
    found = [one.weight for one in attempts if one.weight is not None and one.result is result]
    return max(found, default=None)


def _least_rise(case: _Case) -> Fraction:
    """A record attempt may rise by as little as the record step."""
    return min(case.rules.least_rise, case.rules.record_step) if case.record else case.rules.least_rise


def _floor(case: _Case) -> Fraction:
    """The least weight that no rule about weights forbids."""
    floors = [case.equipment.base_mass]
    good, missed = _heaviest(case.earlier, Result.GOOD), _heaviest(case.earlier, Result.MISSED)
    waiting = _heaviest(case.earlier, Result.OPEN)
    if good is not None:
        floors.append(good + _least_rise(case))
    if missed is not None and not case.rules.below_missed:
        floors.append(missed)
    if waiting is not None:
        floors.append(waiting)
    if case.rules.order_system is OrderSystem.RISING and case.moment.bar_weight is not None:
        floors.append(case.moment.bar_weight)
    return max(floors)


def _nearest(case: _Case) -> str:
    """The weights next to this one that keep every rule about weights, as a sentence."""
    step, floor = case.step, _floor(case)
    down = case.weight // step * step
    lower = (down - step * k for k in range(LOOK_AROUND) if floor <= down - step * k < case.weight)
    start = max(down + step, step_up(floor, step))
    upper = (start + step * k for k in range(LOOK_AROUND))
    below = next((mass for mass in lower if loadable(case.equipment, mass)), None)
    above = next((mass for mass in upper if loadable(case.equipment, mass)), None)
    near = [show_mass(mass) for mass in (below, above) if mass is not None]
    if not near:
        return "No weight near it can be made."
    return f"{'Nearest' if len(near) == 2 else 'Next possible'}: {' or '.join(near)}."
