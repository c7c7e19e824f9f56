"""Run all benchmarks and print one line for each: ``uv run python -m tests.benchmarks``.

Times are processor seconds, so that a busy machine does not blur the ratios, the best of a few runs in one
process; every rival must give the same figure as the planner, or
the run stops. Peak memory is that of a fresh process which plans once.
"""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from itertools import pairwise
from time import process_time

import numpy as np

from app.loading.equipment import Access
from app.planning import Budget, PlanRequest, plan
from app.planning.arrange import Family, all_orders
from app.planning.problem import Problem, prepare
from app.planning.smaller import build_graph
from app.planning.sweep import Course, Sweep, least_total
from app.planning.watch import Watch
from app.planning.ways import by_sweep
from tests.benchmarks.instances import CASES, belt_round, flight, wide_round
from tests.benchmarks.rivals import (
    Layers,
    graph_of_pairs,
    numpy_distances,
    pairwise_chain,
    pairwise_numpy,
    plain_distances,
    shortest_path,
)
from tests.planning.cpsat import fewest_plates_handled

WATCH = Watch(Budget(memory_bytes=8_000_000_000))


def best_of(runs: int, work: Callable[[], object]) -> tuple[float, object]:
    """Processor seconds of the fastest run, and what it gave."""
    times = []
    for _ in range(runs):
        begin = process_time()
        result = work()
        times.append(process_time() - begin)
    return min(times), result


def say(name: str, seconds: float, text: str) -> None:
    print(f"{name:<58} {seconds * 1000:10.1f} ms   {text}", flush=True)


def stack_layers(problem: Problem) -> Layers:
    """The stacks of every attempt as plain tuples, heaviest inside; the start first."""
    vectors = [problem.vectors[share] for share in problem.kit.shares]
    stacks = [[tuple(np.repeat(np.arange(len(row)), row).tolist()) for row in rows] for rows in vectors]
    return [[problem.kit.start], *stacks]


def against_pairs() -> None:
    request = wide_round()
    problem = prepare(request, WATCH)
    layers = stack_layers(problem)
    sizes = [len(layer) for layer in layers[1:]]
    ours, found = best_of(5, lambda: plan(request))
    say(f"plan: {len(sizes)} attempts, {min(sizes)}-{max(sizes)} stacks each", ours, "")
    sweep, _ = best_of(5, lambda: by_sweep(problem, WATCH))
    for name, rival, runs in (
        ("pairwise chain, plain Python", pairwise_chain, 1),
        ("pairwise chain, NumPy", pairwise_numpy, 2),
        ("networkx shortest path", shortest_path, 1),
    ):
        theirs, figure = best_of(runs, lambda rival=rival: rival(layers))
        if figure != found.total.plates:
            raise SystemExit(f"{name} found {figure}, the planner {found.total.plates}")
        say(f"  {name}", theirs, f"{theirs / ours:.0f} x the whole plan, {theirs / sweep:.0f} x the sweep")


def against_edit_distances() -> None:
    """A belt: 500 orders of each of four weights; the rivals price every pair of two attempts."""
    problem = prepare(belt_round(Access.OUTER_END), WATCH)
    for access in Access:
        families = some_orders(problem, 500, 4)
        ours, figure = best_of(5, lambda f=families, a=access: sweep_all(problem, course_of(problem, a, f)))
        say(f"graph and sweep, {access.value}, 500 stacks an attempt", ours, "")
        course = course_of(problem, access, families)
        for name, rival in (
            ("NumPy", numpy_distances),
            ("plain Python", plain_distances),
            ("networkx", graph_of_pairs),
        ):
            theirs, found = best_of(1, lambda c=course, a=access, rival=rival: rival(problem, c, a))
            if figure != found:
                raise SystemExit(f"{name} found {found}, the sweep {figure}")
            say(f"  every pair by {name}", theirs, f"{theirs / ours:.0f} x")


def against_cpsat() -> None:
    for lifters in (6, 10):
        request = flight(lifters, 1)
        problem = prepare(request, WATCH)
        longest = [int(problem.vectors[share].sum(axis=1).max()) for share in problem.kit.shares]
        ours, found = best_of(5, lambda request=request: plan(request))
        theirs, figure = best_of(1, lambda r=request, n=longest: fewest_plates_handled(r, n, seconds=300))
        if figure not in (None, found.total.plates):
            raise SystemExit(f"CP-SAT proved {figure}, the planner {found.total.plates}")
        proof = "proved the same" if figure is not None else "not proved in 300 s"
        say(
            f"plan: {lifters} attempts; CP-SAT {theirs:.1f} s, {proof}",
            ours,
            f"{theirs / ours:.0f} x the plan",
        )


def growth() -> None:
    problem = prepare(belt_round(Access.OUTER_END), WATCH)
    for access in Access:
        times = []
        for size in (2000, 4000, 8000, 16000):
            course = course_of(problem, access, some_orders(problem, size, 10))
            times.append(best_of(3, lambda course=course: sweep_all(problem, course))[0])
        ratios = ", ".join(f"{b / a:.2f}" for a, b in pairwise(times))
        say(f"sweep, {access.value}, 16,000 stacks an attempt", times[-1], f"doubling costs {ratios}")


def some_orders(problem: Problem, size: int, attempts: int) -> list[Family]:
    """Some orders of weights that have many, as many for each."""
    dice = np.random.default_rng(1)
    families: list[Family] = []
    for share in problem.distinct:
        codes = all_orders(problem.kit, problem.request.order, problem.alphabet, problem.vectors[share])
        if len(codes) >= 16_000 and len(families) < attempts:
            some = np.sort(dice.choice(codes, size, replace=False))
            families.append((some, problem.alphabet.lengths(some)))
    return families


def course_of(problem: Problem, access: Access, families: list[Family]) -> Course:
    graph = build_graph(problem.alphabet, access, families, WATCH)
    fees = tuple(np.zeros(len(codes), np.int64) for codes, _ in families)
    return Course(graph, tuple(range(len(families))), fees, fees[0])


def sweep_all(problem: Problem, course: Course) -> int:
    prices = problem.prices
    sweep = Sweep(course.graph, prices.off, prices.on, prices.never)
    return int(least_total(course, sweep, WATCH)[-1].min())


def in_process() -> None:
    for name, make in CASES.items():
        request = make()
        seconds, found = best_of(5, lambda request=request: plan(request))
        # Our own file, our own interpreter.
        peak = subprocess.run(
            [sys.executable, "-m", "tests.benchmarks.peak", name], capture_output=True, text=True, check=True
        )
        say(name, seconds, f"{found.proof}, {found.total.plates} plates, peak {peak.stdout.strip()} MB")


def listed_orders() -> None:
    """What the fast ways save: the plain sweep over all orders of the hard round's lighter half."""
    for access in Access:
        request = belt_round(access)
        lighter = PlanRequest(
            equipment=request.equipment, targets=request.targets[:14], order=request.order, access=access
        )
        problem = prepare(lighter, WATCH)
        theirs, slow = best_of(1, lambda problem=problem: by_sweep(problem, WATCH))
        ours, fast = best_of(3, lambda lighter=lighter: plan(lighter))
        if slow.total // problem.prices.fold != fast.total.plates:
            raise SystemExit(f"the plain sweep found another figure than {fast.total.plates} plates")
        text = f"{theirs / ours:.0f} x; {problem.how_many_stacks():,} stacks, {fast.total.plates} plates"
        say(f"plain sweep, all orders of 14 weights, {access.value}", theirs, text)


if __name__ == "__main__":
    for part in (in_process, against_pairs, against_edit_distances, growth, listed_orders, against_cpsat):
        part()
