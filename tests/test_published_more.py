"""Every further published root, from the nonlinear laws through the public interface.

Sources are named in the files of ``cases_more/``; most are cited from memory, as the files say.
"""

import re
from functools import cache

import numpy as np
import pytest
from published_more import CASES, FOLDER, read
from scipy.optimize import minimize_scalar

# Roots in all of the laws whose published relation is a limit: the eight of R and L waves and two longitudinal
# plasma oscillations; the quartic of drift-acoustic-exact.
LIMITS = {"alfven-from-two-fluids": 8 + 2, "drift-acoustic-limit": 4}
FORMULAS = [name for name in CASES if name not in LIMITS]


@cache
def wave_of(name):
    return CASES[name]()


def points(names):
    return [
        pytest.param(name, i, id=f"{name}-{i}")
        for name in names
        for i in range(len(read(name)["points"]))
    ]


def roots_at(name, point):
    """All non-zero roots at a point of a case; what a point gives goes before the case's parameters."""
    wave, known = wave_of(name), {**read(name)["parameters"], **point}
    values = {n: known[n] for n in wave.linear.symbols}
    vector = {s.name: known[s.name] for s in wave.wave_symbols}
    return wave.roots(values, **vector).require().omega


def published(point):
    return [complex(a, b) for a, b in zip(point["omega_re"], point["omega_im"], strict=True)]


def beyond(case, index):
    """The zero roots and the others that the laws have beyond the published ones, as `verified` lists them."""
    stated = re.findall(
        r"(\d+) extra zero root\(s\)(?: and other roots ([^;]+))?", case["verified"]
    )
    zeros, others = stated[index if len(stated) > 1 else 0]
    return int(zeros), [complex(z) for z in others.split(", ") if z]


def left_after(found, expected, tolerance):
    """The roots that remain when each expected one has taken the nearest, which must be near enough."""
    left = list(found)
    for omega in expected:
        nearest = min(left, key=lambda z: abs(z - omega))
        assert abs(nearest - omega) <= tolerance * abs(omega)
        left.remove(nearest)
    return left


@pytest.mark.parametrize(("name", "index"), points(FORMULAS))
def test_published_roots(name, index):
    case = read(name)
    point = case["points"][index]
    zeros, others = beyond(case, index)
    left = left_after(roots_at(name, point), published(point), case["tolerance"])
    assert left_after(left, others, 1e-6) == []  # seven digits are given
    assert wave_of(name).relation.zero_modes == zeros


@pytest.mark.parametrize(("name", "index"), points(LIMITS))
def test_published_limits(name, index):
    """The published root is as far from the nearest root as the file says, in its three digits."""
    case = read(name)
    point = case["points"][index]
    found = roots_at(name, point)
    assert len(found) == LIMITS[name]
    for omega, error in zip(published(point), point["expected_error"], strict=True):
        distance = np.abs(found - omega).min() / abs(omega)
        assert distance <= case["tolerance"]
        assert distance == pytest.approx(error, rel=6e-3)


@pytest.mark.parametrize("name", CASES)
def test_the_laws_audit(name):
    audit = wave_of(name).linear.audit(seed=1)
    assert audit.passed, str(audit)


def test_all_cases_are_declared():
    assert {f.stem for f in FOLDER.glob("*.toml")} == set(CASES)


def mirror_threshold():
    """Where growth sets in along p_perp, at a propagation so oblique that (kz/kx)² does not matter."""
    values = {"rho0": 1.0, "B0": 1.0, "ppar": 1.0}
    sweep = np.linspace(6.0, 7.0, 11)
    (event,) = (
        wave_of("cgl-mirror-threshold").branches("pperp", sweep, values, kx=1.0, kz=1e-4).events
    )
    assert event.kind == "onset"
    return event.at


@cache
def weak_beam_maximum():
    """The largest growth rate and its k V."""
    wave = wave_of("weak-beam-plasma")
    values = read("weak-beam-plasma")["parameters"]
    best = minimize_scalar(
        lambda k: -wave.roots(values, k=k).imag.max(),
        bounds=(0.9, 1.1),
        method="bounded",
        options={"xatol": 1e-9},
    )
    return -best.fun, best.x * values["V"]


NUMBERS = {
    "threshold pperp": mirror_threshold,
    "maximum growth rate": lambda: weak_beam_maximum()[0],
    "k V at the maximum": lambda: weak_beam_maximum()[1],
    "weak-beam limit": lambda: weak_beam_maximum()[0],
}


@pytest.mark.parametrize(
    "number",
    [pytest.param(n, id=n["name"][:30]) for c in CASES for n in read(c).get("numbers", ())],
)
def test_published_numbers(number):
    mine = next(f() for start, f in NUMBERS.items() if number["name"].startswith(start))
    assert mine == pytest.approx(number["value"], rel=number["tolerance"])
