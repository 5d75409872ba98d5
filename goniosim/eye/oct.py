"""What OCT reports, measured on the built faces by its published definitions.

Definitions (tables of two papers, restated): AOD500/750 = wall-to-iris distance on the perpendicular to the
meshwork 500/750 um from the spur; TISA750 = the area between that line, the perpendicular at the spur, wall
and iris; trabecular-iris angle = apex in the recess (here the iris root), arms through the 500 um points;
chamber depth = endothelium to lens; chamber width = spur to spur; lens vault = lens pole above the spur
plane; bow = on the pigment epithelium (the back of the iris), greatest height above the chord of its ends;
meshwork height = spur to Schwalbe's line, along the wall.

This reads only the faces (their heights, normals, ends), none of the formulas they were built from.
Distances along the wall are sums of short chords, crossings are bisected: good to about 1e-8 mm. On a toric
cornea the meridian halfway between steep and flat is measured.
"""

from __future__ import annotations

import math
from functools import cached_property
from typing import Any, Mapping

import numpy as np

from ..faces import Profile
from ..faces.revolution import cubic_height
from ..frames import clock_direction
from ..scene.bodies import Face
from .anatomy import Anatomy
from .keys import QUADRANTS
from .structures import SCHWALBE_LINE

CHORDS = 3000
LONGEST_MM = 1.5  # of wall walked inward from the spur
REACH_MM = 4.0  # of a perpendicular, from the wall to the iris
QUADRANT_CLOCK = {
    "superior": 12.0,
    "inferior": 6.0,
    "nasal": {"right": 3.0, "left": 9.0},
    "temporal": {"right": 9.0, "left": 3.0},
}


def report_of(eye: Mapping, faces: Mapping[str, Face], anatomy: Anatomy) -> dict[str, Any]:
    """{'put_in': what the complete mapping states, 'measured_on_model': the same, measured}. None: not
    stated.
    """
    return {"put_in": _put_in(eye), "measured_on_model": measured_on_model(faces, anatomy)}


def _put_in(eye: Mapping) -> dict[str, Any]:
    chamber, angle, iris = eye["chamber"], eye["angle"], eye["iris"]
    height = angle["meshwork_height_um"]
    return {
        "corneal_thickness_um": eye["cornea"]["thickness_um"],
        "chamber_depth_mm": chamber["depth_mm"],
        "chamber_width_mm": chamber["width_mm"],
        "lens_vault_mm": chamber["vault_mm"],
        "angle_width_deg": angle["width_deg"],
        "aod500_mm": angle["aod500_mm"],
        "aod750_mm": None,
        "tisa750_mm2": None,
        "meshwork_height_um": dict(height)
        if isinstance(height, Mapping)
        else dict.fromkeys(QUADRANTS, height),
        "iris_bow_mm": iris["bow_mm"],
        "iris_thickness_um": iris["thickness_um"],
        "pupil_mm": iris["pupil_mm"],
    }


def measured_on_model(faces: Mapping[str, Face], anatomy: Anatomy) -> dict[str, Any]:
    """The figures of `report_of`, measured on the faces."""
    section = Section(faces, mean_clock(faces["cornea-back"]))
    lens_z = float(faces["lens-front" if "lens-front" in faces else "vitreous-front"].origin_mm[2])
    apex_z, spur = float(faces["cornea-back"].origin_mm[2]), section.spur
    aod_500, aod_750 = section.facing(0.5), section.facing(0.75)
    return {
        "corneal_thickness_um": -1000.0 * apex_z,
        "chamber_depth_mm": apex_z - lens_z,
        "chamber_width_mm": 2.0 * float(spur[0]),
        "lens_vault_mm": lens_z - float(spur[1]),
        "angle_width_deg": section.angle_deg(),
        "aod500_mm": _length(*aod_500),
        "aod750_mm": _length(*aod_750),
        "tisa750_mm2": section.space_mm2(0.75),
        "meshwork_height_um": {name: _meshwork_height_um(faces, anatomy, name) for name in QUADRANTS},
        "iris_bow_mm": section.bow_mm(),
        "iris_thickness_um": section.iris_thickness_um(aod_750[1]),
        "pupil_mm": 2.0 * section.iris_r[0],
    }


def mean_clock(cornea_back: Face) -> float:
    """Clock hour of the meridian halfway between the steep and the flat one of a corneal surface."""
    return ((90.0 - cornea_back.shape.steep_axis_deg - 45.0) / 30.0) % 12.0


def _meshwork_height_um(faces: Mapping[str, Face], anatomy: Anatomy, quadrant: str) -> float:
    """Chords along the wall from the spur to the point that the anatomy gives for Schwalbe's line."""
    clock = QUADRANT_CLOCK[quadrant]
    clock = clock if isinstance(clock, float) else clock[anatomy.side]
    section = Section(faces, clock)
    point = anatomy.point(SCHWALBE_LINE, clock)
    r = np.linspace(section.spur[0], math.hypot(point[0], point[1]), CHORDS)
    return 1000.0 * float(np.hypot(np.diff(r), np.diff(section.height("cornea-back", r))).sum())


def _length(start: np.ndarray, end: np.ndarray | None) -> float | None:
    return None if end is None else float(np.linalg.norm(end - start))


class Section:
    """The eye cut along one meridian; points are (r, z)."""

    def __init__(self, faces: Mapping[str, Face], clock: float):
        self.faces, self.toward = faces, clock_direction(clock)
        arc, origin = faces["ciliary-face"].shape, faces["ciliary-face"].origin_mm
        self.spur, self.root = (
            np.array(
                [
                    arc.ring_radius_mm + arc.arc_radius_mm * math.cos(math.radians(angle)),
                    origin[2] + arc.arc_radius_mm * math.sin(math.radians(angle)),
                ]
            )
            for angle in (arc.to_deg, arc.from_deg)
        )
        iris = faces["iris-front"].shape.lower()
        self.iris_r = (float(iris.r_min_mm), float(iris.r_max_mm))

    def _points(self, r: np.ndarray, z: float) -> np.ndarray:
        return np.stack([r * self.toward[0], r * self.toward[1], np.full(r.shape, z)], axis=-1)

    def height(self, face: str, r):
        """z of a face that is single-valued over r."""
        placed, r = self.faces[face], np.atleast_1d(np.asarray(r, dtype=float))
        if isinstance(placed.shape, Profile):
            return placed.origin_mm[2] + cubic_height(placed.shape.pieces, r)[0]
        # At z = 0 of its own frame, the side value is minus the height.
        return placed.origin_mm[2] - placed.side_value(self._points(r, placed.origin_mm[2]))

    @cached_property
    def _wall_arcs(self) -> tuple[np.ndarray, np.ndarray]:
        """Radii from the spur inward, and the lengths of wall to them."""
        r = np.linspace(self.spur[0], self.spur[0] - LONGEST_MM, 2 * CHORDS)
        steps = np.hypot(np.diff(r), np.diff(self.height("cornea-back", r)))
        return r, np.concatenate([[0.0], np.cumsum(steps)])

    def wall(self, distance_mm: float) -> tuple[np.ndarray, np.ndarray]:
        """Point of the wall at a distance along it from the spur, and its unit normal into the chamber."""
        r, arcs = self._wall_arcs
        at_r = np.array([_interpolated(distance_mm, arcs, r)])
        point = np.array([at_r[0], self.height("cornea-back", at_r)[0]])
        back = self.faces["cornea-back"]
        normal = back.shape.normal(back.to_local(self._points(at_r, point[1])))[0]
        normal = -np.array([normal @ self.toward, normal[2]])
        return point, normal / np.linalg.norm(normal)

    def facing(self, distance_mm: float) -> tuple[np.ndarray, np.ndarray | None]:
        """Point of the wall, and the point of the iris that it faces squarely; None where it faces none."""
        point, normal = self.wall(distance_mm)
        low, high = self.iris_r

        def above(t):
            at = point + np.atleast_1d(t)[:, None] * normal
            over_iris = (at[:, 0] >= low) & (at[:, 0] <= high)
            return np.where(over_iris, at[:, 1] - self.height("iris-front", at[:, 0]), 1.0)

        t = np.linspace(0.0, REACH_MM, CHORDS)
        below = above(t) <= 0.0
        first = int(np.argmax(below))
        if not below[first] or first == 0:
            return point, None
        return point, point + _bisected(above, t[first - 1], t[first]) * normal

    def angle_deg(self) -> float | None:
        """Trabecular-iris angle at 500 um."""
        wall, iris = self.facing(0.5)
        if iris is None:
            return None
        wall, iris = wall - self.root, iris - self.root
        return math.degrees(abs(math.atan2(wall[0] * iris[1] - wall[1] * iris[0], wall @ iris)))

    def bow_mm(self) -> float:
        """Greatest height of the iris's back above its chord; where nowhere above, the greatest depth."""
        r = np.linspace(*self.iris_r, CHORDS)
        z = self.height("iris-back", r)
        slope = (z[-1] - z[0]) / (r[-1] - r[0])
        above = (z - z[0] - slope * (r - r[0])) / math.hypot(1.0, slope)
        high, deep = _peak(above), -_peak(-above)
        return high if high > 1e-9 else deep

    def iris_thickness_um(self, front: np.ndarray | None) -> float | None:
        """Thickness of the iris along the axis behind a point of its front."""
        return None if front is None else 1000.0 * float(front[1] - self.height("iris-back", front[0])[0])

    def space_mm2(self, distance_mm: float) -> float | None:
        """Area between wall and iris from the perpendicular at the spur to the one at a distance from it.

        Where the perpendicular at the spur meets the ciliary face before the iris, the iris root stands in.
        """
        end, far = self.facing(distance_mm)
        if far is None:
            return None
        near = self.facing(0.0)[1]
        near = self.root if near is None else near
        r, inner = np.linspace(self.spur[0], end[0], CHORDS), np.linspace(near[0], far[0], CHORDS)
        wall = np.stack([r, self.height("cornea-back", r)], axis=-1)
        iris = np.stack([inner, self.height("iris-front", inner)], axis=-1)
        x, y = np.concatenate([wall, iris[::-1]]).T
        return 0.5 * abs(float(x @ np.roll(y, -1) - y @ np.roll(x, -1)))


def _interpolated(at: float, x: np.ndarray, y: np.ndarray) -> float:
    """Value of y at x by the cubic through the four nearest samples."""
    i = min(max(int(np.searchsorted(x, at)) - 2, 0), len(x) - 4)
    return float(
        sum(
            y[i + j] * np.prod([(at - x[i + k]) / (x[i + j] - x[i + k]) for k in range(4) if k != j])
            for j in range(4)
        )
    )


def _bisected(function, low: float, high: float) -> float:
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (low, middle) if function(middle)[0] <= 0.0 else (middle, high)
    return 0.5 * (low + high)


def _peak(values: np.ndarray) -> float:
    """Greatest of evenly spaced samples, by the parabola through the top three."""
    top = int(np.argmax(values))
    if top in (0, len(values) - 1):
        return float(values[top])
    a, b, c = values[top - 1 : top + 2]
    return float(b - (a - c) ** 2 / (8.0 * (a - 2.0 * b + c))) if a - 2.0 * b + c != 0.0 else float(b)
