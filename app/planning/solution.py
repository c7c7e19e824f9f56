"""What an engine gives back: stacks of kinds, their price, and what is proved about it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.course import fees_of
from app.planning.distance import Distance
from app.planning.problem import Problem

Kinds = tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Solution:
    """A chain of stacks, one for each attempt, as kinds from inside to outside.

    ``total`` is its packed price, ``worst`` its slowest change in steps of the measure. ``bound`` is ``None``
    when the chain is proved best; otherwise no chain's aimed figure (sum or slowest change, in steps of the
    measure) is below it. ``kept`` says whether the asked limit is kept, if there is one.
    """

    stacks: tuple[Kinds, ...]
    total: int
    worst: int
    bound: int | None = None
    kept: bool | None = None


def priced(problem: Problem, stacks: Sequence[Kinds], *, bound: int | None = None) -> Solution:
    """The solution with these stacks, priced change by change."""
    prices = problem.prices
    rows = digits(problem, [problem.kit.start, *stacks])
    changes = Distance(problem.request.access, prices.off, prices.on)(rows[:-1], rows[1:])
    if len(stacks):
        changes = changes + fees_of(problem, np.array(problem.kit.shares, np.int64), rows[1:])
    costs = [int(change) for change in changes]
    worst = max((cost // prices.fold for cost in costs), default=0)
    return Solution(tuple(stacks), sum(costs), worst, bound, kept_by(problem, worst))


def kept_by(problem: Problem, worst: int) -> bool | None:
    """Whether a slowest change keeps the asked limit; ``None`` without a limit."""
    limit = problem.limit()
    return None if limit is None else worst <= limit


def digits(problem: Problem, stacks: Sequence[Kinds]) -> NDArray[np.int64]:
    """Stacks of kinds as rows of digits."""
    rows = np.zeros((len(stacks), problem.alphabet.longest), np.int64)
    for row, stack in zip(rows, stacks, strict=True):
        row[: len(stack)] = np.array(stack, np.int64) + 1
    return rows


def kinds(rows: NDArray[Any]) -> list[Kinds]:
    """Rows of digits as stacks of kinds."""
    return [tuple(digit - 1 for digit in row if digit) for row in rows.tolist()]
