"""What species do to each other and to neutrals: sources of particles, friction, heat."""

from __future__ import annotations

from typing import Any

from sympy import Expr

from ..operators import dot

# Sources of particles, 1/(m^3 s) -----------------------------------------------------------------


def ionization(n: Expr, rate: Any) -> Expr:
    """Ionization by a species of density n: S = rate n, with rate in 1/s (n_neutral times the rate coefficient).

    It is the `source` of `continuity` of the electrons and of the ions that are made. Where the new particles start
    with another velocity, add `source_momentum` to the forces. Equation: Lieberman and Lichtenberg (2005), Principles
    of Plasma Discharges and Materials Processing, sec. 2.3 (from memory).
    """
    return rate * n


def recombination(n_s: Expr, n_t: Expr, coefficient: Any) -> Expr:
    """Recombination of two species: S = −coefficient n_s n_t, with the coefficient in m^3/s.

    The same source stands in both continuity laws, which conserves charge. It takes away particles at their own velocity,
    so it adds nothing to a momentum law in the form m n dv/dt. Equation: Langevin (1903), Ann. Chim. Phys. 28, 433
    (from memory).
    """
    return -coefficient * n_s * n_t


def attachment(n: Expr, rate: Any) -> Expr:
    """Attachment of electrons of density n: S = −rate n, with rate in 1/s.

    The negative ions get the opposite source; they start at the velocity of the neutrals, which `source_momentum` adds.
    Equation: Thompson (1959), Proc. Phys. Soc. 73, 818 (from memory).
    """
    return -rate * n


def source_momentum(mass: Any, source: Any, v: Expr, source_velocity: Any = 0) -> Expr:
    """Momentum exchange of a density source S in 1/(m^3 s): −m S (v − v_source), N/m^3.

    For laws in the form m n dv/dt = ..., where continuity has been used: d_t(m n v) + div(m n v v) = m S v_source + ...
    (Braginskii 1965, Reviews of Plasma Physics 1, 205, from memory).
    """
    return -mass * source * (v - source_velocity)


# Friction, N/m^3, and heat, W/m^3 ----------------------------------------------------------------


def neutral_friction(n: Expr, v: Expr, mass: Any, rate: Any, neutral_velocity: Any = 0) -> Expr:
    """Friction on neutrals: −m nu n (v − v_n), N/m^3; `rate` is the collision frequency nu, 1/s.

    The neutrals are outside the model, so momentum is not conserved. Equation: Cowling (1945), Proc. R. Soc. A 183, 453
    (from memory).
    """
    return -mass * rate * n * (v - neutral_velocity)


def friction(n_s: Expr, v_s: Expr, n_t: Expr, v_t: Expr, alpha: Any) -> Expr:
    """Friction of species s on t: R_st = −alpha n_s n_t (v_s − v_t), N/m^3; the force on t has s and t exchanged.

    `alpha` (N s m^2) may depend on temperatures and on ``|v_s − v_t|``; it must be the same in both, then momentum is
    conserved identically. Given as `collisions` of both momentum laws, `audit` shows that it is. Equation: Burgers (1969),
    Flow Equations for Composite Gases (from memory).
    """
    return -alpha * n_s * n_t * (v_s - v_t)


def frictional_heat(n_s: Expr, v_s: Expr, n_t: Expr, v_t: Expr, alpha: Any, share: Any = 1) -> Expr:
    """Heat from `friction` of a pair, share alpha n_s n_t ``|v_s − v_t|^2``, W/m^3.

    The two energy laws take shares that add up to 1; the species s takes m_t/(m_s + m_t) for Maxwellian species of drift
    below the thermal speed (Burgers 1969, Flow Equations for Composite Gases, from memory), so electrons take nearly all
    against ions.
    """
    return share * alpha * n_s * n_t * dot(v_s - v_t, v_s - v_t)


def heat_exchange(n_s: Expr, t_s: Expr, n_t: Expr, t_t: Expr, rate: Any) -> Expr:
    """Heat that s takes from t: −rate n_s n_t (T_s − T_t), W/m^3, with rate in m^3/s and temperatures in J.

    With `friction` of coefficient alpha the rate is 3 alpha/(m_s + m_t) (Braginskii 1965, Reviews of Plasma Physics 1, 205,
    from memory). The law of t takes the same with s and t exchanged.
    """
    return -rate * n_s * n_t * (t_s - t_t)
