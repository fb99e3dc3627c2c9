"""Random slips of hand derivations, and random rearrangements of right relations."""

import random

import sympy
from sympy import Add, Mul, Pow, S

from plasmalin.check.claim import Claim
from plasmalin.declare.operators import omega

NUMBERS = (2, S.Half, 3, S(4) / 3, -1, -1)
KINDS = ("factor", "sign", "dropped", "exponent", "swapped", "doppler", "symbol")


def nodes(expr, path=()):
    yield path, expr
    for i, a in enumerate(expr.args):
        if isinstance(a, sympy.Expr) and not (isinstance(expr, Pow) and i == 1):
            yield from nodes(a, (*path, i))


def put(expr, path, new):
    if not path:
        return new
    args = list(expr.args)
    args[path[0]] = put(args[path[0]], path[1:], new)
    return expr.func(*args)


def parent(expr, path):
    for i in path[:-1]:
        expr = expr.args[i]
    return expr


def addends(expr):
    return [(p, n) for p, n in nodes(expr) if p and isinstance(parent(expr, p), Add)]


def terms(expr):
    """Terms of sums; a relation that is one term has only itself."""
    return addends(expr) or [((), expr)]


def slip(expr, rng):
    """One slip in one place: (kind, the wrong expression), or None where the kind does not fit."""
    kind = rng.choice(KINDS)
    made = globals()[f"_{kind}"](expr, rng)
    return None if made is None else (kind, made)


def _factor(expr, rng):
    path, node = rng.choice(terms(expr))
    return put(expr, path, rng.choice(NUMBERS[:-2]) * node)


def _sign(expr, rng):
    path, node = rng.choice(terms(expr))
    return put(expr, path, -node)


def _dropped(expr, rng):
    path, _ = rng.choice(terms(expr))
    return put(expr, path, S.Zero)


def _exponent(expr, rng):
    """A symbol of a term to another power."""
    places = [(p, n) for p, n in terms(expr) if symbols_of(n)]
    if not places:
        return None
    path, node = rng.choice(places)
    symbol = rng.choice(symbols_of(node))
    return put(expr, path, node * symbol ** rng.choice((1, -1)))


def _swapped(expr, rng):
    """The symbol of another species in one term: the same name with another ending."""
    known = {s.name: s for s in expr.free_symbols}
    choices = []
    for path, node in terms(expr):
        for s in symbols_of(node):
            twins = [
                t for n, t in known.items() if n[:-1] == s.name[:-1] and n != s.name and len(n) > 1
            ]
            choices += [(path, node, s, t) for t in twins]
    if not choices:
        return None
    path, node, s, t = rng.choice(choices)
    return put(expr, path, node.xreplace({s: t}))


def _doppler(expr, rng):
    """One of the Doppler-shifted frequencies loses its shift."""
    shifted = [
        (p, n)
        for p, n in nodes(expr)
        if isinstance(n, Add) and n.coeff(omega) == 1 and len(n.args) == 2 and not n.has(sympy.I)
    ]
    if not shifted:
        return None
    path, _ = rng.choice(shifted)
    return put(expr, path, omega)


def _symbol(expr, rng):
    """A parameter is missing from one term."""
    places = [(p, n) for p, n in terms(expr) if symbols_of(n)]
    if not places:
        return None
    path, node = rng.choice(places)
    return put(expr, path, node / rng.choice(symbols_of(node)))


def symbols_of(node):
    """The parameters that are factors of a term, not inside sums."""
    found = []
    for f in Mul.make_args(node):
        base = f.base if isinstance(f, Pow) else f
        if base.is_Symbol and base != omega:
            found.append(base)
    return sorted(found, key=str)


def rearranged(claim, rng):
    """The same relation, arranged otherwise."""
    expr = claim.left - claim.right
    kind = rng.choice(
        ("expanded", "factored", "divided", "inverted", "sides", "renamed", "numerator")
    )
    if kind == "expanded":
        return kind, Claim(sympy.expand(expr), S.Zero, claim.definitions)
    if kind == "factored":
        return kind, Claim(sympy.factor_terms(expr), S.Zero, claim.definitions)
    if kind == "numerator":
        return kind, Claim(sympy.cancel(expr).as_numer_denom()[0], S.Zero, claim.definitions)
    parts = list(Add.make_args(expr))
    if kind == "divided" and len(parts) > 1:
        return kind, Claim(Add(*(t / parts[0] for t in parts)), S.Zero, claim.definitions)
    at = rng.randrange(1, len(parts)) if len(parts) > 1 else 1
    left, right = Add(*parts[:at]), -Add(*parts[at:])
    if kind == "inverted" and right != 0:
        return kind, Claim(1 / left, 1 / right, claim.definitions)
    if kind == "renamed":
        part = max(
            (n for _, n in nodes(expr) if not n.has(omega) and n.args),
            key=lambda n: n.count_ops(),
            default=None,
        )
        if part is not None:
            name = sympy.Symbol("Q_short")
            return kind, Claim(
                expr.xreplace({part: name}), S.Zero, {**claim.definitions, name: part}
            )
    return "sides", Claim(left, right, claim.definitions)


def shuffled(seed):
    return random.Random(seed)
