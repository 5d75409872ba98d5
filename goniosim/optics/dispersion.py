"""Formulas that give an index from a wavelength in nm. Plain floats: they are called one at a time."""

from __future__ import annotations

import math
from bisect import bisect_right
from typing import Sequence


def constant(wavelength_nm: float, index: float) -> float:
    """The same index at every wavelength."""
    return index


def cauchy(wavelength_nm: float, coefficients: Sequence[float]) -> float:
    """n = A + B / w^2 + C / w^4 + ..., w in nm (Cauchy)."""
    over = 1.0 / (wavelength_nm * wavelength_nm)
    total = 0.0
    for coefficient in reversed(coefficients):
        total = total * over + coefficient
    return total


def sellmeier(wavelength_nm: float, b: Sequence[float], c_um2: Sequence[float]) -> float:
    """n^2 = 1 + sum B w^2 / (w^2 - C), w in um, C in um^2 (Sellmeier). NaN where n^2 is not positive."""
    w2 = (wavelength_nm / 1000.0) ** 2
    n2 = 1.0
    for strength, pole in zip(b, c_um2):
        if w2 == pole:
            return math.nan
        n2 += strength * w2 / (w2 - pole)
    return math.sqrt(n2) if n2 > 0.0 else math.nan


def conrady(wavelength_nm: float, coefficients: Sequence[float]) -> float:
    """n = N + A / w + B / w^3.5, w in um (Conrady)."""
    w = wavelength_nm / 1000.0
    n0, a, b = coefficients
    return n0 + a / w + b / w**3.5


def table(wavelength_nm: float, wavelengths_nm: Sequence[float], indices: Sequence[float]) -> float:
    """Monotone cubic between the rows of a table (PCHIP: Fritsch & Butland, SIAM J Sci Stat Comput 5:300, 1984).

    It passes through every row and adds no rise or fall that the rows do not have.
    """
    x, y = wavelengths_nm, indices
    i = min(max(bisect_right(x, wavelength_nm) - 1, 0), len(x) - 2)
    h = x[i + 1] - x[i]
    if len(x) == 2:
        return y[0] + (wavelength_nm - x[0]) * (y[1] - y[0]) / h
    u = (wavelength_nm - x[i]) / h
    d0, d1 = _slope(x, y, i), _slope(x, y, i + 1)
    return (y[i] * (1.0 + 2.0 * u) * (1.0 - u) ** 2 + y[i + 1] * u * u * (3.0 - 2.0 * u)
            + h * (d0 * u * (1.0 - u) ** 2 - d1 * u * u * (1.0 - u)))


def _slope(x: Sequence[float], y: Sequence[float], i: int) -> float:
    """Slope at row i: weighted harmonic mean of its neighbours' slopes, 0 at a turn of the table."""
    last = len(x) - 1
    if i == 0:
        return _end_slope(x[1] - x[0], x[2] - x[1], (y[1] - y[0]) / (x[1] - x[0]),
                          (y[2] - y[1]) / (x[2] - x[1]))
    if i == last:
        return _end_slope(x[i] - x[i - 1], x[i - 1] - x[i - 2], (y[i] - y[i - 1]) / (x[i] - x[i - 1]),
                          (y[i - 1] - y[i - 2]) / (x[i - 1] - x[i - 2]))
    h0, h1 = x[i] - x[i - 1], x[i + 1] - x[i]
    m0, m1 = (y[i] - y[i - 1]) / h0, (y[i + 1] - y[i]) / h1
    if m0 * m1 <= 0.0:
        return 0.0
    w0, w1 = 2.0 * h1 + h0, h1 + 2.0 * h0
    return (w0 + w1) / (w0 / m0 + w1 / m1)


def _end_slope(h0: float, h1: float, m0: float, m1: float) -> float:
    """One-sided slope at an end (three points), held to the shape of the rows."""
    slope = ((2.0 * h0 + h1) * m0 - h0 * m1) / (h0 + h1)
    if slope * m0 <= 0.0:
        return 0.0
    if m0 * m1 < 0.0 and abs(slope) > 3.0 * abs(m0):
        return 3.0 * m0
    return slope
