"""Toric (biconic) cap, and the corneal surface: biconic centre with its own periphery.

Biconic, X along the steep meridian, Y along the flat one, curvatures cX, cY, k = 1 + Q:

    drop = (cX X^2 + cY Y^2) / (1 + sqrt(1 - k (cX^2 X^2 + cY^2 Y^2))),   z = -drop.

In the meridian at polar angle t this is a conic: with A = cX cos^2 t + cY sin^2 t and
B = k (cX^2 cos^2 t + cY^2 sin^2 t), drop = A r^2 / (1 + S), drop' = A r / S, drop'' = A / S^3,
S = sqrt(1 - B r^2). Outside the join each meridian runs on as a cubic in r with the conic's value,
slope and curvature there; the fourth condition is a point to pass through or a slope to reach.

example: {name: front, shape: toric, flat_mm: 7.9, steep_mm: 7.6, steep_axis_deg: 90, q: 0, side: behind}
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from ..declare import Key
from .base import CONIC, ROUND_CORNEA, TORIC, Lowered, Shape, packed, unit
from .revolution import with_heights

FAR_MM = 1e6  # stands for "never" among the packed parameters
NO_PERIPHERY, THROUGH_POINT, TO_SLOPE = 0, 1, 2


@dataclass(frozen=True)
class CornealSurface(Shape):
    """A biconic centre out to join_mm, and beyond it one cubic per meridian.

    flat_mm, steep_mm : principal radii; steep_axis_deg : meridian of the steep one, anticlockwise
    from +x as the observer sees it. q : asphericity.
    through : (r_mm, drop_mm) that every meridian passes, or None.
    slope_deg_at : (slope_deg, r_mm) that every meridian reaches, or None.
    straight_beyond_mm : from this radius on each meridian runs straight. r_max_mm : where it ends.
    """

    flat_mm: float
    steep_mm: float
    steep_axis_deg: float = 90.0
    q: float = 0.0
    join_mm: float = 4.0
    through: tuple[float, float] | None = None
    slope_deg_at: tuple[float, float] | None = None
    straight_beyond_mm: float | None = None
    r_max_mm: float = np.inf
    name: ClassVar[str] = "corneal-surface"

    @property
    def round(self) -> bool:
        """Whether all meridians are the same."""
        return self.flat_mm == self.steep_mm

    @property
    def periphery(self) -> int:
        """How the cubic's fourth condition is set."""
        if self.through is not None:
            return THROUGH_POINT
        return TO_SLOPE if self.slope_deg_at is not None else NO_PERIPHERY

    def cubic_at_join(self, a, b):
        """Value, slope, half curvature and cubic coefficient at the join, for A and B of a meridian."""
        j = self.join_mm
        s = np.sqrt(1.0 - b * j * j)
        value, slope, half = -a * j * j / (1.0 + s), -a * j / s, -0.5 * a / s**3
        if self.periphery == THROUGH_POINT:
            r, drop = self.through
            u = r - j
            return value, slope, half, (-drop - value - slope * u - half * u * u) / u**3
        slope_deg, r = self.slope_deg_at
        u = r - j
        return value, slope, half, (-math.tan(math.radians(slope_deg)) - slope - 2.0 * half * u) / (3.0 * u * u)

    def sag(self, x, y):
        """Height z over x, y in mm; accepts complex steps, so that derivatives come out exactly."""
        cos, sin = math.cos(math.radians(self.steep_axis_deg)), math.sin(math.radians(self.steep_axis_deg))
        xs, ys = x * cos + y * sin, -x * sin + y * cos
        r2 = xs * xs + ys * ys
        r = np.sqrt(r2)
        safe = np.where(r2 == 0, 1.0, r2)
        cx, cy, k = 1.0 / self.steep_mm, 1.0 / self.flat_mm, 1.0 + self.q
        a = np.where(r2 == 0, cx, (cx * xs * xs + cy * ys * ys) / safe)
        b = np.where(r2 == 0, k * cx * cx, k * (cx * cx * xs * xs + cy * cy * ys * ys) / safe)
        under = 1.0 - b * r2
        under = np.where(np.real(under) > 0.0, under, 0.0 * under)
        height = -a * r2 / (1.0 + np.sqrt(under))
        if self.periphery == NO_PERIPHERY:
            return height
        value, slope, half, cubic = self.cubic_at_join(a, b)
        edge = FAR_MM if self.straight_beyond_mm is None else self.straight_beyond_mm
        u = np.where(np.real(r) > edge, edge, r) - self.join_mm
        outer = value + u * (slope + u * (half + u * cubic))
        outer = outer + (slope + u * (2.0 * half + 3.0 * cubic * u)) * (r - self.join_mm - u)
        return np.where(np.real(r) > self.join_mm, outer, height)

    def lower(self) -> Lowered:
        if self.round and self.periphery == NO_PERIPHERY:
            return Lowered(CONIC, packed(1.0 / self.flat_mm, 1.0 + self.q), r_max_mm=self.r_max_mm)
        if self.round:
            parameters = packed(1.0 / self.flat_mm, 1.0 + self.q, self.join_mm)
            return Lowered(ROUND_CORNEA, parameters, self._outer_pieces(), r_max_mm=self.r_max_mm)
        edge = FAR_MM if self.straight_beyond_mm is None else self.straight_beyond_mm
        mode, at, value = self.periphery, 0.0, 0.0
        if mode == THROUGH_POINT:
            at, value = self.through
        elif mode == TO_SLOPE:
            at, value = self.slope_deg_at[1], math.tan(math.radians(self.slope_deg_at[0]))
        axis = math.radians(self.steep_axis_deg)
        parameters = packed(1.0 / self.steep_mm, 1.0 / self.flat_mm, 1.0 + self.q, math.cos(axis),
                            math.sin(axis), self.join_mm if mode else FAR_MM, mode, at, value, edge)
        return Lowered(TORIC, parameters, r_max_mm=min(self.r_max_mm, self.equator_mm()))

    def _outer_pieces(self) -> np.ndarray:
        """The periphery of a round surface as cubic pieces."""
        c, k = 1.0 / self.flat_mm, 1.0 + self.q
        value, slope, half, cubic = (float(v) for v in self.cubic_at_join(c, k * c * c))
        end = self.r_max_mm if np.isfinite(self.r_max_mm) else 60.0
        edge = self.straight_beyond_mm
        if edge is None or edge >= end:
            return with_heights(np.array([[self.join_mm, end, value, slope, half, cubic]]))
        u = edge - self.join_mm
        height = value + u * (slope + u * (half + u * cubic))
        run = slope + u * (2.0 * half + 3.0 * cubic * u)
        return with_heights(np.array([[self.join_mm, edge, value, slope, half, cubic],
                                      [edge, end, height, run, 0.0, 0.0]]))

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        inside = np.hypot(x, y) < self.equator_mm()
        return np.where(inside, z - self.sag(x, y), -1.0)

    def slopes(self, x, y):
        """dz/dx and dz/dy by complex step: exact to rounding."""
        step = 1e-30
        return np.imag(self.sag(x + 1j * step, y)) / step, np.imag(self.sag(x, y + 1j * step)) / step

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, _ = np.asarray(points_mm).T
        zx, zy = self.slopes(x, y)
        return unit(np.stack([-zx, -zy, np.ones_like(zx)], axis=-1))

    def equator_mm(self) -> float:
        """Radius at which the conic centre would end; endless with a periphery of its own."""
        if self.periphery != NO_PERIPHERY or 1.0 + self.q <= 0.0:
            return np.inf
        return min(abs(self.flat_mm), abs(self.steep_mm)) / math.sqrt(1.0 + self.q)


class Toric(CornealSurface):
    """A biconic cap."""

    name: ClassVar[str] = "toric"
    keys: ClassVar[tuple[Key, ...]] = (
        Key("flat_mm", "number", "radius of the flat principal meridian; greater than 0: centre behind the vertex",
            unit="mm", minimum=-1000.0, maximum=1000.0),
        Key("steep_mm", "number", "radius of the steep principal meridian", unit="mm",
            minimum=-1000.0, maximum=1000.0),
        Key("steep_axis_deg", "number",
            "meridian of the steep radius, anticlockwise from 3 o'clock as the observer sees it",
            default=90.0, unit="deg", minimum=0.0, maximum=180.0),
        Key("q", "number", "asphericity Q, the same in both meridians", default=0.0, minimum=-20.0, maximum=20.0),
    )
