"""The neutral line of sight: where a straight tool sent down an undeviated line lands true."""

from __future__ import annotations

import numpy as np

from ..frames import direction_from_axis
from ..sight.cutoffs import EDGE_DEG, Cutoffs
from ..sight.fan import Fan
from ..sight.landing import land
from ..sight.paths import full_path
from ..sight.sighting import Viewer
from ..sight.target import Target


SCAN_DEG = 1.0  # steps in which a change of sign is looked for


def neutral_line(viewer: Viewer, target: Target, fan: Fan, cut: Cutoffs) -> float | None:
    """Angle from the axis, in degrees, in the target's meridian plane, at which the undeviated line of sight
    lands on the target; None where it never does while the target is seen. The smallest where there are several.
    """
    for low, high in cut.seen_deg:
        angles = np.append(np.arange(low + EDGE_DEG, high, SCAN_DEG), high - EDGE_DEG)
        misses = [landing_miss(viewer, target, fan, angle) for angle in angles]
        for a, b, before, after in zip(angles, angles[1:], misses, misses[1:]):
            if before is not None and after is not None and before * after <= 0.0:
                return _crossing(viewer, target, fan, a, b)
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


def _crossing(viewer: Viewer, target: Target, fan: Fan, low: float, high: float) -> float | None:
    """Angle between two at which the miss changes sign, to 1e-6 degrees; None where it jumps over zero."""
    from scipy.optimize import brentq

    def miss(angle: float) -> float:
        landed = landing_miss(viewer, target, fan, angle)
        if landed is None:
            raise _Lost
        return landed

    try:
        return float(brentq(miss, low, high, xtol=EDGE_DEG))
    except _Lost:
        return None


class _Lost(Exception):
    """The line of sight was lost on the way."""
