"""Every published root, from the nonlinear laws through the public interface."""

import math

import numpy as np
import pytest
from published import CASES, FOLDER, read

import plasmalin as plin

# Roots that a direct declaration has beyond the published ones, as the files' `verified` fields say: a second
# polarization of light, longitudinal plasma oscillations, vorticity damped by viscosity.
EXTRA = {
    "em-wave-unmagnetised": lambda k, p: [s * math.sqrt(p["n0"] * p["e"] ** 2 / (p["eps0"] * p["me"]) + (p["c"] * k) ** 2) for s in (1, -1)],
    "r-and-l-waves": lambda k, p: [s * math.sqrt(p["n0"] * p["e"] ** 2 / p["eps0"] * (1 / p["me"] + 1 / p["mi"])) for s in (1, -1)],
    "kirchhoff-stokes-sound": lambda k, p: [-1j * k**2 * p["mu"] / p["rho0"]] * 2,
}  # fmt: skip
WAVE_NAMES = ("k", "kx", "ky", "kz")


@pytest.fixture(scope="module")
def waves():
    return {}


def wave_of(waves, name):
    if name not in waves:
        waves[name] = CASES[name]()
    return waves[name]


def points(name):
    case = read(name)
    return [pytest.param(name, i, id=f"{name}-{i}") for i in range(len(case["points"]))]


@pytest.mark.parametrize(("name", "index"), [p for name in CASES for p in points(name)])
def test_published_roots(waves, name, index):
    case = read(name)
    wave = wave_of(waves, name)
    point = case["points"][index]
    known = {**case["parameters"]}
    numbers = {n: v for n, v in point.items() if not n.startswith("omega")}
    known.update({n: v for n, v in numbers.items() if n not in WAVE_NAMES})
    values = {n: v for n, v in known.items() if n in wave.linear.symbols}
    vector = {s.name: numbers.get(s.name, 0.0) for s in wave.wave_symbols}
    found = wave.roots(values, **vector).require().omega
    published = [complex(a, b) for a, b in zip(point["omega_re"], point["omega_im"], strict=True)]
    if name in EXTRA:
        published += EXTRA[name](numbers["k"], known)
    assert len(found) == len(published)
    left = list(found)
    for omega in published:
        nearest = min(left, key=lambda z: abs(z - omega))
        assert abs(nearest - omega) <= case["tolerance"] * abs(omega)
        left.remove(nearest)


@pytest.mark.parametrize("name", CASES)
def test_the_laws_audit(waves, name):
    audit = wave_of(waves, name).linear.audit(seed=1)
    assert audit.passed, str(audit)


def test_all_cases_are_declared():
    files = {f.stem for f in FOLDER.glob("*.toml")} - {"handbook-numbers"}
    assert files == set(CASES)


def test_largest_two_stream_growth():
    """Half the plasma frequency of one beam at k V = sqrt(3)/2: source in the case's file."""
    wave = CASES["counterstreaming-cold-beams"]()
    s, omega, _ = wave.branches(
        "k", np.linspace(0.8, 0.93, 1301), {"wp0": 1.0, "V": 1.0}
    ).most_unstable()
    assert omega.imag == pytest.approx(0.5, abs=1e-8)
    assert s == pytest.approx(math.sqrt(3) / 2, abs=1e-4)


def test_two_stream_onset_is_found():
    """Stable beyond k V = sqrt(2): the onset is listed among the events to the last digit."""
    wave = CASES["counterstreaming-cold-beams"]()
    events = wave.branches("k", np.linspace(1.0, 2.0, 37), {"wp0": 1.0, "V": 1.0}).events
    assert [e.kind for e in events] == ["onset"]
    assert events[0].at == math.sqrt(2)
    assert 0 < events[0].radius < 2e-16


def handbook():
    return [pytest.param(n, id=n["name"][:40]) for n in read("handbook-numbers")["numbers"]]


@pytest.mark.parametrize("number", handbook())
def test_handbook_numbers(number):
    """The constants against practical formulas of the NRL Plasma Formulary (see the file for sources)."""
    c = plin.constants
    n, b = 1e6, 1e-4
    omega_pe = math.sqrt(n * c.e**2 / (c.epsilon_0 * c.m_e))
    omega_pi = math.sqrt(n * c.e**2 / (c.epsilon_0 * c.m_p))
    ours = {
        "electron plasma frequency, rad/s": omega_pe,
        "electron plasma frequency, Hz": omega_pe / (2 * math.pi),
        "proton plasma frequency": omega_pi,
        "electron gyrofrequency": c.e * b / c.m_e,
        "proton gyrofrequency": c.e * b / c.m_p,
        "Debye length": math.sqrt(c.epsilon_0 * c.e / (n * c.e**2)),
        "Alfven speed": b / math.sqrt(c.mu_0 * n * c.m_p),
        "ion sound speed": math.sqrt(c.e / c.m_p),
        "electron thermal speed": math.sqrt(c.e / c.m_e),
        "electron inertial length": c.c / omega_pe,
        "ion inertial length": c.c / omega_pi,
        "proton/electron mass ratio": c.m_p / c.m_e,
    }
    mine = next(v for key, v in ours.items() if number["name"].startswith(key))
    assert mine == pytest.approx(number["value"], rel=number["tolerance"])
