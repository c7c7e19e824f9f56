"""The stacks of each weight: count vectors, put in the orders that the rule leaves open."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.counts import Ints
from app.planning.smaller import Alphabet, Codes, Places

Family = tuple[Codes, Places]
"""Codes of different stacks in canonical order, and their lengths."""


def sorted_family(alphabet: Alphabet, vectors: Ints, inside_first: Sequence[int]) -> Family:
    """One stack for each count vector: the kinds inside to outside as in ``inside_first``."""
    return in_order(alphabet, sorted_digits(alphabet, vectors, inside_first))


def sorted_digits(alphabet: Alphabet, vectors: Ints, inside_first: Sequence[int]) -> NDArray[np.int64]:
    """The same as rows of digits (kind + 1, padded with 0), one for each vector, in their order."""
    kinds = np.array(inside_first, np.int64)
    lengths = vectors.sum(axis=1)
    digits = np.zeros((len(vectors), alphabet.longest), np.int64)
    flat = np.repeat(np.tile(kinds + 1, len(vectors)), vectors[:, kinds].ravel())
    rows = np.repeat(np.arange(len(vectors)), lengths)
    first = np.repeat(np.cumsum(lengths) - lengths, lengths)
    digits[rows, np.arange(len(flat)) - first] = flat
    return digits


def in_order(alphabet: Alphabet, digits: NDArray[Any]) -> Family:
    """A family from rows of digits: each stack once, in canonical order."""
    codes, first = np.unique(alphabet.write(digits), return_index=True)
    return codes, np.count_nonzero(digits[first], axis=1)


def counts_of(rows: NDArray[Any], kinds: int) -> Ints:
    """Count vectors of rows of digits."""
    counts = np.zeros((len(rows), kinds), np.int64)
    for kind in range(kinds):
        counts[:, kind] = (rows == kind + 1).sum(axis=1)
    return counts
