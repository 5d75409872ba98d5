"""Surfaces of revolution about z from cubic pieces z(r), and the ring arc (a piece of a torus).

example: {name: front, shape: revolution, r_mm: [0, 2, 4, 6], z_mm: [0, -0.3, -1.1, -2.6], side: behind}
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from ..declare import Key
from .base import PROFILE, RING_ARC, Lowered, Shape, packed, unit


CONVEX = -1.0  # see kernels/shapes.py


def with_heights(pieces: np.ndarray) -> np.ndarray:
    """Cubic pieces (n, 6) with the least and greatest z of each, and a bound on bending, added, (n, 9).

    The bound holds for |d^2/dt^2 (z - s(rho))| along any ray: |s''| + |s'| / r, for |rho'| <= 1, rho'' <= 1 / r.
    """
    rows = []
    for r0, r1, a, b, c, d in pieces:
        # z' = b + 2 c u + 3 d u^2 vanishes where the height may be extreme inside the piece.
        turns = [u.real for u in np.roots([3 * d, 2 * c, b]) if abs(u.imag) < 1e-12] if (c or d) else []
        u = np.array([0.0, r1 - r0, *[t for t in turns if 0.0 < t < r1 - r0]])
        z = a + u * (b + u * (c + u * d))
        long = r1 - r0
        steep = abs(b) + long * (2.0 * abs(c) + 3.0 * abs(d) * long)
        curved = max(abs(2.0 * c), abs(2.0 * c + 6.0 * d * long))
        bend = curved + steep / r0 if r0 > 0.0 else np.inf
        falls = max(b, b + long * (2.0 * c + 3.0 * d * long)) <= 0.0
        if falls and max(c, c + 3.0 * d * long) <= 0.0:
            bend = CONVEX  # s falls and steepens, as a dome does
        rows.append([r0, r1, a, b, c, d, z.min() - 1e-9, z.max() + 1e-9, bend])
    return np.array(rows)


def cubic_height(pieces: np.ndarray, r: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """z(r) and dz/dr of pieces (n, 6 or more); beyond the ends the end pieces run on."""
    index = np.clip(np.searchsorted(pieces[:, 0], r, side="right") - 1, 0, len(pieces) - 1)
    u = r - pieces[index, 0]
    a, b, c, d = pieces[index, 2:6].T
    return a + u * (b + u * (c + u * d)), b + u * (2 * c + 3 * d * u)


class Profile(Shape):
    """A surface of revolution z(r) from cubic pieces (r0, r1, a, b, c, d), mm; ends at its radii."""

    name: ClassVar[str] = "profile"

    def __init__(self, pieces):
        self.pieces = with_heights(np.asarray(pieces, dtype=float).reshape(-1, 6))

    def lower(self) -> Lowered:
        return Lowered(PROFILE, packed(), self.pieces, self.pieces[0, 0], self.pieces[-1, 1])

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        rho = np.hypot(x, y)
        height, _ = cubic_height(self.pieces, rho)
        inside = (rho >= self.pieces[0, 0]) & (rho <= self.pieces[-1, 1])
        return np.where(inside, z - height, -1.0)

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, _ = np.asarray(points_mm).T
        rho = np.hypot(x, y)
        _, slope = cubic_height(self.pieces, rho)
        over = np.where(rho > 0.0, slope / np.where(rho > 0.0, rho, 1.0), 0.0)
        return unit(np.stack([-over * x, -over * y, np.ones_like(x)], axis=-1))

    def equator_mm(self) -> float:
        return float(self.pieces[-1, 1])


class Revolution(Profile):
    """A surface of revolution through points, by the cubic spline of scipy (flat on the axis, natural outside)."""

    name: ClassVar[str] = "revolution"
    keys: ClassVar[tuple[Key, ...]] = (
        Key("r_mm", "numbers", "radii of the profile's points, rising, the first 0", unit="mm", minimum=0.0),
        Key("z_mm", "numbers", "heights of the profile's points, as many as radii", unit="mm"),
    )

    def __init__(self, r_mm, z_mm):
        from scipy.interpolate import CubicSpline

        r = np.asarray(r_mm, dtype=float)
        spline = CubicSpline(r, np.asarray(z_mm, dtype=float), bc_type=((1, 0.0), (2, 0.0)))
        d, c, b, a = spline.c
        super().__init__(np.stack([r[:-1], r[1:], a, b, c, d], axis=-1))


@dataclass(frozen=True)
class RingArc(Shape):
    """A piece of a torus about z; ahead is outside the tube.

    ring_radius_mm : radius of the ring on which the circle's centre runs.
    arc_radius_mm : radius of the circle.
    from_deg, to_deg : the piece kept, as angles from the +r axis toward +z in the (r, z) half plane.
    """

    ring_radius_mm: float
    arc_radius_mm: float
    from_deg: float
    to_deg: float
    name: ClassVar[str] = "ring-arc"

    def lower(self) -> Lowered:
        low, high = math.radians(self.from_deg), math.radians(self.to_deg)
        # Highest and lowest point of the arc, the poles included where the piece holds them.
        angles = np.array([low, high, *[t for t in (-math.pi / 2, math.pi / 2, 0.0, math.pi) if low < t < high]])
        z = self.arc_radius_mm * np.sin(angles)
        r = self.ring_radius_mm + self.arc_radius_mm * np.cos(angles)
        parameters = packed(self.ring_radius_mm, self.arc_radius_mm, low, high)
        return Lowered(RING_ARC, parameters, r_min_mm=r.min() - 1e-9, r_max_mm=r.max() + 1e-9,
                       z_min_mm=z.min() - 1e-9, z_max_mm=z.max() + 1e-9)

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        return np.hypot(np.hypot(x, y) - self.ring_radius_mm, z) - self.arc_radius_mm

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        rho = np.hypot(x, y)
        out = (rho - self.ring_radius_mm) / rho
        return unit(np.stack([out * x, out * y, z], axis=-1))
