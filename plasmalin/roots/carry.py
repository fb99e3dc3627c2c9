"""Roots carried along a path: Hermite interpolation between solved nodes gives starts for the points between.

Values and slopes at the two nodes about a point and at one more give a quintic; where there is no third one that
belongs to the same roots, a cubic.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Array
from .path import Path
from .scaling import Scaled
from .sheets import UNKNOWN, Sheet
from .slopes import power_table


@dataclass(frozen=True)
class Carrier:
    """Solved nodes of a path, and how their roots move."""

    scaled: Scaled
    path: Path
    nodes: NDArray[np.int64]
    sheet: Sheet
    mirrored: bool
    slopes: NDArray[Any]

    @classmethod
    def of(cls, scaled: Scaled, path: Path, nodes: NDArray[np.int64], sheet: Sheet) -> Carrier:
        slopes = _slopes(scaled, nodes, sheet.re + 1j * sheet.im if sheet.im.any() else sheet.re)
        mirrored = scaled.high.shape[1] == len(sheet.re) + 1
        return cls(scaled, path, nodes, sheet, mirrored, slopes)

    def starts(self, points: NDArray[np.int64]) -> Sheet:
        """Roots at some points of the path; UNKNOWN where the ends of an interval are not alike."""
        nodes, s, known = self.nodes, self.path.s, self.sheet.real
        made = Sheet.unknown(len(self.sheet.re), len(points))
        if len(nodes) < 2:
            return made
        interval = np.clip(np.searchsorted(nodes, points, side="right") - 1, 0, len(nodes) - 2)
        alike = (known[:-1] == known[1:]) & ~self.path.breaks[nodes[1:]]
        made.real[:] = np.where(alike, known[:-1], UNKNOWN)[interval]
        for real in made.kinds:
            chosen = np.flatnonzero(made.real == real)
            mine = interval[chosen]
            spans, span = np.arange(mine[0], mine[-1] + 1), mine - mine[0]
            left = s[nodes[spans]]
            length = s[nodes[spans + 1]] - left
            length[length <= 0] = 1.0
            t = (s[points[chosen]] - left[span]) / length[span]
            curve = _quintic(self, real, spans, self._third(spans, alike), length)
            _fill(made, chosen, real, _values(curve, span, t))
        return made

    def _third(self, spans: NDArray[np.int64], alike: NDArray[np.bool_]) -> NDArray[np.int64]:
        """For each interval a node beside it with the same kinds of roots; its own left end if there is none."""
        before = alike[np.maximum(spans - 1, 0)] & (spans > 0)
        after = alike[np.minimum(spans + 1, len(alike) - 1)] & (spans + 1 < len(alike))
        return np.where(before, spans - 1, np.where(after, spans + 2, spans))


def _rows(degree: int, real: int, mirrored: bool) -> int:
    """How many rows there are without mirror images."""
    return real + (degree - real) // 2 if mirrored else degree


def _slopes(scaled: Scaled, nodes: NDArray[np.int64], z: NDArray[Any]) -> NDArray[Any]:
    """d root / d quantity = -p_g / p_z in working precision, shape (G, degree, nodes)."""
    powers = [
        power_table(hi[nodes], e)
        for (hi, _), e in zip(scaled.columns, scaled.exponents.T, strict=True)
    ]
    plain = _polynomials(scaled, np.prod([part for part, _ in powers], axis=0), len(z))
    kind = np.result_type(plain, z)
    slope = np.zeros(z.shape, kind)
    for j in range(len(z), 0, -1):
        slope = slope * z + j * plain[j]
    rates = np.empty((len(powers), *z.shape), kind)
    for i in range(len(powers)):
        factors = [rate if i == place else part for place, (part, rate) in enumerate(powers)]
        value = np.zeros(z.shape, kind)
        for row in _polynomials(scaled, np.prod(factors, axis=0), len(z))[::-1]:
            value = value * z + row
        rates[i] = -value / slope
    return rates


def _polynomials(scaled: Scaled, monomials: Array, degree: int) -> NDArray[Any]:
    """The sums of terms for every power of the unknown, shape (degree + 1, nodes)."""
    # Not by BLAS, whose sums may depend on the number of threads.
    sums = np.einsum("tj,tn->jn", scaled.high, monomials)
    parts = sums.reshape(-1, degree + 1, monomials.shape[1])
    return np.asarray(parts[0] + 1j * parts[1] if len(parts) > 1 else parts[0])


def _quintic(
    carrier: Carrier,
    real: int,
    spans: NDArray[np.int64],
    third: NDArray[np.int64],
    length: Array,
) -> list[Any]:
    """Coefficients in t, 0 to 1 over each of some intervals, each of shape (rows, spans)."""
    nodes, s = carrier.nodes, carrier.path.s
    rows = _rows(len(carrier.sheet.re), real, carrier.mirrored)
    change = [hi[nodes[spans + 1]] - hi[nodes[spans]] for hi, _ in carrier.scaled.columns]
    ends = [_end(carrier, rows, real, node, change) for node in (spans, spans + 1, third)]
    place = (s[nodes[third]] - s[nodes[spans]]) / length
    if rows - real > 1:
        for other, where in ((1, 1.0), (2, place)):
            follow = _followers(real, ends[0], ends[other], where)
            ends[other] = tuple(np.take_along_axis(a, follow, axis=0) for a in ends[other])
    return _through(ends, place)


def _end(
    carrier: Carrier, rows: int, real: int, node: NDArray[np.int64], change: list[Array]
) -> Any:
    """Roots and their slopes in t at some nodes, as real numbers where all of them are."""
    sheet = carrier.sheet
    value: Any = sheet.re[:rows].take(node, axis=1)
    rate: Any = 0.0
    for d, slopes in zip(change, carrier.slopes, strict=True):
        rate = rate + d * slopes[:rows].take(node, axis=1)
    if rows == real:
        return value, rate.real
    return value + 1j * sheet.im[:rows].take(node, axis=1), rate


def _through(ends: list[Any], place: Array) -> list[Any]:
    """The cubic through both ends, then t^2 (t - 1)^2 (a + b t) so that it meets the third node at `place`."""
    (value, rate), (right, right_rate), (other, other_rate) = ends
    jump = right - value
    cubic = [value, rate, 3 * jump - 2 * rate - right_rate, rate + right_rate - 2 * jump]
    lone = place == 0
    t = np.where(lone, -1.0, place)
    weight, weight_rate = (t * (t - 1)) ** 2, 2 * t * (t - 1) * (2 * t - 1)
    off = other - (value + t * (rate + t * (cubic[2] + t * cubic[3])))
    off_rate = other_rate - (rate + t * (2 * cubic[2] + 3 * t * cubic[3]))
    factor = off / weight
    b = np.where(lone, 0.0, (off_rate - weight_rate * factor) / weight)
    a = np.where(lone, 0.0, factor - b * t)
    return [cubic[0], cubic[1], cubic[2] + a, cubic[3] + b - 2 * a, a - 2 * b, b]


def _followers(real: int, left: Any, right: Any, place: float | Array) -> NDArray[np.int64]:
    """For every row at the left end its row at `place`: real roots by order, others by extrapolation halfway."""
    follow = np.broadcast_to(np.arange(len(left[0]))[:, None], left[0].shape).copy()
    ahead = left[0][real:] + 0.5 * place * left[1][real:]
    back = right[0][real:] - 0.5 * place * right[1][real:]
    follow[real:] = real + np.abs(ahead[:, None] - back[None, :]).argmin(axis=1)
    return follow


def _values(curve: list[Any], span: NDArray[np.int64], t: Array) -> NDArray[Any]:
    value: NDArray[Any] = curve[-1].take(span, axis=1)
    for part in curve[-2::-1]:
        value *= t
        value += part.take(span, axis=1)
    return value


def _fill(made: Sheet, points: NDArray[np.int64], real: int, z: NDArray[Any]) -> None:
    """Starts; real ones that overtook each other, as they do near where roots avoid each other, in order again."""
    rows = len(z)
    made.re[:rows, points], made.im[real:rows, points] = z.real, z[real:].imag
    disordered = points[(np.diff(z.real[:real], axis=0) <= 0).any(axis=0)]
    if len(disordered):
        made.re[:real, disordered] = np.sort(made.re[:real, disordered], axis=0)
