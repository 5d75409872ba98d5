"""The point looked at: a structure at a clock hour, or any point of the eye frame."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Mapping

import numpy as np

from ..eye import BuiltEye
from ..frames import clock_of, clockwise_direction

POINT = "point"


@dataclass(frozen=True)
class Target:
    """A point T with its neighbourhood.

    structure : its name, 'point' for a free point. clock : hour, None on the axis. point_mm (3,).
    normal : (3,) unit vector into the chamber, about which the fan is shot.
    anterior, clockwise : (3,) unit tangents of the wall, None for a free point.
    arc_mm : distance along the wall from the spur, anterior positive; None for a free point.
    face : name of the face it lies on, None for a free point.
    """

    structure: str
    clock: float | None
    point_mm: np.ndarray
    normal: np.ndarray
    anterior: np.ndarray | None
    clockwise: np.ndarray | None
    arc_mm: float | None
    face: str | None

    @property
    def on_wall(self) -> bool:
        """Whether figures that need a wall exist."""
        return self.arc_mm is not None


def target_of(eye: BuiltEye, wanted: Mapping[str, Any]) -> Target:
    """The target that a scene asks for: {structure, clock, across} or {point_mm}."""
    if wanted.get("point_mm") is not None:
        point = np.asarray(wanted["point_mm"], dtype=float)
        return Target(POINT, clock_of(point[0], point[1]), point, np.array([0.0, 0.0, 1.0]), None, None, None, None)
    return structure_target(eye, wanted["structure"], wanted["clock"], wanted.get("across", 0.5))


def structure_target(eye: BuiltEye, structure: str, clock: float, across: float = 0.5) -> Target:
    """A structure's point at a clock hour, a fraction of the way across its band (0.5 its mid-line)."""
    anatomy = eye.anatomy
    low, high = anatomy.band(structure, clock)
    arc = low + across * (high - low)
    return Target(structure, clock, anatomy.wall_point(arc, clock), anatomy.wall_normal(arc, clock),
                  anatomy.anterior(arc, clock), clockwise_direction(clock), arc, anatomy.face_at(arc))
