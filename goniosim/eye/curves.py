"""Plane curves z(r): exact arc lengths, points at a given arc length, and a safe root finder."""

from __future__ import annotations

import math
from typing import Callable

import numpy as np

from ..errors import Misuse

NODES, WEIGHTS = np.polynomial.legendre.leggauss(40)
ROOT_TOLERANCE = 1e-15


def arc_length(slope: Callable, r0: float, r1: float) -> float:
    """Length in mm of z(r) between two radii, by Gauss quadrature; slope(r) takes arrays."""
    half = 0.5 * abs(r1 - r0)
    r = 0.5 * (r0 + r1) + half * NODES
    return half * float(WEIGHTS @ np.sqrt(1.0 + slope(r) ** 2))


def radius_at_arc(slope: Callable, start_r: float, length: float, low: float, high: float) -> float:
    """Radius inward of start_r, between low and high, where the arc from start_r has a length (mm).

    Newton's method; the derivative of arc length by r is exact, so few steps reach rounding.
    """
    r = start_r - length / math.sqrt(1.0 + float(slope(np.array(start_r))) ** 2)
    r = min(max(r, low), high)
    for _ in range(50):
        miss = arc_length(slope, r, start_r) - length
        step = miss / math.sqrt(1.0 + float(slope(np.array(r))) ** 2)
        r = min(max(r + step, low), high)
        if abs(step) < 4e-15:
            break
    return r


def find_root(function: Callable[[float], float], low: float, high: float) -> float:
    """Root of a function that changes sign between low and high (bracketed secant, halving as a safeguard).

    Raises Misuse where the signs at the ends agree.
    """
    at_low, at_high = function(low), function(high)
    if at_low == 0.0:
        return low
    if at_low * at_high > 0.0:
        raise Misuse(f"no change of sign between {low:g} and {high:g}")
    for step in range(200):
        if at_high == 0.0 or abs(high - low) <= ROOT_TOLERANCE * (1.0 + abs(low)):
            return high
        # Every third step halves, so that the bracket shrinks whatever the function does.
        middle = 0.5 * (low + high) if step % 3 == 2 else high - at_high * (high - low) / (at_high - at_low)
        if not min(low, high) < middle < max(low, high):
            middle = 0.5 * (low + high)
        at_middle = function(middle)
        if at_middle * at_high <= 0.0:
            low, at_low = high, at_high
        high, at_high = middle, at_middle
    return high
