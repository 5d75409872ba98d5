"""The clock ring: for each clock position of the meshwork, is it seen, and is it clear."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..sight.blur import blur
from ..sight.paths import Scoped
from ..sight.sighting import Viewer, graze_deg
from ..sight.target import structure_target

STEP_DEG = 5.0
COARSE_FAN = 40


@dataclass(frozen=True)
class RingPlace:
    """One clock position, the scope centred on it along the scene's line of sight.

    reachable is None until a reach is computed.
    """

    clock: float
    seen: bool
    clear: bool
    by: str | None
    headroom_deg: float | None
    blur_um: float | None
    graze_deg: float | None
    reachable: bool | None = None


def clock_ring(viewer: Viewer, structure: str) -> list[RingPlace]:
    """The ring every 5 degrees, from 12 o'clock on, with the head and the scope as they are."""
    clocks = [12.0] + [i * STEP_DEG / 30.0 for i in range(1, int(360.0 / STEP_DEG))]
    return [_place(viewer, structure, clock) for clock in clocks]


def _place(viewer: Viewer, structure: str, clock: float) -> RingPlace:
    target = structure_target(viewer.scene.eye, structure, clock)
    fan = viewer.fan(target, coarse=COARSE_FAN, refined=False)
    scope = viewer.scope_at(target.point_mm)
    found = viewer.best_centring(fan, scope)
    if found is None:
        return RingPlace(clock, False, False, None, None, None, None)
    scope = viewer.scope_at(found.centre_mm)
    view = viewer.view(fan, found.group, scope)
    if view is None or viewer.refused(view, scope) is not None:
        return RingPlace(clock, False, False, None, None, None, None)
    spread = blur(viewer.compiled, viewer.nm, scope, view.apparent_mm, target.face).rms_um
    graze = graze_deg(target, view.middle)
    return RingPlace(clock, True, is_clear(viewer.scene.settings, view.middle.headroom_deg, spread, graze),
                     view.middle.by, view.middle.headroom_deg, spread, graze)


def is_clear(settings, headroom_deg: float | None, blur_um: float | None, graze: float) -> bool:
    """Whether a view that is seen is clear: headroom, blur and graze within the floors of the settings."""
    floors = settings["clear"]
    return bool((headroom_deg is None or headroom_deg >= floors["headroom_floor_deg"])
                and blur_um is not None and blur_um <= floors["blur_ceiling_um"]
                and graze >= floors["graze_floor_deg"])
