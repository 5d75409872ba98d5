"""Build an eye: measurements in; faces, bodies, anatomy and what OCT would report of it out."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Mapping

import numpy as np

from ..scene.bodies import Body, Face
from .anatomy import Anatomy
from .bands import Bands, heights_by_clock
from .bodies import Parts, chamber_sides, eye_bodies, eye_faces
from .cornea import cornea_of
from .cup_keys import is_cup
from .iris import iris_of
from .lens import lens_of, margin_back_z
from .lining import Lining
from .structures import ANGLE_STRUCTURES, PIGMENTED_MESHWORK

if TYPE_CHECKING:
    from .cup import CupAnatomy

ROOM_UP = (0.0, 0.0, 1.0)


@dataclass(frozen=True)
class BuiltEye:
    """An eye ready to be traced, or a cup in its place (`cup.py`).

    faces : name -> Face, in the eye frame. bodies : list of Body. anatomy : where structures lie. report :
    {'put_in': ..., 'measured_on_model': ...}, what was stated and what OCT would measure (`oct.py`; not of a
    cup). notes : what had to give way. structures : bands of the angle, from the cornea to the iris.
    ring_structure : the band that the clock ring follows, None for no ring. inlet : face through which a
    line enters the chamber. inner_sides : (face, side of the chamber) for every face that closes it.
    """

    faces: dict[str, Face]
    bodies: list[Body]
    anatomy: Anatomy | CupAnatomy
    report: dict[str, Any]
    notes: list[str]
    inner_sides: tuple[tuple[str, str], ...]
    structures: tuple[str, ...] = ANGLE_STRUCTURES
    ring_structure: str | None = PIGMENTED_MESHWORK
    inlet: str = "cornea-back"


def build(mapping: Mapping[str, Any], side: str, room_vertical_in_eye=ROOM_UP) -> BuiltEye:
    """Build a complete eye mapping (see `complete`).

    side : 'right' or 'left'. room_vertical_in_eye : unit vector; an air bubble floats toward it.
    Raises BadInput where the measurements leave no eye; what merely contradicts gives way and is noted.
    """
    from .cup import build_cup
    from .oct import report_of

    if is_cup(mapping):
        return build_cup(mapping)
    parts, iris_notes = solve_parts(mapping)
    angle = mapping["angle"]
    heights = heights_by_clock(angle["meshwork_height_um"], side)
    lining = Lining(parts.cornea.mean_back(), parts.recess, parts.iris)
    bands = Bands(
        heights,
        angle["spur_width_um"] / 1000.0,
        angle["pigmented_share"],
        angle["schwalbe_width_um"] / 1000.0,
        float(lining.root_mm),
        float(lining.margin_mm),
    )
    anatomy = Anatomy(
        side, parts.cornea, lining, bands, angle["canal_width_um"] / 1000.0, angle["canal_depth_um"] / 1000.0
    )
    faces = eye_faces(mapping, parts, max(heights), np.asarray(room_vertical_in_eye, dtype=float))
    return BuiltEye(
        faces,
        eye_bodies(mapping, parts),
        anatomy,
        report_of(mapping, faces, anatomy),
        [*parts.cornea.notes, *iris_notes],
        chamber_sides(parts),
    )


def solve_parts(mapping: Mapping[str, Any]) -> tuple[Parts, list[str]]:
    """Cornea, recess, iris and lens of a complete mapping, and what gave way in the iris."""
    cornea = cornea_of(mapping)
    lens = lens_of(mapping, cornea)
    iris, recess, notes = iris_of(mapping, cornea, margin_back_z(mapping, cornea, lens))
    return Parts(cornea, recess, iris, lens), notes
