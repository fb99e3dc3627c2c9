"""What the complete list of events costs beside the branches that it belongs to.

Usage: python tests/benchmarks/bench_events.py [--points N]

Processor seconds of the best of some repeats: branches as they are, the list of all meetings alone, and whether it was
taken. The determinant and its factors are kept from a first call.
"""

import argparse
import os
import time

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
from models import electromagnetic, numbers

import plasmalin as plin
from plasmalin.roots.meetings import all_crossings, all_meetings
from plasmalin.roots.solve import pose
from plasmalin.roots.values import gather, with_defaults

RANGE = 10.0, 2e4


def two_streams():
    """Two cold beams through each other, of equal density; invented."""
    beams = [
        plin.Species(name, charge_number=-1, mass=plin.constants.m_e, density=1e15, drift=(u,))
        for name, u in (("a", 1e6), ("b", -1e6))
    ]
    ion = plin.Species(
        "i", charge_number=1, mass=plin.constants.u, density=2e15, temperature_eV=0.1, gamma=3
    )
    return plin.mixture([*beams, ion], field="electrostatic", axes="x")


def seconds(function, repeats=5):
    def each():
        start = time.process_time()
        function()
        return time.process_time() - start

    return min(each() for _ in range(repeats))


def show(name, wave, values, waves, k):
    found = wave.branches("k", k, values, **waves)
    whole = seconds(lambda: wave.branches("k", k, values, **waves))
    chosen = gather(wave, with_defaults(wave, {**values, "k": k}), waves)
    families = [f for f, _ in pose(wave, chosen).factors]
    size = float(np.abs(found.omega).max())
    alone = seconds(
        lambda: [*(all_meetings(f, k, size) for f in families), all_crossings(families, k, size)]
    )
    print(
        f"{name:<34} {len(wave.rows):>3} {1e3 * whole:>9.1f} {1e3 * alone:>9.1f} "
        f"{len(found.events):>7} {found.events_complete}"
    )


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--points", type=int, default=1000)
    k = np.geomspace(*RANGE, parser.parse_args().points)
    print(f"{'model':<34} {'n':>3} {'whole ms':>9} {'events ms':>9} {'events':>7} complete")
    beams = two_streams()
    show("two cold beams and warm ions", beams.linearize().plane_wave("x"), beams.values, {}, k)
    cases = [
        ("cold", 2, {"cold": True}),
        ("warm", 2, {}),
        ("warm, parallel", 2, {}),
        ("drift", 2, {"drift": True}),
        ("friction", 2, {"friction": True}),
        ("drift and friction", 2, {"drift": True, "friction": True}),
        ("drift, three species", 3, {"drift": True}),
        ("warm, five species", 5, {}),
    ]
    for name, count, options in cases:
        wave = electromagnetic(count, **options).linearize().plane_wave(angle="theta")
        theta = 0.0 if "parallel" in name else 0.5
        show(name, wave, numbers(count, **options), {"theta": theta}, k)


if __name__ == "__main__":
    main()
