"""Certified roots against what one would write otherwise, side by side in one run.

Usage: python tests/benchmarks/bench_roots.py [--points N] [--long]

"floor" is batched numpy.linalg.eigvals on the same model's full complex matrices; the two loops are one determinant
polynomial per point with numpy.roots, and scipy.linalg.eigvals (QZ) on the pencil. Ours and the floor take turns; processor time of the best, and the median
of the ratios. Compare ratios, not microseconds.
With --long only ten million points, in blocks on two processes, with their memory.
"""

import argparse
import os
import resource
import time

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
import scipy.linalg
import sympy as sp
from models import dusty_numbers, electromagnetic, numbers

from plasmalin.roots.enclose import enclose, enclosed_blocks
from plasmalin.roots.pointwise import solved_exactly
from plasmalin.roots.slopes import ScaledFamily
from plasmalin.roots.solve import grid_of, pose, rates_of
from plasmalin.roots.tracking import track
from plasmalin.roots.values import gather, with_defaults

RANGE = 10.0, 2e4
SAMPLE = 400


class Case:
    """One model on one grid: the wave matrix, its numbers and its exact factors."""

    def __init__(self, linear, values, points, *, grid=False):
        if grid:
            side = int(points**0.5)
            k = np.geomspace(*RANGE, side)
            self.wave = linear.plane_wave(("k_x", 0, "k_z"))
            waves = {"k_x": np.repeat(k, side), "k_z": np.tile(k, side)}
        else:
            self.wave = linear.plane_wave(angle="theta")
            waves = {"k": np.geomspace(*RANGE, points), "theta": 0.5}
        self.numbers = gather(self.wave, with_defaults(self.wave, values), waves)
        self.points = self.numbers.shape[0]
        self.problem = pose(self.wave, self.numbers)
        self.grid = grid_of(self.problem, self.numbers)

    def enclosures(self):
        return [enclose(f, self.grid, points=self.points) for f, _ in self.problem.factors]

    def pencil(self, sample):
        """A_0 + omega A_1 at some points."""
        size, symbols = len(self.wave.rows), list(self.numbers.swept)
        fixed = {s: sp.Float(float(v), 17) for s, v in self.numbers.fixed.items()}
        columns = [self.numbers.swept[s][sample] for s in symbols]
        parts = np.zeros((2, len(sample), size, size), complex)
        for (i, j), entry in self.wave.entries.items():
            number = entry.subs(fixed)
            for power, c in enumerate(
                (number.subs(self.wave.omega, 0), number.diff(self.wave.omega))
            ):
                parts[power, :, i, j] = sp.lambdify(symbols, c, "numpy")(*columns)
        return parts


def seconds(function, repeats=3):
    """Processor seconds of the quickest of some repeats."""
    return min(each(function) for _ in range(repeats))


def each(function):
    start = time.process_time()
    function()
    return time.process_time() - start


def matrices_of(case):
    """The model's full complex matrices at a sample of points, and the pencil that they come from."""
    sample = np.linspace(0, case.points - 1, SAMPLE).astype(int)
    constant, linear = case.pencil(sample)
    return -np.linalg.solve(linear, constant), constant, linear, sample


def ours_and_floor(case):
    """Microseconds a point, the best of some repeats, and the median of the ratios of neighboring runs."""
    matrices, *_ = matrices_of(case)
    scale = case.points / len(matrices)
    repeats = 15 if case.points < 20_000 else 5
    pairs = [
        (each(case.enclosures), each(lambda: np.linalg.eigvals(matrices)) * scale)
        for _ in range(repeats)
    ]
    ours, floor = (min(times) / case.points * 1e6 for times in zip(*pairs, strict=True))
    return ours, floor, float(np.median([f / o for o, f in pairs]))


def loops(case):
    """Microseconds a point: the loop of np.roots, the loop of QZ."""
    _, constant, linear, sample = matrices_of(case)
    omega = np.array([1e11 + 0j])
    coefficients = []
    for family, _ in case.problem.factors:
        scaled = ScaledFamily(family, omega, [hi for hi, _ in case.grid])
        terms, _ = scaled.polynomials(
            [hi[sample] for hi, _ in case.grid], [0.0 * sample] * len(case.grid)
        )
        table = np.zeros((family.degree + 1, SAMPLE), complex)
        table[:: scaled.terms.step] = terms[::-1]
        coefficients.append(table.T)
    user = seconds(lambda: [np.roots(c) for table in coefficients for c in table])
    pairs = list(zip(constant, -linear, strict=True))
    qz = seconds(lambda: [scipy.linalg.eigvals(a, b, check_finite=False) for a, b in pairs])
    return [t / SAMPLE * 1e6 for t in (user, qz)]


def show(name, case, target):
    found = case.enclosures()
    ours, floor, median = ours_and_floor(case)
    user, qz = loops(case)
    certified = np.mean([np.isin(e.state, (0, 1, 2)).all() for e in found])
    radius = max(float((e.radius / np.abs(e.omega)).max()) for e in found)
    print(
        f"{name:<34} {len(case.wave.rows):>3} {floor:>7.1f} {ours:>7.2f} {floor / ours:>7.1f} {median:>7.1f} {target:>7} "
        f"{user / ours:>9.1f} {qz / ours:>7.1f} {100 * certified:>9.0f} {radius:>9.1e}"
    )


def show_tracking(case):
    family, _ = case.problem.factors[0]
    symbol = next(iter(case.numbers.swept))
    found = enclose(family, case.grid, points=case.points)
    plain = [hi for hi, _ in case.grid]
    rates = rates_of(case.problem, case.numbers, symbol)
    s = case.numbers.swept[symbol]

    def whole():
        slope = ScaledFamily(family, found.omega, plain).slope(found.omega, plain, rates)
        return track(lambda _: (found.omega[:0], slope[:0]), s, found.omega, slope)

    solve = seconds(lambda: enclose(family, case.grid, points=case.points))
    extra = seconds(whole)
    print(
        f"tracking (slopes and matching): {extra / case.points * 1e6:.2f} us a point, "
        f"{extra / solve:.2f} of the solve"
    )


def show_polarization(points=267):
    wave = electromagnetic(2).linearize().plane_wave(angle="theta")
    branches = wave.branches("k", np.geomspace(*RANGE, points), numbers(2), theta=0.5)
    took = each(lambda: branches.amplitudes("E", per="E_x"))
    print(f"amplitudes: {took / branches.omega.size * 1e3:.2f} ms a root, {took:.2f} s")


def show_accuracy(case):
    """The dusty plasma: every root against exact arithmetic at a sample of points."""
    sample = np.linspace(0, case.points - 1, 25).astype(int)
    worst, sizes = 0.0, []
    for (family, _), found in zip(case.problem.factors, case.enclosures(), strict=True):
        exact = solved_exactly(family, case.grid, sample)
        error = np.abs(found.omega[sample] - exact.omega) / np.abs(exact.omega)
        worst = max(worst, float(error.max()))
        sizes.append(np.abs(exact.omega))
    small, large = (f(np.concatenate(sizes, axis=1)) for f in (np.min, np.max))
    print(f"accuracy, dusty plasma, |omega| from {small:.1e} to {large:.1e} rad/s: {worst:.1e}")


def show_scattered(count, names, points=4096):
    """Wave number, angle and more at random points: no two share anything."""
    random, values = np.random.default_rng(1), numbers(count, drift=True)
    values.pop("u_1")  # from no net current
    values |= {n: values[n] * random.uniform(0.7, 1.4, points) for n in names}
    wave = electromagnetic(count, drift=True).linearize().plane_wave(angle="theta")
    waves = {"k": np.geomspace(*RANGE, points), "theta": random.uniform(0.1, 1.4, points)}
    given = gather(wave, with_defaults(wave, values), waves)
    problem = pose(wave, given)
    ((family, _),), grid = problem.factors, grid_of(problem, given)
    took = seconds(lambda: enclose(family, grid, points=points)) / points * 1e6
    swept, terms = ", ".join(["k", "theta", *names]), len(family.exponents)
    print(
        f"drift, {len(wave.rows)} unknowns, scattered {swept}: {terms} terms, {took:.1f} us a point"
    )


def show_many(case, points=10_000_000):
    family, _ = case.problem.factors[0]
    k = np.geomspace(*RANGE, points)
    grid = [(k, np.zeros_like(k))]
    start, done = time.perf_counter(), 0
    for block in enclosed_blocks(family, grid, workers=2):
        done += int((block.state == 0).all(axis=1).sum())
    took = time.perf_counter() - start
    kinds = (resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN)
    memory = [resource.getrusage(kind).ru_maxrss / 1024 for kind in kinds]
    print(
        f"{points:,} points on two processes: {done:,} certified, {took:.1f} s, "
        f"{memory[0]:.0f} MB here and {memory[1]:.0f} MB in a process"
    )


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--points", type=int, default=65536)
    parser.add_argument("--long", action="store_true")
    options = parser.parse_args()
    if options.long:
        linear = electromagnetic(2).linearize()
        show_many(Case(linear, numbers(2), 100))
        return
    print(
        f"{'model':<34} {'n':>3} {'floor':>7} {'ours':>7} {'ratio':>7} {'median':>7} {'target':>7} "
        f"{'np.roots':>9} {'QZ':>7} {'proven %':>9} {'radius':>9}"
    )
    cases = [
        ("cold, ray", 2, {"cold": True}, False, 20),
        ("warm, ray", 2, {}, False, 20),
        ("warm five species, ray", 5, {}, False, 18),
        ("drift, ray", 2, {"drift": True}, False, 4),
        ("drift five species, ray", 5, {"drift": True}, False, 4),
        ("friction, ray", 2, {"friction": True}, False, 1),
        ("drift and friction, ray", 2, {"drift": True, "friction": True}, False, 1),
        ("warm, grid of k_x and k_z", 2, {}, True, 8),
        ("drift, grid of k_x and k_z", 2, {"drift": True}, True, 1),
    ]
    for name, count, options_, grid, target in cases:
        linear = electromagnetic(count, **options_).linearize()
        case = Case(linear, numbers(count, **options_), options.points, grid=grid)
        show(name, case, target)
        if name == "warm, ray":
            warm = case
    show_scattered(2, ["B_0"])
    show_scattered(2, ["B_0", "T_0", "T_1", "m_1"])
    show_scattered(5, ["B_0"])
    show_tracking(warm)
    show_polarization()
    show_accuracy(Case(electromagnetic(3).linearize(), dusty_numbers(), 2000))


if __name__ == "__main__":
    main()
