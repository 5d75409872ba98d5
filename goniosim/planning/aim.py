"""The correction of aim from the entry, and the gap table: apparent against real distance of tip and target."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..sight.fan import shoot
from ..sight.paths import Scoped
from ..sight.sighting import Viewer
from ..sight.target import Target

GAP_SHARES = tuple(i / 10 for i in range(11))  # of the way from entry to target


@dataclass(frozen=True)
class Aim:
    """What to add to the direction from the entry to the image, so that the tool goes to the target.

    correction_deg : angle between entry-to-A and entry-to-T. toward_iris_deg, clockwise_deg : its parts,
    in the plane square to the true line (toward the iris and clockwise positive). The same three in mm
    at the target: angle in radians times the distance entry to target.
    """

    correction_deg: float
    toward_iris_deg: float
    clockwise_deg: float
    correction_mm: float
    toward_iris_mm: float
    clockwise_mm: float
    distance_mm: float


def aim_correction(target: Target, apparent_mm: np.ndarray, entry_mm: np.ndarray) -> Aim:
    """Correction of aim for a straight tool through an entry."""
    to_target = target.point_mm - entry_mm
    distance = float(np.linalg.norm(to_target))
    true = to_target / distance
    seems = (apparent_mm - entry_mm) / np.linalg.norm(apparent_mm - entry_mm)
    angle = float(np.arctan2(np.linalg.norm(np.cross(seems, true)), seems @ true))
    # At the true line, the way in which the correction still runs: away from the image.
    onward = true * (seems @ true) - seems
    size = np.linalg.norm(onward)
    onward = onward / size if size > 0.0 else onward
    posterior = -target.anterior + (target.anterior @ true) * true
    posterior /= np.linalg.norm(posterior)
    clockwise = np.cross(posterior, true)
    if clockwise @ target.clockwise < 0.0:
        clockwise = -clockwise
    parts = (angle, angle * float(onward @ posterior), angle * float(onward @ clockwise))
    return Aim(*(float(np.degrees(part)) for part in parts), *(part * distance for part in parts), distance)


@dataclass(frozen=True)
class GapRow:
    """One place of the tip. share : of the way to the target. true_mm : real distance left.
    seen_mm : distance between the tip's and the target's apparent points; None where the tip is not seen."""

    share: float
    true_mm: float
    seen_mm: float | None


def gap_table(viewer: Viewer, scope: Scoped, target: Target, apparent_mm: np.ndarray, entry_mm: np.ndarray,
              by: str) -> list[GapRow]:
    """The tip on the true line at 0 to 100 % of the way, seen through the same optics as the target."""
    rows = []
    for share in GAP_SHARES:
        tip = entry_mm + share * (target.point_mm - entry_mm)
        left = float(np.linalg.norm(target.point_mm - tip))
        if share == 1.0:
            rows.append(GapRow(share, 0.0, 0.0))
            continue
        seen = _apparent(viewer, scope, tip, target, by)
        rows.append(GapRow(share, left, None if seen is None else float(np.linalg.norm(seen - apparent_mm))))
    return rows


def _apparent(viewer: Viewer, scope: Scoped, tip_mm: np.ndarray, target: Target, by: str) -> np.ndarray | None:
    """Apparent place of the tip by the same mirrors as the target, the view with the most throughput."""
    toward = target.normal if np.allclose(tip_mm, target.point_mm) else scope.sight
    fan = shoot(viewer.compiled, viewer.nm, tip_mm, toward, coarse=48, refined=False)
    views = [view for view in viewer.views(fan, scope) if view.middle.by == by]
    return max(views, key=lambda view: view.middle.throughput).apparent_mm if views else None
