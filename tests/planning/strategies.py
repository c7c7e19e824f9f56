"""Random small requests: small enough for the slow reference, odd enough to find mistakes."""

from __future__ import annotations

from fractions import Fraction

from hypothesis import settings
from hypothesis import strategies as st

from app.loading.equipment import Collar, Equipment, Implement, Plate
from app.planning import Access, Aim, Comfort, ComfortBy, Measure, Order, PlanRequest, Unit

KG_FACES = ["25", "20", "15", "10", "5", "2.5", "1.25", "0.5", "0.25"]
LB_FACES = ["45", "35", "25", "10", "5", "2.5"]
MIXED = ["20", "11.33980925", "10", "4.5359237", "5", "1.25"]
ENOUGH_ORDERS = 40


def a_fifth() -> settings:
    """For properties tried once for every combination: a fifth of the profile's cases for each."""
    return settings(max_examples=settings().max_examples // 5)


def fractions(*words: str) -> st.SearchStrategy[Fraction]:
    return st.sampled_from([Fraction(word) for word in words])


@st.composite
def equipments(draw, *, most_kinds: int = 5, most_pieces: int = 5) -> Equipment:
    """Odd counts, pairs and singles; sizes always known, a limit of room sometimes."""
    faces = draw(st.sampled_from([KG_FACES, LB_FACES, MIXED]))
    chosen = draw(st.lists(st.sampled_from(faces), min_size=1, max_size=most_kinds, unique=True))
    ends = draw(st.sampled_from([1, 2]))
    plates = tuple(
        Plate(
            face=Fraction(face),
            count=draw(st.integers(0, most_pieces if ends == 2 else most_pieces // 2)),
            thickness_mm=draw(fractions("5", "8.5", "20", "27")),
            diameter_mm=draw(fractions("100", "130", "160", "200")),
            off_s=draw(fractions("0", "1", "2", "2.5")),
            on_s=draw(fractions("1", "1.5", "3")),
        )
        for face in chosen
    )
    collar = draw(
        st.sampled_from([None, Collar(Fraction("2.5"), Fraction(30)), Collar(Fraction(0), Fraction(5))])
    )
    room = draw(st.one_of(st.none(), fractions("40", "70", "100", "200")))
    return Equipment(Implement(draw(fractions("0", "20", "45")), ends, room), collar, plates)


@st.composite
def stacks(draw, equipment: Equipment, *, most: int = 4) -> tuple[Fraction, ...]:
    """Plates that are there, in any order."""
    pool = [plate.face for plate in equipment.plates for _ in range(equipment.pieces_per_end(plate))]
    if not pool:
        return ()
    places = draw(st.lists(st.integers(0, len(pool) - 1), max_size=most, unique=True))
    return tuple(pool[place] for place in places)


@st.composite
def requests(draw, *, full: bool = True, most_targets: int = 4, **overrides) -> PlanRequest:
    """Requests whose targets are made by some plates of the stock (though perhaps not within the room)."""
    equipment = overrides.pop("equipment", None) or draw(equipments())
    made = draw(st.lists(stacks(equipment), max_size=most_targets))
    targets = tuple(equipment.base_mass + equipment.implement.ends * sum(s, Fraction(0)) for s in made)
    fields = {
        "unit": draw(st.sampled_from(Unit)),
        "start": draw(stacks(equipment)),
        "extra_plates": draw(st.integers(0, 2)),
        "measure": draw(st.sampled_from(Measure)),
        "aim": draw(st.sampled_from(Aim)),
    }
    if full:
        fields |= {
            "order": draw(st.sampled_from(Order)),
            "access": draw(st.sampled_from(Access)),
            "comfort": tuple(draw(st.lists(comforts(), max_size=2))),
            "thread_s": draw(fractions("0", "0", "0.5", "4")),
            "finger_mm": draw(fractions("15", "10")),
        }
    fields |= overrides
    if full and fields["aim"] is Aim.TOTAL and "limit" not in overrides:
        limits = st.one_of(st.none(), st.just("chart"), fractions("1", "3", "7.5", "25", "60"))
        fields["limit"] = draw(limits)
    return PlanRequest(equipment=equipment, targets=targets, **fields)


def comforts() -> st.SearchStrategy[Comfort]:
    return st.builds(Comfort, st.sampled_from(ComfortBy), fractions("0", "0", "1", "10", "40"))
