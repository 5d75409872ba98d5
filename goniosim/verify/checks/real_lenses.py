"""Fermat's principle, reversibility and the conservation of etendue through the shipped lenses on an eye."""

from __future__ import annotations

from functools import partial

import numpy as np

from ..check import EXACT, Check, Measured
from ..fermat import Passage, has_heights
from ..real_rays import LENS_SCENES, RealRays, medium_index, real_rays

RAYS = 12
SHAKE_MM = 0.02  # how far the start of Fermat's search lies from the traced path
OUTSIDE_MM = 150.0
REACH_MM = 3.0  # less than the way to the plane of the lens, behind which the model has no outside of the globe
STEP = 1e-5


def fermat(name: str) -> Measured:
    """Greatest distance between the traced points and those of the path of least optical length."""
    rays, random, worst, done = real_rays(name, RAYS), np.random.default_rng(5), 0.0, 0
    for ray in range(len(rays.first)):
        faces = [rays.compiled.faces[rays.compiled.face_number[face]] for face, _ in rays.faces[ray]]
        if not all(map(has_heights, faces)):
            continue
        traced = rays.points_mm[ray]
        end = traced[-1] + OUTSIDE_MM * rays.outward[ray]
        whole = np.array([rays.start_mm, *traced, end])
        indices = [medium_index(rays.scene, 0.5 * (a + b)) for a, b in zip(whole, whole[1:])]
        across = np.array([face.to_local(point[None])[0, :2] for face, point in zip(faces, traced)]).ravel()
        start = across + random.uniform(-SHAKE_MM, SHAKE_MM, across.shape)
        found = Passage(rays.start_mm, end, faces, indices).shortest(start)
        worst, done = np.max([worst, np.abs(found - traced).max()]), done + 1
    return Measured(worst if done else np.inf, done)


def reversed_light(name: str) -> Measured:
    """Greatest distance between the points on the way out and on the way back, the target included."""
    rays, worst = real_rays(name, 400), 0.0
    ends = np.array([points[-1] for points in rays.points_mm]) + REACH_MM * rays.outward
    back = rays.scene.trace(ends, -rays.outward, paths=True)
    for ray, points in enumerate(rays.points_mm):
        returned = back.path_points_mm[ray]
        if len(returned) < len(points) + 1:
            return Measured(np.inf, ray)
        expected = np.array([*points[::-1], rays.start_mm])
        worst = np.max([worst, np.abs(returned[: len(expected)] - expected).max()])
    return Measured(worst, len(rays.first))


def etendue(name: str) -> Measured:
    """Greatest departure from 1 of the determinant of (x, y, n l, n m) at T to the same in the air."""
    rays, worst = real_rays(name, RAYS), 0.0
    index = medium_index(rays.scene, rays.start_mm + 1e-3 * rays.first[0])
    for ray in range(len(rays.first)):
        worst = np.max([worst, abs(np.linalg.det(_phase_map(rays, ray, index)) - 1.0)])
    return Measured(worst, len(rays.first))


def _phase_map(rays: RealRays, ray: int, index: float) -> np.ndarray:
    """Derivatives of position and momentum across the outward ray by those across the first, (4, 4)."""
    first, outward = rays.first[ray], rays.outward[ray]
    e, f = _across(first), _across(outward)
    # The start moves into the chamber, so that neighbours of T on the wall's far side do not count.
    start, screen = rays.start_mm + 0.05 * first, rays.points_mm[ray][-1] + 5.0 * outward
    shifts = STEP * np.array([sign * np.eye(4)[k] for k in range(4) for sign in (1.0, -1.0, 2.0, -2.0)])
    sideways = shifts[:, 2:] @ e / index
    directions = sideways + np.sqrt(1.0 - np.sum(sideways**2, axis=1))[:, None] * first
    traces = rays.scene.trace(start + shifts[:, :2] @ e, directions)
    reach = ((screen - traces.points_mm) @ outward) / (traces.directions @ outward)
    met = traces.points_mm + reach[:, None] * traces.directions
    ends = np.column_stack([(met - screen) @ f.T, traces.directions @ f.T]).reshape(4, 4, 4)
    # Differences over one and two steps together leave an error of the fourth order only.
    return ((8.0 * (ends[:, 0] - ends[:, 1]) - (ends[:, 2] - ends[:, 3])) / (12.0 * STEP)).T


def _across(direction: np.ndarray) -> np.ndarray:
    """Two unit vectors at right angles to a direction and each other, (2, 3)."""
    x = np.cross(direction, np.eye(3)[int(np.argmin(np.abs(direction)))])
    x /= np.linalg.norm(x)
    return np.array([x, np.cross(direction, x)])


CHECKS = [
    *(Check(f"{name}: traced paths are those of least optical length",
            "Fermat's principle, minimised by scipy", EXACT,
            0.0, 1e-9, "mm", partial(fermat, name)) for name in LENS_SCENES),
    *(Check(f"{name}: light goes back the way it came", "reversibility of light", EXACT, 0.0, 1e-9, "mm",
            partial(reversed_light, name)) for name in LENS_SCENES),
    *(Check(f"{name}: etendue is kept", "Liouville's theorem for rays", EXACT, 0.0, 1e-7, "", partial(etendue,
                                                                                                      name))
      for name in LENS_SCENES),
]
