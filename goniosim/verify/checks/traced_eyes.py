"""Schematic eyes from their shipped files, held to their published figures by tracing near the axis."""

from __future__ import annotations

from functools import lru_cache, partial

import numpy as np

from ... import load_scene
from ...shipped import shipped_folder
from ...sight.scene import Scene
from ..check import COMPUTED, MEMORY, Check, Measured
from .schematic_eyes import PRINTED, SUMS

NEAR_MM = 1e-3  # height of a paraxial ray
NM = 589.3


@lru_cache(maxsize=None)
def bare_eye(name: str) -> Scene:
    """A shipped eye without a lens on it."""
    return load_scene({"goniosim": "scene", "schema": 1, "name": "bare", "lens": "none",
                       "eye": {"use": name, "side": "right"},
                       "target": {"structure": "pigmented-meshwork", "clock": 3}},
                      plugin_folders=[shipped_folder("plugins")])


def _parallel_ray(name: str):
    """Face names, points and directions of a ray that enters parallel to the axis."""
    traces = bare_eye(name).trace([[NEAR_MM, 0.0, 5.0]], [0.0, 0.0, -1.0], NM, paths=True)
    return [face for face, _ in traces.path_faces[0]], traces.path_points_mm[0], traces.path_directions[0]


def _index(name: str, medium: str) -> float:
    scene = bare_eye(name)
    return scene.media[scene.mapping["eye"]["definition"]["media"][medium]].index(NM)


def corneal_power_d(name: str) -> Measured:
    """n times the angle in the aqueous, over the height at the cornea."""
    faces, _, directions = _parallel_ray(name)
    onward = directions[faces.index("cornea-back")]
    return Measured(-1000.0 * _index(name, "aqueous") * onward[0] / -onward[2] / NEAR_MM, 1)


def whole_power_d(name: str) -> Measured:
    """n times the angle in the vitreous, over the height at the cornea."""
    faces, _, directions = _parallel_ray(name)
    onward = directions[faces.index("lens-back")]
    return Measured(-1000.0 * _index(name, "vitreous") * onward[0] / -onward[2] / NEAR_MM, 1)


def focus_mm(name: str) -> Measured:
    """Depth behind the vertex at which the ray crosses the axis."""
    faces, points, directions = _parallel_ray(name)
    last = faces.index("lens-back")
    point, onward = points[last], directions[last]
    return Measured(-(point[2] - point[0] / onward[0] * onward[2]), 1)


def entrance_pupil(name: str) -> Measured:
    """Depth at which a point of the axis at the lens's front seems to lie, and the magnification of a small step there."""
    scene = bare_eye(name)
    eye = scene.mapping["eye"]["definition"]
    stop = -(eye["cornea"]["thickness_um"] / 1000.0 + eye["chamber"]["depth_mm"])
    slope, step = 1e-4, 1e-3
    traces = scene.trace([[0.0, 0.0, stop], [step, 0.0, stop], [step, 0.0, stop]],
                         [[slope, 0.0, 1.0], [slope, 0.0, 1.0], [-slope, 0.0, 1.0]], NM)
    p, d = traces.points_mm, traces.directions
    lean = d[:, 0] / d[:, 2]
    depth = p[0, 0] / lean[0] - p[0, 2]
    crossing = ((p[1, 0] - lean[1] * p[1, 2]) - (p[2, 0] - lean[2] * p[2, 2])) / (lean[2] - lean[1])
    return Measured((depth, (p[1, 0] + lean[1] * (crossing - p[1, 2])) / step), 3)


def _eye_checks(eye: str, called: str, status: str, source: str, corneal_d: float, pupil: tuple[float, float],
                tolerance: float) -> list[Check]:
    """Corneal power and entrance pupil of one shipped eye."""
    return [
        Check(f"traced, {eye}: corneal power of {called}", source, status, corneal_d, tolerance, "D",
              partial(corneal_power_d, eye)),
        Check(f"traced, {eye}: entrance pupil (mm) and magnification", source, status, pupil, tolerance, "mm",
              partial(entrance_pupil, eye)),
    ]


CHECKS = [
    *_eye_checks("gullstrand-exact-anterior", "Gullstrand's exact eye", MEMORY, PRINTED, 43.053, (3.047,
          1.133), 6e-4),
    *_eye_checks("le-grand-full", "Le Grand's full eye", MEMORY, PRINTED, 42.356, (3.038, 1.131), 6e-4),
    *_eye_checks("navarro-1985", "Navarro's eye", COMPUTED, SUMS, 42.8818, (3.0424, 1.13284), 7e-5),
    *_eye_checks("liou-brennan-1997-anterior", "Liou and Brennan's eye", COMPUTED, SUMS, 42.2511, (3.0981,
          1.13317), 7e-5),
    *_eye_checks("atchison-2006-anterior", "Atchison's eye", COMPUTED, SUMS, 42.4767, (3.1350, 1.13557),
          7e-5),
    Check("traced, le-grand-full: equivalent power", PRINTED, MEMORY, 59.940, 6e-4, "D",
          partial(whole_power_d, "le-grand-full")),
    Check("traced, le-grand-full: focus behind the vertex", PRINTED, MEMORY, 24.197, 6e-4, "mm",
          partial(focus_mm, "le-grand-full")),
    Check("traced, navarro-1985: equivalent power",
          "Navarro, Santamaria & Bescos, J Opt Soc Am A 2:1273 (1985)", MEMORY,
          60.416, 6e-4, "D", partial(whole_power_d, "navarro-1985")),
    Check("traced, navarro-1985: focus behind the vertex", "Navarro, Santamaria & Bescos (1985)", MEMORY,
          24.004, 6e-4, "mm", partial(focus_mm, "navarro-1985")),
]
