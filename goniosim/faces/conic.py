"""Sphere and conic: caps on the vertex's side of their centre.

Surface, with c = 1/R and k = 1 + Q:  z = -c r^2 / (1 + sqrt(1 - k c^2 r^2)).
radius > 0: centre behind the vertex (a dome seen from ahead).

example: {name: contact, shape: sphere, radius_mm: 7.9, side: ahead}
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from ..declare import Key
from .base import CONIC, Lowered, Shape, packed, unit

RADIUS = Key("radius_mm", "number",
             "radius of curvature at the vertex; greater than 0: centre behind the vertex; not 0",
             unit="mm", minimum=-1000.0, maximum=1000.0)


@dataclass(frozen=True)
class Conic(Shape):
    """A conic of revolution about z, with asphericity q (0 sphere, -1 paraboloid)."""

    radius_mm: float
    q: float = 0.0
    r_max_mm: float = np.inf
    name: ClassVar[str] = "conic"
    keys: ClassVar[tuple[Key, ...]] = (
        RADIUS,
        Key("q", "number", "asphericity Q: 0 sphere, between -1 and 0 prolate ellipsoid, -1 paraboloid",
            minimum=-20.0, maximum=20.0),
    )

    def lower(self) -> Lowered:
        return Lowered(CONIC, packed(1.0 / self.radius_mm, 1.0 + self.q), r_max_mm=self.r_max_mm)

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        c, k = 1.0 / self.radius_mm, 1.0 + self.q
        under = 1.0 - k * c * c * (x * x + y * y)
        drop = c * (x * x + y * y) / (1.0 + np.sqrt(np.maximum(under, 0.0)))
        return np.where(under > 0.0, z + drop, -1.0)

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        c, k = 1.0 / self.radius_mm, 1.0 + self.q
        return unit(np.stack([c * x, c * y, 1.0 + c * k * z], axis=-1))

    def equator_mm(self) -> float:
        k = 1.0 + self.q
        return abs(self.radius_mm) / np.sqrt(k) if k > 0.0 else np.inf


@dataclass(frozen=True)
class Sphere(Conic):
    """A spherical cap."""

    name: ClassVar[str] = "sphere"
    keys: ClassVar[tuple[Key, ...]] = (RADIUS,)

    @classmethod
    def from_mapping(cls, values) -> "Sphere":
        return cls(values["radius_mm"])
