"""From the table of nested stays to one stack for each attempt."""

from __future__ import annotations

from app.planning.prices import Numbers
from app.planning.stays import Stays

Stack = tuple[int, ...]


def best_by_stays(stays: Stays) -> list[Stack]:
    """One chain of least total price, as kinds from inside to outside for every attempt."""
    stays.fill()
    stacks: list[Stack] = [()] * len(stays.runs)
    waiting = _from_start(stays)
    while waiting:
        waiting += _unfold(stays, stacks, *waiting.pop())
    return [stack for stack, (_, times) in zip(stacks, stays.runs, strict=True) for _ in range(times)]


Task = tuple[int, int, int, Stack]
"""First and last attempt, the inside and the stack that lies under all of them."""


def _from_start(stays: Stays) -> list[Task]:
    """The start is attempt −1, whose stack is given: ``best[j][r]`` is the least price of the attempts up to j
    when the r innermost plates of the start lie untouched under all of them. Its plates pay no on."""
    prices, start, attempts = stays.problem.prices, stays.problem.kit.start, len(stays.runs)
    prefix = _prefixes(stays, start)
    best = [[prices.never] * (len(start) + 1) for _ in range(attempts + 1)]
    best[0][len(start)] = 0
    cut: dict[tuple[int, int], int] = {}
    for last in range(attempts + 1):
        for inner in range(len(start), -1, -1):
            for middle in range(last):
                value = best[middle][inner] + int(stays.table[last - 1 - middle][middle, prefix[inner]])
                if value < best[last][inner]:
                    best[last][inner], cut[last, inner] = value, middle
            if inner < len(start):
                value = best[last][inner + 1] + _leaves(stays, start, prefix, inner, last)
                if value < best[last][inner]:
                    best[last][inner] = value
                    cut.pop((last, inner), None)
    tasks, last, inner = [], attempts, 0
    while last or inner < len(start):
        middle = cut.get((last, inner), -1)
        if middle < 0:
            inner += 1
        else:
            tasks.append((middle, last - 1, prefix[inner], start[:inner]))
            last = middle
    return tasks


def _prefixes(stays: Stays, start: Stack) -> list[int]:
    """The insides of the start's innermost plates; the sentinel (priced never) from where the rule breaks."""
    prefix = [0]
    for kind in start:
        here = prefix[-1]
        prefix.append(int(stays.insides.child[here, kind]) if here < len(stays.insides) else here)
    return prefix


def _leaves(stays: Stays, start: Stack, prefix: list[int], inner: int, last: int) -> int:
    """The price of the stay of one plate of the start, up to an attempt: it comes off, if hands still follow,
    and threads at every attempt."""
    prices = stays.problem.prices
    price = int(prices.off[start[inner]]) if last < len(stays.runs) else 0
    if prices.thread and prefix[inner] < len(stays.insides):
        apart = int(stays.insides.apart[prefix[inner], start[inner]])
        price += int(stays.before[last]) * apart * prices.packed_thread()
    return price


def _unfold(
    stays: Stays, stacks: list[Stack], first: int, last: int, inside: int, under: Stack
) -> list[Task]:
    """The line of the recurrence that gives the table's value: a stay throughout (heaviest first), the stack
    itself, or the first cut."""
    length = last - first
    value = stays.table[length][first, inside]
    for kind, larger in enumerate(stays.insides.child[inside].tolist()):
        if larger < len(stays.insides):
            cost = stays.stay(length, kind, stays.insides.levels[0] * 0 + inside)[first, 0]
            if stays.table[length][first, larger] + cost == value:
                return [(first, last, larger, (*under, kind))]
    if length == 0:
        stacks[first] = under
        return []
    for cut in range(first, last):
        left: Numbers = stays.table[cut - first][first, inside]
        if left + stays.table[last - cut - 1][cut + 1, inside] == value:
            return [(first, cut, inside, under), (cut + 1, last, inside, under)]
    raise AssertionError("the table of stays holds a price that nothing explains")
