"""The limbus: the cone where clear cornea ends and sclera begins.

It runs from the Schwalbe ring of the tallest meshwork on the back surface to the ring of the spur's radius
on the front one: the posterior limbal border overlies the spur, the middle of the limbus Schwalbe's line
(Mohan, "Wound construction").
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from ..faces import Cone, CornealSurface, Lowered
from ..scene.bodies import Face
from .cornea import Cornea

MARGIN_MM = 1e-6


@dataclass(frozen=True)
class LimbalCone(Cone):
    """A cone that ends at two heights (mm in its own frame)."""

    z_min_mm: float = -math.inf
    z_max_mm: float = math.inf

    def lower(self) -> Lowered:
        return replace(super().lower(), z_min_mm=self.z_min_mm, z_max_mm=self.z_max_mm)


def limbus_face(cornea: Cornea, tallest_mm: float) -> Face:
    """The limbus of an eye whose tallest meshwork is given, in mm."""
    inner_r, outer_r = cornea.mean_back().radius_at(tallest_mm), cornea.spur_r_mm
    inner = ring_heights(cornea.back, inner_r) - cornea.thickness_mm
    outer = ring_heights(cornea.front, outer_r)
    inner_z, outer_z = float(inner[1]), float(outer[1])
    half_angle = math.degrees(math.atan2(outer_r - inner_r, outer_z - inner_z))
    # On a toric cornea both rings wave a little: the cone is long enough for every meridian.
    cone = LimbalCone(
        inner_r,
        half_angle,
        float(inner.min()) - inner_z - MARGIN_MM,
        float(outer.max()) - inner_z + MARGIN_MM,
    )
    return Face("limbus", cone, origin_mm=np.array([0.0, 0.0, inner_z]), finish="opaque", beyond="opaque")


def ring_heights(surface: CornealSurface, r: float) -> np.ndarray:
    """Heights of a surface at a radius: in its steep meridian, halfway to the flat one, in the flat one."""
    angles = np.radians(surface.steep_axis_deg + np.array([0.0, 45.0, 90.0]))
    return surface.sag(r * np.cos(angles), r * np.sin(angles))
