"""Size and orientation in the picture of small steps at T, against the same steps in the open."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scene.compile import CompiledScene
from .fan import Fan
from .paths import LightPath, Scoped, full_path

STEP_MM = 1e-3


@dataclass(frozen=True)
class Magnification:
    """clockwise, anterior : angular size of a step over its size in the open from the same distance.

    ratio : anterior over clockwise. handed : 'true' or 'reversed'. clockwise_points_deg,
    anterior_points_deg : where the steps point in the picture, degrees from right, anticlockwise.
    """

    clockwise: float
    anterior: float
    ratio: float
    handed: str
    clockwise_points_deg: float
    anterior_points_deg: float


def magnify(scene: CompiledScene, wavelength_nm: float, fan: Fan, path: LightPath, scope: Scoped,
            clockwise: np.ndarray, anterior: np.ndarray) -> Magnification | None:
    """Magnification at T, seen from the middle pupil; None where a step leaves the path.

    The picture's own plane is square to the line of sight. In the open a step is seen from the side from
    which the light sets out, square or aslant as it really lies to that light.
    """
    steps = {"clockwise": clockwise, "anterior": anterior}
    seen, open_size = {}, {}
    distance = float(np.linalg.norm(scope.pupil(0.0) - fan.origin_mm))
    for name, step in steps.items():
        picture = _picture_step(scene, wavelength_nm, fan, path, scope, step)
        if picture is None:
            return None
        seen[name] = picture
        aslant = step - (step @ path.first) * path.first
        open_size[name] = float(np.linalg.norm(aslant)) / distance
    factors = {name: float(np.linalg.norm(seen[name])) / open_size[name] for name in steps}
    turned = float(np.linalg.det(np.stack([seen["clockwise"], seen["anterior"]])))
    # Looking against the light's first direction, are clockwise and anterior met in the same sense?
    meant = float(np.dot(np.cross(clockwise, anterior), path.first))
    points = {name: float(np.degrees(np.arctan2(v[1], v[0]))) for name, v in seen.items()}
    return Magnification(factors["clockwise"], factors["anterior"], factors["anterior"] / factors["clockwise"],
                         "true" if turned * meant > 0.0 else "reversed", points["clockwise"], points["anterior"])


def _picture_step(scene, wavelength_nm, fan: Fan, path: LightPath, scope: Scoped, step: np.ndarray) -> np.ndarray | None:
    """Angular displacement (right, up) in the picture per mm of a step at T, by central difference."""
    from ..kernels.aim import FOUND, aim

    arrays = scene.arrays(wavelength_nm)
    found, point, out = np.empty(3), np.empty(3), np.empty(3)
    ends = []
    for sign in (1.0, -1.0):
        origin = fan.origin_mm + sign * STEP_MM * step
        status = aim(arrays, fan.body, origin, path.first.copy(), path.code, True, scope.pupil(0.0), 1e-9, found, point, out)
        if status != FOUND:
            return None
        ends.append(out.copy())
    change = -(ends[0] - ends[1]) / (2.0 * STEP_MM)
    return np.array([change @ scope.right, change @ scope.up])
