"""Where a straight, undeviated line strikes the inside of the eye."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..eye import BuiltEye
from ..scene.compile import face_table

NO_WALL = ("lens", "pupil")  # structures along which no distance from the target is told


@dataclass(frozen=True)
class Landing:
    """Where a line lands. structure : its name, None where the line misses the chamber.

    point_mm : (3,) or None. anterior_mm : signed distance along the wall from T, anterior positive; None
    where there is no wall between (lens, pupil) or no target on the wall.
    """

    structure: str | None
    point_mm: np.ndarray | None
    anterior_mm: float | None


MISSED = Landing(None, None, None)


def land(eye: BuiltEye, start_mm: np.ndarray, direction: np.ndarray, target_arc_mm: float | None,
         target_clock: float | None) -> Landing:
    """Follow a straight line through the eye's inlet into the chamber to the first inner surface it strikes."""
    entry = crossing_of(eye, eye.inlet, start_mm, direction, inward=True)
    if entry is None:
        return MISSED
    hits = [(t, name) for name, side in eye.inner_sides
            if (t := crossing_of(eye, name, start_mm + entry * direction, direction, side=side)) is not None]
    if not hits:
        return MISSED
    t, name = min(hits)
    point = start_mm + (entry + t) * direction
    structure = eye.anatomy.structure_at(point, name)
    return Landing(structure, point, _anterior(eye, point, structure, target_arc_mm, target_clock))


def crossing_of(eye: BuiltEye, name: str, start_mm: np.ndarray, direction: np.ndarray, side: str = "behind",
                inward: bool = False) -> float | None:
    """Distance to the crossing that leaves a region on one side of a face (or enters it), or None."""
    from ..kernels.bundle import face_crossing

    table, pieces = face_table((eye.faces[name],))
    want = (1.0 if side == "behind" else -1.0) * (-1.0 if inward else 1.0)
    t = float(face_crossing(table, 0, pieces, *start_mm, *direction, want, np.inf))
    return t if np.isfinite(t) else None


def _anterior(eye: BuiltEye, point: np.ndarray, structure: str, target_arc_mm, target_clock) -> float | None:
    """Signed distance along the lining from the target, over the apex where the line lands beyond it."""
    if target_arc_mm is None or structure in NO_WALL:
        return None
    arc = eye.anatomy.arc_of(point)
    angle = np.radians(30.0 * target_clock)
    beyond_axis = point[0] * np.sin(angle) + point[1] * np.cos(angle) < 0.0
    if not beyond_axis:
        return float(arc - target_arc_mm)
    if structure != "cornea":
        return None
    return float(2.0 * eye.anatomy.arc_of(eye.anatomy.apex_mm) - arc - target_arc_mm)
