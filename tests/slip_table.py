"""What is wrong in each of the published slips: the kind of verdict, the term at fault and its multiplier.

The order is that of ``[[slips]]`` in the files of ``cases`` and ``cases_more``; the words behind a line are those of
the file (``what``). A multiplier of 1 means that the term is missing. Empty: not located, only shown side by side.
"""

SLIPS = {
    "cold-plasma-oscillation-drift": (
        (
            "special",
            "-V0*k",
            "1",
        ),  # convective terms dropped in both continuity and momentum: (omega - k*V0) must replace omeg
        (
            "differs",
            "-V0*k",
            "1",
        ),  # Doppler shift missing in one of the two electron equations; right multiplier is (omega - k
        (
            "differs",
            "e**2*n0/(eps0*me)",
            "-1",
        ),  # sign of the charge in the momentum or the Poisson equation flipped once; right sign of ome
    ),
    "langmuir-bohm-gross": (
        (
            "special",
            "-Te_eV*e*k**2/me",
            "gamma",
        ),  # gamma dropped (isothermal); right multiplier of k**2*Te/me is 3
        (
            "special",
            "-5*Te_eV*e*k**2/(3*me)",
            "3*gamma/5",
        ),  # three-dimensional gamma 5/3; right multiplier is 3
        (
            "differs",
            "Te_eV*e*gamma*k**2/me",
            "-1",
        ),  # sign of the pressure force flipped; right multiplier is +3 on the right-hand side (omega**
    ),
    "ion-acoustic-boltzmann-debye": (
        (
            "limit",
            "-Te_eV*e*k**2/mi",
            "1/(Te_eV*k**2/(e*n0) + 1)",
        ),  # Debye-length correction 1/(1 + k**2*lambda_De**2) dropped (quasi-neutral)
        (
            "special",
            "-Ti_eV*e*k**2/mi",
            "gi",
        ),  # ion gamma dropped; right multiplier of k**2*Ti/mi is gi = 3
        (
            "differs",
            "Ti_eV*eps0*k**2/(e*n0)",
            "Te_eV/Ti_eV",
        ),  # ion temperature used in the Debye length; right is Te_eV
    ),
    "two-fluid-langmuir-ion-acoustic": (
        (
            "differs",
            "-gi*k**2*tau",
            "1/M",
        ),  # electron mass in the ion pressure term; right is gi*tau*k**2/M
        (
            "differs",
            "-1/(omega**2 - gi*k**2*tau/M)",
            "1/M",
        ),  # electron mass in the ion plasma frequency; right is 1/M
        (
            "differs",
            "1/(M*(omega**2 - gi*k**2*tau/M))",
            "-1",
        ),  # sign of the ion susceptibility flipped; right multiplier is -1
    ),
    "two-ion-species-acoustic": (
        (
            "differs",
            "-Z1*n1/(m1*(-T1*gi*k**2/m1 + omega**2))",
            "Z1",
        ),  # Z instead of Z**2 in the ion plasma frequencies; right multiplier for species 2 is Z2 = 2
        (
            "differs",
            "-T2*gi*k**2/m1",
            "m1/m2",
        ),  # light mass in the heavy ion's pressure term; right is T2/m2
        ("special", "-T1*gi*k**2/m1", "1"),  # light-ion pressure dropped; the slow mode needs it
    ),
    "upper-hybrid-warm": (
        (
            "special",
            "B0**2*e**2/me**2",
            "1",
        ),  # magnetic force dropped: Omega_e**2 = (e*B0/me)**2 missing
        (
            "differs",
            "B0**2*e**2/me**2",
            "-1",
        ),  # sign slip in one component of v x B: Omega_e**2 must enter omega**2 with +1
    ),
    "em-wave-unmagnetised": (
        (
            "differs",
            "e**2*n0/(eps0*me)",
            "-1",
        ),  # sign of the current in Ampere flipped: omega_p**2 must add to c**2 k**2
        (
            "differs",
            "omega**2",
            "1",
        ),  # displacement current dropped: no propagating transverse root left
    ),
    "r-and-l-waves": (
        (
            "differs",
            "B0*e/me",
            "-1",
        ),  # ion gyration given the electron sense: sign of Omega_i flipped in R and L
        ("limit", "1", "1"),  # displacement current dropped (the 1 in n**2 = 1 - ...)
        (
            "limit",
            "e**2*n0/(eps0*mi*omega*(B0*e/mi - omega))",
            "1",
        ),  # ion current dropped: the Alfven/ion-cyclotron root is lost
    ),
    "counterstreaming-cold-beams": (
        (
            "differs",
            "V*k",
            "1",
        ),  # Doppler term missing in the second beam; right is (omega + k*V)**2
        (
            "differs",
            "-2*wp0**2/(-V*k + omega)**2",
            "(-V*k + omega)**2/(2*(V*k + omega)**2) + 1/2",
        ),  # both drifts with the same sign: no instability at all
        (
            "differs",
            "1",
            "1/2",
        ),  # density of each beam halved; right multiplier 1 for wp0 of one beam
    ),
    "buneman-electron-ion": (
        ("special", "-1/omega**2", "1/M"),  # electron mass used for the ions
        (
            "differs",
            "-1/omega**2",
            "omega**2*(1 - 1/M) + M**(-2)",
        ),  # drift attached to the wrong species (differs by a Galilean shift in the real part)
        ("differs", "-V*k", "1"),  # Doppler shift missing in one electron equation
    ),
    "ideal-mhd-shear-fast-slow": (
        ("special", "p0", "gamma"),  # gamma dropped in the sound speed; right multiplier 5/3
        (
            "differs",
            "-B0**2*gamma*kx**2*kz**2*p0/(mu0*rho0**2)",
            "1",
        ),  # kz**4 instead of k**2*kz**2 in the constant term
        (
            "limit",
            "-B0**2*omega**2*(kx**2 + kz**2)/(mu0*rho0)",
            "1 + gamma*mu0*p0/B0**2",
        ),  # pressure dropped from the magnetosonic sum
    ),
    "hall-mhd-parallel": (
        ("special", "B0**2*di**2*k**4*omega**2/(mu0*rho0)", "1"),  # Hall term dropped
        (
            "differs",
            "-B0**2*di**2*k**2*omega**2/(mu0*rho0)",
            "k**2",
        ),  # one power of k lost in the Hall term
        (
            "differs",
            "-4*B0**2*di**2*k**4*omega**2/(mu0*rho0)",
            "1/4",
        ),  # factor 2 in the Hall term; right multiplier 1
    ),
    "jeans": (
        ("differs", "2*pi*G*rho0", "2"),  # 2*pi instead of 4*pi
        ("differs", "-4*pi*G*rho0", "-1"),  # sign of gravity (repulsive): no instability
        (
            "differs",
            "-cs**2*k**2/gamma",
            "gamma",
        ),  # isothermal sound speed used; right multiplier gamma
    ),
    "dust-acoustic": (
        (
            "differs",
            "-Zd*k**2*nd0/(md*(k**2 + ni0/Ti + (-Zd*nd0 + ni0)/Te))",
            "Zd",
        ),  # Zd instead of Zd**2 in the dust plasma frequency
        (
            "limit",
            "ni0/Ti - Zd*nd0/Te",
            "1",
        ),  # ion screening dropped: only the electron Debye length kept
    ),
    "kirchhoff-stokes-sound": (
        ("differs", "mu", "4/3"),  # factor 4/3 dropped
        ("limit", "", ""),  # pressure work p div v dropped: isothermal sound speed
        ("differs", "-I*k**2*omega*(4*mu/3 + zeta)/rho0", "-1"),  # sign of the viscous term
    ),
    "drift-wave-hasegawa-mima": (
        (
            "differs",
            "Te_eV*ky/(B0*Ln)",
            "-1",
        ),  # sign of omega_* (direction of E x B or of the gradient)
        (
            "limit",
            "-Te_eV*ky/(B0*Ln)",
            "1/(1 + Te_eV*kx**2*mi/(B0**2*e) + Te_eV*ky**2*mi/(B0**2*e))",
        ),  # polarisation drift dropped
        ("differs", "-Te_eV*mi*(kx**2 + ky**2)/(B0**2*e)", "-1"),  # sign of the polarisation drift
    ),
    "alfven-from-two-fluids": (
        (
            "differs",
            "mi*n0/(B0**2*eps0)",
            "1",
        ),  # electron mass for the ion mass in the Alfven speed
        ("differs", "2*n0*(me + mi)/(B0**2*eps0)", "1/2"),  # factor 2 in the mass density
    ),
    "ambipolar-diffusion": (
        ("differs", "De", "Di/De"),  # mobilities attached to the wrong diffusion coefficients
        ("convention", "-I*k**2*(De*mui + Di*mue)/(mue + mui)", "-1"),  # sign of diffusion
    ),
    "appleton-hartree-collisionless": (
        (
            "differs",
            "Wc**2/omega**2",
            "-1",
        ),  # v x B sign slip in one component: (1 - Y**2) became (1 + Y**2)
        ("differs", "kx", "kz/kx"),  # angle measured from the wrong axis: sin and cos swapped
    ),
    "appleton-hartree-collisional": (
        (
            "convention",
            "-I*nu/omega",
            "-1",
        ),  # sign of the collision term flipped (growth instead of damping)
        ("differs", "2*I*nu/omega", "1/2"),  # factor 2 in the collision term
    ),
    "cgl-firehose": (
        ("differs", "ppar", "pperp/ppar"),  # sign of the pressure anisotropy flipped
        ("differs", "-kz**2*ppar/rho0", "3"),  # factor 3 (parallel adiabatic index) dropped
        ("differs", "pperp", "2"),  # factor 2 (perpendicular adiabatic index) dropped
    ),
    "cgl-mirror-threshold": (
        (
            "differs",
            "-kz**2*ppar/rho0",
            "3",
        ),  # factor 3 dropped: threshold factor becomes 2 instead of 6
        (
            "differs",
            "kx**2*kz**2*pperp**2/rho0**2",
            "-1",
        ),  # sign of the coupling term (pperp mirror force) flipped
    ),
    "cold-electrostatic-oblique": (
        (
            "differs",
            "-e**2*kz**2*n0/(eps0*mi*omega**2*(kx**2 + kz**2))",
            "1 + mi/me",
        ),  # parallel electron inertia term dropped; right multiplier of wpe**2*kz**2/(k**2*omega**2) i
        (
            "differs",
            "-kx*kz*(e**2*n0/(eps0*mi) + e**2*n0/(eps0*me))/(omega**2*(kx**2 + kz**2))",
            "kz/kx",
        ),  # sin*cos instead of cos**2 in the parallel term
    ),
    "lower-hybrid-perp": (
        (
            "differs",
            "-B0**2*e**2/me**2",
            "me**2/mi**2",
        ),  # electron cyclotron frequency used for the ions; right is Omega_i = e*B0/mi
        (
            "limit",
            "e**2*n0/(eps0*mi*(-B0**2*e**2/mi**2 + omega**2))",
            "1",
        ),  # ion motion dropped: the lower hybrid pair disappears
        ("differs", "B0**2*e**2/me**2", "-1"),  # sign slip in v x B: omega**2 - Omega**2 is right
    ),
    "drift-acoustic-exact": (
        ("differs", "B0*Te_eV*e**2*ky/(Ln*mi**2*omega)", "-1"),  # sign of the gradient drive
    ),
    "drift-acoustic-limit": (
        ("differs", "Te_eV*ky*omega/(B0*Ln)", "-1"),  # sign of omega_*
        ("differs", "Te_eV*e*kz**2/mi", "-1"),  # sign of the parallel term
    ),
    "electrostatic-ion-cyclotron": (
        ("special", "Ti", "gi"),  # ion gamma dropped; right cs**2 = Te + 3*Ti
        ("differs", "Wi**2", "-1"),  # sign slip in v x B; right is omega**2 - Wi**2
        ("differs", "kx", "kz/kx"),  # parallel and perpendicular components of k swapped
    ),
    "filamentation-cold-beams": (
        ("differs", "V**2*k**2*wp**2", "-1"),  # sign of V x B: pinch turned into repulsion
        ("differs", "-V**2*k**2*wp**2/2", "2"),  # one beam only in the density-perturbation current
    ),
    "ion-acoustic-neutral-drag": (
        ("convention", "-I*nu", "-1"),  # sign of the drag flipped (growth)
        ("differs", "2*I*nu", "1/2"),  # factor 2 in the drag
        ("differs", "-I*nu", "1"),  # drag put in the continuity equation too
    ),
    "negative-ion-acoustic": (
        (
            "differs",
            "nn/(mn*(-Tn*gi*k**2/mn + omega**2))",
            "-1",
        ),  # negative-ion charge enters as q instead of q**2: sign flipped
        (
            "limit",
            "nn/(Te*k**2)",
            "1",
        ),  # electron depletion forgotten; right electron density is np - nn
    ),
    "o-and-x-modes": (
        (
            "differs",
            "B0**2*e**2/me**2",
            "-1",
        ),  # sign of Omega_e**2 in the upper hybrid denominator; right is omega**2 - wp**2 - We**2
        ("limit", "", ""),  # magnetic force dropped in one component: X mode collapses onto O
    ),
    "pair-plasma-electrostatic": (
        ("differs", "-wp**2", "2"),  # one species only; right multiplier of wp**2 is 2
        (
            "limit",
            "-2*wp**2",
            "1",
        ),  # charges of both species given the same sign in Poisson: fields cancel
    ),
    "pair-plasma-em-parallel": (
        ("differs", "omega**2*wp**2", "2"),  # only one species in the current
        (
            "differs",
            "-Wc*omega/(Wc + omega)",
            "1",
        ),  # species given the same sense of gyration (sign of the charge dropped in v x B)
    ),
    "resistive-mhd-alfven": (
        (
            "convention",
            "-I*eta*k**2*omega/mu0",
            "-1",
        ),  # sign of the resistive term flipped (growth)
        (
            "differs",
            "2*I*eta*k**2*omega/mu0",
            "1/2",
        ),  # factor 2: damping rate taken as eta k**2 rather than eta k**2/2
    ),
    "weak-beam-plasma": (
        ("special", "-V*k", "1"),  # beam drift dropped in both beam equations
        ("differs", "-V*k", "1"),  # Doppler shift missing in one of the beam equations
        ("differs", "V*k", "-1"),  # sign of the drift
    ),
    "whistler-electron-mhd": (
        (
            "limit",
            "-B0**2*kz**2*(kx**2 + kz**2)/(e**2*mu0**2*n0**2)",
            "(1 + kx**2*me/(e**2*mu0*n0) + kz**2*me/(e**2*mu0*n0))**(-2)",
        ),  # electron inertia dropped: (1 + k**2 de**2)**2 missing
        ("differs", "-kx**2", "1"),  # k**2 for k*kz: the cos(theta) factor lost
    ),
}
