"""The graph of smaller stacks: every stack, and all that single plates off can leave of it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.loading.equipment import Access
from app.planning.watch import Watch

Codes = NDArray[Any]  # int64, or Python integers where a stack needs more than 62 bits
Places = NDArray[np.int64]

# Of one node and one edge, copies in the parts and values of the sweeps included.
NODE_BYTES, EDGE_BYTES = 100, 30


@dataclass(frozen=True, slots=True)
class Alphabet:
    """How a stack is written as one number: ``longest`` digits of ``bits`` each, the innermost plate first,
    digit 0 for no plate and k + 1 for a plate of kind k. Numbers of stacks sort like the stacks, heavier
    plates inside first, so the order of a list never depends on how the request listed its plates."""

    bits: int
    longest: int

    @classmethod
    def of(cls, kinds: int, longest: int) -> Alphabet:
        return cls(max(1, kinds.bit_length()), max(1, longest))

    @property
    def dtype(self) -> Any:
        return np.int64 if self.bits * self.longest <= 62 else object

    def shift(self, place: int) -> int:
        return self.bits * (self.longest - 1 - place)

    def write(self, digits: NDArray[Any]) -> Codes:
        """Codes of stacks given as rows of digits, padded with 0."""
        codes = np.zeros(len(digits), self.dtype)
        for place in range(digits.shape[1]):
            codes = codes | (digits[:, place].astype(self.dtype) << self.shift(place))
        return codes

    def digit(self, codes: Codes, place: int) -> Places:
        """The digit of every code at one place."""
        mask = (1 << self.bits) - 1
        return ((codes >> self.shift(place)) & mask).astype(np.int64)

    def read(self, codes: Codes) -> NDArray[np.int8]:
        """Rows of digits, padded with 0."""
        columns = [self.digit(codes, place) for place in range(self.longest)]
        return np.stack(columns, axis=1).astype(np.int8)

    def lengths(self, codes: Codes) -> Places:
        """How many plates every stack has."""
        return np.asarray(np.count_nonzero(self.read(codes), axis=1))

    def without(self, codes: Codes, place: int) -> Codes:
        """The stacks that are left when the plate at this place is taken out."""
        shift = self.shift(place)
        inside = (codes >> (shift + self.bits)) << (shift + self.bits)
        outside = codes & ((1 << shift) - 1)
        return inside | (outside << self.bits)

    def with_plate(self, codes: Codes, place: int, digits: Places) -> Codes:
        """The stacks with one more plate, which then stands at this place."""
        shift = self.shift(place)
        inside = (codes >> (shift + self.bits)) << (shift + self.bits)
        outside = codes & ((1 << (shift + self.bits)) - 1)
        return inside | (outside >> self.bits) | (digits.astype(self.dtype) << shift)


@dataclass(frozen=True, slots=True)
class Level:
    """Stacks of one length in one attempt's part of the graph: their nodes, the nodes one plate smaller
    (a column for each way), and the kind of the plate that makes the difference."""

    nodes: Places
    smaller: Places
    kind: NDArray[np.int8]


@dataclass(frozen=True, slots=True)
class Part:
    """One attempt's stacks (``ends``, nodes in canonical order) and everything smaller, longest last."""

    ends: Places
    levels: tuple[Level, ...]

    def nodes(self) -> Places:
        return np.concatenate([level.nodes for level in self.levels])


@dataclass(frozen=True, slots=True)
class Graph:
    """The union of all parts; node 0 is the empty end."""

    alphabet: Alphabet
    codes: Codes
    length: NDArray[np.int64]
    parts: tuple[Part, ...]


def open_places(access: Access, length: int) -> Sequence[int]:
    """Places from which a plate can be taken without touching another."""
    if access is Access.OUTER_END:
        return [length - 1]
    if access is Access.BOTH_ENDS:
        return sorted({0, length - 1})
    return range(length)


def build_graph(
    alphabet: Alphabet, access: Access, families: Sequence[tuple[Codes, Places]], watch: Watch
) -> Graph:
    """The graph over some families of stacks, each given as (codes, lengths) in canonical order.

    A stack of n plates has one smaller neighbour with the outer end only (the graph is the tree of common
    insides), two with both ends (substrings), up to n with access anywhere (subsequences). Size and time are
    linear in the number of different smaller stacks times their neighbours, but for sorting. Raises
    :class:`app.planning.watch.TooLarge` before it outgrows the budget.
    """
    longest = max((int(lengths.max(initial=0)) for _, lengths in families), default=0)
    known: list[Codes] = [np.zeros(0, alphabet.dtype)] * (longest + 1)
    removed: list[list[Codes]] = [[] for _ in range(longest + 1)]
    for length in range(longest, -1, -1):
        own = [codes[lengths == length] for codes, lengths in families]
        known[length] = np.unique(np.concatenate([*own, *removed[length]]))
        if length:
            watch.check()
            watch.room(sum(map(len, known)) * (NODE_BYTES + EDGE_BYTES * len(open_places(access, length))))
            for place in open_places(access, length):
                removed[length - 1].append(alphabet.without(known[length], place))
    known[0] = np.zeros(1, alphabet.dtype)
    first = np.cumsum([0, *(len(codes) for codes in known)])
    edges = [_edges(alphabet, access, known, first, length) for length in range(longest + 1)]
    parts = tuple(
        _part([np.searchsorted(known[n], codes[lengths == n]) for n in range(longest + 1)], edges, first)
        for codes, lengths in families
    )
    ends = [_in_order(known, first, codes, lengths) for codes, lengths in families]
    return Graph(
        alphabet=alphabet,
        codes=np.concatenate(known),
        length=np.repeat(np.arange(longest + 1), [len(codes) for codes in known]),
        parts=tuple(Part(end, levels) for end, levels in zip(ends, parts, strict=True)),
    )


Edges = tuple[Places, NDArray[np.int8]]


def _edges(alphabet: Alphabet, access: Access, known: list[Codes], first: Places, length: int) -> Edges:
    if length == 0:
        return np.zeros((1, 0), np.int64), np.zeros((1, 0), np.int8)
    codes = known[length]
    smaller, kinds = [], []
    for place in open_places(access, length):
        target = alphabet.without(codes, place)
        smaller.append(np.searchsorted(known[length - 1], target) + first[length - 1])
        kinds.append((alphabet.digit(codes, place) - 1).astype(np.int8))
    return np.stack(smaller, axis=1), np.stack(kinds, axis=1)


def _part(own: list[Places], edges: list[Edges], first: Places) -> tuple[Level, ...]:
    """Everything smaller than the stacks of one family, from the longest down."""
    levels = []
    reached = np.zeros(0, np.int64)
    for length in range(len(own) - 1, -1, -1):
        smaller, kinds = edges[length]
        marked = np.zeros(len(smaller), np.bool_)
        marked[own[length]] = True
        marked[reached] = True
        here = np.flatnonzero(marked)
        levels.append(Level(here + first[length], smaller[here], kinds[here]))
        reached = smaller[here].ravel() - first[length - 1] if length else reached
    return tuple(levels[::-1])


def _in_order(known: list[Codes], first: Places, codes: Codes, lengths: Places) -> Places:
    nodes = np.zeros(len(codes), np.int64)
    for length in np.unique(lengths):
        here = np.flatnonzero(lengths == length)
        nodes[here] = np.searchsorted(known[length], codes[here]) + first[length]
    return nodes
