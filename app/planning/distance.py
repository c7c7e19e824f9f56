"""The price of a change between given stacks, without the graph: one stack against many at once."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.loading.equipment import Access
from app.planning.prices import Numbers

Rows = NDArray[Any]


class Distance:
    """Prices of changes from many stacks to one, by the plates that may stay.

    off(a) + on(b) − the greatest worth (off + on) of an untouched part: the common inside (outer end), the
    worthiest common run (both ends) or the worthiest common subsequence (anywhere; Wagner and Fischer 1974).
    Time: the product of the two lengths, vectorised over the many. Stacks are rows of digits (kind + 1,
    innermost first, padded with 0).
    """

    def __init__(self, access: Access, off: Numbers, on: Numbers) -> None:
        zero = np.zeros(1, off.dtype)
        self.access = access
        self.off = np.concatenate([zero, off])
        self.on = np.concatenate([zero, on])
        self.worth = self.off + self.on

    def __call__(self, many: Rows, one: Rows) -> Numbers:
        """Prices from each row of ``many`` to the one row of ``one``, or row by row to as many."""
        gross = self.off[many].sum(axis=1) + self.on[one].sum(axis=1)
        if self.access is Access.OUTER_END:
            return np.asarray(gross - self._inside(many, one))
        stay = self._run if self.access is Access.BOTH_ENDS else self._subsequence
        return np.asarray(gross - stay(many, one))

    def _inside(self, many: Rows, one: Rows) -> Numbers:
        same = np.logical_and.accumulate(many == one, axis=1)
        return np.asarray((same * self.worth[many]).sum(axis=1))

    def _run(self, many: Rows, one: Rows) -> Numbers:
        width = many.shape[1]
        best = np.zeros(len(many), self.off.dtype)
        for slide in range(1 - width, width):
            run = np.zeros(len(many), self.off.dtype)
            for place in range(max(0, slide), min(width, slide + width)):
                kind = many[:, place]
                run = (run + self.worth[kind]) * (kind == one[:, place - slide])
                best = np.maximum(best, run)
        return best

    def _subsequence(self, many: Rows, one: Rows) -> Numbers:
        width = many.shape[1]
        best = [np.zeros(len(many), self.off.dtype) for _ in range(width + 1)]
        for place in range(width):
            diagonal, kind = best[0], many[:, place]
            worth = self.worth[kind]
            for index in range(width):
                above = best[index + 1]
                kept = diagonal + worth * (kind == one[:, index])
                best[index + 1] = np.maximum(np.maximum(above, best[index]), kept)
                diagonal = above
        return best[-1]
