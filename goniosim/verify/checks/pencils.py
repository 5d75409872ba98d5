"""Coddington's equations against the tracer: narrow pencils at one surface, met by finite differences."""

from __future__ import annotations

from functools import partial

import numpy as np

from ...faces import Cylinder, Plane, Shape, Sphere
from ...optics.coddington import refracted_foci_mm
from ..blocks import face, followed, scene_of
from ..check import COMPUTED, EXACT, Check, Measured
from .planes import tilted

HALF_ANGLE = 1e-4  # radians between the chief ray and its neighbours


def outward_foci_mm(shape: Shape, index: float, incidence_deg: float, object_mm: float) -> Measured:
    """Sagittal and tangential image distances of a point in glass, seen from air, along the outgoing chief ray."""
    scene = scene_of([face("front", shape), face("back", Plane(), -200.0), face("rim", Cylinder(100.0),
                                                                                finish="ground")],
                     ("glass", index, (("front", "behind"), ("back", "ahead"), ("rim", "behind"))))
    chief = tilted(incidence_deg)
    return _foci(scene, -object_mm * chief, chief)


def _foci(scene, start: np.ndarray, chief: np.ndarray) -> Measured:
    """Where neighbours on either side of the chief ray meet after one face at the origin."""
    found = []
    for across in (np.array([0.0, 1.0, 0.0]), np.cross([0.0, 1.0, 0.0], chief)):
        pair = np.array([chief + HALF_ANGLE * across, chief - HALF_ANGLE * across, chief])
        traces = followed(scene, start, pair)
        # After the first face: light that leaves a hollow one slantwise meets it again.
        p, d = ([rows[0] for rows in kept] for kept in (traces.path_points_mm, traces.path_directions))
        found.append(float((nearest_point(p[0], d[0], p[1], d[1]) - p[2]) @ d[2]))
    return Measured(found, 6)


def nearest_point(p1: np.ndarray, d1: np.ndarray, p2: np.ndarray, d2: np.ndarray) -> np.ndarray:
    """Middle of the shortest segment between two lines."""
    normal = np.cross(d1, d2)
    t1, t2 = (np.linalg.det(np.array([p2 - p1, d, normal])) / (normal @ normal) for d in (d2, d1))
    return 0.5 * (p1 + t1 * d1 + p2 + t2 * d2)


def greatest_difference() -> Measured:
    """Greatest difference between traced foci and the equations, relative, over spheres, indices and angles."""
    worst, rays = 0.0, 0
    for radius in (7.7, 25.0, -12.0):
        for index in (1.336, 1.376, 1.4906):
            for angle in (5.0, 15.0, 25.0, 35.0):
                traced = outward_foci_mm(Sphere(radius), index, angle, 3.6)
                # The tracer's radius is positive where the centre lies behind: against the light that leaves.
                theory = refracted_foci_mm(index, 1.0, -radius, angle, -3.6, -3.6)
                worst = np.max([worst, *(abs(a / b - 1.0) for a, b in zip(traced.got, theory))])
                rays += traced.rays
    return Measured(worst, rays)


KINGSLAKE = "Coddington's equations as in Kingslake, Opt Photon News 5(8) (1994), evaluated by hand"

CHECKS = [
    Check("traced: 1.376 to air, R -7.7, 30 deg, object at -3.6: s', t'", KINGSLAKE, COMPUTED, (-3.1084,
          -2.3287), 6e-5, "mm", partial(outward_foci_mm, Sphere(7.7), 1.376, 30.0, 3.6)),
    Check("traced: plane, 1.336 to air, 30 deg: s'/s, t'/t", KINGSLAKE, COMPUTED, (-0.74850, -0.55267), 6e-6,
          "", partial(outward_foci_mm, Plane(), 1.336, 30.0, 1.0)),
    Check("traced: plane, 4/3 to air, 30 deg: s'/s = 3/4, t'/t = 5/9", KINGSLAKE, COMPUTED, (-0.75,
          -5.0 / 9.0), 1e-7, "", partial(outward_foci_mm, Plane(), 4.0 / 3.0, 30.0, 1.0)),
    Check("traced: 36 oblique pencils at spheres, greatest relative difference", "Coddington's equations",
          EXACT, 0.0, 1e-6, "", greatest_difference),
]
