"""Small scenes for exact checks, and helpers on traced rays."""

from __future__ import annotations

from functools import partial
from typing import Sequence

import numpy as np

from ..faces import Cylinder, Plane, Shape
from ..frames import lean_toward
from ..optics import dispersion
from ..optics.media import Medium
from ..scene.bodies import Body, Face
from ..scene.compile import CompiledScene
from ..scene.tracing import Traces, trace

NM = 555.0
"""Wavelength of the exact checks; their media have the same index at every one."""


def plain(index: float) -> Medium:
    """A medium of one index."""
    return Medium(f"index {index:g}", partial(dispersion.constant, index=index))


def face(name: str, shape: Shape, z_mm: float = 0.0, lean_deg: float = 0.0, clock: float = 12.0, **more) -> Face:
    """A face with its vertex on the axis, leaned toward a clock hour."""
    return Face(name, shape, lean_toward(clock, lean_deg), np.array([0.0, 0.0, z_mm]), **more)


def scene_of(faces: Sequence[Face], *bodies: tuple[str, float, Sequence[tuple[str, str]]]) -> CompiledScene:
    """Faces, and bodies as (name, index, sides), ready to trace."""
    return CompiledScene(tuple(faces), tuple(Body(name, f"{index!r}", tuple(sides)) for name, index,
                                             sides in bodies),
                         {f"{index!r}": plain(index) for _, index, _ in bodies})


def layers(indices: Sequence[float], thickness_mm: float = 1.0, radius_mm: float = 500.0) -> CompiledScene:
    """Plane-parallel layers from z = 0 upward, the first index the deepest."""
    count = len(indices)
    faces = [face(f"plane-{i}", Plane(), i * thickness_mm) for i in range(count + 1)]
    faces.append(face("rim", Cylinder(radius_mm), finish="ground"))
    return scene_of(faces, *((f"layer-{i}", index, ((f"plane-{i}", "ahead"), (f"plane-{i + 1}", "behind"),
                                                    ("rim", "behind"))) for i, index in enumerate(indices)))


def followed(scene: CompiledScene, origins_mm, directions) -> Traces:
    """Traced rays with their paths."""
    return trace(scene, origins_mm, directions, NM, paths=True)


def disc(radii_mm: Sequence[float], count: int = 12) -> np.ndarray:
    """Points on rings round the axis, (n, 2) mm."""
    angles = 2.0 * np.pi * np.arange(count) / count
    return np.array([[r * np.cos(a), r * np.sin(a)] for r in radii_mm for a in angles])


def axis_distance(points_mm: np.ndarray, directions: np.ndarray, point_mm: Sequence[float]) -> np.ndarray:
    """Distances of lines from a point, (n,) mm."""
    return np.linalg.norm(np.cross(np.asarray(point_mm) - points_mm, directions), axis=1)


def axis_crossing_z(points_mm: np.ndarray, directions: np.ndarray) -> np.ndarray:
    """Where lines that meet the z axis cross it, (n,) mm: the z of the point nearest to the axis."""
    run = np.sum(directions[:, :2] ** 2, axis=1)
    t = -np.sum(points_mm[:, :2] * directions[:, :2], axis=1) / run
    return points_mm[:, 2] + t * directions[:, 2]


def passed_all(traces: Traces, faces: int) -> np.ndarray:
    """Rays that went through so many faces and nothing else, (n,) bool."""
    return np.array([len(path) == faces and all(event == "through" for _,
                                                event in path) for path in traces.path_faces])
