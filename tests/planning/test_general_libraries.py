"""The planner against general libraries that know nothing of plates."""

from fractions import Fraction
from itertools import pairwise

import networkx as nx
import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import Bounds, LinearConstraint, milp

from app.loading.equipment import Equipment, Implement, Plate
from app.planning import Measure, PlanRequest, Refusal, plan
from tests.planning import reference
from tests.planning.strategies import requests

QUARTER = Fraction(1, 4)


@given(
    faces=st.lists(st.integers(1, 100), min_size=1, max_size=8, unique=True),
    data=st.data(),
)
def test_fewest_plates_are_those_of_an_integer_programme(faces, data) -> None:
    """SciPy's MILP: least sum of counts, subject to mass and stock."""
    counts = [data.draw(st.integers(0, 4)) for _ in faces]
    side = data.draw(st.integers(0, sum(f * n for f, n in zip(faces, counts, strict=True))))
    plates = tuple(Plate(face * QUARTER, n) for face, n in zip(faces, counts, strict=True))
    belt = Equipment(Implement(Fraction(2), 1), None, plates)
    solved = milp(
        np.ones(len(faces)),
        constraints=LinearConstraint(np.array([faces]), side, side),
        bounds=Bounds(np.zeros(len(faces)), np.array(counts)),
        integrality=np.ones(len(faces)),
    )
    request = PlanRequest(equipment=belt, targets=(2 + side * QUARTER,), extra_plates=0)
    try:
        found = plan(request).total.plates
    except Refusal:
        found = None
    assert found == (round(solved.fun) if solved.success else None)


@settings(max_examples=100)
@given(requests(full=False, aim="total"))
def test_the_chain_is_a_shortest_path_through_the_layered_graph(request: PlanRequest) -> None:
    """networkx: one node for each stack at each attempt, one edge for each change, priced one by one."""
    layers = [[request.start], *(reference.all_stacks(request, target) for target in request.targets)]
    if not all(layers):
        return
    graph = nx.DiGraph()
    graph.add_node("end")
    for attempt, (before, after) in enumerate(pairwise(layers)):
        for a in before:
            for b in after:
                measure, _ = reference.change_price(request, a, b)
                graph.add_edge((attempt, a), (attempt + 1, b), weight=measure)
    for last in layers[-1]:
        graph.add_edge((len(layers) - 1, last), "end", weight=Fraction(0))
    total = plan(request).total
    names = {Measure.PLATES: total.plates, Measure.MASS: total.mass, Measure.TIME: total.time_s}
    assert nx.shortest_path_length(graph, (0, request.start), "end", "weight") == names[request.measure]
