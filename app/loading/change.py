"""From one stack to the next: which plates come off, which go on, and where."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import takewhile
from math import lcm

from app.loading.equipment import Access, Stack

Worth = Mapping[Fraction, int]
"""What not having to touch a plate of this face is worth; values add."""


@dataclass(frozen=True, slots=True)
class HandList:
    """Plates off, outermost first, with their places in the stack before; plates on, innermost first, with
    their places in the stack after (0 = innermost). What is not named is not touched."""

    off: Stack
    off_at: tuple[int, ...]
    on: Stack
    on_at: tuple[int, ...]


def fewest_plates(stack: Stack) -> Worth:
    """The usual worth: every plate counts one, and among equals the heavier stays."""
    scale = lcm(*(face.denominator for face in stack))
    more_than_all = sum(int(face * scale) for face in stack) + 1
    return {face: more_than_all + int(face * scale) for face in stack}


def hand_list(before: Stack, after: Stack, access: Access, worth: Worth | None = None) -> HandList:
    """The least work that turns ``before`` into ``after``.

    Outer end: the innermost plates that both share stay. Both ends: one unbroken run that both share stays.
    Anywhere: any common subsequence stays. Of all that may stay, what is worth most does (usually most
    plates, then most mass); of equals, what is found innermost. Time is the product of the two lengths.
    """
    if worth is None:
        worth = fewest_plates(before)
    if access is Access.OUTER_END:
        kept = _shared_inside(before, after)
    elif access is Access.BOTH_ENDS:
        kept = _best_run(before, after, worth)
    else:
        kept = _best_subsequence(before, after, worth)
    stays_before = {place for place, _ in kept}
    stays_after = {place for _, place in kept}
    off_at = tuple(place for place in reversed(range(len(before))) if place not in stays_before)
    on_at = tuple(place for place in range(len(after)) if place not in stays_after)
    return HandList(
        off=tuple(before[place] for place in off_at),
        off_at=off_at,
        on=tuple(after[place] for place in on_at),
        on_at=on_at,
    )


def apply(before: Stack, hands: HandList) -> Stack:
    """The stack after the hand list has been done; raises ``ValueError`` if it does not fit ``before``."""
    if tuple(before[place] for place in hands.off_at) != hands.off:
        raise ValueError("The plates to take off are not where the list says.")
    left = [face for place, face in enumerate(before) if place not in set(hands.off_at)]
    for face, place in zip(hands.on, hands.on_at, strict=True):
        if place > len(left):
            raise ValueError("A plate would go on with nothing inside it.")
        left.insert(place, face)
    return tuple(left)


Kept = Sequence[tuple[int, int]]


def _shared_inside(before: Stack, after: Stack) -> Kept:
    pairs = zip(before, after, strict=False)
    shared = sum(1 for _ in takewhile(lambda pair: pair[0] == pair[1], pairs))
    return [(place, place) for place in range(shared)]


def _best_run(before: Stack, after: Stack, worth: Worth) -> Kept:
    best: Kept = []
    most = 0
    for first in range(len(before)):
        for second in range(len(after)):
            run = _shared_inside(before[first:], after[second:])
            value = sum(worth[before[first + step]] for step, _ in run)
            if value > most:
                most, best = value, [(first + step, second + step) for step, _ in run]
    return best


def _best_subsequence(before: Stack, after: Stack, worth: Worth) -> Kept:
    """The worthiest common subsequence (Wagner and Fischer 1974, with insertions and deletions only)."""
    best = [[0] * (len(after) + 1) for _ in range(len(before) + 1)]
    for first in reversed(range(len(before))):
        for second in reversed(range(len(after))):
            most = max(best[first + 1][second], best[first][second + 1])
            if before[first] == after[second]:
                most = max(most, worth[before[first]] + best[first + 1][second + 1])
            best[first][second] = most
    kept, first, second = [], 0, 0
    while first < len(before) and second < len(after):
        here, pair = best[first][second], best[first + 1][second + 1]
        if before[first] == after[second] and here == worth[before[first]] + pair:
            kept.append((first, second))
            first, second = first + 1, second + 1
        elif here == best[first + 1][second]:
            first += 1
        else:
            second += 1
    return kept
