"""An air bubble in the chamber: what lies above a level plane, as the head lies."""

from __future__ import annotations

import math

import numpy as np

from ..frames import clock_of, from_axis_deg, lean_toward
from ..faces import Plane
from ..scene.bodies import Face
from .cornea import Cornea
from .curves import find_root
from .meridian import from_steep_deg, meridian_at

LEVEL = "bubble-level"


def level_face(cornea: Cornea, vertical: np.ndarray, height_mm: float) -> Face:
    """The level under a bubble. vertical : the room's, unit vector in the eye frame; height_mm : see the
    keys.
    """
    clock = clock_of(vertical[0], vertical[1])
    rotation = np.eye(3) if clock is None else lean_toward(clock, from_axis_deg(vertical))
    top = highest_mm(cornea, vertical)
    return Face(
        LEVEL, Plane(), rotation=rotation, origin_mm=(top - height_mm) * np.asarray(vertical, dtype=float)
    )


def highest_mm(cornea: Cornea, vertical: np.ndarray) -> float:
    """Height along the room's vertical of the highest point of the cornea's back, in the vertical's own
    meridian.
    """
    clock = clock_of(vertical[0], vertical[1])
    outward, up = math.hypot(vertical[0], vertical[1]), vertical[2]
    if clock is None:
        return -cornea.thickness_mm * up
    back = meridian_at(
        cornea.back, -cornea.thickness_mm, cornea.spur_r_mm, from_steep_deg(cornea.back, clock)
    )

    def rise(r: float) -> float:
        return outward + up * float(back.slope(r))

    # The rise falls outward: where it is still positive at the spur, the spur is the highest.
    top = cornea.spur_r_mm if rise(cornea.spur_r_mm) >= 0.0 else find_root(rise, 0.0, cornea.spur_r_mm)
    return outward * top + up * float(back.height(top))
