"""Plane, and the annular plane with an inner and an outer edge.

example: {name: front, shape: plane, vertex_mm: [0, 0, 5.0], lean_deg: 48, lean_toward_clock: 12, side: behind}
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from .base import PLANE, Lowered, Shape, packed


@dataclass(frozen=True)
class Plane(Shape):
    """The plane z = 0; ahead is z > 0. An annulus where radii are given (mm from its axis)."""

    r_min_mm: float = 0.0
    r_max_mm: float = np.inf
    name: ClassVar[str] = "plane"

    def lower(self) -> Lowered:
        return Lowered(PLANE, packed(), r_min_mm=self.r_min_mm, r_max_mm=self.r_max_mm)

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        return np.asarray(points_mm)[:, 2]

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        return np.broadcast_to(np.array([0.0, 0.0, 1.0]), np.shape(points_mm)).copy()


def AnnularPlane(r_min_mm: float, r_max_mm: float) -> Plane:
    """A flat ring between two radii, in mm."""
    return Plane(r_min_mm, r_max_mm)
