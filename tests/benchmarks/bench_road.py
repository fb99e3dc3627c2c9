"""From laws to determinant, side by side in one run. Usage: python tests/benchmarks/bench_road.py [--sympy]

The option adds SymPy's own determinant for the two-species model, which takes minutes.
"""

import subprocess
import sys
import time

from models import electromagnetic

from plasmalin.exact.determinant import determinant


def best(function, repeats=3):
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        result = function()
        times.append(time.perf_counter() - start)
    return min(times), result


def import_time(name):
    command = [
        sys.executable,
        "-c",
        f"import time; t = time.perf_counter(); import {name}; print(time.perf_counter() - t)",
    ]
    return min(
        float(subprocess.run(command, capture_output=True, text=True, check=True).stdout)
        for _ in range(7)
    )


def main():
    print(f"{'unknowns':>8} {'laws to matrix, s':>18} {'determinant, s':>15} {'terms':>9}")
    for count in (2, 3, 4):

        def road(count=count):
            linear = electromagnetic(count, drift=True).linearize()
            return linear.plane_wave(("k_x", 0, "k_z"))

        laws, wave = best(road)
        minors, found = best(
            lambda wave=wave: determinant(wave.entries, len(wave.rows), wave.omega),
            3 if count < 4 else 1,
        )
        print(f"{len(wave.rows):>8} {laws:>18.3f} {minors:>15.3f} {len(found):>9}")
        if count == 2 and "--sympy" in sys.argv:
            from sympy.polys.matrices import DomainMatrix

            slow, _ = best(lambda wave=wave: DomainMatrix.from_Matrix(wave.matrix).det(), 1)
            print(
                f"         SymPy's DomainMatrix determinant: {slow:.1f} s, {slow / minors:.0f} times longer"
            )
    ours, theirs = import_time("plasmalin"), import_time("sympy")
    print(f"import plasmalin {ours:.3f} s, import sympy {theirs:.3f} s, ratio {ours / theirs:.2f}")


if __name__ == "__main__":
    main()
