"""Fermat's principle: the path of least optical length between two points, found without any law of refraction."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Sequence

import numpy as np

from ..scene.bodies import Face


@dataclass(frozen=True)
class Passage:
    """A path's ends, the faces that it touches in order, and the index of each stretch (one more than faces)."""

    start_mm: np.ndarray
    end_mm: np.ndarray
    faces: Sequence[Face]
    indices: Sequence[float]

    def points(self, across: np.ndarray) -> np.ndarray:
        """Points on the faces from their local x and y, with both ends, (m + 2, 3) mm."""
        touched = [face.to_eye(_on_surface(face, xy)) for face, xy in zip(self.faces, across.reshape(-1, 2))]
        return np.array([self.start_mm, *touched, self.end_mm])

    def length_and_slope(self, across: np.ndarray) -> tuple[float, np.ndarray]:
        """Optical length in mm, and its derivatives by the local x and y of every face."""
        points = self.points(across)
        steps = np.diff(points, axis=0)
        lengths = np.linalg.norm(steps, axis=1)
        pulls = np.asarray(self.indices)[:, None] * steps / lengths[:, None]
        slope = []
        for i, face in enumerate(self.faces):
            along_x, along_y = _tangents(face, points[i + 1])
            pull = pulls[i] - pulls[i + 1]
            slope += [pull @ along_x, pull @ along_y]
        return float(np.dot(self.indices, lengths)), np.array(slope)

    def shortest(self, across: np.ndarray) -> np.ndarray:
        """Points of the stationary path from a start nearby: scipy goes down the length, then zeroes its slope."""
        from scipy.optimize import minimize, root

        down = minimize(self.length_and_slope, across, jac=True, method="BFGS", options={"gtol": 1e-7})
        exact = root(lambda x: self.length_and_slope(x)[1], down.x, method="hybr", options={"xtol": 1e-14})
        return self.points(exact.x)[1:-1]


def _on_surface(face: Face, xy: np.ndarray) -> np.ndarray:
    """The point of a face above local x and y: its side value at z = 0 is minus its height."""
    height = -face.shape.side_value(np.array([[xy[0], xy[1], 0.0]]))[0]
    return np.array([xy[0], xy[1], height])


def _tangents(face: Face, point_mm: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """How a point of a face moves with its local x and with its local y."""
    nx, ny, nz = face.shape.normal(face.to_local(point_mm[None]))[0]
    return face.rotation @ np.array([1.0, 0.0, -nx / nz]), face.rotation @ np.array([0.0, 1.0, -ny / nz])


def has_heights(face: Face) -> bool:
    """Whether a face is a height over its own x and y, as planes, caps and corneas are."""
    return face.shape.name in ("plane", "sphere", "conic",
                               "toric") or type(face.shape).__name__ == "CornealSurface"
