"""Null vectors at roots: the fast way against the wave matrix itself and against multiprecision."""

import mpmath
import numpy as np
import pytest

from plasmalin.roots import polarization
from plasmalin.roots.nullspace import Rows, null_vectors_at
from tests.benchmarks.models import electromagnetic, numbers

WAVE_NUMBERS = np.geomspace(10.0, 2e4, 5)


def branches_of(theta, **options):
    wave = electromagnetic(2, **options).linearize().plane_wave(angle="theta")
    return wave.branches("k", WAVE_NUMBERS, numbers(2, **options), theta=theta)


def in_multiprecision(branches):
    made = np.zeros((*branches.omega.shape, len(branches.wave.rows)), complex)
    places = np.argwhere(np.isfinite(branches.omega))
    polarization._in_multiprecision(branches.wave, branches.numbers, branches.omega, places, made)
    return made


@pytest.mark.parametrize("theta", [0.0, 0.5])
@pytest.mark.parametrize("options", [{}, {"drift": True, "friction": True}])
def test_both_ways_agree(theta, options, monkeypatch):
    branches = branches_of(theta, **options)
    slow = in_multiprecision(branches)
    monkeypatch.setattr(polarization, "_in_multiprecision", lambda *_: None)
    quick = branches._vectors
    assert np.isfinite(quick).all(), "nothing is left to multiprecision"
    assert np.array_equal(quick == 0, slow == 0)
    assert np.allclose(quick, slow, rtol=1e-14, atol=0)


def test_small_amplitudes_solve_the_laws():
    """Nearly perpendicular: amplitudes from 1 to 1e-25, each right by itself, as every row shows."""
    branches = branches_of(np.pi / 2)
    wave, theta = branches.wave, np.pi / 2
    vectors = branches._vectors
    fixed = {s: float(v) for s, v in branches.numbers.fixed.items()}
    for b, i in [(0, 0), (5, 2), (9, 4)]:
        with mpmath.workdps(60):
            point = {
                **{s: mpmath.mpf(v) for s, v in fixed.items()},
                wave.omega: branches.omega[b, i],
            }
            point |= {s: mpmath.mpf(a[i]) for s, a in branches.numbers.swept.items()}
            assert theta in fixed.values()
            terms = [[] for _ in wave.rows]
            for (row, column), entry in wave.entries.items():
                value = mpmath.mpmathify(entry.evalf(60, subs=point))
                terms[row].append(value * mpmath.mpmathify(complex(vectors[b, i, column])))
            for row in terms:
                assert abs(sum(row)) <= 1e-13 * max(abs(t) for t in row)


def test_a_singular_matrix_is_not_found():
    """Two null vectors at one root: none is named; a zero root is left alone too."""
    high = np.array([[[1.0], [1.0]], [[-1.0], [-1.0]]], complex)
    rows = Rows(2, np.array([[0, 1], [0, 1]]), np.zeros((1, 0), np.int64), high, 0 * high)
    _, found = null_vectors_at(rows, [], np.array([1.0 + 0j, 0.0]), np.array([0, 0]))
    assert not found.any()
