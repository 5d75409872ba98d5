"""One meridian of the cornea's back surface: height, slope and arc length, from the spur to the apex.

In the meridian at an angle t from the steep one, A = cX cos^2 t + cY sin^2 t and
B = k (cX^2 cos^2 t + cY^2 sin^2 t); see `goniosim.faces.cornea` for the conic and the cubic.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..faces import CornealSurface
from .curves import arc_length, radius_at_arc


@dataclass(frozen=True)
class Meridian:
    """z(r) of one meridian, from r = 0 to the spur.

    a, b : the meridian's conic (module text). cubic : value, slope, half curvature and cubic coefficient at
    the join, or None where the conic runs on. apex_z, spur_r, join : mm.
    """

    a: float
    b: float
    cubic: tuple[float, float, float, float] | None
    apex_z: float
    spur_r: float
    join: float

    def height(self, r):
        """z in mm at a radius or an array of radii."""
        r = np.asarray(r, dtype=float)
        inner = np.minimum(r, self.join) if self.cubic else r
        conic = -self.a * inner**2 / (1.0 + np.sqrt(1.0 - self.b * inner**2))
        if self.cubic is None:
            return self.apex_z + conic
        value, slope, half, third = self.cubic
        u = r - self.join
        return self.apex_z + np.where(u > 0.0, value + u * (slope + u * (half + u * third)), conic)

    def slope(self, r):
        """dz/dr at a radius or an array of radii."""
        r = np.asarray(r, dtype=float)
        inner = np.minimum(r, self.join) if self.cubic else r
        conic = -self.a * inner / np.sqrt(1.0 - self.b * inner**2)
        if self.cubic is None:
            return conic
        _, slope, half, third = self.cubic
        u = r - self.join
        return np.where(u > 0.0, slope + u * (2.0 * half + 3.0 * third * u), conic)

    def arc_to(self, r: float) -> float:
        """Length in mm along the meridian from the spur to a radius."""
        if self.cubic is None or r >= self.join:
            return arc_length(self.slope, r, self.spur_r)
        return arc_length(self.slope, self.join, self.spur_r) + arc_length(self.slope, r, self.join)

    def radius_at(self, arc: float) -> float:
        """Radius at a length along the meridian from the spur, in mm."""
        if self.cubic is None:
            return radius_at_arc(self.slope, self.spur_r, arc, 0.0, self.spur_r)
        outer = arc_length(self.slope, self.join, self.spur_r)
        if arc <= outer:
            return radius_at_arc(self.slope, self.spur_r, arc, self.join, self.spur_r)
        return radius_at_arc(self.slope, self.join, arc - outer, 0.0, self.join)


def meridian_at(surface: CornealSurface, apex_z: float, spur_r: float, from_steep_deg: float) -> Meridian:
    """The meridian at an angle from the steep one."""
    share = math.cos(math.radians(from_steep_deg)) ** 2
    return _meridian(surface, apex_z, spur_r, share)


def mean_meridian(surface: CornealSurface, apex_z: float, spur_r: float) -> Meridian:
    """The meridian halfway between the steep and the flat one."""
    return _meridian(surface, apex_z, spur_r, 0.5)


def _meridian(surface: CornealSurface, apex_z: float, spur_r: float, steep_share: float) -> Meridian:
    cx, cy, k = 1.0 / surface.steep_mm, 1.0 / surface.flat_mm, 1.0 + surface.q
    a = cx * steep_share + cy * (1.0 - steep_share)
    b = k * (cx * cx * steep_share + cy * cy * (1.0 - steep_share))
    cubic = None if surface.periphery == 0 else tuple(float(v) for v in surface.cubic_at_join(a, b))
    return Meridian(a, b, cubic, apex_z, spur_r, surface.join_mm)


def from_steep_deg(surface: CornealSurface, clock: float) -> float:
    """Angle between a clock hour's meridian and the steep one, in degrees."""
    return 90.0 - 30.0 * clock - surface.steep_axis_deg
