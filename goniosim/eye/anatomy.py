"""Anatomy of a built eye: where each structure lies, and what lies at each place."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from ..frames import clock_direction, clock_of
from .bands import Bands
from .cornea import Cornea
from .lining import CILIARY_FACE, CORNEA_BACK, IRIS_FRONT, Lining
from .meridian import from_steep_deg, meridian_at
from .structures import CORNEA, IRIS, LENS, PUPIL
from .structures import CILIARY_FACE as ON_CILIARY_FACE

ON_FACE = {
    "iris-margin": IRIS,
    "iris-back": IRIS,
    "lens-front": LENS,
    "lens-equator": LENS,
    "lens-back": LENS,
    "vitreous-front": PUPIL,
    "zonule": PUPIL,
    "ciliary-wall": ON_CILIARY_FACE,
}


@dataclass(frozen=True)
class Anatomy:
    """Structures of one eye, in the eye frame. Arcs are mm along the inner lining from the spur
    (`lining.py`).

    side : 'right' or 'left'. canal_width_mm, canal_depth_mm : Schlemm's canal. mean : the mean meridian's
    lining.
    """

    side: str
    cornea: Cornea
    mean: Lining
    bands: Bands
    canal_width_mm: float
    canal_depth_mm: float
    _linings: dict = field(default_factory=dict, repr=False, compare=False)

    @property
    def spur_r_mm(self) -> float:
        """Distance of the spur from the eye's axis."""
        return self.cornea.spur_r_mm

    @property
    def spur_z_mm(self) -> float:
        """Height of the spur plane."""
        return self.cornea.spur_z_mm

    @property
    def limbus_radius_mm(self) -> float:
        """Radius of the limbus on the outer surface: its posterior border overlies the spur."""
        return self.cornea.spur_r_mm

    @property
    def apex_mm(self) -> np.ndarray:
        """The endothelium's apex, (3,)."""
        return np.array([0.0, 0.0, -self.cornea.thickness_mm])

    def lining(self, clock: float) -> Lining:
        """The inner lining in the meridian of a clock hour."""
        if self.cornea.back.round:
            return self.mean
        if clock not in self._linings:
            cornea = self.cornea
            wall = meridian_at(
                cornea.back, -cornea.thickness_mm, cornea.spur_r_mm, from_steep_deg(cornea.back, clock)
            )
            self._linings[clock] = Lining(wall, self.mean.recess, self.mean.iris)
        return self._linings[clock]

    def meshwork_height_mm(self, clock: float) -> float:
        """Distance along the wall from the spur to Schwalbe's line."""
        return self.bands.height_mm(clock)

    def band(self, structure: str, clock: float) -> tuple[float, float]:
        """Arcs of a structure's posterior and anterior edge; the pupil margin is a line, both the same."""
        return self.bands.of(structure, clock)

    def point(self, structure: str, clock: float, across: float = 0.5) -> np.ndarray:
        """Point of a structure, a fraction of the way from its posterior to its anterior edge, (3,) mm."""
        low, high = self.band(structure, clock)
        return self.wall_point(low + across * (high - low), clock)

    def face_at(self, arc: float) -> str:
        """Name of the face that carries an arc."""
        return self.mean.face_at(arc)

    def wall_point(self, arc: float, clock: float) -> np.ndarray:
        """Point of the lining at an arc and a clock hour, (3,) mm."""
        return in_eye(self.lining(clock).at(arc)[0], clock)

    def wall_normal(self, arc: float, clock: float) -> np.ndarray:
        """Unit normal of the lining there, into the chamber, (3,)."""
        point, _, normal = self.lining(clock).at(arc)
        if arc < 0.0 or self.cornea.back.round:
            return in_eye(normal, clock)
        # On a toric cornea the normal leans out of the meridian plane.
        at = in_eye(point, clock) - self.apex_mm
        return -self.cornea.back.normal(at[None, :])[0]

    def anterior(self, arc: float, clock: float) -> np.ndarray:
        """Unit tangent of the lining toward the cornea's apex, in the meridian plane, (3,)."""
        return in_eye(self.lining(clock).at(arc)[1], clock)

    def arc_of(self, point_mm: np.ndarray) -> float:
        """Arc of a point of the lining, in its own meridian."""
        x, y, z = point_mm
        clock = clock_of(x, y)
        return self.lining(12.0 if clock is None else clock).arc_of(math.hypot(x, y), float(z))

    def structure_at(self, point_mm: np.ndarray, face_name: str) -> str:
        """What lies at a point of an inner face: a band, or cornea, iris, lens, pupil, ciliary-face."""
        if face_name not in (CORNEA_BACK, CILIARY_FACE, IRIS_FRONT):
            return ON_FACE[face_name]
        clock = clock_of(point_mm[0], point_mm[1])
        band = None if clock is None else self.bands.holding(self.arc_of(point_mm), clock)
        return band or {CORNEA_BACK: CORNEA, CILIARY_FACE: ON_CILIARY_FACE, IRIS_FRONT: IRIS}[face_name]

    def entry_point(self, clock: float, inside_limbus_mm: float) -> np.ndarray:
        """Point of the cornea's front inside the limbus by a distance square to the axis, (3,) mm."""
        r = self.limbus_radius_mm - inside_limbus_mm
        x, y, _ = r * clock_direction(clock)
        return np.array([x, y, float(self.cornea.front.sag(x, y))])

    def canal(self, clock: float) -> tuple[np.ndarray, np.ndarray]:
        """Posterior and anterior end of Schlemm's canal, behind the wall from the spur's band on, two (3,)
        mm.
        """
        start = self.band("scleral-spur", clock)[1]
        ends = (start, start + self.canal_width_mm)
        return tuple(
            self.wall_point(arc, clock) - self.canal_depth_mm * self.wall_normal(arc, clock) for arc in ends
        )


def in_eye(plane_vector: np.ndarray, clock: float) -> np.ndarray:
    """A vector (r, z) of a clock hour's half plane in the eye frame, (3,)."""
    vector = plane_vector[0] * clock_direction(clock)
    vector[2] = plane_vector[1]
    return vector
