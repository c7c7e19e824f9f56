"""Which plates, in which number, make each weight: the count vectors."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.kit import Kit
from app.planning.refusal import bad_request
from app.planning.watch import Watch

Ints = NDArray[np.int64]
MOST_SUMS = 3_000_000


@dataclass(frozen=True, slots=True)
class Sums:
    """What the kinds from one index on can make: masses ascending, the fewest plates and the least thickness
    for each (not always by the same plates)."""

    mass: Ints
    fewest: Ints
    thinnest: Ints

    def find(self, mass: Ints) -> tuple[NDArray[np.bool_], Ints]:
        """For each mass, whether it can be made, and its place (0 where it cannot)."""
        place = np.searchsorted(self.mass, mass)
        place[place == len(self.mass)] = 0
        return self.mass[place] == mass, place


def suffix_sums(kit: Kit) -> list[Sums]:
    """``sums[k]``: everything the kinds k, k+1, … make, up to the largest share."""
    zero = np.zeros(1, np.int64)
    sums = [Sums(zero, zero, zero)]
    largest, listed = max(kit.shares, default=0), 0
    for kind in reversed(range(kit.kinds)):
        here = sums[-1]
        for pieces in _bundles(min(kit.stock[kind], largest // kit.mass[kind])):
            here = _with_bundle(kit, here, kind, pieces, largest)
            if listed + len(here.mass) > MOST_SUMS:
                raise bad_request("plates", "These plates make more different weights than can be searched.")
        listed += len(here.mass)
        sums.append(here)
    return sums[::-1]


def _bundles(count: int) -> list[int]:
    """1, 2, 4, … and what is left: bundles that make every number of pieces up to the count."""
    bundles, size = [], 1
    while size <= count:
        bundles.append(size)
        count -= size
        size *= 2
    return [*bundles, count] if count else bundles


def _with_bundle(kit: Kit, sums: Sums, kind: int, pieces: int, largest: int) -> Sums:
    """The sums with and without a bundle of one kind, the better of each mass."""
    mass = np.concatenate([sums.mass, sums.mass + pieces * kit.mass[kind]])
    fewest = np.concatenate([sums.fewest, sums.fewest + pieces])
    thinnest = np.concatenate([sums.thinnest, sums.thinnest + pieces * kit.thickness[kind]])
    order = np.argsort(mass, kind="stable")
    order = order[: np.searchsorted(mass, largest, side="right", sorter=order)]
    mass = mass[order]
    first = np.flatnonzero(np.r_[True, mass[1:] != mass[:-1]])
    return Sums(
        mass[first],
        np.minimum.reduceat(fewest[order], first),
        np.minimum.reduceat(thinnest[order], first),
    )


def count_vectors(kit: Kit, extra_plates: int, watch: Watch) -> dict[int, Ints]:
    """For each share, every count vector within stock, room and ``extra_plates`` over the fewest.

    Rows are in dictionary order, most of the heaviest first. A share that nothing makes has no rows.

    All shares are filled at once, one kind after the other, heaviest first; a partial vector is kept only if
    the lighter kinds can still make the rest within the plates (and, apart from that, within the
    millimetres) that are left. Without a limit of room no partial vector dies later, so the work is
    proportional to what comes out. Raises :class:`app.planning.watch.TooLarge` when that outgrows the budget.
    """
    sums = suffix_sums(kit)
    shares = np.unique(np.array(kit.shares, np.int64))
    made, place = sums[0].find(shares)
    if kit.room is not None:
        made &= sums[0].thinnest[place] <= kit.room
    open_shares, allowed = shares[made], sums[0].fewest[place[made]]
    found = {int(share): np.zeros((0, kit.kinds), np.int64) for share in shares}
    while len(open_shares):
        # The fewest plates may be too thick for the sleeve: then one more is allowed, and one more again.
        which, rows = _fill(kit, sums, open_shares, allowed + extra_plates, watch)
        again = []
        for index, share in enumerate(open_shares):
            vectors = rows[np.searchsorted(which, index) : np.searchsorted(which, index + 1)]
            fewest = int(vectors.sum(axis=1).min(initial=np.iinfo(np.int64).max))
            if len(vectors) and fewest <= allowed[index]:
                found[int(share)] = vectors
            else:
                allowed[index] = min(fewest, int(allowed[index]) + extra_plates + 1)
                again.append(index)
        open_shares, allowed = open_shares[again], allowed[again]
    return found


def _fill(kit: Kit, sums: list[Sums], shares: Ints, most: Ints, watch: Watch) -> tuple[Ints, Ints]:
    """Count vectors of at most ``most`` plates for every share, as (index of the share, rows)."""
    which = np.arange(len(shares))
    rest, left = shares.copy(), most.copy()
    wide = np.zeros(len(shares), np.int64)
    columns: list[Ints] = []
    for kind in range(kit.kinds):
        parts: list[tuple[Any, ...]] = []
        for pieces in range(kit.stock[kind], -1, -1):
            new_rest = rest - pieces * kit.mass[kind]
            made, place = sums[kind + 1].find(new_rest)
            made &= sums[kind + 1].fewest[place] <= left - pieces
            if kit.room is not None:
                taken = wide + pieces * kit.thickness[kind]
                made &= sums[kind + 1].thinnest[place] <= kit.room - taken
            kept = np.flatnonzero(made)
            if len(kept):
                parts.append((kept, np.full(len(kept), pieces), new_rest[kept]))
        if not parts:  # nothing keeps to both the plates and the room
            return np.zeros(0, np.int64), np.zeros((0, kit.kinds), np.int64)
        kept, pieces_put, rest = (np.concatenate(column) for column in zip(*parts, strict=True))
        watch.check()
        watch.room(len(kept) * kit.kinds * 32)
        # Keep the rows of one share together, most of the heaviest first.
        order = np.lexsort((-pieces_put, kept))
        kept, pieces_put, rest = kept[order], pieces_put[order], rest[order]
        columns = [column[kept] for column in columns]
        columns.append(pieces_put)
        which, left = which[kept], left[kept] - pieces_put
        wide = wide[kept] + pieces_put * kit.thickness[kind]
    rows = np.stack(columns, axis=1) if columns else np.zeros((len(shares), 0), np.int64)
    return which, rows


def one_vector(kit: Kit) -> dict[int, Ints]:
    """A single count vector of the fewest plates for every share, heaviest first; not minding the room."""
    sums, found = suffix_sums(kit), {}
    for share in set(kit.shares):
        rest, vector = share, []
        for kind in range(kit.kinds):
            here, after = sums[kind], sums[kind + 1]
            left = int(here.fewest[here.find(np.array([rest]))[1]][0])
            for pieces in range(min(kit.stock[kind], rest // kit.mass[kind]), -1, -1):
                made, place = after.find(np.array([rest - pieces * kit.mass[kind]]))
                if made[0] and int(after.fewest[place[0]]) + pieces == left:
                    vector.append(pieces)
                    rest -= pieces * kit.mass[kind]
                    break
        known = rest == 0 and len(vector) == kit.kinds
        found[share] = np.array([vector] if known else [], np.int64).reshape(-1, kit.kinds)
    return found
