"""Swept angles: coefficients keep their digits where the sine or the cosine is small."""

from fractions import Fraction as F

import numpy as np
import pytest
import sympy as sp

import plasmalin as plin
from plasmalin.roots.circular import filled_up
from plasmalin.roots.family import Family


def plasma():
    """Two warm magnetized species of an invented plasma."""
    u = plin.constants.u
    species = [
        plin.Species("e", -1, plin.constants.m_e, 1e18, temperature_eV=5.0),
        plin.Species("Ar", 1, 39.9 * u, 1e18, temperature_eV=0.1),
    ]
    return plin.mixture(species, magnetic_field=(0, 0, 0.05))


def test_the_same_polynomial_on_the_circle():
    theta = sp.Symbol("theta")
    swept = sp.sin(theta), sp.cos(theta)
    exponents = np.array([[2, 0, 0], [1, 1, 0], [0, 0, 0], [0, 2, 0], [0, 4, 0], [0, 3, 1]])
    family = Family(
        exponents,
        ((F(1), F(0)), (F(2), F(1)), (F(1), F(0)), (F(-2), F(0)), (F(1), F(0)), (F(3), F(0))),
    )
    made = filled_up(family, swept)
    s, c = F(3, 5), F(4, 5)
    assert made.of([(s, F(0)), (c, F(0))]) == family.of([(s, F(0)), (c, F(0))])
    free = {
        tuple(row): x for row, x in zip(made.exponents.tolist(), made.coefficients, strict=True)
    }
    assert free[0, 0, 4] == (F(1), F(0))  # (1 − sin²)² is cos⁴, one term
    assert (0, 2, 2) not in free


@pytest.mark.parametrize("near", [0.0, np.pi / 2])
def test_roots_and_slopes_near_an_axis(near):
    """Waves across B turn into others within a small angle; slopes against differences of certified roots."""
    wave = plasma().linearize().plane_wave(angle="theta")
    angle = np.abs(near - np.array([1e-3, 1.000001e-3]))
    branches = wave.branches("theta", np.sort(angle), k=50.0)
    rise = np.diff(branches.omega, axis=1)[:, 0] / np.diff(np.sort(angle))
    size = np.abs(branches.omega[:, 0])
    assert np.abs(rise - branches.slope[:, 0]).max() < 1e-4 * size.max()
    assert (np.abs(rise - branches.slope[:, 0]) < 1e-2 * np.abs(rise) + 1e-4 * size).all()


def test_a_sweep_over_all_angles_needs_no_exact_arithmetic():
    wave = plasma().linearize().plane_wave(angle="theta")
    branches = wave.branches("theta", np.linspace(0.01, np.pi / 2 - 1e-6, 300), k=50.0)
    assert "exact ball arithmetic at 0" in branches.method
