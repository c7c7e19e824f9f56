"""Balance: the one comfort rule that cannot be judged without listing every order."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from app.planning.arrange import Family, all_orders, how_many_orders
from app.planning.course import LISTED_BYTES, Bars, set_bars
from app.planning.hard import Hunt
from app.planning.problem import Problem
from app.planning.refusal import bad_request
from app.planning.solution import Solution
from app.planning.watch import OutOfTime, TooLarge, Watch
from app.planning.ways import by_sweep

SAMPLE = 400


@dataclass(frozen=True, slots=True)
class Listed:
    """The comfortable stacks of every weight, and what its comfort rules allow at most."""

    families: list[Family]
    bars: dict[int, Bars]

    def sampled(self, size: int) -> list[Family]:
        """At most so many of each weight's stacks, evenly spread over their canonical order."""
        places = [
            np.unique(np.linspace(0, len(c) - 1, min(size, len(c))).astype(int)) for c, _ in self.families
        ]
        return [(codes[at], lengths[at]) for (codes, lengths), at in zip(self.families, places, strict=True)]


def list_comfortable(problem: Problem, watch: Watch) -> Listed:
    """List the orders of one weight after another and keep the comfortable ones.

    Time is linear in all orders; memory in the orders of one weight and in what is kept. Raises
    :class:`Refusal` when that is too much: then it is not known which stacks are comfortable enough.
    """
    kit, alphabet, found, bars = problem.kit, problem.alphabet, [], {}
    try:
        for share in problem.distinct:
            watch.check()
            vectors = problem.vectors[share]
            watch.room(how_many_orders(kit, problem.request.order, vectors) * LISTED_BYTES * 3)
            codes = np.sort(all_orders(kit, problem.request.order, alphabet, vectors))
            bars[share], kept = set_bars(problem, alphabet.read(codes))
            found.append((codes[kept], alphabet.lengths(codes[kept])))
            watch.room(sum(len(some) for some, _ in found) * 16)
    except (OutOfTime, TooLarge):
        because = "There are too many orders to find the best balanced; allow fewer extra plates."
        raise bad_request("comfort", because) from None
    return Listed(found, bars)


def by_listing(problem: Problem, watch: Watch, most_stacks: int) -> Solution:
    """Sweep over what comfort leaves; if that is too large, hunt, starting from a plan over a sample of it."""
    listed = list_comfortable(problem, watch)
    known = replace(by_sweep(problem, watch, listed.sampled(1)), bound=0)
    try:
        return by_sweep(problem, watch, listed.families)
    except TooLarge:
        pass
    except OutOfTime:
        return known
    try:
        known = replace(by_sweep(problem, watch, listed.sampled(SAMPLE)), bound=0)
        hunt = Hunt(problem, watch, most_stacks=most_stacks, bars=listed.bars)
        known = replace(known, bound=hunt.floor())
        return hunt.best(replace(known, bound=None))
    except (OutOfTime, TooLarge):
        return known
