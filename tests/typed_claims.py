"""Right relations as authors type them, with their shorthands, for cases of ``published`` and ``published_more``."""

OMEGAS = {"wpe": "sqrt(n0 e^2/(eps0 me))", "wpi": "sqrt(n0 e^2/(eps0 mi))"}
GYRATION = {"Wce": "e B0/me", "Wci": "e B0/mi"}

TYPED = {
    "langmuir-bohm-gross": [
        ("omega^2 = wpe^2 + gamma k^2 vte^2", {"vte": "sqrt(e Te_eV/me)"}),
        ("omega^2 = wpe^2 (1 + gamma k^2 lD^2)", {"lD": "sqrt(eps0 Te_eV/(n0 e))"}),
        ("omega = wpe sqrt(1 + gamma k^2 lD^2)", {"lD": "sqrt(eps0 Te_eV/(n0 e))"}),
        ("1 = wpe^2/(omega^2 - gamma k^2 vt^2/2)", {"vt": "sqrt(2 e Te_eV/me)"}),
    ],
    "ion-acoustic-boltzmann-debye": [
        (
            "omega^2/k^2 = cs^2/(1 + k^2 lD^2) + gi e Ti_eV/mi",
            {"cs": "sqrt(e Te_eV/mi)", "lD": "sqrt(eps0 Te_eV/(e n0))"},
        ),
        (
            "1 + 1/(k^2 lD^2) = wpi^2/(omega^2 - gi k^2 vti^2)",
            {"vti": "sqrt(e Ti_eV/mi)", "lD": "sqrt(eps0 Te_eV/(e n0))"},
        ),
    ],
    "upper-hybrid-warm": [
        ("omega^2 = wpe^2 + Wce^2 + gamma kx^2 vte^2", {"vte": "sqrt(e Te_eV/me)"}),
    ],
    "em-wave-unmagnetised": [
        ("omega^2 = wpe^2 + c^2 k^2", {}),
        ("n^2 = 1 - wpe^2/omega^2", {"n": "c k/omega"}),
    ],
    "r-and-l-waves": [
        (
            "c^2 k^2/omega^2 = 1 - wpe^2/(omega (omega - Wce)) - wpi^2/(omega (omega + Wci))",
            {},
        ),
    ],
    "cold-plasma-oscillation-drift": [("(omega - k V0)^2 = wpe^2", {})],
    "buneman-electron-ion": [("1 = 1/(M omega^2) + 1/(omega - k V)^2", {})],
    "weak-beam-plasma": [("1 = 1/omega^2 + eta/(omega - k V)^2", {})],
    "o-and-x-modes": [
        (
            "c^2 kx^2/omega^2 = 1 - wpe^2 (omega^2 - wpe^2)/(omega^2 (omega^2 - wuh^2))",
            {"wuh": "sqrt(wpe^2 + Wce^2)"},
        ),
    ],
    "ideal-mhd-shear-fast-slow": [
        (
            "omega^4 - omega^2 (kx^2 + kz^2) (cs^2 + vA^2) + (kx^2 + kz^2) kz^2 cs^2 vA^2 = 0",
            {"cs": "sqrt(gamma p0/rho0)", "vA": "B0/sqrt(mu0 rho0)"},
        ),
    ],
    "appleton-hartree-collisionless": [
        (
            "n^2 = 1 - X/(1 - Y^2 s2/(2 (1 - X)) + sqrt(Y^4 s2^2/(4 (1 - X)^2) + Y^2 c2))",
            {
                "X": "wp^2/omega^2",
                "Y": "Wc/omega",
                "n": "c sqrt(kx^2 + kz^2)/omega",
                "s2": "kx^2/(kx^2 + kz^2)",
                "c2": "kz^2/(kx^2 + kz^2)",
            },
        ),
    ],
    "lower-hybrid-perp": [("1 - wpe^2/(omega^2 - Wce^2) - wpi^2/(omega^2 - Wci^2) = 0", {})],
    "whistler-electron-mhd": [
        (
            "omega^2 (1 + (kx^2 + kz^2) de^2)^2 = kz^2 (kx^2 + kz^2) B0^2/(e mu0 n0)^2",
            {"de": "sqrt(me/(mu0 n0 e^2))"},
        ),
    ],
}


def shorthands(text, own):
    """What a relation needs of the usual shorthands, and its own."""
    usual = {**OMEGAS, **GYRATION}
    used = " ".join([text, *own.values()])
    return {**{n: d for n, d in usual.items() if n in used}, **own}
