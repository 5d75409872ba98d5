"""The angle recess: the ciliary face, an arc of 0.5 mm radius tangent to the wall at the spur, to the iris
root.

All in the (r, z) half plane of the mean meridian. On a toric cornea the wall's slope at the spur differs by
meridian (by less than a degree per dioptre): wall and arc meet in the same ring there, with that small
kink.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from .cornea import Cornea

ARC_RADIUS_MM = 0.5  # gives a rounded recess; no published figure found (common practice, no source)
WALL_POINT_MM = 0.5  # along the wall from the spur: where OCT measures AOD500 and the trabecular-iris angle


@dataclass(frozen=True)
class Recess:
    """centre : (r, z) of the arc. spur_angle, root_angle : radians from +r toward +z, spur above root."""

    centre: np.ndarray
    spur_angle: float
    root_angle: float

    @property
    def root(self) -> np.ndarray:
        """(r, z) of the iris root."""
        return self.at(self.root_angle)

    @property
    def band_mm(self) -> float:
        """Width of the ciliary band along the arc."""
        return (self.spur_angle - self.root_angle) * ARC_RADIUS_MM

    def at(self, angle: float) -> np.ndarray:
        """(r, z) of a point of the arc."""
        return self.centre + ARC_RADIUS_MM * np.array([math.cos(angle), math.sin(angle)])


def recess_of(cornea: Cornea, band_mm: float) -> Recess:
    """The recess whose ciliary band has a width."""
    slope = float(cornea.mean_back().slope(cornea.spur_r_mm))
    into = inward(slope)
    spur = np.array([cornea.spur_r_mm, cornea.spur_z_mm])
    spur_angle = math.atan2(-into[1], -into[0])
    return Recess(spur + ARC_RADIUS_MM * into, spur_angle, spur_angle - band_mm / ARC_RADIUS_MM)


def inward(slope: float) -> np.ndarray:
    """Unit normal (r, z) of a wall of slope dz/dr, into the chamber."""
    return np.array([slope, -1.0]) / math.hypot(slope, 1.0)


@dataclass(frozen=True)
class WallPoint:
    """A point of the wall and its normal into the chamber, (r, z)."""

    at: np.ndarray
    normal: np.ndarray


def wall_point(cornea: Cornea, arc_mm: float) -> WallPoint:
    """The wall of the mean meridian at a distance along it from the spur."""
    meridian = cornea.mean_back()
    r = meridian.radius_at(arc_mm)
    return WallPoint(np.array([r, float(meridian.height(r))]), inward(float(meridian.slope(r))))
