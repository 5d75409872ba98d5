"""Astigmatic foci of a narrow pencil about a path, by differential ray tracing.

A pencil of light from one point stays square to wavefronts, so that along the last ray it has two
foci: the distances t at which the map from first direction to place across the ray is singular,
det(X + t Y) = 0, X the change of place and Y the change of direction. X and Y come from central
differences at two steps (Richardson), good to about 1e-10. For a single spherical face the result is
Coddington's (tests/authorities).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scene.compile import CompiledScene
from ..scene.tracing import raw_trace
from .fan import frame_about
from .paths import LightPath

STEPS = (2e-4, 1e-4)  # radians
NORMAL_INCIDENCE = 1e-6  # sine; below it the plane of incidence has no meaning


@dataclass(frozen=True)
class Foci:
    """The two foci as points, (3,) mm; None where one lies at infinity."""

    tangential_mm: np.ndarray | None
    sagittal_mm: np.ndarray | None

    @property
    def separation_mm(self) -> float | None:
        """Distance between the two foci."""
        if self.tangential_mm is None or self.sagittal_mm is None:
            return None
        return float(np.linalg.norm(self.tangential_mm - self.sagittal_mm))


def foci(scene: CompiledScene, wavelength_nm: float, origin_mm: np.ndarray, body: int, path: LightPath) -> Foci | None:
    """Tangential and sagittal image points along a path; None at the very edge of a path.

    Tangential is the focus whose rays spread nearest to the last face's plane of incidence; at normal
    incidence the nearer of the two is given first.
    """
    across = frame_about(path.outward)[:2]
    change = _differences(scene, wavelength_nm, origin_mm, body, path, across)
    if change is None:
        return None
    place, direction = change
    distances, spreads = _singular_distances(place, direction)
    points = [None if d is None else path.last_point_mm + d * path.outward for d in distances]
    axis = _incidence_axis(scene, path, across)
    if axis is None:
        order = sorted(range(2), key=lambda i: np.inf if distances[i] is None else abs(distances[i]))
        return Foci(points[order[0]], points[order[1]])
    first = 0 if abs(spreads[0] @ axis) >= abs(spreads[1] @ axis) else 1
    return Foci(points[first], points[1 - first])


def _differences(scene, wavelength_nm, origin_mm, body, path, across):
    """Changes of place and direction across the last ray by first direction: two (2, 2), or None."""
    tangent = frame_about(path.first)[:2]
    offsets = [(axis, sign * h) for h in STEPS for axis in range(2) for sign in (1.0, -1.0)]
    first = np.array([path.first + h * tangent[axis] for axis, h in offsets])
    first /= np.linalg.norm(first, axis=1, keepdims=True)
    origins = np.ascontiguousarray(np.broadcast_to(origin_mm, first.shape))
    out = raw_trace(scene.arrays(wavelength_nm), origins, first, np.full(len(first), body, np.int64))
    if np.any(out["code"] != path.code):
        return None
    along = out["outward"] @ path.outward
    reach = -((out["points"] - path.last_point_mm) @ path.outward) / along
    place = (out["points"] + reach[:, None] * out["outward"] - path.last_point_mm) @ across.T
    slope = (out["outward"] / along[:, None]) @ across.T
    return _richardson(place), _richardson(slope)


def _richardson(values: np.ndarray) -> np.ndarray:
    """Derivative (2 across, 2 axes) from rows ordered by step, axis, sign; error of fourth order."""
    steps = values.reshape(2, 2, 2, 2)  # step, axis, sign, across
    coarse, fine = ((steps[i, :, 0] - steps[i, :, 1]) / (2.0 * h) for i, h in enumerate(STEPS))
    return ((4.0 * fine - coarse) / 3.0).T


def _singular_distances(place: np.ndarray, direction: np.ndarray):
    """Distances t with det(X + t Y) = 0, and the directions across the ray in which each focus's rays spread."""
    a = np.linalg.det(direction)
    b = (place[0, 0] * direction[1, 1] + place[1, 1] * direction[0, 0]
         - place[0, 1] * direction[1, 0] - place[1, 0] * direction[0, 1])
    c = np.linalg.det(place)
    # A normal pencil has real foci: a negative rest is rounding at a stigmatic point.
    root = np.sqrt(max(b * b - 4.0 * a * c, 0.0))
    q = -0.5 * (b + (root if b >= 0.0 else -root))
    distances = [q / a if abs(a) > 1e-14 else None, c / q if abs(q) > 1e-14 else None]
    spreads = []
    for t in distances:
        if t is None:
            spreads.append(np.zeros(2))
            continue
        _, _, v = np.linalg.svd(place + t * direction)
        spread = direction @ v[-1]
        size = np.linalg.norm(spread)
        spreads.append(spread / size if size > 0.0 else spread)
    return distances, spreads


def _incidence_axis(scene: CompiledScene, path: LightPath, across: np.ndarray) -> np.ndarray | None:
    """The last face's plane of incidence as a direction across the last ray, (2,); None at normal incidence."""
    face = scene.faces[scene.face_number[path.faces[-1][0]]]
    normal = face.rotation @ face.shape.normal(face.to_local(path.points_mm[-1:]))[0]
    in_plane = across @ normal
    size = float(np.linalg.norm(in_plane))
    return in_plane / size if size > NORMAL_INCIDENCE else None
