"""The day before: will the plates do? Which weights fail, what is short, and what to borrow.

Looked at from the lightest opener to the heaviest × 1.15: thirds are about 110 % of openers in a published
study of attempts (``trade.md`` B 18), and a little is kept in hand.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from app.loading.chart import Chart, loadable
from app.loading.equipment import Equipment, Plate
from app.loading.mass import show_mass
from app.meet.silence import step_up
from app.planning import Budget, Measure, PlanRequest, plan

HEADROOM = Fraction(115, 100)
MOST_BORROWED = 8  # pairs of one face; who needs more needs another set


@dataclass(frozen=True, slots=True)
class Shortage:
    """Pieces of one face that are missing, and how many more weights they would make."""

    face: Fraction
    pieces: int
    makes: int


@dataclass(frozen=True, slots=True)
class StockCheck:
    """``missing``: weights of the span that cannot be made. ``shortages``: borrow these, one after another.

    ``beyond``: weights that no borrowed plates make (under the bar, or the sleeve is too short).
    """

    lightest: Fraction
    heaviest: Fraction
    missing: tuple[Fraction, ...]
    shortages: tuple[Shortage, ...]
    beyond: tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class Borrowed:
    """One pair (one piece for a belt) and the mass it saves the crew over the openers, all ends together.

    ``proved``: both plans that were compared are the best there are, so the saving is exact.
    """

    face: Fraction
    pieces: int
    saves: Fraction
    of: Fraction
    proved: bool = True


def span(openers: Iterable[Fraction], step: Fraction, headroom: Fraction = HEADROOM) -> tuple[Fraction, ...]:
    """Every multiple of the step from the lightest opener to the heaviest × ``headroom``; none without."""
    known = list(openers)
    if not known:
        return ()
    low, high = step_up(min(known), step), max(known) * headroom
    return tuple(low + step * k for k in range(int((high - low) // step) + 1))


def check_stock(
    equipment: Equipment, openers: Sequence[Fraction], step: Fraction, lendable: Sequence[Plate] = ()
) -> StockCheck:
    """What the stock cannot make of all weights that are likely to be asked for.

    ``lendable`` are plates that the meet does not own but could borrow (their ``count`` is not looked at).
    """
    weights = sorted({*span(openers, step), *openers})
    missing = tuple(weight for weight in weights if not loadable(equipment, weight))
    shortages, beyond = _shortages(equipment, missing, lendable)
    low, high = (weights[0], weights[-1]) if weights else (Fraction(0), Fraction(0))
    return StockCheck(low, high, missing, shortages, beyond)


def with_more(equipment: Equipment, plate: Plate, pieces: int) -> Equipment:
    """The equipment with so many more pieces of one plate, owned already or not."""
    if equipment.plate(plate.face) is None:
        return replace(equipment, plates=(*equipment.plates, replace(plate, count=pieces)))
    rows = tuple(
        replace(one, count=one.count + pieces) if one.face == plate.face else one for one in equipment.plates
    )
    return replace(equipment, plates=rows)


def _shortages(
    equipment: Equipment, missing: tuple[Fraction, ...], lendable: Sequence[Plate]
) -> tuple[tuple[Shortage, ...], tuple[Fraction, ...]]:
    """Again and again the one face that makes most of what is missing, with the fewest pieces of it."""
    kinds = _kinds(equipment, lendable)
    found: list[Shortage] = []
    while missing:
        best, stock, left = _most_useful(equipment, missing, kinds)
        if best is None:
            break
        found.append(best)
        equipment, missing = stock, left
    return tuple(found), missing


def _kinds(equipment: Equipment, lendable: Sequence[Plate]) -> list[Plate]:
    owned = {plate.face for plate in equipment.plates}
    return [*equipment.plates, *(plate for plate in lendable if plate.face not in owned)]


def _most_useful(
    equipment: Equipment, missing: tuple[Fraction, ...], kinds: Sequence[Plate]
) -> tuple[Shortage | None, Equipment, tuple[Fraction, ...]]:
    """Most weights made, then fewest pieces, then fewest plates on the bar, then the lightest plate."""
    tries: list[tuple[Shortage, Equipment, tuple[Fraction, ...]]] = []
    ends = equipment.implement.ends
    for plate in sorted(kinds, key=lambda one: one.face):
        owned = equipment.plate(plate.face)
        odd = owned.count % ends if owned else 0  # a single piece that only needs its partner
        for pieces in range(ends - odd, MOST_BORROWED * ends + 1, ends):
            tried = with_more(equipment, plate, pieces)
            still = tuple(weight for weight in missing if not loadable(tried, weight))
            if len(still) < len(missing):
                tries.append((Shortage(plate.face, pieces, len(missing) - len(still)), tried, still))
            if not still:
                break
    if not tries:
        return None, equipment, missing
    best = max((one.makes, -one.pieces) for one, _, _ in tries)
    tied = [one for one in tries if (one[0].makes, -one[0].pieces) == best]
    return min(tied, key=lambda one: _plates_needed(one[1], missing)) if len(tied) > 1 else tied[0]


def _plates_needed(equipment: Equipment, weights: Sequence[Fraction]) -> int:
    """Plates of the chart's stacks for those of these weights that have one: three chips do no plate's work well."""
    chart = Chart(equipment)
    return sum(len(chart.stack(weight) or ()) for weight in weights)


def best_to_borrow(
    request: PlanRequest,
    flights: Sequence[Sequence[Fraction]],
    lendable: Sequence[Plate] = (),
    budget: Budget | None = None,
) -> Borrowed | None:
    """The single pair (piece for a belt) that saves most mass over a plan of all flights' openers.

    ``request`` carries the equipment and the loading rules of the lift; its targets and measure are not
    looked at. Each flight is lifted lightest first. Openers that cannot be made are left out on both sides
    of the comparison. None when no plate saves anything. Plans once for every kind of plate, each within the
    budget.
    """
    equipment = request.equipment
    ends = equipment.implement.ends
    targets = tuple(weight for flight in flights for weight in sorted(flight) if loadable(equipment, weight))
    now, sure = _mass_handled(request, equipment, targets, budget)
    savings = []
    for kind in _kinds(equipment, lendable):
        mass, proved = _mass_handled(request, with_more(equipment, kind, ends), targets, budget)
        savings.append(Borrowed(kind.face, ends, now - mass, now, proved=sure and proved))
    best = max(savings, key=lambda one: (one.saves, -one.face), default=None)
    return best if best is not None and best.saves > 0 else None


def _mass_handled(
    request: PlanRequest, equipment: Equipment, targets: tuple[Fraction, ...], budget: Budget | None
) -> tuple[Fraction, bool]:
    question = replace(
        request, equipment=equipment, targets=targets, measure=Measure.MASS, limit=None, start=()
    )
    made = plan(question, budget or Budget())
    return made.total.mass * equipment.implement.ends, made.proof == "optimal"


def say_missing(missing: Sequence[Fraction], unit: str) -> tuple[str, ...]:
    """Weights merged into plain phrases: ``300 kg``, ``from 102.5 to 117.5 kg in steps of 5``."""
    phrases = []
    for run in _runs(sorted(missing)):
        if len(run) < 3:
            phrases += [f"{show_mass(weight)} {unit}" for weight in run]
        else:
            rise = show_mass(run[1] - run[0])
            phrases.append(f"from {show_mass(run[0])} to {show_mass(run[-1])} {unit} in steps of {rise}")
    return tuple(phrases)


def _runs(weights: Sequence[Fraction]) -> list[list[Fraction]]:
    """Split where the distance to the next changes; every weight is in one run."""
    runs: list[list[Fraction]] = []
    for weight in weights:
        last = runs[-1] if runs else None
        if last is not None and (len(last) < 2 or weight - last[-1] == last[1] - last[0]):
            last.append(weight)
        else:
            runs.append([weight])
    return runs


def sentences(check: StockCheck, unit: str, ends: int) -> tuple[str, ...]:
    """The check as the organiser reads it."""
    low, high = show_mass(check.lightest), show_mass(check.heaviest)
    if not check.missing:
        return (f"Every weight from {low} to {high} {unit} can be made.",)
    count = len(check.missing)
    said = [
        f"{count} of the weights from {low} to {high} {unit} cannot be made: {_list(check.missing, unit)}."
    ]
    for at, one in enumerate(check.shortages):
        said.append(
            f"{'Then also' if at else 'Short by'} {say_pieces(one.face, one.pieces, ends)}, "
            f"which makes {one.makes} of them."
        )
    if check.beyond:
        said.append(
            f"No borrowed plates make {_list(check.beyond, unit)}: "
            "lighter than the empty bar, or more than there is room for."
        )
    return tuple(said)


def _list(weights: Sequence[Fraction], unit: str) -> str:
    return "; ".join(say_missing(weights, unit))


def say_pieces(face: Fraction, pieces: int, ends: int) -> str:
    """``2 pairs of 5s`` for a bar, ``1 of the 1.25s`` where it is no pair."""
    name = show_mass(face)
    if ends == 2 and pieces % 2 == 0:
        pairs = pieces // 2
        return f"{pairs} pair{'s' if pairs > 1 else ''} of {name}s"
    return f"{pieces} of the {name}s"
