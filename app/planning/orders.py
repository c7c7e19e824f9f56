"""The order rules on many stacks at once."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.problem import Problem
from app.planning.request import Order


def obeying(problem: Problem, rows: NDArray[Any]) -> NDArray[np.bool_]:
    """Which rows of digits (padded with 0 outside) obey the request's order.

    All four rules are inherited: a stack that obeys still does with any plate taken out.
    """
    order, kit = problem.request.order, problem.kit
    if order is Order.ANY or rows.shape[1] < 2:
        return np.ones(len(rows), np.bool_)
    both = rows[:, 1:] > 0
    if order is Order.HEAVIEST_INSIDE:
        return np.asarray((~both | (rows[:, 1:] >= rows[:, :-1])).all(axis=1))
    wide = np.array([0, *kit.diameter])[rows]
    rises = both & (wide[:, 1:] > wide[:, :-1])
    if order is Order.WIDEST_INSIDE:
        return np.asarray(~rises.any(axis=1))
    falls = both & (wide[:, 1:] < wide[:, :-1])
    return np.asarray(~(rises & np.logical_or.accumulate(falls, axis=1)).any(axis=1))
