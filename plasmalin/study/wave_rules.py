"""Rules on a wave in one fluid: its length and its speed against what the particles do."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from .kind import Array, Kind, length
from .plasma import Plasma
from .remark import Remark
from .rule import PRACTICE, Rule, collisions, known, largest, most_frequent, remark, smallest

# What a wave is to a fluid -----------------------------------------------------------------------


def along_field(s: Kind, p: Plasma) -> tuple[Array, Array]:
    """The wave number along and across the magnetic field."""
    whole, b = known(p.wave_number), s.gyration or []
    along = np.abs(sum(k * x for k, x in zip(p.k or [], b, strict=True))) / length(b)
    return along, np.sqrt(np.maximum(whole**2 - along**2, 0.0))


def doppler(s: Kind, p: Plasma) -> Array:
    """omega − k.u, shape (..., degree); NaN where no wave moves past the fluid."""
    flow = np.asarray(sum(k * u for k, u in zip(p.k or [], s.drift or [], strict=True)))
    shifted = known(p.omega) - flow[..., None]
    still = np.abs(shifted) <= 1e-6 * (known(p.wave_number) * known(s.thermal_speed))[..., None]
    dying = (shifted.imag < 0) & (np.abs(shifted.real) < -shifted.imag)
    return np.asarray(np.where(still | dying, np.nan, shifted))


def resonance(s: Kind, p: Plasma) -> Array:
    """``|omega − k.u| / (k v_th)``, with k along the field where gyration is faster than the wave."""
    pace = np.abs(doppler(s, p))
    reach = np.broadcast_to(known(p.wave_number)[..., None], pace.shape)
    if s.gyration is not None:
        along = along_field(s, p)[0][..., None]
        reach = np.where(pace < known(s.gyrofrequency)[..., None], along, reach)
    return np.asarray(pace / (reach * known(s.thermal_speed)[..., None]))


def is_collisional(s: Kind, p: Plasma) -> bool:
    """Whether the mean free path is below a third of 1/k everywhere."""
    if not collisions(s) or s.thermal_speed is None:
        return False
    return largest(known(p.wave_number) * s.thermal_speed / most_frequent(s)[0]) < 1 / 3


def at_root(s: Kind, p: Plasma, where: Array, distance: Array) -> tuple[float, complex] | None:
    """Among the chosen roots the one of least distance: its resonance number and itself."""
    if not np.any(where):
        return None
    place = np.unravel_index(np.argmin(np.where(where, distance, np.inf)), where.shape)
    omega = np.broadcast_to(known(p.omega), where.shape)
    return float(resonance(s, p)[place]), complex(omega[place])


def shown(omega: complex) -> str:
    sign = "−" if omega.imag < 0 else "+"
    return f"ω = {omega.real:.4g} {sign} {abs(omega.imag):.3g} i rad/s"


# Waves -------------------------------------------------------------------------------------------


def debye(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(known(p.wave_number) * known(s.debye_length))
    if x > 0.3 and not s.fluid.nonlocal_closure:
        yield remark(
            f"k λ_D, species {s.name}",
            x,
            f"waves near the plasma frequency of {s.name} are Landau damped, which is not in the model",
            f"{PRACTICE}: below 0.3, where Landau's rate (1946, J. Phys. USSR 10, 25) is 2 % of the plasma frequency",
        )


def quasineutral(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(known(p.wave_number) * known(s.debye_length))
    if x > 0.1:
        yield remark(
            f"k λ_D under quasi-neutrality, species {s.name}",
            x,
            "the laws leave charge separation out, which adds (k λ_D)² to 1 in the speed of sound",
            f"{PRACTICE}: below 0.1, a correction of 1 %",
        )


def landau(s: Kind, p: Plasma) -> Iterator[Remark]:
    ratio = resonance(s, p)
    found = at_root(s, p, (ratio > 0.3) & (ratio < 3), np.abs(np.log(ratio)))
    if found and not s.fluid.nonlocal_closure and not is_collisional(s, p):
        yield remark(
            f"ω/(k v_th), species {s.name}",
            found[0],
            f"at {shown(found[1])} the wave passes {s.name} at a speed that its particles have: "
            "Landau damping (or growth) by them is not in the model",
            f"{PRACTICE}: below 0.3 or above 3 times sqrt(T/m); resonant particles are there as exp(−x²/2)",
        )


def closure(s: Kind, p: Plasma) -> Iterator[Remark]:
    gamma, ratio = known(s.gamma), resonance(s, p)
    if is_collisional(s, p) or s.fluid.nonlocal_closure:
        return
    fast = (ratio >= 3) & (ratio < 10) & (gamma < 1.2)[..., None]
    found = at_root(s, p, fast, ratio)
    if found:
        yield remark(
            f"ω/(k v_th) for γ, species {s.name}",
            found[0],
            f"at {shown(found[1])} the wave outruns {s.name}, so that compression is adiabatic (γ = 3 along k without "
            f"collisions), while the model has γ = {smallest(gamma):.3g}",
            "Bohm and Gross 1949, Phys. Rev. 75, 1851, from memory; above 10 pressure adds less than 3 %",
        )
    slow = (ratio <= 0.3) & (gamma > 1.2)[..., None]
    found = at_root(s, p, slow, ratio)
    if found:
        yield remark(
            f"ω/(k v_th) for γ, species {s.name}",
            found[0],
            f"at {shown(found[1])} the particles of {s.name} overtake the wave and even out their temperature "
            f"(γ = 1), while the model has γ = {largest(gamma):.3g}",
            f"{PRACTICE}: isothermal below 0.3 times sqrt(T/m) without collisions",
        )


def isotropized(s: Kind, p: Plasma) -> Iterator[Remark]:
    gamma, (nu, source) = known(s.gamma), most_frequent(s)
    x = largest(np.where((gamma > 2.5)[..., None], nu[..., None] / np.abs(doppler(s, p)), 0.0))
    if x > 1:
        yield remark(
            f"ν/ω, species {s.name}",
            x,
            f"collisions ({source}) spread the heat of compression over three directions within a period, γ = 5/3, "
            f"while γ = {largest(gamma):.3g} is for one direction",
            f"{PRACTICE}: γ = 3 for ν below ω",
        )


def free_path(s: Kind, p: Plasma) -> Iterator[Remark]:
    nu, source = most_frequent(s)
    ratio = known(p.wave_number) * known(s.thermal_speed) / nu
    between = ratio[(ratio > 1 / 3) & (ratio < 3)]
    if between.size:
        yield remark(
            f"k v_th/ν, species {s.name}",
            float(between.flat[0]),
            f"the mean free path ({source}) is about 1/k: neither a collisional nor a collisionless closure holds",
            f"{PRACTICE}: below 1/3 or above 3",
        )
    elif (
        s.gamma is not None
        and largest(ratio[np.broadcast_to(abs(s.gamma - 5 / 3) < 0.2, ratio.shape)]) >= 3
    ):
        yield remark(
            f"k v_th/ν, species {s.name}",
            largest(ratio),
            f"γ = 5/3 is for a mean free path ({source}) below the wavelength; without collisions γ = 3 along k",
            f"{PRACTICE}: below 1/3",
        )


# Magnetic field ----------------------------------------------------------------------------------


def larmor(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(along_field(s, p)[1] * known(s.larmor_radius))
    if x > 0.3:
        more = (
            "; whether the viscous terms of its law are those is not judged"
            if s.fluid.viscous
            else ""
        )
        yield remark(
            f"k ρ_L, species {s.name}",
            x,
            "gyroviscosity and cyclotron harmonics are not in a fluid with this pressure" + more,
            f"{PRACTICE}: k across B times sqrt(T/m)/gyrofrequency below 0.3, corrections of order (k ρ_L)²",
        )


def across(s: Kind, p: Plasma) -> Iterator[Remark]:
    along, over = along_field(s, p)
    gamma = known(s.gamma)
    part = largest(np.where(gamma > 2.5, over / np.sqrt(along**2 + over**2), 0.0))
    slow = p.omega is None or smallest(np.abs(p.omega)) < largest(known(s.gyrofrequency))
    if part > 0.3 and slow:
        yield remark(
            f"γ = 3 across B, species {s.name}",
            part,
            f"this part of k is across the field, where compression is shared by two directions (γ = 2); "
            f"γ = {largest(gamma):.3g} is for one direction, along B",
            "Chew, Goldberger and Low 1956, Proc. R. Soc. A 236, 112: 3 along, 2 across",
        )


def _quasineutral(s: Kind, p: Plasma) -> bool:
    return s.charge is not None and s.response is None


def magnetized(s: Kind, p: Plasma) -> bool:
    return s.gyration is not None and bool(np.any(length(s.gyration)))


WAVE_RULES = (
    Rule("k λ_D", ("charge", "temperature", "mass", "k", "debye"), debye),
    Rule(
        "k λ_D under quasi-neutrality",
        ("temperature", "k", "debye"),
        quasineutral,
        applies=_quasineutral,
    ),
    Rule(
        "ω/k against thermal speed",
        ("charge", "temperature", "mass", "drift", "k", "roots"),
        landau,
    ),
    Rule(
        "γ against ω/k",
        ("charge", "temperature", "gamma", "mass", "drift", "k", "roots"),
        closure,
    ),
    Rule(
        "γ = 3 against collisions",
        ("temperature", "gamma", "mass", "drift", "collisions", "k", "roots"),
        isotropized,
    ),
    Rule(
        "mean free path against wavelength", ("temperature", "mass", "collisions", "k"), free_path
    ),
    Rule("k ρ_L", ("temperature", "mass", "k"), larmor, applies=magnetized),
    Rule("γ = 3 across B", ("temperature", "gamma", "mass", "k"), across, applies=magnetized),
)
