"""A slow, obvious tracer: the bodies of the design asked point by point, nothing shared with the kernels.

A body is the set of points on the right side of all its faces; every change of
side of every face along a ray is found by marching and scipy's brentq, and between two of them the sets are asked.
Fresnel by the angle form of the textbooks, on purpose another one than the program's.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from scipy.optimize import brentq

from goniosim.scene.bodies import Body
from goniosim.scene.compile import CompiledScene

REACH_MM, STEP_MM, OFF_MM = 30.0, 0.02, 1e-7
EDGE_MM = 1e-5  # a hit this near to another face may fall to either: such rays are not judged
NEAR_CRITICAL = 1e-7


@dataclass
class Way:
    """What became of one ray. fair: whether rounding may not decide what happens."""

    points: list = field(default_factory=list)
    events: list = field(default_factory=list)
    direction: np.ndarray | None = None
    power: float = 1.0
    fair: bool = True


class SlowTracer:
    """The twin of the compiled tracer for one scene and one wavelength."""

    def __init__(self, scene: CompiledScene, wavelength_nm: float):
        self.faces = {face.name: face for face in scene.faces}
        self.bodies = scene.bodies
        self.index = {body.name: scene.media[body.medium].index(wavelength_nm) for body in scene.bodies
                      if body.medium != "opaque"}
        self.absorption = {body.name: scene.media[body.medium].absorption_per_mm for body in scene.bodies
                           if body.medium != "opaque"}

    def depths(self, body: Body, points: np.ndarray) -> np.ndarray:
        """Side values of a body's faces, positive inside, (faces, n)."""
        return np.array([(1.0 if side == "ahead" else -1.0) * self.faces[name].side_value(points)
                         for name, side in body.sides])

    def body_at(self, point: np.ndarray) -> Body | None:
        """The body that holds a point; None is the air."""
        for body in self.bodies:
            if self.depths(body, point[None]).min() > 0.0:
                return body
        return None

    def crossings(self, start: np.ndarray, way: np.ndarray) -> list[tuple[float, str]]:
        """Every change of side of every face along a ray, nearest first."""
        distances = np.concatenate([[OFF_MM], np.arange(STEP_MM, REACH_MM, STEP_MM)])
        points, found = start + distances[:, None] * way, []
        for name, face in self.faces.items():
            ahead = face.side_value(points) > 0.0
            for i in np.flatnonzero(ahead[1:] != ahead[:-1]):
                t = brentq(lambda s: float(face.side_value((start + s * way)[None])[0]), distances[i], distances[i + 1],
                           xtol=1e-15, rtol=1e-15)
                found.append((t, name))
        return sorted(found)

    def border(self, body: Body, crossed: list, start: np.ndarray, way: np.ndarray, inside: bool) -> tuple[float, str]:
        """Where a ray that is inside (or outside) a body first is no longer, and the face it crosses there."""
        ends = [t for t, _ in crossed] + [REACH_MM]
        for (t, name), end in zip(crossed, ends[1:]):
            if (self.depths(body, (start + 0.5 * (t + end) * way)[None]).min() > 0.0) != inside:
                return t, name
        return np.inf, ""

    def edge(self, name: str, point: np.ndarray) -> float:
        """How far, by side values, the nearest other face is from a point on a face."""
        return min(abs(float(face.side_value(point[None])[0])) for other, face in self.faces.items() if other != name)

    def trace(self, start: np.ndarray, way: np.ndarray) -> Way:
        """Follow a ray to its end."""
        body, told = self.body_at(start), Way(direction=way)
        if body is not None and body.medium == "opaque":
            told.fair = False  # no light sets out there
            return told
        for _ in range(40):
            crossed = self.crossings(start, way)
            candidates = self.bodies if body is None else [body]
            t, name = min(self.border(each, crossed, start, way, inside=body is not None) for each in candidates)
            if not np.isfinite(t):
                return told
            start = start + t * way
            # A side value that jumps where a cap ends, instead of vanishing, means that a crossing close by was stepped over.
            on_face = abs(float(self.faces[name].side_value(start[None])[0])) < 1e-9
            told.fair &= on_face and self.edge(name, start) > EDGE_MM
            if not told.fair:
                return told
            told.points.append(start)
            if body is not None:
                told.power *= np.exp(-self.absorption[body.name] * t)
            beyond = self.body_at(start + 1e-6 * way)
            way, passed = self.meet(self.faces[name], start, way, body, beyond, told)
            if passed is None:
                return told
            body = beyond if passed else body
        told.fair = False  # goes round for longer than is followed
        return told

    def meet(self, face, point, way, body, beyond, told: Way):
        """What a face does: the new direction, and whether the ray passed (None: absorbed)."""
        swallowed = beyond is not None and beyond.medium == "opaque"
        if face.finish in ("ground", "opaque") or (swallowed and face.finish != "mirror"):
            told.events.append((face.name, "absorbed"))
            return way, None
        normal = face.rotation @ face.shape.normal(face.to_local(point[None]))[0]
        if normal @ way < 0.0:
            normal = -normal
        incidence = np.arctan2(np.linalg.norm(np.cross(normal, way)), normal @ way)
        n1 = 1.0 if body is None else self.index[body.name]
        n2 = 1.0 if beyond is None or swallowed else self.index[beyond.name]
        sine = n1 * np.sin(incidence) / n2
        told.fair &= face.finish == "mirror" or abs(sine - 1.0) > NEAR_CRITICAL
        if face.finish == "mirror" or sine > 1.0:
            told.events.append((face.name, "reflected"))
            told.power *= face.reflectance if face.finish == "mirror" else 1.0
            told.direction = way - 2.0 * (normal @ way) * normal
            return told.direction, False
        onward = np.arcsin(sine)
        told.events.append((face.name, "through"))
        told.power *= 1.0 - face.reflectance if face.finish == "coated" else 1.0 - reflected(n1, n2, incidence, onward)
        across = way - (normal @ way) * normal
        size = np.linalg.norm(across)
        told.direction = np.cos(onward) * normal + (np.sin(onward) * across / size if size > 0.0 else 0.0)
        return told.direction, True


def reflected(n1: float, n2: float, incidence: float, onward: float) -> float:
    """Unpolarised reflectance: (sin^2(i-t) / sin^2(i+t) + tan^2(i-t) / tan^2(i+t)) / 2 (Fresnel, textbook form)."""
    if n1 == n2:
        return 0.0
    if incidence < 1e-6:
        return ((n1 - n2) / (n1 + n2)) ** 2
    less, more = incidence - onward, incidence + onward
    return 0.5 * ((np.sin(less) / np.sin(more)) ** 2 + (np.tan(less) / np.tan(more)) ** 2)
