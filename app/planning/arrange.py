"""The stacks of each weight: count vectors, put in the orders that the rule leaves open."""

from __future__ import annotations

from collections.abc import Sequence
from math import factorial, prod
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.comfort import keep_comfortable
from app.planning.counts import Ints
from app.planning.kit import Kit
from app.planning.request import Comfort, ComfortBy, Order, PlanRequest
from app.planning.smaller import Alphabet, Codes, Places

Family = tuple[Codes, Places]
"""Codes of different stacks in canonical order, and their lengths."""


def order_matters(request: PlanRequest) -> bool:
    """Whether two orders of the same plates, both allowed, can differ in comfort or threading.

    With the widest inside, the diameters read from inside to outside are the same whatever the order, so
    rims and threading are too; only the balance then depends on it.
    """
    by = {rule.by for rule in request.comfort}
    if request.order is Order.HEAVIEST_INSIDE:
        return False
    if ComfortBy.BALANCE in by:
        return True
    rims = bool(by & {ComfortBy.RIMS, ComfortBy.THREADING}) or request.thread_s > 0
    return rims and request.order is not Order.WIDEST_INSIDE


def by_width(request: PlanRequest) -> bool:
    """Whether stacks are best compared with the widest inside: the order asks for it, or rims or threading
    count, which that order makes least (see :func:`inside_first`)."""
    return request.order in {Order.WIDEST_INSIDE, Order.NO_VALLEY} or order_matters(request)


def inside_first(kit: Kit, request: PlanRequest) -> list[int]:
    """One order of kinds in which every count vector obeys the rule and is most comfortable to thread.

    With the widest inside, the rims step down from the widest to the narrowest, which no order can better;
    and holes fail to line up only where consecutive diameters are further apart than a finger, where every
    order fails at least once. So of all orders of the same plates this one has the least rims, the fewest
    misaligned neighbours and the same thickness: if any order of some plates passes rules about these, one
    after another, this one does.
    """
    if by_width(request) and request.order is not Order.HEAVIEST_INSIDE:
        return sorted(range(kit.kinds), key=lambda kind: (-kit.diameter[kind], kind))
    return list(range(kit.kinds))


def rules_by_counts(request: PlanRequest) -> tuple[Comfort, ...]:
    """The comfort rules, from the first, that :func:`inside_first` decides for all orders of some plates."""
    if request.order is Order.HEAVIEST_INSIDE:
        return request.comfort
    by = [rule.by for rule in request.comfort]
    return request.comfort[: by.index(ComfortBy.BALANCE)] if ComfortBy.BALANCE in by else request.comfort


def leading_thickness(request: PlanRequest) -> int:
    """How many comfort rules, from the first, depend on the counts alone."""
    rules = [rule.by is ComfortBy.THICKNESS for rule in request.comfort]
    return rules.index(False) if False in rules else len(rules)


def comfortable_vectors(kit: Kit, request: PlanRequest, vectors: Ints) -> Ints:
    """The count vectors that pass the comfort rules which depend on the counts alone."""
    for rule in request.comfort[: leading_thickness(request)]:
        alphabet = Alphabet.of(kit.kinds, int(vectors.sum(axis=1).max(initial=0)))
        rows = sorted_digits(alphabet, vectors, range(kit.kinds))
        vectors = vectors[keep_comfortable(kit, rows, rule)]
    return vectors


def families(kit: Kit, request: PlanRequest, alphabet: Alphabet, vectors: Sequence[Ints]) -> list[Family]:
    """The stacks of every weight, given its count vectors after :func:`comfortable_vectors`."""
    if request.order is Order.HEAVIEST_INSIDE:
        codes = one_order(kit, request, alphabet, vectors)
    else:
        codes = [np.sort(all_orders(kit, request.order, alphabet, rows)) for rows in vectors]
    rest = request.comfort[leading_thickness(request) :]
    return comfortable_families(kit, alphabet, codes, rest)


def one_order(kit: Kit, request: PlanRequest, alphabet: Alphabet, vectors: Sequence[Ints]) -> list[Codes]:
    """Codes of one stack for each count vector, by :func:`inside_first`, in canonical order."""
    digits = sorted_digits(alphabet, np.concatenate(vectors), inside_first(kit, request))
    cuts = np.cumsum([len(rows) for rows in vectors])[:-1]
    return [np.sort(codes) for codes in np.split(alphabet.write(digits), cuts)]


def comfortable_families(
    kit: Kit, alphabet: Alphabet, codes: Sequence[Codes], rules: Sequence[Comfort]
) -> list[Family]:
    """The stacks of every weight that pass the rules, one rule after another, with their lengths."""
    if rules:
        return [_comfortable(kit, alphabet, some, rules) for some in codes]
    lengths = alphabet.lengths(np.concatenate(codes))
    cuts = np.cumsum([len(some) for some in codes])[:-1]
    return list(zip(codes, np.split(lengths, cuts), strict=True))


def _comfortable(kit: Kit, alphabet: Alphabet, codes: Codes, rules: Sequence[Comfort]) -> Family:
    rows = alphabet.read(codes)
    for rule in rules:
        kept = keep_comfortable(kit, rows, rule)
        codes, rows = codes[kept], rows[kept]
    return codes, np.count_nonzero(rows, axis=1)


def how_many_orders(kit: Kit, order: Order, vectors: Ints) -> int:
    """How many stacks the vectors have; for no-valley, at most this many."""
    if order is Order.HEAVIEST_INSIDE:
        return len(vectors)
    return sum(_orders_of(kit, order, row) for row in vectors.tolist())


def _orders_of(kit: Kit, order: Order, counts: list[int]) -> int:
    if order is Order.ANY:
        return factorial(sum(counts)) // prod(map(factorial, counts))
    groups: dict[int, list[int]] = {}
    for wide, count in zip(kit.diameter, counts, strict=True):
        groups.setdefault(wide, []).append(count)
    # No valley: the plates of one diameter stand in two runs, one on either side of the wider ones.
    sides = prod(sum(group) + 1 for group in groups.values()) if order is Order.NO_VALLEY else 1
    return sides * prod(factorial(sum(group)) // prod(map(factorial, group)) for group in groups.values())


def all_orders(kit: Kit, order: Order, alphabet: Alphabet, vectors: Ints) -> Codes:
    """Codes of every allowed order of every vector, built from inside to outside, nothing in vain.

    Widest inside: the next plate is one of the widest left. No valley: it is one of the widest left, or,
    while diameters have not yet fallen, one no narrower than the last; both can always be completed.
    """
    rest = vectors.astype(np.int16)
    codes: Codes = np.zeros(len(vectors), alphabet.dtype)
    last = np.zeros(len(vectors), np.int64)
    fallen = np.zeros(len(vectors), np.bool_)
    wide = np.array(kit.diameter, np.int64)
    whole: list[Codes] = []
    for place in range(alphabet.longest + 1):
        done = ~rest.any(axis=1)
        whole.append(codes[done])
        rest, codes, last, fallen = rest[~done], codes[~done], last[~done], fallen[~done]
        if not len(codes):
            break
        widest = np.where(rest > 0, wide, -1).max(axis=1)
        grown = []
        for kind in range(kit.kinds):
            allowed = rest[:, kind] > 0
            if order is Order.WIDEST_INSIDE:
                allowed &= wide[kind] == widest
            elif order is Order.NO_VALLEY:
                allowed &= (wide[kind] == widest) | (~fallen & (wide[kind] >= last))
            left = rest[allowed]
            left[:, kind] -= 1
            added = codes[allowed] | ((kind + 1) << alphabet.shift(place))
            falls = fallen[allowed] | (wide[kind] < last[allowed])
            grown.append((left, added, np.full(len(left), wide[kind]), falls))
        rest = np.concatenate([part[0] for part in grown])
        codes = np.concatenate([part[1] for part in grown])
        last = np.concatenate([part[2] for part in grown])
        fallen = np.concatenate([part[3] for part in grown])
    return np.concatenate(whole)


def sorted_digits(alphabet: Alphabet, vectors: Ints, inside: Sequence[int]) -> NDArray[np.int64]:
    """One stack for each count vector, kinds inside to outside as in ``inside``, as rows of digits."""
    kinds = np.array(inside, np.int64)
    lengths = vectors.sum(axis=1)
    digits = np.zeros((len(vectors), alphabet.longest), np.int64)
    flat = np.repeat(np.tile(kinds + 1, len(vectors)), vectors[:, kinds].ravel())
    rows = np.repeat(np.arange(len(vectors)), lengths)
    first = np.repeat(np.cumsum(lengths) - lengths, lengths)
    digits[rows, np.arange(len(flat)) - first] = flat
    return digits


def counts_of(rows: NDArray[Any], kinds: int) -> Ints:
    """Count vectors of rows of digits."""
    counts = np.zeros((len(rows), kinds), np.int64)
    for kind in range(kinds):
        counts[:, kind] = (rows == kind + 1).sum(axis=1)
    return counts
