"""A cup of water in place of an eye, with the same interface: faces, bodies, and where its mark lies.

Its frame is the eye's with the origin at the centre of the water's surface and +z up. The cup is opaque, wall
and floor are straight, and the surface is flat: how the water wets the wall is left out.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Mapping

import numpy as np

from ..faces import AnnularPlane, Cylinder, Plane
from ..frames import clock_direction
from ..scene.bodies import OPAQUE, Body, Face
from .build import BuiltEye

SURFACE, WALL, FLOOR = "water-surface", "cup-wall", "cup-floor"
RIM, OUTSIDE, FOOT = "cup-rim", "cup-outside", "cup-foot"
MARK = "mark"
THICKNESS_MM = 3.0  # of wall and floor; no figure of a plan depends on it


@dataclass(frozen=True)
class CupAnatomy:
    """Where the mark lies, in mm, at the same height all round.

    Arcs run up the wall from the middle of the mark, and on from the wall's foot (negative) along the floor.
    """

    inside_radius_mm: float
    depth_mm: float
    mark_height_mm: float

    def band(self, structure: str, clock: float) -> tuple[float, float]:
        """Arcs of the mark's lower and upper edge."""
        return -0.5 * self.mark_height_mm, 0.5 * self.mark_height_mm

    def point(self, structure: str, clock: float, across: float = 0.5) -> np.ndarray:
        """Point of the mark, a fraction of the way from its lower to its upper edge, (3,) mm."""
        low, high = self.band(structure, clock)
        return self.wall_point(low + across * (high - low), clock)

    def face_at(self, arc: float) -> str:
        """Name of the face that carries the mark."""
        return WALL

    def wall_point(self, arc: float, clock: float) -> np.ndarray:
        """Point of the wall at an arc and a clock hour, (3,) mm."""
        point = self.inside_radius_mm * clock_direction(clock)
        point[2] = arc - self.depth_mm
        return point

    def wall_normal(self, arc: float, clock: float) -> np.ndarray:
        """Unit normal of the wall, into the water, (3,)."""
        return -clock_direction(clock)

    def anterior(self, arc: float, clock: float) -> np.ndarray:
        """Unit tangent of the wall: up, (3,)."""
        return np.array([0.0, 0.0, 1.0])

    def arc_of(self, point_mm: np.ndarray) -> float:
        """Arc of a point of wall or floor, in its own meridian."""
        x, y, z = point_mm
        return float(z + self.depth_mm - (self.inside_radius_mm - np.hypot(x, y)))

    def structure_at(self, point_mm: np.ndarray, face_name: str) -> str:
        """What lies at a point of an inner face: the mark, or the face itself."""
        on_mark = face_name == WALL and abs(self.arc_of(point_mm)) <= 0.5 * self.mark_height_mm
        return MARK if on_mark else face_name


def build_cup(mapping: Mapping[str, Any]) -> BuiltEye:
    """Build a complete cup mapping (see `complete_cup`)."""
    cup = mapping["cup"]
    anatomy = CupAnatomy(cup["inside_radius_mm"], cup["water_above_mark_mm"], cup["mark_height_mm"])
    return BuiltEye(
        faces={face.name: face for face in _faces(cup)},
        bodies=_bodies(cup["water"]),
        anatomy=anatomy,
        report={"put_in": dict(cup)},
        notes=[],
        inner_sides=((WALL, "behind"), (FLOOR, "ahead")),
        structures=(MARK,),
        ring_structure=None,
        inlet=SURFACE,
    )


def _faces(cup: Mapping[str, Any]) -> list[Face]:
    radius = cup["inside_radius_mm"]
    outer = radius + THICKNESS_MM
    floor_z = -cup["water_above_mark_mm"] - cup["water_below_mark_mm"]
    stops = {"finish": "opaque", "beyond": "opaque"}
    return [
        Face(SURFACE, Plane(0.0, radius)),
        Face(WALL, Cylinder(radius), **stops),
        Face(FLOOR, Plane(), origin_mm=_at_height(floor_z), **stops),
        Face(RIM, AnnularPlane(radius, outer), origin_mm=_at_height(cup["wall_above_water_mm"])),
        Face(OUTSIDE, Cylinder(outer)),
        Face(FOOT, Plane(), origin_mm=_at_height(floor_z - THICKNESS_MM)),
    ]


def _bodies(water: str) -> list[Body]:
    """The water, the ring of wall above it, and the cup as it stops light from outside.

    Light in air meets the water at its surface alone, so that light from the wall starts in the water.
    """
    inside = ((SURFACE, "behind"), (WALL, "behind"), (FLOOR, "ahead"))
    within, ring = ((OUTSIDE, "behind"), (RIM, "behind")), ((WALL, "ahead"), (SURFACE, "ahead"))
    return [
        Body("water", water, inside, open_to_air=(SURFACE,)),
        Body("wall-above-water", OPAQUE, (*ring, *within)),
        Body("cup", OPAQUE, (*within, (FOOT, "ahead"))),
    ]


def _at_height(z: float) -> np.ndarray:
    return np.array([0.0, 0.0, z])
