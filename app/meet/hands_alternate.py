"""One loader alone at a bar on a rack or bench: the ends in turns, never one far ahead of the other.

Never more than one big plate of difference between the ends (``trade.md`` E, racked bar): the dangerous moment
is the last plate of the lighter side. The usual cautions: nobody under the bar, a hand on the heavy end,
two people for what is heavy or high, and the meet's own rules and trained people before this list.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction

from app.loading.change import HandList, hand_list
from app.loading.equipment import Access, Equipment, Stack
from app.loading.mass import show_mass
from app.meet.tipping import Balance, Rests, balance

SIDES = ("left", "right")


class Move(StrEnum):
    """What the hands do."""

    OFF = "off"
    ON = "on"


@dataclass(frozen=True, slots=True)
class HandStep:
    """One thing for one pair of hands; ``face`` None is the collar."""

    side: str
    move: Move
    face: Fraction | None


@dataclass(frozen=True, slots=True)
class HandOrder:
    """The steps in order. ``apart``: the greatest difference between the ends on the way.

    ``within``: never more than one big plate. ``tips_at``: the first step after which the bar may turn over,
    with ``balance`` the worst on the way (None: no supports were told, or a thickness is not known).
    """

    steps: tuple[HandStep, ...]
    apart: Fraction
    within: bool
    balance: Balance | None = None
    tips_at: int | None = None


def alternate(
    equipment: Equipment,
    before: tuple[Stack, Stack],
    after: Stack,
    rests: Rests | None = None,
) -> HandOrder:
    """The whole change of both ends for one loader: collars off, plates off, plates on, collars on.

    Each end's own order is kept (outermost off first, innermost on first). Of all ways to take turns: the
    least greatest difference between the ends; then least difference summed over the steps, which brings the
    ends level again as soon as can be; then fewest walks round the bar. So ends that were alike are done
    left, right, right, left, … Exact, over the grid of how far each end is: time and memory are the product
    of the two lengths. ``before`` may be unequal, as after a misload. ``ValueError`` for a belt.
    """
    if equipment.implement.ends != 2:
        raise ValueError("A belt has one stack: there are no two ends to take in turns.")
    hands = [_steps(side, equipment, stack, after) for side, stack in zip(SIDES, before, strict=True)]
    masses = [[*_masses(equipment, stack, steps)] for stack, steps in zip(before, hands, strict=True)]
    paths = _Grid(masses[0], masses[1])
    steps = tuple(hands[side][at] for side, at in paths.walk())
    big = max((*before[0], *before[1], *after), default=Fraction(0))
    found = HandOrder(steps, paths.apart, within=paths.apart <= big)
    return found if rests is None else _watched(found, equipment, before, rests)


def _steps(side: str, equipment: Equipment, before: Stack, after: Stack) -> list[HandStep]:
    hands: HandList = hand_list(before, after, Access.OUTER_END)
    if not hands.off and not hands.on:
        return []
    steps = [HandStep(side, Move.OFF, face) for face in hands.off]
    steps += [HandStep(side, Move.ON, face) for face in hands.on]
    if equipment.collar is not None:
        steps = [HandStep(side, Move.OFF, None), *steps, HandStep(side, Move.ON, None)]
    return steps


def _masses(equipment: Equipment, before: Stack, steps: Sequence[HandStep]) -> list[Fraction]:
    """The mass of one end before and after each of its steps."""
    collar = equipment.collar.mass if equipment.collar else Fraction(0)
    masses = [sum(before, Fraction(0)) + collar]
    for step in steps:
        face = collar if step.face is None else step.face
        masses.append(masses[-1] + (face if step.move is Move.ON else -face))
    return masses


class _Grid:
    """All ways to take turns, as paths over how many steps each end has done."""

    def __init__(self, left: list[Fraction], right: list[Fraction]) -> None:
        self.difference = [[abs(one - other) for other in right] for one in left]
        self.last = (len(left) - 1, len(right) - 1)
        self.apart = self._least_greatest()

    def _least_greatest(self) -> Fraction:
        """The least greatest difference of any path (a bottleneck: the better neighbour, or this cell)."""
        best: dict[tuple[int, int], Fraction] = {}
        for left in range(self.last[0] + 1):
            for right in range(self.last[1] + 1):
                ways = [best[cell] for cell in ((left - 1, right), (left, right - 1)) if cell in best]
                best[left, right] = max(self.difference[left][right], min(ways, default=Fraction(0)))
        return best[self.last]

    def walk(self) -> list[tuple[int, int]]:
        """(side, step of that side) along the best path within the least greatest difference."""
        cost: dict[tuple[int, int, int], tuple[Fraction, int]] = {}
        for left in range(self.last[0], -1, -1):
            for right in range(self.last[1], -1, -1):
                for side in (0, 1):
                    found = self._from_here(cost, left, right, side)
                    if found is not None:
                        cost[left, right, side] = found
        side, at, path = 0, (0, 0), []
        while at != self.last:
            side = min(self._ways(cost, *at, side))[1]
            path.append((side, at[side]))
            at = (at[0] + (side == 0), at[1] + (side == 1))
        return path

    def _from_here(
        self, cost: dict[tuple[int, int, int], tuple[Fraction, int]], left: int, right: int, side: int
    ) -> tuple[Fraction, int] | None:
        here = self.difference[left][right]
        if here > self.apart:
            return None
        if (left, right) == self.last:
            return here, 0
        ways = self._ways(cost, left, right, side)
        if not ways:
            return None
        (rest, walks), _ = min(ways)
        return here + rest, walks

    def _ways(
        self, cost: dict[tuple[int, int, int], tuple[Fraction, int]], left: int, right: int, side: int
    ) -> list[tuple[tuple[Fraction, int], int]]:
        """The rest of the way by the side that goes next, walks counted."""
        ways = []
        for next_side, cell in enumerate(((left + 1, right, 0), (left, right + 1, 1))):
            if cell in cost:
                rest, walks = cost[cell]
                ways.append(((rest, walks + (next_side != side)), next_side))
        return ways


def _watched(found: HandOrder, equipment: Equipment, before: tuple[Stack, Stack], rests: Rests) -> HandOrder:
    """The same steps with the worst balance on the way."""
    stacks = [list(before[0]), list(before[1])]
    collars = [equipment.collar is not None] * 2
    worst, tips_at = Balance.STAYS, None
    for at, step in enumerate(found.steps):
        side = SIDES.index(step.side)
        if step.face is None:
            collars[side] = step.move is Move.ON
        elif step.move is Move.OFF:
            stacks[side].pop()
        else:
            stacks[side].append(step.face)
        now = balance(equipment, rests, tuple(stacks[0]), tuple(stacks[1]), (collars[0], collars[1]))
        if now is None:
            return found
        worst = max(worst, now, key=list(Balance).index)
        if now is Balance.TIPS and tips_at is None:
            tips_at = at
    return HandOrder(found.steps, found.apart, found.within, worst, tips_at)


def caution(found: HandOrder, unit: str) -> str | None:
    """What the loader must be told before the first plate; None where nothing special holds.

    Where no order of one loader's steps is safe, it says so: a second pair of hands, or the bar on the floor.
    """
    if found.tips_at is not None:
        return (
            "One loader alone must not do this: the bar may turn over. Get a second person to hold the bar."
        )
    if not found.within:
        return (
            f"The ends differ by {show_mass(found.apart)} {unit} on the way, more than one big plate. "
            "Get a second person, or take the bar down first."
        )
    if found.balance is Balance.LITTLE_MARGIN:
        return "The bar stays with little to spare: keep a hand on the heavy end, nobody near it."
    return None


def in_words(steps: Sequence[HandStep], say: Callable[[Fraction], str] = show_mass) -> tuple[str, ...]:
    """``left: collar off``, ``right: 25 off``, in order."""
    return tuple(
        f"{step.side}: {'collar' if step.face is None else say(step.face)} {step.move}" for step in steps
    )
