"""Random slips of hand derivations, and random rearrangements of right relations."""

import random

import sympy
from sympy import Add, Mul, Pow, S

from plasmalin.check.claim import Claim
from plasmalin.declare.operators import omega

NUMBERS = (2, S.Half, 3, S(4) / 3, S(2) / 3, sympy.sqrt(2), sympy.cbrt(2))
KINDS = (
    "factor", "sign", "dropped", "exponent", "swapped", "doppler", "symbol", "power of a sum", "conjugated",
    "component", "not squared", "root",
)  # fmt: skip
DEFINED = (
    "factor in a definition",
    "symbol in a definition",
    "definition not squared",
    "root in a definition",
)


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
    kind, made = _any(expr, rng)
    return None if made in (None, expr) or not made.has(omega) else (kind, made)


def _any(expr, rng):
    kind = rng.choice(KINDS)
    return kind, globals()[f"_{kind.replace(' ', '_')}"](expr, rng)


def slip_of_claim(claim, rng):
    """As `slip`, for a claim as an author types it: on either side, or in a definition."""
    if claim.definitions and rng.random() < 0.4:
        kind = rng.choice(DEFINED)
        made = _in_definition(kind, claim, rng)
    else:
        sides = {"left": claim.left, "right": claim.right}
        side = rng.choice([s for s in sides if sides[s] not in (0, omega**2)])
        kind, sides[side] = _any(sides[side], rng)
        if kind == "root":
            return None
        made = None if None in sides.values() else Claim(*sides.values(), claim.definitions)
    return None if made is None or not made.residual.has(omega) else (kind, made)


def _in_definition(kind, claim, rng):
    name = rng.choice(sorted(claim.definitions, key=str))
    wrong = claim.definitions[name]
    if kind == "factor in a definition":
        wrong = rng.choice(NUMBERS) * wrong
    elif kind == "symbol in a definition":
        path, node = rng.choice(terms(wrong))
        found = symbols_of(node)
        if not found:
            return None
        wrong = put(wrong, path, node / rng.choice(found))
    elif kind == "root in a definition":
        wrong = wrong**2 if wrong.atoms(Pow) else sympy.sqrt(wrong)
    else:
        return Claim(*(e.subs(name**2, name) for e in (claim.left, claim.right)), claim.definitions)
    return Claim(claim.left, claim.right, {**claim.definitions, name: wrong})


def _factor(expr, rng):
    path, node = rng.choice(terms(expr))
    return put(expr, path, rng.choice(NUMBERS) * node)


def _power_of_a_sum(expr, rng):
    """A power of a sum, or a sum in a denominator, with another power."""
    found = [(p, n) for p, n in nodes(expr) if isinstance(n, Pow) and isinstance(n.base, Add)]
    if not found:
        return None
    path, node = rng.choice(found)
    powers = [-node.exp, node.exp / 2 if abs(node.exp) > 1 else 2 * node.exp]
    if path and isinstance(parent(expr, path), Add):
        powers = [p for p in powers if p != 1]  # a sum in a sum is no longer seen as one
    return put(expr, path, node.base ** rng.choice(powers))


def _conjugated(expr, rng):
    """i with the other sign in one term."""
    found = [(p, n) for p, n in terms(expr) if n.has(sympy.I)]
    if not found:
        return None
    path, node = rng.choice(found)
    return put(expr, path, node.xreplace({sympy.I: -sympy.I}))


def _component(expr, rng):
    """k for one of its components, and the reverse, or sine for cosine."""
    known = {s.name: s for s in expr.free_symbols}
    names = [(a, b) for a in ("kx", "kz", "ky") for b in ("kx", "kz", "ky") if a != b]
    swaps = [{known[a]: known[b]} for a, b in names if a in known and b in known]
    swaps += [{f: sympy.cos(f.args[0])} for f in expr.atoms(sympy.sin)]
    swaps += [{f: sympy.sin(f.args[0])} for f in expr.atoms(sympy.cos)]
    found = [(p, n, s) for p, n in terms(expr) for s in swaps if n.xreplace(s) not in (n, S.Zero)]
    if not found:
        return None
    path, node, swap = rng.choice(found)
    return put(expr, path, node.xreplace(swap))


def _not_squared(expr, rng):
    """A square that was forgotten."""
    found = [
        (p, n) for p, n in nodes(expr) if isinstance(n, Pow) and n.exp == 2 and n.base.is_Symbol
    ]
    if not found:
        return None
    path, node = rng.choice(found)
    return put(expr, path, node.base)


def _root(expr, rng):
    """A root that was forgotten, or one too many."""
    found = [(p, n) for p, n in terms(expr) if symbols_of(n)]
    if not found:
        return None
    path, node = rng.choice(found)
    return put(expr, path, node * sympy.sqrt(rng.choice(symbols_of(node))))


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
