"""The neutral line of sight: where a straight tool sent down an undeviated line lands true."""

from __future__ import annotations

import numpy as np

from ..frames import direction_from_axis
from ..sight.cutoffs import EDGE_DEG, STEP_DEG, Cutoffs
from ..sight.fan import Fan
from ..sight.landing import land
from ..sight.paths import full_path
from ..sight.sighting import Viewer
from ..sight.target import Target


def neutral_line(viewer: Viewer, target: Target, fan: Fan, cut: Cutoffs) -> float | None:
    """Angle from the axis, in degrees, in the target's meridian plane, at which the undeviated line of sight
    lands on the target; None where it never does while the target is seen. The smallest where there are several.
    """
    for low, high in cut.seen_deg:
        angles = np.append(np.arange(low + EDGE_DEG, high, STEP_DEG), high - EDGE_DEG)
        misses = [landing_miss(viewer, target, fan, angle) for angle in angles]
        for a, b, before, after in zip(angles, angles[1:], misses, misses[1:]):
            if before is not None and after is not None and before * after <= 0.0:
                return _bisect(viewer, target, fan, a, b, before)
    return None


def landing_miss(viewer: Viewer, target: Target, fan: Fan, angle: float) -> float | None:
    """Signed distance along the wall (anterior positive, mm) at which the undeviated line lands, or None."""
    away = (target.clock + 6.0) % 12.0 or 12.0
    scope = viewer.scope_at(target.point_mm, direction_from_axis(angle, away))
    found = viewer.best_centring(fan, scope)
    if found is None:
        return None
    path = full_path(viewer.compiled, viewer.nm, fan.origin_mm, fan.body, found.middle)
    return land(viewer.scene.eye, path.last_point_mm, -path.outward, target.arc_mm, target.clock).anterior_mm


def _bisect(viewer: Viewer, target: Target, fan: Fan, low: float, high: float, at_low: float) -> float | None:
    """Angle at which the miss changes sign, to 1e-6 degrees."""
    while high - low > EDGE_DEG:
        middle = 0.5 * (low + high)
        miss = landing_miss(viewer, target, fan, middle)
        if miss is None:
            return None
        if at_low * miss <= 0.0:
            high = middle
        else:
            low, at_low = middle, miss
    return float(0.5 * (low + high))
