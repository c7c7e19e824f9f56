"""The price of a change between given stacks, without the graph: one stack against many at once."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.loading.equipment import Access
from app.planning.prices import Numbers
from app.planning.smaller import Alphabet, Codes


class Distance:
    """Prices of changes from many stacks to one, by the plates that may stay.

    off(a) + on(b) − the greatest worth (off + on) of an untouched part: the common inside (outer end), the
    worthiest common run (both ends) or the worthiest common subsequence (anywhere; Wagner and Fischer 1974).
    Time: the product of the two lengths, vectorised over the many.
    """

    def __init__(self, alphabet: Alphabet, access: Access, off: Numbers, on: Numbers) -> None:
        zero = np.zeros(1, off.dtype)
        self.alphabet = alphabet
        self.access = access
        self.off = np.concatenate([zero, off])
        self.on = np.concatenate([zero, on])

    def __call__(self, many: Codes, one: Codes) -> Numbers:
        """Prices from the stacks ``many`` to the stack ``one`` (an array of one code)."""
        rows = self.alphabet.read(many).astype(np.int64)
        target = self.alphabet.read(one)[0].astype(np.int64)
        target = target[target > 0]
        gross = self.off[rows].sum(axis=1) + self.on[target].sum()
        stay = {
            Access.OUTER_END: self._inside,
            Access.BOTH_ENDS: self._run,
            Access.ANYWHERE: self._subsequence,
        }[self.access]
        return np.asarray(gross - stay(rows, target))

    def _worth(self, kind: Any) -> Any:
        return self.off[kind] + self.on[kind]

    def _inside(self, rows: NDArray[Any], target: NDArray[Any]) -> Numbers:
        width = min(rows.shape[1], len(target))
        same = np.logical_and.accumulate(rows[:, :width] == target[:width], axis=1)
        return np.asarray((same * self._worth(target[:width])).sum(axis=1))

    def _run(self, rows: NDArray[Any], target: NDArray[Any]) -> Numbers:
        best = np.zeros(len(rows), self.off.dtype)
        for slide in range(1 - len(target), rows.shape[1]):
            run = np.zeros(len(rows), self.off.dtype)
            for place in range(max(0, slide), min(rows.shape[1], slide + len(target))):
                kind = target[place - slide]
                run = (run + self._worth(kind)) * (rows[:, place] == kind)
                best = np.maximum(best, run)
        return best

    def _subsequence(self, rows: NDArray[Any], target: NDArray[Any]) -> Numbers:
        best = [np.zeros(len(rows), self.off.dtype) for _ in range(len(target) + 1)]
        for place in range(rows.shape[1]):
            diagonal = best[0]
            for index, kind in enumerate(target):
                above = best[index + 1]
                kept = diagonal + self._worth(kind) * (rows[:, place] == kind)
                best[index + 1] = np.maximum(np.maximum(above, best[index]), kept)
                diagonal = above
        return best[-1]
