"""Roots carried along a path: cubic Hermite interpolation between solved nodes gives starts for the points between."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients
from .doubledouble import Array
from .path import Path
from .scaling import Scaled
from .sheets import UNKNOWN, Sheet

Complex = NDArray[np.complex128]


@dataclass(frozen=True)
class Carrier:
    """Solved nodes of a path, and how their roots move."""

    scaled: Scaled
    path: Path
    nodes: NDArray[np.int64]
    sheet: Sheet
    mirrored: bool
    slopes: Complex

    @classmethod
    def of(
        cls, scaled: Scaled, path: Path, nodes: NDArray[np.int64], c: Coefficients, sheet: Sheet
    ) -> Carrier:
        slopes = _slopes(scaled, c, nodes, sheet.re + 1j * sheet.im)
        return cls(scaled, path, nodes, sheet, c.high_imag is None, slopes)

    def starts(self, points: NDArray[np.int64]) -> Sheet:
        """Roots at some points of the path; UNKNOWN where the ends of an interval are not alike."""
        nodes, s, known = self.nodes, self.path.s, self.sheet.real
        made = Sheet.unknown(len(self.sheet.re), len(points))
        if len(nodes) < 2:
            return made
        interval = np.clip(np.searchsorted(nodes, points, side="right") - 1, 0, len(nodes) - 2)
        alike = (known[:-1] == known[1:]) & ~self.path.breaks[nodes[1:]]
        made.real[:] = np.where(alike, known[:-1], UNKNOWN)[interval]
        for real in np.unique(made.real[made.real != UNKNOWN]).tolist():
            chosen = np.flatnonzero(made.real == real)
            first, last = interval[chosen[0]], interval[chosen[-1]]
            spans, span = np.arange(first, last + 1), interval[chosen] - first
            left, right = s[nodes[spans]], s[nodes[spans + 1]]
            length = np.where(right > left, right - left, 1.0)
            t = (s[points[chosen]] - left[span]) / length[span]
            _fill(made, chosen, real, _values(_cubic(self, real, spans), span, t))
        return made


def _rows(degree: int, real: int, mirrored: bool) -> int:
    """How many rows there are without mirror images."""
    return real + (degree - real) // 2 if mirrored else degree


def _slopes(scaled: Scaled, c: Coefficients, nodes: NDArray[np.int64], z: Complex) -> Complex:
    """d root / d quantity = -p_g / p_z, shape (G, degree, nodes)."""
    columns = [hi[nodes] for hi, _ in scaled.columns]
    powers = [
        _power_table(x, int(e)) for x, e in zip(columns, scaled.exponents.max(axis=0), strict=True)
    ]
    plain = c.plain
    slope = np.zeros_like(z)
    for j in range(c.degree, 0, -1):
        slope = slope * z + j * plain[j]
    rates = np.empty((len(columns), *z.shape), np.complex128)
    for i in range(len(columns)):
        rate = _rate(scaled, powers, i, c.degree)
        value = np.zeros_like(z)
        for row in rate[::-1]:
            value = value * z + row
        rates[i] = -value / slope
    return rates


def _power_table(x: Array, highest: int) -> Array:
    table = np.ones((highest + 1, len(x)))
    for n in range(highest):
        np.multiply(table[n], x, out=table[n + 1])
    return table


def _rate(scaled: Scaled, powers: list[Array], place: int, degree: int) -> Complex:
    """The derivative of all coefficients by one quantity, shape (degree + 1, nodes)."""
    rate = np.zeros((scaled.high.shape[1], powers[place].shape[1]))
    for row, high in zip(scaled.exponents, scaled.high, strict=True):
        if row[place]:
            term = float(row[place]) * powers[place][row[place] - 1]
            for i, e in enumerate(row):
                if i != place:
                    term = term * powers[i][e]
            rate += high[:, None] * term
    parts = rate.reshape(-1, degree + 1, rate.shape[1])
    return np.asarray(parts[0] + (1j * parts[1] if len(parts) > 1 else 0.0))


def _cubic(carrier: Carrier, real: int, spans: NDArray[np.int64]) -> list[Any]:
    """Coefficients in t of the Hermite cubics over some intervals, each of shape (rows, spans)."""
    sheet, nodes = carrier.sheet, carrier.nodes
    rows = _rows(len(sheet.re), real, carrier.mirrored)
    change = [hi[nodes[spans + 1]] - hi[nodes[spans]] for hi, _ in carrier.scaled.columns]
    values, rates = [], []
    for end in (spans, spans + 1):
        values.append(sheet.re[:rows, end] + 1j * sheet.im[:rows, end])
        rates.append(sum(d * s[:rows, end] for d, s in zip(change, carrier.slopes, strict=True)))
    if rows - real > 1:
        follow = _followers(real, values, rates)
        values[1], rates[1] = (np.take_along_axis(a, follow, axis=0) for a in (values[1], rates[1]))
    if rows == real:
        values, rates = [v.real for v in values], [r.real for r in rates]
    jump = values[1] - values[0]
    return [values[0], rates[0], 3 * jump - 2 * rates[0] - rates[1], rates[0] + rates[1] - 2 * jump]


def _followers(real: int, values: list[Any], rates: list[Any]) -> NDArray[np.int64]:
    """For every row at the left end its row at the right one: real roots by order, others by extrapolation."""
    follow = np.broadcast_to(np.arange(len(values[0]))[:, None], values[0].shape).copy()
    left, right = (
        v[real:] + 0.5 * sign * r[real:] for v, r, sign in zip(values, rates, (1, -1), strict=True)
    )
    follow[real:] = real + np.abs(left[:, None] - right[None, :]).argmin(axis=1)
    return follow


def _values(cubic: list[Any], span: NDArray[np.int64], t: Array) -> NDArray[Any]:
    value: NDArray[Any] = cubic[3][:, span]
    for part in cubic[2::-1]:
        value *= t
        value += part[:, span]
    return value


def _fill(made: Sheet, points: NDArray[np.int64], real: int, z: NDArray[Any]) -> None:
    """Starts that are distinct and, where real, in order; others are not carried."""
    rows = len(z)
    made.re[:rows, points], made.im[real:rows, points] = z.real, z[real:].imag
    disordered = (np.diff(z.real[:real], axis=0) <= 0).any(axis=0)
    made.real[points[disordered]] = UNKNOWN
