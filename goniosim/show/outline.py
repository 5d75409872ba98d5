"""Outlines of bodies in a plane through the eye's axis."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..frames import clock_direction
from ..scene.bodies import Body, Face
from ..scene.checks import on_right_side
from ..scene.compile import face_table

DIRECTIONS = 2880  # rays cast from inside a body to find its outline
SEARCH_MM = 0.4  # pitch of the search for a point inside
FAR_MM = 25.0
FLAT_MM = 0.003  # points this near to the line between the ones kept are left out


@dataclass(frozen=True)
class Meridian:
    """The plane of the eye's axis and a clock hour; across (3,) points to the observer's right in it."""

    across: np.ndarray

    @staticmethod
    def of(clock: float) -> "Meridian":
        """The meridian of a clock hour; 12 o'clock comes to the right where the plane stands upright."""
        toward = clock_direction(clock)
        side = toward[0] if abs(toward[0]) > 1e-9 else toward[1]
        return Meridian(toward if side > 0.0 else -toward)

    def flat(self, points_mm) -> np.ndarray:
        """Points of the eye frame projected on the plane, (n, 2): u across, z along the axis."""
        points = np.atleast_2d(np.asarray(points_mm, dtype=float))
        return np.stack([points @ self.across, points[:, 2]], axis=-1)

    def solid(self, u, z) -> np.ndarray:
        """Points of the plane in the eye frame, (n, 3)."""
        u, z = np.broadcast_arrays(np.asarray(u, dtype=float), np.asarray(z, dtype=float))
        return u.ravel()[:, None] * self.across + z.ravel()[:, None] * np.array([0.0, 0.0, 1.0])


def body_outline(body: Body, faces: dict[str, Face], plane: Meridian) -> np.ndarray | None:
    """Outline of a body, seen whole from a point inside, in the plane, (n, 2); None where that misses it."""
    from ..kernels.bundle import face_crossing

    line = np.arange(-FAR_MM, FAR_MM, SEARCH_MM)
    u, z = np.meshgrid(line, line)
    points = plane.solid(u, z)
    inside = points[on_right_side(body, faces, points)]
    if len(inside) == 0:
        return None
    start = inside[np.argmin(np.linalg.norm(inside - inside.mean(axis=0), axis=1))]
    table, pieces = face_table(tuple(faces[name] for name, _ in body.sides))
    senses = [1.0 if side == "behind" else -1.0 for _, side in body.sides]
    angles = np.linspace(0.0, 2.0 * np.pi, DIRECTIONS, endpoint=False)
    ways = plane.solid(np.cos(angles), np.sin(angles))
    reach = np.full(DIRECTIONS, FAR_MM)
    begun = tuple(start.tolist())
    for row, way in enumerate(ways.tolist()):  # plain numbers: a kernel takes them sooner than numpy's
        for i, sense in enumerate(senses):
            reach[row] = min(reach[row], face_crossing(table, i, pieces, *begun, *way, sense, FAR_MM))
    edge = start + reach[:, None] * ways
    return thinned(plane.flat(edge))


def thinned(points: np.ndarray) -> np.ndarray:
    """A closed outline with only the points that its shape needs (Douglas and Peucker's method)."""
    kept = np.zeros(len(points), dtype=bool)
    kept[[0, -1]] = True
    spans = [(0, len(points) // 2), (len(points) // 2, len(points) - 1)]
    kept[len(points) // 2] = True
    while spans:
        first, last = spans.pop()
        if last - first < 2:
            continue
        chord = points[last] - points[first]
        rest = points[first + 1 : last] - points[first]
        size = np.hypot(*chord)
        off = np.abs(chord[0] * rest[:, 1] - chord[1] * rest[:, 0]) / size if size else np.hypot(*rest.T)
        if off.max() > FLAT_MM:
            middle = first + 1 + int(off.argmax())
            kept[middle] = True
            spans += [(first, middle), (middle, last)]
    return points[kept]
