"""Solved light paths: through a pupil, or out along a line of sight, found by Newton from a fan."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scene.compile import CompiledScene
from ..scene.tracing import raw_trace
from .fan import Fan

PUPIL_TOLERANCE_MM = 1e-10
FAR_MM = 1e6
WIDEST_START_DEG = 8.0  # a group whose nearest ray leaves farther off than this is not tried


@dataclass(frozen=True)
class LightPath:
    """One light path from T into the air.

    first : (3,) direction at T. faces : face names with what happened there. points_mm (m, 3) and
    onward (m, 3) : points on the faces and directions after them. throughput, headroom_deg,
    headroom_at : see `Traces`. by : 'direct', or the mirrors' names joined by '+'.
    """

    code: int
    first: np.ndarray
    faces: tuple[tuple[str, str], ...]
    points_mm: np.ndarray
    onward: np.ndarray
    throughput: float
    headroom_deg: float | None
    headroom_at: str | None
    by: str

    @property
    def last_point_mm(self) -> np.ndarray:
        """Where the light leaves the last face."""
        return self.points_mm[-1]

    @property
    def outward(self) -> np.ndarray:
        """Direction in which the light leaves the last face."""
        return self.onward[-1]

    @property
    def deviation_deg(self) -> float:
        """Angle between first and last direction."""
        cross = np.linalg.norm(np.cross(self.first, self.outward))
        return float(np.degrees(np.arctan2(cross, self.first @ self.outward)))


def full_path(scene: CompiledScene, wavelength_nm: float, origin_mm: np.ndarray, body: int, first: np.ndarray) -> LightPath:
    """Trace one direction and keep the whole path."""
    out = raw_trace(scene.arrays(wavelength_nm), origin_mm[None], np.ascontiguousarray(first[None]),
                    np.array([body], np.int64), paths=True)
    met = int(out["met"][0])
    numbers = out["path_face"][0, :met]
    faces = tuple((scene.faces[n // 2].name, "reflected" if n % 2 else "through") for n in numbers)
    mirrors = [name for name, event in faces if event == "reflected"]
    room_face = int(out["room_face"][0])
    return LightPath(
        int(out["code"][0]), first, faces, out["path_point"][0, :met].copy(), out["path_dir"][0, :met].copy(),
        float(out["power"][0]), float(np.degrees(out["headroom"][0])) if room_face >= 0 else None,
        scene.faces[room_face].name if room_face >= 0 else None, "+".join(mirrors) if mirrors else "direct")


def through_point(scene: CompiledScene, wavelength_nm: float, fan: Fan, group: int, goal_mm: np.ndarray,
                  start: np.ndarray | None = None) -> np.ndarray | None:
    """First direction (3,) of the group's path through a point within 1e-10 mm, or None.

    start : first direction of a path known to pass near the point.
    """
    toward = goal_mm - fan.points[fan.groups[group]]
    toward /= np.linalg.norm(toward, axis=1, keepdims=True)
    near = np.einsum("ij,ij->i", toward, fan.outward[fan.groups[group]])
    starts = starts_of(fan, group, near) if start is None else iter([start])
    return _newton(scene, wavelength_nm, fan, group, starts, True, goal_mm, PUPIL_TOLERANCE_MM)


def along_direction(scene: CompiledScene, wavelength_nm: float, fan: Fan, group: int, direction: np.ndarray) -> np.ndarray | None:
    """First direction (3,) of the group's path that leaves in exactly a direction, or None."""
    starts = starts_of(fan, group, fan.outward[fan.groups[group]] @ direction)
    return _newton(scene, wavelength_nm, fan, group, starts, False, direction, 1e-13)


def starts_of(fan: Fan, group: int, near: np.ndarray):
    """First directions from which Newton may start, best first: the ray that leaves nearest to the goal, then
    the nearest that sets out well apart from those, for maps that fold.

    near : (n,) cosines between the group's rays, as they leave, and the goal.
    """
    from ..kernels.aim import APART_COS, TRIES

    first = fan.first[fan.groups[group]]
    open_cos = np.where(near >= np.cos(np.radians(WIDEST_START_DEG)), near, -2.0)
    for _ in range(TRIES):
        row = int(np.argmax(open_cos))
        if open_cos[row] < -1.5:
            return
        yield first[row]
        open_cos[first @ first[row] > APART_COS] = -2.0


def _newton(scene, wavelength_nm, fan, group, starts, to_point, goal, tolerance) -> np.ndarray | None:
    from ..kernels.aim import FOUND, aim

    arrays = scene.arrays(wavelength_nm)
    found, point, out = np.empty(3), np.empty(3), np.empty(3)
    for start in starts:
        if aim(arrays, fan.body, fan.origin_mm, np.ascontiguousarray(start), group, to_point, goal, tolerance,
               found, point, out) == FOUND:
            return found
    return None


@dataclass(frozen=True)
class Scoped:
    """A scope at its place: line of sight w, centre C, and what its pupils are.

    sight, right, up : (3,) unit vectors. centre_mm : (3,). lost : it was to be centred on a target's image, but
    no path from the target leaves along the line of sight, so that C is the target itself.
    """

    sight: np.ndarray
    right: np.ndarray
    up: np.ndarray
    centre_mm: np.ndarray
    working_distance_mm: float
    stereo_base_mm: float
    pupil_diameter_mm: float
    field_diameter_mm: float
    lost: bool = False

    def pupil(self, side: float) -> np.ndarray:
        """Centre of a pupil: side -1 left, 0 the middle between, +1 right."""
        return self.centre_mm + self.working_distance_mm * self.sight + 0.5 * side * self.stereo_base_mm * self.right


    def far_mm(self) -> np.ndarray:
        """A point so far along the line of sight that light toward it leaves in its direction."""
        return self.centre_mm + FAR_MM * self.sight


@dataclass(frozen=True)
class Centred:
    """The outcome of centring the scope on a target through one group of paths."""

    group: int
    centre_mm: np.ndarray
    apparent_mm: np.ndarray
    gap_mm: float
    left: np.ndarray
    right: np.ndarray
    middle: np.ndarray


def centred(scene: CompiledScene, wavelength_nm: float, fan: Fan, group: int, scope: Scoped) -> Centred | None:
    """Centre the scope on T's image along its line of sight (design: `focus_on: target`), or None."""
    from ..kernels.aim import FOUND, centred_sight

    dirs, points, outs = np.empty((3, 3)), np.empty((3, 3)), np.empty((3, 3))
    centre, apparent = np.empty(3), np.empty(3)
    for start in starts_of(fan, group, fan.outward[fan.groups[group]] @ scope.sight):
        status, gap = centred_sight(
            scene.arrays(wavelength_nm), fan.body, fan.origin_mm, np.ascontiguousarray(start), group, scope.sight,
            scope.right, scope.working_distance_mm, 0.5 * scope.stereo_base_mm, dirs, points, outs, centre, apparent)
        if status == FOUND:
            return Centred(group, centre, apparent, float(gap), dirs[0].copy(), dirs[1].copy(), dirs[2].copy())
    return None


def stereo_point(point_a: np.ndarray, out_a: np.ndarray, point_b: np.ndarray, out_b: np.ndarray) -> tuple[np.ndarray, float] | None:
    """Midpoint and length of the shortest segment between two external rays; None where they run parallel."""
    from ..kernels.aim import between

    middle = np.empty(3)
    gap = float(between(point_a, out_a, point_b, out_b, middle))
    return (middle, gap) if np.isfinite(gap) else None
