"""Draws what certified roots cost against the number of unknowns and of points: docs/speed.svg.

Usage: python tests/benchmarks/plot_roots.py [FILE]
"""

import sys

import matplotlib as mpl

mpl.use("svg")

import matplotlib.pyplot as plt
import numpy as np
from bench_roots import Case, ours_and_floor
from models import electromagnetic, numbers

SPECIES = (2, 3, 4, 5)
POINTS = tuple(4**n for n in range(4, 9))
TICKS = 1, 3, 10, 30, 100, 300


def measured(count, points):
    """Unknowns, and microseconds a point: ours and batched eigvals."""
    case = Case(electromagnetic(count).linearize(), numbers(count), points)
    case.enclosures()
    ours, floor, _ = ours_and_floor(case)
    return len(case.wave.rows), ours, floor


def draw(ax, x, rows, label):
    ours, floor = (np.array([r[i] for r in rows]) for i in (1, 2))
    ax.loglog(x, floor, "s--", color="#D55E00", label="batched eigvals, no proof")
    ax.loglog(x, ours, "o-", color="#0072B2", label="every root with its proof")
    for at, y, ratio in zip(x, ours, floor / ours, strict=True):
        ax.annotate(f"{ratio:.0f}x", (at, y), (0, -13), textcoords="offset points", ha="center")
    ax.set_xticks(x, [f"{n:,}" for n in x])
    ax.set_xticks([], minor=True)
    ax.set_xlabel(label)
    ax.set_yticks(TICKS, [str(n) for n in TICKS])
    ax.set_yticks([], minor=True)
    ax.set_ylim(TICKS[0], TICKS[-1])


def main():
    file = sys.argv[1] if len(sys.argv) > 1 else "docs/speed.svg"
    mpl.rcParams |= {"svg.fonttype": "none", "svg.hashsalt": "plasmalin", "font.size": 9}
    figure, (left, right) = plt.subplots(1, 2, figsize=(8, 3.2), sharey=True, layout="constrained")
    rows = [measured(count, 4096) for count in SPECIES]
    draw(left, [r[0] for r in rows], rows, "unknowns (4,096 points)")
    draw(right, list(POINTS), [measured(2, n) for n in POINTS], "points (14 unknowns)")
    left.set_ylabel("microseconds a point")
    right.legend(frameon=False, loc="upper right")
    figure.savefig(file, metadata={"Date": None, "Creator": None})


if __name__ == "__main__":
    main()
