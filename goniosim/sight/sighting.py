"""Sightings: is a point seen, by which path, where does it seem to be, and how well."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from ..scene.compile import CompiledScene
from .blur import Blur, blur
from .cause import BEYOND_TILT, OUTSIDE_FIELD, TOO_DIM, why_unseen
from .fan import Fan, shoot
from .magnification import Magnification, magnify
from .paths import Centred, LightPath, Scoped, along_direction, centred, full_path, stereo_point, through_point
from .pencil import Foci, foci
from .scene import Scene
from .target import Target


@dataclass(frozen=True)
class View:
    """A path to both pupils and the middle between them, all by the same faces.

    left, right, middle : LightPath. apparent_mm (3,), gap_mm : the stereo midpoint and its gap.
    """

    left: LightPath
    right: LightPath
    middle: LightPath
    apparent_mm: np.ndarray
    gap_mm: float


@dataclass(frozen=True)
class Sighting:
    """What the surgeon sees of one target. Figures are None where there is no view to take them from."""

    target: Target
    seen: bool
    cause: str | None
    view: View | None
    others: tuple[View, ...]
    foci: Foci | None
    blur: Blur | None
    magnification: Magnification | None
    graze_deg: float | None
    split: tuple[float, float | None, float | None] | None


class Viewer:
    """The scope of a scene, and the compiled scene it looks into.

    Sightings of many structures and many lines of sight share it; fans are kept per target.
    """

    def __init__(self, scene: Scene, compiled: CompiledScene | None = None):
        self.scene = scene
        self.compiled = compiled or scene.compiled
        self.nm = scene.wavelength_nm
        self.floor = scene.settings["seen"]["throughput_floor"]
        self.through = scene.mapping["scope"]["through"]

    def fan(self, target: Target, **how: Any) -> Fan:
        """The fan of rays from a target."""
        return shoot(self.compiled, self.nm, target.point_mm, target.normal, **how)

    def scope_at(self, centre_mm: np.ndarray, sight: np.ndarray | None = None) -> Scoped:
        """The scope centred on a point, along the scene's line of sight or another."""
        from ..frames import clock_direction, picture_axes

        scene, measures = self.scene, self.scene.scope
        right, up = scene.right, scene.up
        if sight is not None:
            seat = scene.head.T @ clock_direction(scene.mapping["surgeon"]["seat_clock"])
            right, up = picture_axes(sight, seat)
        return Scoped(scene.sight if sight is None else sight, right, up, centre_mm, measures["working_distance_mm"],
                      measures["stereo_base_mm"], measures["pupil_diameter_mm"], measures["field_diameter_mm"])

    def centre_on(self, target: Target, fan: Fan) -> Scoped:
        """The scope centred as the scene says: on the target's image, or on a point."""
        focus = self.scene.mapping["scope"]["focus_on"]
        if focus != "target":
            return self.scope_at(np.asarray(focus["point_mm"], dtype=float))
        scope = self.scope_at(target.point_mm)
        found = self.best_centring(fan, scope)
        return replace(scope, lost=True) if found is None else replace(scope, centre_mm=found.centre_mm)

    def best_centring(self, fan: Fan, scope: Scoped) -> Centred | None:
        """The centring with the most throughput among those the scene allows."""
        best, power = None, -1.0
        for group in fan.groups:
            found = centred(self.compiled, self.nm, fan, group, scope)
            if found is None:
                continue
            path = self._path(fan, found.middle)
            if self._allowed(path) and path.throughput > power:
                best, power = found, path.throughput
        return best

    def sighting(self, target: Target, scope: Scoped, fan: Fan) -> Sighting:
        """All figures of one target through a scope at its place."""
        views = sorted(self.views(fan, scope), key=lambda view: -view.middle.throughput)
        # What no path shows along the line of sight itself is not seen, so that plan and cut-offs agree.
        missed = scope.lost and bool(np.all(scope.centre_mm == target.point_mm))
        chosen = [] if missed else [view for view in views if self._allowed(view.middle)]
        if not chosen:
            return Sighting(target, False, self._cause(fan, scope), None, tuple(views), None, None, None, None, None)
        view = chosen[0]
        cause = self.refused(view, scope)
        return Sighting(
            target, cause is None, cause, view, tuple(other for other in views if other is not view),
            foci(self.compiled, self.nm, fan.origin_mm, fan.body, view.middle),
            blur(self.compiled, self.nm, scope, view.apparent_mm, target.face) if target.face else None,
            magnify(self.compiled, self.nm, fan, view.middle, scope, target.clockwise, target.anterior)
            if target.on_wall else None,
            graze_deg(target, view.middle) if target.on_wall else None,
            split_shift(target, view.apparent_mm, scope.sight))

    def views(self, fan: Fan, scope: Scoped) -> list[View]:
        """Every view of the fan's origin through both pupils, one per list of faces."""
        found = []
        for group in fan.groups:
            view = self.view(fan, group, scope)
            if view is not None:
                found.append(view)
        return found

    def view(self, fan: Fan, group: int, scope: Scoped) -> View | None:
        """The view by one list of faces, or None where a pupil is not reached."""
        firsts = []
        for side in (0.0, -1.0, 1.0):
            start = firsts[0] if firsts else None
            first = through_point(self.compiled, self.nm, fan, group, scope.pupil(side), start)
            if first is None:
                return None
            firsts.append(first)
        middle, left, right = (self._path(fan, first) for first in firsts)
        met = stereo_point(left.last_point_mm, left.outward, right.last_point_mm, right.outward)
        return None if met is None else View(left, right, middle, *met)

    def _path(self, fan: Fan, first: np.ndarray) -> LightPath:
        return full_path(self.compiled, self.nm, fan.origin_mm, fan.body, first)

    def _allowed(self, path: LightPath) -> bool:
        return self.through is None or path.by == self.through

    def refused(self, view: View, scope: Scoped) -> str | None:
        """Why a view that exists does not count as seen, or None."""
        tilt, limit = self.scene.mapping["scope"]["tilt_deg"], self.scene.scope["max_tilt_deg"]
        if tilt > limit:
            return BEYOND_TILT.format(tilt=tilt, limit=limit)
        power = min(view.left.throughput, view.right.throughput)
        if power < self.floor:
            return TOO_DIM.format(value=power, floor=self.floor)
        off = view.apparent_mm - scope.centre_mm
        off = off - (off @ scope.sight) * scope.sight
        return OUTSIDE_FIELD if np.linalg.norm(off) > 0.5 * scope.field_diameter_mm else None

    def _cause(self, fan: Fan, scope: Scoped) -> str:
        """Why no view exists: asked for the axis, then for the pupils in turn."""
        return why_unseen(self.compiled, self.nm, fan, [scope.far_mm(), *(scope.pupil(side) for side in (-1.0, 1.0, 0.0))])


def graze_deg(target: Target, path: LightPath) -> float:
    """Angle between the light's first direction and the wall's tangent plane at T, in degrees."""
    return float(np.degrees(np.arcsin(np.clip(path.first @ target.normal, -1.0, 1.0))))


def split_shift(target: Target, apparent_mm: np.ndarray, sight: np.ndarray) -> tuple[float, float | None, float | None]:
    """Shift A - T split along the line of sight (nearer positive), along the meridian (anterior positive)
    and round the clock (clockwise positive), all in mm.

    The three directions are square to each other: the line of sight, the part of the wall's anterior
    tangent square to it, and what is square to both.
    """
    shift = apparent_mm - target.point_mm
    nearer = float(shift @ sight)
    if not target.on_wall:
        return nearer, None, None
    anterior = target.anterior - (target.anterior @ sight) * sight
    size = np.linalg.norm(anterior)
    if size < 1e-12:
        return nearer, None, None
    anterior /= size
    across = np.cross(anterior, sight)
    if across @ target.clockwise < 0.0:
        across = -across
    return nearer, float(shift @ anterior), float(shift @ across)
