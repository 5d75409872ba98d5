"""Placed faces and the bodies that they bound: plain data between builders and the compiler."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from ..faces import Shape

FINISHES = ("clear", "coated", "mirror", "ground", "opaque")
OPAQUE = "opaque"
"""Medium name of a body that swallows light."""


@dataclass(frozen=True)
class Face:
    """A shape at its place in the eye frame, with what it does to light.

    name : unique in the scene.
    shape : the surface at its own origin.
    rotation : (3, 3), takes the shape's frame to the eye frame.
    origin_mm : (3,), the shape's origin in the eye frame.
    finish : 'clear' (Snell and Fresnel), 'coated', 'mirror', 'ground' or 'opaque' (both absorb).
    reflectance : of a coated or mirror face, 0 to 1.
    works_by : 'total_reflection' where the face is meant to reflect totally, else None.
    beyond : what lies behind the face where no neighbouring body does: 'air' or 'opaque'.
    """

    name: str
    shape: Shape
    rotation: np.ndarray = field(default_factory=lambda: np.eye(3))
    origin_mm: np.ndarray = field(default_factory=lambda: np.zeros(3))
    finish: str = "clear"
    reflectance: float | None = None
    works_by: str | None = None
    beyond: str = "air"

    def to_local(self, points_mm: np.ndarray) -> np.ndarray:
        """Points of the eye frame in the shape's own frame, (n, 3) mm."""
        return (np.asarray(points_mm) - self.origin_mm) @ self.rotation

    def to_eye(self, points_mm: np.ndarray) -> np.ndarray:
        """Points of the shape's own frame in the eye frame, (n, 3) mm."""
        return np.asarray(points_mm) @ self.rotation.T + self.origin_mm

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        """Positive ahead of the face, not positive behind it, (n,)."""
        return self.shape.side_value(self.to_local(points_mm))


@dataclass(frozen=True)
class Body:
    """One medium bounded by faces: the points on the right side of every face.

    name : unique in the scene.
    medium : name of the medium, or 'opaque'.
    sides : (face name, 'behind' | 'ahead') for every bounding face.
    entry_checks : the sides that a hit from outside must respect; None means all of `sides`.
                   The eye's chamber is closed by faces with ends, not by half-spaces, and needs none.
    open_to_air : whether a ray in air can meet it; or names of the only faces at which it can.
    """

    name: str
    medium: str
    sides: tuple[tuple[str, str], ...]
    entry_checks: tuple[tuple[str, str], ...] | None = None
    open_to_air: bool | tuple[str, ...] = True

    def meets_air_at(self, face_name: str) -> bool:
        """Whether a ray in air can meet the body at a face."""
        return face_name in self.open_to_air if isinstance(self.open_to_air, tuple) else self.open_to_air
