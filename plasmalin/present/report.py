"""The derivation as a document in Markdown, and the table of branches as text."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from ..declare.notation import latex, paper
from ..roots.solve import general_degree

if TYPE_CHECKING:
    from ..check.verdict import Verdict
    from ..declare.files import StatedClaim
    from ..linearize.linearized import LinearizedModel
    from ..roots.branches import Branches
    from ..waves.matrix import WaveMatrix

CAUTION = (
    "These numbers come from a linear fluid model. Before a device, a discharge or a spacecraft relies on them, "
    "have them checked against local codes and by licensed practice."
)
LONG_RELATION = 120
LARGEST = 18
"""Unknowns beyond which a report leaves the relation in symbols out."""


def relation_text(wave: WaveMatrix) -> str:
    """The relation factor by factor; a long one by its size."""
    if len(wave.rows) > LARGEST:
        return (
            f"{_count_text(wave)}; with {len(wave.rows)} unknowns the relation in symbols is too long "
            "to be read. The roots come from the same exact determinant with the numbers put in."
        )
    relation = wave.relation
    if len(relation.exact) <= LONG_RELATION:
        return str(relation)
    lines = [f"{relation!r}"]
    for f in relation.factors:
        short = len(f.polynomial) <= LONG_RELATION // 4
        lines.append(
            str(f) if short else f"a factor of degree {f.degree} in ω, {len(f.polynomial)} terms"
        )
    return "\n".join(lines)


def _count_text(wave: WaveMatrix) -> str:
    """How many roots and zero modes, and how many zero modes a constraint forbids."""
    degree, zeros = general_degree(wave)
    forbidden = wave.forbidden_modes
    left_out = f", {forbidden} more that a constraint forbids" if forbidden else ""
    return f"{degree} roots and {zeros - forbidden} zero modes{left_out}"


def branch_table(branches: Branches, rows: int = 7) -> str:
    """Frequency and growth rate of every branch at a few points, as plain text."""
    chosen = np.unique(np.linspace(0, len(branches.along) - 1, rows).astype(int))
    head = f"{'branch':>6} {'label':<10} {branches.name:>12} {'frequency':>14} {'growth rate':>14} {'error bound':>12}   rad/s"
    lines = [head]
    for b in range(len(branches)):
        for i in chosen:
            lines.append(
                f"{b:>6} {branches.label[b]:<10} {branches.along[i]:>12.5g} {branches.frequency[b, i]:>14.6g} "
                f"{branches.growth_rate[b, i]:>14.6g} {branches.radius[b, i]:>12.1e}"
            )
    return "\n".join(lines)


def growth_text(branches: Branches) -> str:
    """One sentence on the largest growth of the sweep."""
    s, omega, branch = branches.most_unstable()
    scale = float(np.nanmax(np.abs(branches.omega[branch]), initial=0.0))
    if omega.imag <= 1e-14 * scale:
        return f"No branch grows on this sweep over {branches.name}."
    return (
        f"Largest growth on the sweep: branch {branch} at {branches.name} = {s:.6g}, "
        f"ω = {omega.real:.6g} + {omega.imag:.6g} i rad/s."
    )


def values_table(linear: LinearizedModel) -> str:
    """The default numbers, each in the unit that its parameter declares (SI without one)."""
    width = max(map(len, linear.defaults))
    units = {name: unit.text for name, unit in linear.units.items() if unit.text != "1"}
    return "\n".join(
        f"{name:<{width}} = {number!r} {units.get(name, '')}".rstrip()
        for name, number in linear.defaults.items()
    )


def derivation(wave: WaveMatrix, branches: Branches | None) -> str:
    """The whole derivation in Markdown: laws, background, every term's fate, relation, branches."""
    linear = wave.linear
    parts = [
        f"# {linear.title}",
        "",
        "Plane waves exp[i(k·x − ωt)], SI units, growth is Im ω > 0.",
        "",
    ]
    parts += ["## Nonlinear laws", ""]
    parts += [
        f"- {name}: ${latex(law.lhs, linear.axes)} = {latex(law.rhs, linear.axes)}$"
        for name, law in linear.laws.items()
    ]
    parts += ["", "## Background", "", "```text", str(linear.background), "```", ""]
    if linear.conditions:
        parts += ["Conditions:", ""]
        parts += [f"- ${latex(c.lhs, linear.axes)} = 0$" for c in linear.conditions] + [""]
    if linear.defaults:
        parts += ["## Numbers", "", "```text", values_table(linear), "```", ""]
    parts += ["## Linearized laws", ""]
    parts += [f"- {name}: ${linear.equations.latex(name)}$" for name in linear.equations]
    if linear.redundant:
        parts += [
            "",
            "## Constraints",
            "",
            "Redundant laws and the proof that the others preserve them:",
            "",
        ]
        parts += [f"- {name}: ${linear.constraints.latex(name)}$" for name in linear.constraints]
        parts += ["", "```text", *map(str, wave.constraints), "```"]
    parts += ["", "## Every term and its fate", "", "```text", str(linear.ledger), "```", ""]
    vector = ", ".join(paper(c) for c in wave.k)
    parts += [
        "## Dispersion relation",
        "",
        f"Wave vector ({vector}) along {', '.join(linear.axes)}.",
        "",
    ]
    formula = wave.relation._repr_latex_() if len(wave.rows) <= LARGEST else None
    parts += [f"${formula.strip('$')}$" if formula else f"```text\n{relation_text(wave)}\n```", ""]
    parts += [f"{_count_text(wave)}.", ""]
    if branches is not None:
        parts += [
            "## Branches",
            "",
            growth_text(branches),
            "",
            "```text",
            branch_table(branches),
            "```",
            "",
        ]
        parts += [
            f"- branches of one factor meet ({e.kind}) at {branches.name} = {e.at:.10g}"
            for e in branches.events
        ]
        parts += ["", f"Roots: {branches.method}.", ""]
    return "\n".join([*parts, CAUTION, ""])


def claim_note(title: str, claim: StatedClaim, verdict: Verdict) -> str:
    """A referee's note on one claim in Markdown, with the claim as it was understood in LaTeX."""
    stated = [f"law: {claim.law}"] if claim.law else []
    stated += [f"{name} = {meaning}" for name, meaning in claim.where.items()]
    if claim.under:
        under = claim.under
        pairs = under.items() if isinstance(under, Mapping) else ()
        stated.append("under " + (", ".join(f"{n} = {v}" for n, v in pairs) or ", ".join(under)))
    stated += [f"{key}: {value}" for key, value in claim.convention.items()]
    parts = [f"# {title}", "", "## Claim", "", "```text", claim.text, *stated, "```", ""]
    parts += [f"As it was understood: $\\displaystyle {verdict.reading}$", "", "## Verdict", ""]
    parts += ["```text", str(verdict), "```", "", "## Verdict in LaTeX", ""]
    return "\n".join([*parts, "```latex", verdict.latex(), "```", ""])
