"""The inner lining of the eye in one meridian: iris front, ciliary face, wall and cornea as one curve.

Its parameter is the arc length s from the scleral spur, in mm: positive along the wall toward the cornea's
apex, negative along the ciliary face to the iris root and on along the front of the iris to the pupil
margin.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..errors import Misuse
from .curves import arc_length, radius_at_arc
from .iris import Iris
from .meridian import Meridian
from .recess import ARC_RADIUS_MM, Recess, inward

EDGE_MM = 1e-9
CORNEA_BACK, CILIARY_FACE, IRIS_FRONT = "cornea-back", "ciliary-face", "iris-front"


@dataclass(frozen=True)
class Lining:
    """One meridian's lining. Points, tangents and normals are (r, z) arrays."""

    wall: Meridian
    recess: Recess
    iris: Iris

    @property
    def root_mm(self) -> float:
        """Arc of the iris root."""
        return -self.recess.band_mm

    @property
    def margin_mm(self) -> float:
        """Arc of the pupil margin."""
        return self.root_mm - arc_length(self.iris.slope, self.iris.margin[0], self.iris.root[0])

    @property
    def apex_mm(self) -> float:
        """Arc of the cornea's apex."""
        return self.wall.arc_to(0.0)

    def face_at(self, arc: float) -> str:
        """Name of the face that carries an arc."""
        if arc >= 0.0:
            return CORNEA_BACK
        return CILIARY_FACE if arc >= self.root_mm else IRIS_FRONT

    def at(self, arc: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Point, anterior tangent and normal into the chamber at an arc; Misuse beyond the lining's ends.

        At the root, a corner, the normal halves the angle between ciliary face and iris.
        """
        if arc >= 0.0:
            return self._on_wall(arc)
        if arc >= self.root_mm:
            point, tangent, normal = self._on_arc(arc)
            if arc == self.root_mm:
                normal = normal + self._on_iris(arc)[2]
                normal = normal / np.linalg.norm(normal)
            return point, tangent, normal
        return self._on_iris(arc)

    def _on_wall(self, arc: float):
        if arc > self.apex_mm + EDGE_MM:
            raise Misuse(f"arc must be at most {self.apex_mm:g} mm, the cornea's apex; got {arc:g}")
        r = self.wall.radius_at(arc)
        slope = float(self.wall.slope(r))
        return (
            np.array([r, float(self.wall.height(r))]),
            np.array([-1.0, -slope]) / math.hypot(1.0, slope),
            inward(slope),
        )

    def _on_arc(self, arc: float):
        angle = self.recess.spur_angle + arc / ARC_RADIUS_MM
        out = np.array([math.cos(angle), math.sin(angle)])
        return self.recess.at(angle), np.array([-out[1], out[0]]), -out

    def _on_iris(self, arc: float):
        if arc < self.margin_mm - EDGE_MM:
            raise Misuse(f"arc must be at least {self.margin_mm:g} mm, the pupil margin; got {arc:g}")
        iris = self.iris
        r = radius_at_arc(iris.slope, iris.root[0], self.root_mm - arc, iris.margin[0], iris.root[0])
        slope = float(iris.slope(r))
        # Anterior along the lining is outward on the iris, toward its root.
        return (
            np.array([r, float(iris.height(r))]),
            np.array([1.0, slope]) / math.hypot(1.0, slope),
            -inward(slope),
        )

    def arc_of(self, r: float, z: float) -> float:
        """Arc of the lining's point that is nearest to (r, z) by height on wall and iris, by distance on
        the arc.
        """
        off_wall = abs(z - float(self.wall.height(min(r, self.wall.spur_r))))
        dr, dz = r - self.recess.centre[0], z - self.recess.centre[1]
        angle = math.atan2(dz, dr)
        on_arc = self.recess.root_angle - EDGE_MM <= angle <= self.recess.spur_angle + EDGE_MM
        off_arc = abs(math.hypot(dr, dz) - ARC_RADIUS_MM) if on_arc else math.inf
        low, high = self.iris.margin[0], self.iris.root[0]
        off_iris = abs(z - float(self.iris.height(min(max(r, low), high))))
        nearest = min(off_wall, off_arc, off_iris)
        if nearest == off_wall:
            return self.wall.arc_to(min(r, self.wall.spur_r))
        if nearest == off_arc:
            return (angle - self.recess.spur_angle) * ARC_RADIUS_MM
        return self.root_mm - arc_length(self.iris.slope, min(max(r, low), high), high)
