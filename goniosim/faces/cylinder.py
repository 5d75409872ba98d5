"""Cylinder and cone about z; behind is inside.

example: {name: rim, shape: cylinder, radius_mm: 6.0, side: behind, finish: ground}
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from ..declare import Key
from .base import CONE, CYLINDER, Lowered, Shape, packed, unit


@dataclass(frozen=True)
class Cylinder(Shape):
    """A round cylinder about z, endless unless heights are given; ahead is outside."""

    radius_mm: float
    z_min_mm: float = -np.inf
    z_max_mm: float = np.inf
    name: ClassVar[str] = "cylinder"
    keys: ClassVar[tuple[Key, ...]] = (
        Key("radius_mm", "number", "radius of the cylinder", unit="mm", above=0.0, maximum=1000.0),
    )

    def lower(self) -> Lowered:
        return Lowered(CYLINDER, packed(self.radius_mm), z_min_mm=self.z_min_mm, z_max_mm=self.z_max_mm)

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, _ = np.asarray(points_mm).T
        return np.hypot(x, y) - self.radius_mm

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        return unit(np.stack([x, y, np.zeros_like(z)], axis=-1))


@dataclass(frozen=True)
class Cone(Shape):
    """A cone about z whose radius is radius_mm at the vertex height and grows forward; ahead is outside."""

    radius_mm: float
    half_angle_deg: float
    name: ClassVar[str] = "cone"
    keys: ClassVar[tuple[Key, ...]] = (
        Key("radius_mm", "number", "radius at the height of the vertex", unit="mm", minimum=0.0, maximum=1000.0),
        Key("half_angle_deg", "number",
            "angle between side and axis; greater than 0: wider forward, less than 0: wider backward",
            unit="deg", above=-90.0, below=90.0),
    )

    @property
    def slope(self) -> float:
        """Growth of the radius per mm forward."""
        return math.tan(math.radians(self.half_angle_deg))

    def lower(self) -> Lowered:
        return Lowered(CONE, packed(self.radius_mm, self.slope))

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        return np.hypot(x, y) - (self.radius_mm + self.slope * z)

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        x, y, z = np.asarray(points_mm).T
        rho = np.hypot(x, y)
        return unit(np.stack([x, y, -self.slope * rho], axis=-1))
