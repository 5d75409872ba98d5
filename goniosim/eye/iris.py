"""The iris: from its root on the ciliary face to the pupil margin, shaped by angle width and bow.

Front, with u from 0 at the root (radius r_R) to 1 at the margin (r_P), L = r_R - r_P:

    z = chord(u) + L u (1 - u) (A (1 - u) + B u).

The two arms of the trabecular-iris angle meet at the root; one runs through the wall W 500 um ahead of the
spur, the other through the iris where it faces W squarely. Both the angle width and AOD500 thus name the
point I of the iris on W's perpendicular, and the front passes through I for one A to each B. B then sets
the bow, measured as OCT does: the greatest height of the back (pigment epithelium) above the chord of its
ends, square to the chord. Back: the front less a thickness along the axis, linear in r: half the stated one
at the margin, and the stated one where the iris faces the wall 750 um ahead of the spur.

Where angle and bow clash, believable shapes (A and B within limits) come first: the bow gives way, then the
insertion.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import Mapping

import numpy as np

from ..errors import BadInput, Fault
from .cornea import Cornea
from .curves import find_root
from .recess import Recess, WALL_POINT_MM, WallPoint, recess_of, wall_point

WORTH_A_NOTE_MM = 0.005  # a bow that gives way by less is not told: OCT does not resolve it
THICKNESS_POINT_MM = 0.75
BELIEVABLE_B = (-0.5, 1.0)
LEAST_A = -0.6
BAND_LIMITS_MM = (0.02, 1.0)
BOW_TOLERANCE_MM = 1e-9


@dataclass(frozen=True)
class Iris:
    """The iris in the (r, z) half plane. root, margin : ends of the front. a, b : its shape (module text).

    thickness_mm : as stated, 750 um ahead of the spur. wall_750 : the wall there.
    """

    root: np.ndarray
    margin: np.ndarray
    a: float
    b: float
    thickness_mm: float
    wall_750: WallPoint

    @cached_property
    def front(self) -> np.ndarray:
        """z as a cubic in v = r - r_P: coefficients of 1, v, v^2, v^3."""
        (r_root, z_root), (r_margin, z_margin) = self.root, self.margin
        length = r_root - r_margin
        # With w = 1 - u = v / L: z = z_P + (z_R - z_P) w + L (w - w^2) (B + (A - B) w).
        in_w = np.array(
            [
                z_margin,
                z_root - z_margin + length * self.b,
                length * (self.a - 2.0 * self.b),
                length * (self.b - self.a),
            ]
        )
        return in_w / length ** np.arange(4)

    @cached_property
    def thickness(self) -> np.ndarray:
        """Thickness along the axis, linear in v: coefficients of 1, v."""
        at_margin = 0.5 * self.thickness_mm
        r = (self.wall_750.at + facing_distance(self, self.wall_750) * self.wall_750.normal)[0]
        return np.array([at_margin, (self.thickness_mm - at_margin) / (r - self.margin[0])])

    @cached_property
    def back(self) -> np.ndarray:
        """z of the back as a cubic in v."""
        return self.front - np.array([*self.thickness, 0.0, 0.0])

    @property
    def back_root_z(self) -> float:
        """Height of the back's outer end, at the root's radius."""
        return float(np.polyval(self.back[::-1], self.root[0] - self.margin[0]))

    def bow_mm(self) -> float:
        """Greatest height of the back above the chord of its ends; where nowhere above it, the greatest
        depth.
        """
        low, high = self.bow_extremes()
        return high if high > BOW_TOLERANCE_MM else low

    def bow_extremes(self) -> tuple[float, float]:
        """Least and greatest height of the back above its chord, square to the chord, in mm."""
        length = self.root[0] - self.margin[0]
        drop = self.back_root_z - self.back[0]
        bump = self.back - np.array([self.back[0], drop / length, 0.0, 0.0])
        turns = np.roots([3.0 * bump[3], 2.0 * bump[2], bump[1]])
        v = [t.real for t in turns if abs(t.imag) < 1e-12 and 0.0 < t.real < length]
        heights = np.polyval(bump[::-1], np.array([0.0, length, *v])) * length / math.hypot(length, drop)
        return float(heights.min()), float(heights.max())

    def height(self, r):
        """z of the front at a radius or radii."""
        return np.polyval(self.front[::-1], np.asarray(r) - self.margin[0])

    def slope(self, r):
        """dz/dr of the front."""
        return np.polyval(np.polyder(self.front[::-1]), np.asarray(r) - self.margin[0])


def facing_distance(iris: Iris, wall: WallPoint) -> float:
    """Distance in mm along the wall's perpendicular to the front of the iris; infinite where it misses."""
    (r, z), (n_r, n_z) = wall.at, wall.normal
    # Substitute r + t n_r into the cubic: a polynomial in t.
    t_line, z_line = np.poly1d([n_r, r - iris.margin[0]]), np.poly1d([n_z, z])
    gap = z_line - np.polyval(np.poly1d(iris.front[::-1]), t_line)
    found = [
        t.real
        for t in gap.roots
        if abs(t.imag) < 1e-9 and t.real > 0.0 and iris.margin[0] <= r + t.real * n_r <= iris.root[0] + 1e-9
    ]
    return min(found, default=math.inf)


def iris_of(eye: Mapping, cornea: Cornea, margin_back_z: float) -> tuple[Iris, Recess, list[str]]:
    """Iris and recess of a complete eye. margin_back_z : height of the back of the pupil margin.

    Raises BadInput where the iris would touch the cornea.
    """
    solver = _Solver(eye, cornea, margin_back_z)
    iris, recess = solver.solve()
    _check_clear(iris, cornea)
    return iris, recess, solver.notes


class _Solver:
    """Finds insertion, A and B from what the eye's mapping states of the angle and the bow."""

    def __init__(self, eye: Mapping, cornea: Cornea, margin_back_z: float):
        angle, iris = eye["angle"], eye["iris"]
        self.cornea = cornea
        self.width = None if angle["width_deg"] is None else math.radians(angle["width_deg"])
        self.aod, self.band, self.bow = angle["aod500_mm"], angle["ciliary_band_mm"], iris["bow_mm"]
        self.thickness = iris["thickness_um"] / 1000.0
        self.margin = np.array([iris["pupil_mm"] / 2.0, margin_back_z + 0.5 * self.thickness])
        self.wall_500 = wall_point(cornea, WALL_POINT_MM)
        self.wall_750 = wall_point(cornea, THICKNESS_POINT_MM)
        self.notes: list[str] = []

    def solve(self) -> tuple[Iris, Recess]:
        recess = recess_of(self.cornea, self._insertion())
        b = self._agreed_b(recess)
        iris = self._shape(recess, b)
        if iris.a < LEAST_A:
            recess, b = self._insert_farther_back(recess)
            iris = self._shape(recess, b)
        self._note_bow(iris)
        return iris, recess

    def _insertion(self) -> float:
        """Width of the ciliary band: as stated, or where AOD500 and angle width put the root."""
        if self.band is not None:
            return self.band
        facing = self.wall_500.at + self.aod * self.wall_500.normal

        def miss(band: float) -> float:
            root = recess_of(self.cornea, band).root
            return angle_between(self.wall_500.at - root, facing - root) - self.width

        low, high = BAND_LIMITS_MM
        if miss(low) * miss(high) <= 0.0:
            return find_root(miss, low, high)
        nearest = min((low, high), key=lambda band: abs(miss(band)))
        self.notes.append(
            f"an AOD500 of {self.aod:g} mm and an angle of {math.degrees(self.width):g} deg contradict "
            f"each other: no insertion gives both; the angle is held, with a ciliary band of {nearest:g} mm"
        )
        self.aod = None
        return nearest

    def _facing_point(self, recess: Recess) -> np.ndarray:
        """The point I of the iris that faces the wall 500 um ahead of the spur."""
        wall = self.wall_500
        if self.width is None or (self.aod is not None and self.band is None):
            return wall.at + self.aod * wall.normal
        arm = wall.at - recess.root
        c, s = math.cos(self.width), math.sin(self.width)
        toward_iris = np.array([c * arm[0] - s * arm[1], s * arm[0] + c * arm[1]])
        along, _ = np.linalg.solve(np.array([toward_iris, -wall.normal]).T, arm)
        return recess.root + along * toward_iris

    def _shape(self, recess: Recess, b: float) -> Iris:
        """The iris through I with a given B."""
        root, margin, facing = recess.root, self.margin, self._facing_point(recess)
        length = root[0] - margin[0]
        u = (root[0] - facing[0]) / length
        if not 0.0 < u < 1.0:
            raise BadInput(
                "eye",
                [
                    Fault(
                        "angle",
                        "is so wide that the iris would have to reach beyond its own ends; "
                        "use a smaller width_deg or aod500_mm",
                    )
                ],
            )
        above = facing[1] - (root[1] + (margin[1] - root[1]) * u)
        a = (above / (length * u * (1.0 - u)) - b * u) / (1.0 - u)
        return Iris(root, margin, float(a), float(b), self.thickness, self.wall_750)

    def _agreed_b(self, recess: Recess) -> float:
        """B that gives the bow asked for, within believable shapes."""
        which = 1 if self.bow > 0.0 else 0

        def miss(b: float) -> float:
            return self._shape(recess, b).bow_extremes()[which] - self.bow

        low, high = BELIEVABLE_B
        if self.bow == 0.0:
            return max(low, min(high, self._flat_b(recess)))
        if miss(low) * miss(high) <= 0.0:
            return find_root(miss, low, high)
        return low if miss(low) > 0.0 else high

    def _flat_b(self, recess: Recess) -> float:
        """B for a bow of zero: none of the back above its chord, where A allows it."""
        return 0.0 if self._shape(recess, 0.0).a <= 0.0 else BELIEVABLE_B[0]

    def _insert_farther_back(self, recess: Recess) -> tuple[Recess, float]:
        """Move the root back until A is believable: wider by insertion, not by a hollow iris."""

        def miss(band: float) -> float:
            moved = recess_of(self.cornea, band)
            return self._shape(moved, self._agreed_b(moved)).a - LEAST_A

        low, high = recess.band_mm, BAND_LIMITS_MM[1]
        band = find_root(miss, low, high) if miss(high) > 0.0 else high
        moved = recess_of(self.cornea, band)
        self.notes.append(
            f"so wide an angle would hollow the iris beyond belief: its root is put {band:.2f} mm behind the "
            f"spur instead of {low:.2f} mm"
        )
        return moved, self._agreed_b(moved)

    def _note_bow(self, iris: Iris) -> None:
        got = iris.bow_mm()
        if abs(got - self.bow) > WORTH_A_NOTE_MM:
            self.notes.append(
                f"a bow of {self.bow:g} mm does not go with this angle: {got:.3f} mm is used "
                "(the bow gives way)"
            )


def angle_between(one: np.ndarray, other: np.ndarray) -> float:
    """Angle in radians between two vectors of the plane."""
    return abs(math.atan2(one[0] * other[1] - one[1] * other[0], one @ other))


def _check_clear(iris: Iris, cornea: Cornea) -> None:
    """The front of the iris must stay behind the cornea everywhere."""
    meridian = cornea.mean_back()
    r = np.linspace(iris.margin[0], min(iris.root[0], cornea.spur_r_mm), 200)[:-1]
    if np.any(meridian.height(r) - iris.height(r) <= 0.0):
        raise BadInput(
            "eye",
            [Fault("iris", "touches the cornea: this bow, angle, depth and pupil leave no chamber")],
            "Use a smaller bow, a wider angle or a deeper chamber.",
        )
