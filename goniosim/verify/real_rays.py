"""Rays from the angle through the shipped scenes' lenses into the air, for checks on real cases."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from .. import load_scene
from ..scene.compile import CompiledScene
from ..shipped import shipped_folder
from ..sight.scene import Scene
from ..sight.target import Target, target_of

SEED = 7
LENS_SCENES = ("right-eye-temporal", "dome", "one-mirror", "four-mirror", "twin-mirror", "total-reflection",
               "saline-pool")
"""Shipped scenes, one for each kind of lens."""


@dataclass(frozen=True)
class RealRays:
    """Rays of one scene that leave for the air by faces meant to be passed.

    scene : Scene. start_mm (3,). first (n, 3), outward (n, 3): directions at T and in the air.
    points_mm : n arrays (m, 3), one row a face. faces : n lists of (face name, event).
    """

    scene: Scene
    start_mm: np.ndarray
    first: np.ndarray
    outward: np.ndarray
    points_mm: list[np.ndarray]
    faces: list[list[tuple[str, str]]]

    @property
    def compiled(self) -> CompiledScene:
        """The traced scene."""
        return self.scene.compiled


@lru_cache(maxsize=None)
def shipped_scene(name: str) -> Scene:
    """A scene of scenes/, whatever the user has put in front of it."""
    return load_scene(shipped_folder("scenes") / f"{name}.yaml")


def scene_target(scene: Scene) -> Target:
    """The point that a scene looks at."""
    return target_of(scene.eye, scene.mapping["target"])


@lru_cache(maxsize=None)
def real_rays(name: str, count: int) -> RealRays:
    """`count` rays of a shipped scene that leave, out of a seeded sample over the hemisphere at its target."""
    scene = shipped_scene(name)
    target = scene_target(scene)
    directions = over_hemisphere(target.normal, 6000)
    traces = scene.trace(target.point_mm, directions, paths=True)
    leaves = np.flatnonzero((traces.status == 0) & ~traces.stray)
    by_faces: dict[tuple, list[int]] = {}
    for row in leaves:
        by_faces.setdefault(tuple(traces.path_faces[row]), []).append(int(row))
    rows = _taken_in_turn(list(by_faces.values()), count)
    return RealRays(scene, target.point_mm, directions[rows], traces.directions[rows],
                    [traces.path_points_mm[row] for row in rows], [traces.path_faces[row] for row in rows])


def over_hemisphere(axis: np.ndarray, count: int) -> np.ndarray:
    """Seeded random unit vectors within 89 deg of an axis, (n, 3)."""
    vectors = np.random.default_rng(SEED).normal(size=(4 * count, 3))
    vectors /= np.linalg.norm(vectors, axis=1, keepdims=True)
    return vectors[vectors @ axis > np.cos(np.radians(89.0))][:count]


def _taken_in_turn(groups: list[list[int]], count: int) -> list[int]:
    """Rows taken from every group in turn, so that each way through the lens is there."""
    rows: list[int] = []
    for depth in range(max(map(len, groups), default=0)):
        rows += [group[depth] for group in groups if depth < len(group)]
    return rows[:count]


def medium_index(scene: Scene, point_mm: np.ndarray) -> float:
    """Index at a point by asking every body's faces in plain numpy, without the tracer; 1 in the air."""
    for body in scene.compiled.bodies:
        sides = body.sides if body.entry_checks is None else body.entry_checks
        if body.medium == "opaque" or not sides:
            continue
        values = [_face(scene, name).side_value(point_mm[None])[0] * (1.0 if side == "ahead" else -1.0)
                  for name, side in sides]
        if min(values) > 0.0:
            return scene.media[body.medium].index(scene.wavelength_nm)
    return 1.0


def _face(scene: Scene, name: str):
    return scene.compiled.faces[scene.compiled.face_number[name]]
