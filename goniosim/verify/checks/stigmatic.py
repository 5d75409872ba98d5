"""The tracer on surfaces that image without aberration, and on a sphere, whose aberration has a closed form."""

from __future__ import annotations

import numpy as np

from ...faces import Conic, Cylinder, Plane, Sphere
from ..blocks import axis_crossing_z, axis_distance, disc, face, followed, passed_all, scene_of
from ..check import COMPUTED, EXACT, Check, Measured

HEIGHTS_MM = (0.5, 1.0, 2.0, 3.0, 4.0)
RADIUS_MM, INDEX = 7.8, 1.376
DOWN = np.array([0.0, 0.0, -1.0])


def _into_glass(shape) -> tuple[np.ndarray, np.ndarray, int]:
    """Last points and directions in the glass of parallel light from ahead, and the rays that got there."""
    scene = scene_of([face("front", shape), face("back", Plane(), -60.0, finish="ground"),
                      face("rim", Cylinder(7.0), finish="ground")],
                     ("glass", INDEX, (("front", "behind"), ("back", "ahead"), ("rim", "behind"))))
    across = disc(HEIGHTS_MM)
    origins = np.column_stack([across, np.full(len(across), 10.0)])
    traces = followed(scene, origins, DOWN)
    points = np.array([points[0] for points in traces.path_points_mm])
    directions = np.array([onward[0] for onward in traces.path_directions])
    return points, directions, len(origins)


def ellipsoid_into_glass() -> Measured:
    """Greatest distance from the focus n R / (n - 1) of an ellipsoid with Q = -1/n^2."""
    points, directions, rays = _into_glass(Conic(RADIUS_MM, -1.0 / INDEX**2))
    focus = (0.0, 0.0, -INDEX * RADIUS_MM / (INDEX - 1.0))
    return Measured(axis_distance(points, directions, focus).max(), rays)


def hyperboloid_out_of_glass() -> Measured:
    """Greatest distance from the focus R / (n - 1) of parallel light that leaves glass by a hyperboloid, Q = -n^2."""
    scene = scene_of([face("front", Conic(RADIUS_MM, -INDEX**2)), face("back", Plane(), -20.0),
                      face("rim", Cylinder(7.0), finish="ground")],
                     ("glass", INDEX, (("front", "behind"), ("back", "ahead"), ("rim", "behind"))))
    across = disc(HEIGHTS_MM)
    traces = followed(scene, np.column_stack([across, np.full(len(across), -19.0)]), -DOWN)
    through = passed_all(traces, 1)
    focus = (0.0, 0.0, RADIUS_MM / (INDEX - 1.0))
    off = axis_distance(traces.points_mm, traces.directions, focus)
    return Measured(off.max() if through.all() else np.inf, int(through.sum()))


def aplanatic_sphere() -> Measured:
    """Greatest distance from the sphere's second aplanatic point of rays from its first."""
    scene = scene_of([face("front", Sphere(RADIUS_MM)), face("back", Plane(), -20.0),
                      face("rim", Cylinder(7.79), finish="ground")],
                     ("glass", INDEX, (("front", "behind"), ("back", "ahead"), ("rim", "behind"))))
    first = np.array([0.0, 0.0, -RADIUS_MM - RADIUS_MM / INDEX])
    slopes = disc(np.tan(np.radians((1.0, 5.0, 10.0, 15.0, 20.0, 25.0))))
    traces = followed(scene, first, np.column_stack([slopes, np.ones(len(slopes))]))
    through = passed_all(traces, 1)
    second = (0.0, 0.0, -RADIUS_MM - RADIUS_MM * INDEX)
    off = axis_distance(traces.points_mm, traces.directions, second)
    return Measured(off.max() if through.all() else np.inf, int(through.sum()))


def sphere_off_closed_form() -> Measured:
    """Greatest difference between traced axis crossings behind a sphere and the closed form by the sine law."""
    points, directions, rays = _into_glass(Sphere(RADIUS_MM))
    height = np.hypot(points[:, 0], points[:, 1])
    incidence = np.arcsin(height / RADIUS_MM)
    inside = np.arcsin(height / RADIUS_MM / INDEX)
    # In the triangle of centre, hit point and crossing: R / sin(crossing) = distance from the centre / sin(inside).
    expected = -RADIUS_MM - RADIUS_MM * np.sin(inside) / np.sin(incidence - inside)
    return Measured(np.abs(axis_crossing_z(points, directions) - expected).max(), rays)


def sphere_aberration() -> Measured:
    """How far short of the paraxial focus a ray at 4 mm crosses the axis."""
    points, directions, _ = _into_glass(Sphere(RADIUS_MM))
    edge = np.hypot(points[:, 0], points[:, 1]) > 3.999
    paraxial = -INDEX * RADIUS_MM / (INDEX - 1.0)
    return Measured(axis_crossing_z(points, directions)[edge].mean() - paraxial, int(edge.sum()))


CARTESIAN = "Cartesian ovals: conics that image a point without aberration (Descartes)"

CHECKS = [
    Check("an ellipsoid of Q = -1/n^2 focuses parallel light at n R / (n - 1)", CARTESIAN, EXACT, 0.0, 1e-12,
          "mm", ellipsoid_into_glass),
    Check("a hyperboloid of Q = -n^2 focuses parallel light that leaves glass at R / (n - 1)", CARTESIAN,
          EXACT, 0.0, 1e-12, "mm", hyperboloid_out_of_glass),
    Check("a sphere images its aplanatic point R / n from the centre at n R",
          "aplanatic points of a sphere (Weierstrass)", EXACT, 0.0, 1e-12, "mm", aplanatic_sphere),
    Check("behind a sphere rays cross the axis where the sine law says", "law of sines", EXACT, 0.0, 1e-11,
          "mm", sphere_off_closed_form),
    Check("aberration of a sphere R 7.8, 1.376, at 4 mm height", "a separate trial program", COMPUTED, 2.1,
          0.05, "mm", sphere_aberration),
]
