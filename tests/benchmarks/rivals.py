"""What the planner is measured against: the same question put to plain and general tools."""

from __future__ import annotations

from itertools import pairwise, takewhile
from operator import eq

import networkx as nx
import numpy as np

from app.loading.change import hand_list
from app.loading.equipment import Access
from app.planning.distance import Distance
from app.planning.problem import Problem
from app.planning.sweep import Course

Layers = list[list[tuple[int, ...]]]


def pairwise_chain(layers: Layers) -> int:
    """Plain Python: every stack against every stack of the attempt before, by the inside they share."""
    best = [0] * len(layers[0])
    for before, after in pairwise(layers):
        found = []
        for b in after:
            ways = []
            for a, so_far in zip(before, best, strict=True):
                shared = sum(1 for _ in takewhile(bool, map(eq, a, b)))
                ways.append(so_far + len(a) + len(b) - 2 * shared)
            found.append(min(ways))
        best = found
    return min(best)


def pairwise_numpy(layers: Layers) -> int:
    """NumPy: the same, all pairs of two attempts at once."""
    width = max(len(stack) for layer in layers for stack in layer)
    padded = [np.array([[*stack, *[-1] * (width - len(stack))] for stack in layer]) for layer in layers]
    best = np.zeros(len(layers[0]), np.int64)
    for before, after in pairwise(padded):
        same = (before[:, None, :] == after[None, :, :]) & (before[:, None, :] >= 0)
        shared = np.logical_and.accumulate(same, axis=2).sum(axis=2)
        lengths = (before >= 0).sum(axis=1)[:, None] + (after >= 0).sum(axis=1)[None, :]
        best = (best[:, None] + lengths - 2 * shared).min(axis=0)
    return int(best.min())


def shortest_path(layers: Layers) -> int:
    """networkx: Dijkstra on the layered graph, its making counted."""
    graph = nx.DiGraph()
    for at, (before, after) in enumerate(pairwise(layers)):
        for i, a in enumerate(before):
            for j, b in enumerate(after):
                shared = sum(1 for _ in takewhile(bool, map(eq, a, b)))
                graph.add_edge((at, i), (at + 1, j), weight=len(a) + len(b) - 2 * shared)
    for j in range(len(layers[-1])):
        graph.add_edge((len(layers) - 1, j), "end", weight=0)
    return int(nx.shortest_path_length(graph, (0, 0), "end", "weight"))


def numpy_distances(problem: Problem, course: Course, access: Access) -> int:
    """NumPy: the edit distance of every pair, one stack against all of the attempt before at once."""
    price = Distance(access, problem.prices.off, problem.prices.on)
    best = course.seed
    for attempt in range(1, len(course.attempts)):
        before, after = course.rows(attempt - 1), course.rows(attempt)
        best = np.array([(best + price(before, after[[at]])).min() for at in range(len(after))])
    return int(best.min())


def _stacks(course: Course, attempt: int) -> list[tuple[int, ...]]:
    return [tuple(digit for digit in row if digit) for row in course.rows(attempt).tolist()]


def _price(
    problem: Problem, access: Access, a: tuple[int, ...], b: tuple[int, ...], worth: dict[int, int]
) -> int:
    """The textbook edit distance of two stacks, as a hand list is made."""
    hands = hand_list(a, b, access, worth)  # digits stand for faces
    off, on = problem.prices.off, problem.prices.on
    return sum(int(off[kind - 1]) for kind in hands.off) + sum(int(on[kind - 1]) for kind in hands.on)


def plain_distances(problem: Problem, course: Course, access: Access) -> int:
    """Plain Python: the textbook edit distance of every pair, and the chain over them."""
    worth = {
        kind + 1: int(problem.prices.off[kind] + problem.prices.on[kind]) for kind in range(problem.kit.kinds)
    }
    best = [0] * len(course.rows(0))
    for attempt in range(1, len(course.attempts)):
        before, after = _stacks(course, attempt - 1), _stacks(course, attempt)
        best = [
            min(so_far + _price(problem, access, a, b, worth) for a, so_far in zip(before, best, strict=True))
            for b in after
        ]
    return min(best)


def graph_of_pairs(problem: Problem, course: Course, access: Access) -> int:
    """networkx: the layered graph of every pair, priced by NumPy, and its shortest path."""
    price = Distance(access, problem.prices.off, problem.prices.on)
    graph = nx.DiGraph()
    for attempt in range(1, len(course.attempts)):
        before, after = course.rows(attempt - 1), course.rows(attempt)
        for j in range(len(after)):
            costs = price(before, after[[j]]).tolist()
            graph.add_weighted_edges_from(
                ((attempt - 1, i), (attempt, j), cost) for i, cost in enumerate(costs)
            )
    graph.add_weighted_edges_from(("start", (0, i), 0) for i in range(len(course.rows(0))))
    last = len(course.attempts) - 1
    graph.add_weighted_edges_from(((last, j), "end", 0) for j in range(len(course.rows(last))))
    return int(nx.shortest_path_length(graph, "start", "end", "weight"))
