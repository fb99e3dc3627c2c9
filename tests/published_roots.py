"""A case's roots against those of its published polynomials."""

import mpmath

TOLERANCE = 1e-10


def published_roots(case):
    """The roots of the published polynomials, by mpmath at 40 digits."""
    with mpmath.workdps(40):
        return [
            complex(z)
            for p in case.polynomials
            for z in mpmath.polyroots(list(map(complex, p)), maxsteps=200, extraprec=200)
        ]


def assert_published_roots(case):
    """Every published root is found, and nothing else."""
    left = list(case.wave.roots(case.values, **case.k).require().omega)
    expected = published_roots(case)
    assert len(left) == len(expected)
    for omega in expected:
        nearest = min(left, key=lambda z: abs(z - omega))
        assert abs(nearest - omega) <= TOLERANCE * abs(omega)
        left.remove(nearest)
