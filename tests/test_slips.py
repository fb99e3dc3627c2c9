"""Slips of hand derivations are found and located: the published ones, and random ones at measured rates.

Goals: every slip is detected, no rearrangement of a right relation is called wrong, and one slip is located in at
least 95 of 100 claims.
"""

import random
from collections import Counter
from functools import cache

import check_models
import published
import published_more
import pytest
import slip_generator
from slip_table import SLIPS
from sympy import Poly, Rational, S, Symbol, fraction, together
from test_check import COLD
from typed_claims import TYPED, shorthands

from plasmalin.check.claim import Claim, make_claim
from plasmalin.check.compare import compare
from plasmalin.check.derived import derive
from plasmalin.check.slips import repairs
from plasmalin.declare.operators import omega

MODULES = {n: m for m in (published, published_more) for n in m.CASES}
FORMULAS = [n for n, m in MODULES.items() if m.read(n)["kind"] == "formula"]
LISTED = [(n, i) for n in MODULES for i in range(len(MODULES[n].read(n).get("slips", [])))]
BUDGET = 10.0


@pytest.fixture(scope="module")
def oblique():
    return check_models.cold()


@cache
def wave_of(name):
    return MODULES[name].CASES[name]()


def relation_for(wave, claim):
    """The derived relation; a case in units with eps0 = 1 has that value in its model too."""
    derived = derive(wave, claim.residual.free_symbols, ())
    eps0 = wave.linear.symbols.get("eps0")
    if eps0 is None or eps0 in claim.residual.free_symbols:
        return derived
    return derived.substituted({eps0: S.One})


def test_every_published_slip_is_in_the_table():
    assert {n: len(rows) for n, rows in SLIPS.items()} == Counter(n for n, _ in LISTED)


@pytest.mark.parametrize(("name", "number"), LISTED)
def test_published_slips(name, number):
    wave, text = wave_of(name), MODULES[name].read(name)["slips"][number]["relation"]
    kind, term, multiplier = SLIPS[name][number]
    under = {"eps0": 1} if "eps0" in wave.linear.symbols and "eps0" not in text else None
    verdict = wave.check(text, under=under)
    assert (verdict.kind, verdict.agrees) == (kind, False)
    shown = [(str(s.term), str(s.multiplier)) for s in verdict.slips[:1]]
    assert shown == ([(term, multiplier)] if term else [])


def wrong_claims(name, count, rng):
    """Random slips in a published relation, as it is or rearranged."""
    wave = wave_of(name)
    right = make_claim(wave, MODULES[name].read(name)["relation"], {})
    derived = relation_for(wave, right)
    for _ in range(count):
        base = rng.choice([right, slip_generator.rearranged(right, rng)[1]])
        made = slip_generator.slip(base.left - base.right, rng)
        if made is not None:
            yield made[0], Claim(made[1], S.Zero, base.definitions), derived


def wrong_typed_claims(name, count, rng):
    """Random slips in relations as authors type them."""
    wave = wave_of(name)
    for text, own in TYPED[name]:
        right = make_claim(wave, text, shorthands(text, own))
        derived = relation_for(wave, right)
        assert compare(right, derived) is not None
        for _ in range(count):
            made = slip_generator.slip_of_claim(right, rng)
            if made is not None:
                yield *made, derived


def rates(claims):
    """How many claims of each kind there are, and how many of them are located by one change."""
    found, total = Counter(), Counter()
    for kind, claim, derived in claims:
        if compare(claim, derived) is not None:  # some changes make another right relation
            assert has_no_other_roots(claim, derived), (kind, claim)
            continue
        total[kind] += 1
        best = repairs(claim, derived, BUDGET)[:1]
        found[kind] += any(len(r.slips) == 1 for r in best)
    return found, total


def has_no_other_roots(claim, derived):
    """Numerically, at one point: every frequency of a claim that agrees is one of the derived relation's."""
    draw = random.Random(1)
    expr = derived.rational(claim.residual)
    symbols = sorted((expr.free_symbols | derived.symbols) - {omega}, key=str)
    point = {s: Rational(draw.randrange(20, 99), 50) for s in symbols}
    top = fraction(together(expr.xreplace(point)))[0]
    right = derived.polynomial.as_expr().xreplace(point)
    size = max(abs(c) for c in Poly(right, omega).all_coeffs())
    zeros = (z for z in Poly(top, omega).nroots(n=30, maxsteps=200) if abs(z) > 1e-9)
    return all(abs(right.xreplace({omega: z}).evalf(30)) < 1e-9 * size for z in zeros)


def told(what, found, total):
    lost = ", ".join(f"{k} {found[k]}/{n}" for k, n in sorted(total.items()) if found[k] < n)
    return f"{what}: {found.total()} of {total.total()} slips located; less than all: {lost or '-'}"


def test_random_slips_are_located(report):
    rng = random.Random(20)
    found, total = rates(c for n in FORMULAS for c in wrong_claims(n, 2, rng))
    report(told("published relations", found, total))
    assert found.total() >= 0.95 * total.total()


def test_random_slips_of_typed_claims_are_located(report):
    rng = random.Random(21)
    found, total = rates(c for n in TYPED for c in wrong_typed_claims(n, 3, rng))
    report(told("typed relations", found, total))
    assert found.total() >= 0.95 * total.total()


def test_no_rearrangement_of_a_right_relation_is_called_wrong(report):
    rng, count = random.Random(22), 0
    for name in FORMULAS:
        wave = wave_of(name)
        right = make_claim(wave, MODULES[name].read(name)["relation"], {})
        derived = relation_for(wave, right)
        for _ in range(3):
            kind, claim = slip_generator.rearranged(right, rng)
            assert compare(claim, derived) is not None, (name, kind, claim)
            count += 1
    report(f"rearrangements: {count} right relations, none called wrong")


def first(wave, text, where):
    return wave.check(text, where=where).slips[0]


def test_the_contract_of_a_multiplier():
    wave = published.langmuir_bohm_gross()
    slip = first(wave, "omega^2 = wpe^2 + 3 k^2 e Te_eV/me", {"wpe": "sqrt(n0 e^2/(eps0 me))"})
    assert (str(slip.term), str(slip.multiplier)) == ("3*Te_eV*e*k**2/me", "gamma/3")


STIX = COLD | {"A": "S sin^2 theta + P cos^2 theta", "b": "R L sin^2 theta + P S (1 + cos^2 theta)"}


@pytest.mark.parametrize(
    ("name", "wrong", "term", "right"),
    [
        ("A", "S sin^2 theta + P cos^4 theta", "cos(theta)**4", "cos(theta)**(-2)"),
        ("A", "S sin^4 theta + P cos^2 theta", "sin(theta)**4", "sin(theta)**(-2)"),
        ("b", "R L sin^2 theta + P S (1 + cos^4 theta)", "cos(theta)**4", "cos(theta)**(-2)"),
        ("b", "R L sin^2 theta + P S (1 + cos theta)", "cos(theta)", "cos(theta)"),
    ],
)
def test_a_wrong_power_of_a_sine_is_located(oblique, name, wrong, term, right):
    """Stix 1992, Waves in Plasmas, ch. 1: A n^4 - B n^2 + C = 0, with its nested forms (from memory)."""
    verdict = oblique.check("A n^4 - b n^2 + P R L = 0", where=STIX | {name: wrong})
    assert (verdict.kind, verdict.agrees) == ("differs", False)
    assert term in str(verdict.slips[0].term)
    assert str(verdict.slips[0].multiplier) == right


def test_a_wrong_power_below_two_roots_is_located(oblique):
    root = "sqrt((R L - P S)^2 sin^4 theta + 4 P^2 D^2 cos^4 theta)"
    verdict = oblique.check("n^2 = (b + F)/(2 A)", where=STIX | {"F": root})
    assert [(str(s.term), str(s.multiplier)) for s in verdict.slips] == [
        ("cos(theta)**4", "cos(theta)**(-2)")
    ]


def test_both_repairs_of_a_thermal_speed_are_offered():
    """v_te with or without the root of 2: the coefficient or the definition."""
    wave = published.langmuir_bohm_gross()
    where = {"wpe": "sqrt(n0 e^2/(eps0 me))", "vte": "sqrt(2 e Te_eV/me)"}
    slips = wave.check("omega^2 = wpe^2 + gamma k^2 vte^2", where=where).slips
    assert (str(slips[0].term), slips[0].multiplier) == ("gamma*k**2*vte**2", S.Half)
    assert any("in the definition of vte" in s.text for s in slips)


def test_a_missing_shorthand_squared_is_told_in_shorthands():
    wave = published.langmuir_bohm_gross()
    where = {"wpe": "sqrt(n0 e^2/(eps0 me))", "vte": "sqrt(e Te_eV/me)"}
    slip = first(wave, "omega^2 = wpe + gamma k^2 vte^2", where)
    assert (slip.term, slip.multiplier) == (Symbol("wpe"), Symbol("wpe"))
