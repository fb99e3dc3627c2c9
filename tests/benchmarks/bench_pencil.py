"""Many swept quantities at scattered points: the reduced pencil against what one would do otherwise, and its choice.

Usage: python tests/benchmarks/bench_pencil.py [--points N] [--choice]

"floor" is batched numpy.linalg.eigvals on the same model's full complex matrices, "exact" the exact way point by point, both in
turns with ours; processor time of the best. With --choice instead the polynomial and the pencil by the number of terms, where
the limit in roots/solve.py comes from. Compare ratios, not microseconds.
"""

import argparse
import os
import time
from functools import partial

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
import sympy as sp
from models import electromagnetic, numbers
from scipy.optimize import linear_sum_assignment

from plasmalin.roots.choice import by_blocks, chosen_problem
from plasmalin.roots.pointwise import solved_exactly
from plasmalin.roots.roots import solve
from plasmalin.roots.solve import filled_in, grid_of, pose, what_is_known
from plasmalin.roots.values import gather, with_defaults

SWEPT = "B_0", "T_0", "n_00", "u_0"
EXACT = 6


def scattered(count, names, points, **options):
    """A model with k, theta and some parameters at random points."""
    random = np.random.default_rng(1)
    wave = electromagnetic(count, **options).linearize().plane_wave(angle="theta")
    values = numbers(count, **options)
    for name in names:
        values[name] = values[name] * random.uniform(0.5, 2, points)
    if {"n_00", "u_0"} & set(names):
        del values["u_1"]  # it follows from the current
    waves = {"k": random.uniform(10, 2e4, points), "theta": random.uniform(0.1, 1.4, points)}
    return wave, gather(wave, with_defaults(wave, values), waves)


def full_matrices(wave, known):
    """The model's full complex matrices."""
    entries = filled_in(wave, *what_is_known(known))
    symbols, size = list(known.swept), len(wave.rows)
    parts = np.zeros((2, known.shape[0], size, size), complex)
    for (i, j), entry in entries.items():
        for power, c in enumerate((entry.subs(wave.omega, 0), entry.diff(wave.omega))):
            number = sp.lambdify(symbols, sp.N(c, 17), "numpy")
            parts[power, :, i, j] = number(*(known.swept[s] for s in symbols))
    return -np.linalg.solve(parts[1], parts[0])


def seconds(function):
    start = time.process_time()
    function()
    return time.process_time() - start


def show_ways(count, points):
    wave, known = scattered(count, SWEPT, points, drift=True)
    begun = seconds(lambda: chosen_problem(wave, known))
    problem = chosen_problem(wave, known)
    (matrix,), grid = problem.matrices, grid_of(problem, known)
    matrices, sample = full_matrices(wave, known), np.arange(EXACT)
    ours, floor, exact = np.min(
        [
            (
                seconds(lambda: solve(problem, known)) / points,
                seconds(lambda: np.linalg.eigvals(matrices)) / points,
                seconds(lambda: solved_exactly(matrix, grid, sample)) / EXACT,
            )
            for _ in range(5)
        ],
        axis=0,
    )
    found = solve(problem, known)
    print(found.method)
    print(
        f"{count} species, {len(wave.rows)} unknowns, {points} points: ours {ours * 1e6:.0f} us a point, floor "
        f"{floor * 1e6:.0f} us (ratio {floor / ours:.2f}), exact {exact * 1e3:.1f} ms (ratio {exact / ours:.0f}); "
        f"choosing {begun:.2f} s once; largest relative radius {(found.radius / np.abs(found.omega)).max():.1e}, "
        f"error of the floor {error_of(matrices, found):.1e}"
    )


def error_of(matrices, found, sample=100):
    """The largest relative error of the plain eigenvalues, zero modes left out."""
    worst = 0.0
    for values, truth in zip(np.linalg.eigvals(matrices[:sample]), found.omega, strict=False):
        off = np.abs(values[:, None] - truth) / np.abs(truth)
        rows, columns = linear_sum_assignment(off)
        worst = max(worst, float(off[rows, columns].max()))
    return worst


def show_choice(points):
    print(
        f"{'unknowns':>8} {'swept':<28} {'terms':>6} {'polynomial':>11} {'pencil':>7}  us a point"
    )
    sweeps = [
        (),
        ("T_0",),
        ("B_0", "T_0"),
        ("T_0", "T_1", "n_00"),
        ("B_0", "T_0", "T_1", "n_00", "u_0"),
    ]
    for count, names in [(c, s) for c in (2, 3) for s in sweeps[: 7 - c]] + [
        (5, s) for s in [(), ("T_0",), ("B_0",), ("T_0", "T_1")]
    ]:
        wave, known = scattered(count, names, points, drift=True)
        ways = pose(wave, known), by_blocks(wave, *what_is_known(known), True, longest=0)
        times = [[seconds(partial(solve, way, known)) for way in ways] for _ in range(3)]
        polynomial, pencil = np.min(times, axis=0) / points * 1e6
        terms = sum(len(f.coefficients) for f, _ in ways[0].factors)
        swept = ", ".join(("k", "theta", *names))
        print(
            f"{len(wave.rows):>8} {swept:<28} {terms:>6} {polynomial:>11.0f} {pencil:>7.0f}",
            flush=True,
        )


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--points", type=int, default=1024)
    parser.add_argument("--choice", action="store_true")
    options = parser.parse_args()
    if options.choice:
        show_choice(options.points)
        return
    for count in (2, 3, 5):
        show_ways(count, options.points)


if __name__ == "__main__":
    main()
