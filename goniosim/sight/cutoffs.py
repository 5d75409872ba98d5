"""Cut-offs: the lines of sight from which a structure is seen, swept in its meridian plane."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..frames import clock_direction, direction_from_axis, picture_axes
from .cause import TOO_DIM, why_unseen
from .fan import Fan
from .paths import WIDEST_START_DEG, full_path
from .sighting import Viewer
from .target import Target

FROM_DEG, TO_DEG, STEP_DEG = 0.0, 115.0, 1.0
EDGE_DEG = 1e-6  # to which the ends of an interval are found
BEYOND_DEG = (1e-3, 1e-2, 0.1, 0.5)  # how far outside an end its cause is asked for, until a pupil is lost


@dataclass(frozen=True)
class Cutoffs:
    """Where a structure is seen: line of sight in degrees from the axis, away from its own clock hour.

    seen_deg : list of (from, to). causes : for each interval, (cause below, cause above); None at an end
    of the sweep. never : cause where no interval exists.
    """

    seen_deg: tuple[tuple[float, float], ...]
    causes: tuple[tuple[str | None, str | None], ...]
    never: str | None


def cutoffs(viewer: Viewer, target: Target, fan: Fan) -> Cutoffs:
    """Sweep the line of sight from 0 to 115 deg in the target's meridian plane."""
    sweep = _Sweep(viewer, target, fan)
    angles = np.arange(FROM_DEG, TO_DEG + STEP_DEG / 2, STEP_DEG)
    seen = sweep.powers(angles) >= viewer.floor
    intervals, causes = [], []
    for low, high in _runs(seen):
        start, below = (angles[low], None) if low == 0 else sweep.end(angles[low], angles[low - 1])
        stop, above = (angles[high], None) if high == len(angles) - 1 else sweep.end(angles[high], angles[high + 1])
        intervals.append((float(start), float(stop)))
        causes.append((below, above))
    never = None if intervals else sweep.cause(0.5 * (FROM_DEG + TO_DEG))
    return Cutoffs(tuple(intervals), tuple(causes), never)


def _runs(flags: np.ndarray) -> list[tuple[int, int]]:
    """First and last index of every run of True."""
    edges = np.flatnonzero(np.diff(np.concatenate([[False], flags, [False]]).astype(int)))
    return [(int(a), int(b) - 1) for a, b in zip(edges[::2], edges[1::2])]


class _Sweep:
    """Lines of sight in one meridian plane, for one target."""

    def __init__(self, viewer: Viewer, target: Target, fan: Fan):
        self.viewer, self.fan = viewer, fan
        self.away_clock = (target.clock + 6.0) % 12.0 or 12.0
        self.seat = viewer.scene.head.T @ clock_direction(viewer.scene.mapping["surgeon"]["seat_clock"])

    def powers(self, angles: np.ndarray) -> np.ndarray:
        """Throughput (the lesser of both pupils) at each angle, 0 where not seen."""
        from ..kernels.aim import sweep

        viewer, fan, measures = self.viewer, self.fan, self.viewer.scene.scope
        sights = np.array([direction_from_axis(angle, self.away_clock) for angle in angles])
        rights = np.array([picture_axes(sight, self.seat)[0] for sight in sights])
        power = np.zeros(len(angles))
        for group, rows in fan.groups.items():
            if viewer.through is not None and full_path(
                    viewer.compiled, viewer.nm, fan.origin_mm, fan.body, fan.first[rows[0]]).by != viewer.through:
                continue
            sweep(viewer.compiled.arrays(viewer.nm), fan.body, fan.origin_mm, group, fan.first[rows],
                  fan.outward[rows], sights, rights, float(measures["working_distance_mm"]),
                  0.5 * measures["stereo_base_mm"], np.cos(np.radians(WIDEST_START_DEG)), power)
        return power

    def end(self, inside: float, outside: float) -> tuple[float, str]:
        """End of an interval between an angle that sees and one that does not, and its cause."""
        power = 0.0
        while abs(outside - inside) > EDGE_DEG:
            middle = 0.5 * (inside + outside)
            reached = self.powers(np.array([middle]))[0]
            if reached >= self.viewer.floor:
                inside = middle
            else:
                outside, power = middle, reached
        if power > 0.0:
            return inside, TOO_DIM.format(value=power, floor=self.viewer.floor)
        return inside, self.cause(outside, inside)

    def cause(self, angle: float, seen_at: float | None = None) -> str:
        """Why nothing is seen along a line of sight; seen_at: a neighbouring angle that still sees."""
        viewer, fan = self.viewer, self.fan
        centre = fan.origin_mm
        if seen_at is not None:
            seen = viewer.best_centring(fan, self.scope(seen_at, centre))
            centre = centre if seen is None else seen.centre_mm
        angles = [angle] if seen_at is None else [angle + np.sign(angle - seen_at) * beyond for beyond in BEYOND_DEG]
        scopes = [self.scope(onward, centre) for onward in angles]
        goals = [goal for scope in scopes for goal in (scope.far_mm(), scope.pupil(-1.0), scope.pupil(1.0))]
        return why_unseen(viewer.compiled, viewer.nm, fan, goals)

    def scope(self, angle: float, centre_mm: np.ndarray):
        """The scope at a line of sight of the sweep."""
        return self.viewer.scope_at(centre_mm, direction_from_axis(angle, self.away_clock))
