"""The Plan: everything computed for one scene, and its plain-data form, plan.json."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any

import numpy as np

from ..cautions import CAUTION
from ..frames import clock_of, from_axis_deg
from ..sight.cutoffs import Cutoffs
from ..sight.landing import Landing
from ..sight.paths import Scoped
from ..sight.scene import Scene
from ..sight.sighting import Sighting, View
from ..sight.target import Target
from ..units import prism_dioptres
from .aim import Aim, GapRow
from .ring import RingPlace, is_clear

STRAIGHT_ON_DEG = 1e-9


@dataclass(frozen=True)
class CutoffRow:
    """Cut-offs of one structure through one lens ('none': bare cornea)."""

    lens: str
    structure: str
    clock: float
    cut: Cutoffs


@dataclass(frozen=True)
class Plan:
    """What `goniosim.plan` returns. `sightings` holds the target first.

    margin_deg : total-reflection margin of faces that work by it, {face: {dry, wet}}, empty for others.
    """

    scene: Scene
    scope: Scoped
    target: Target
    sightings: tuple[Sighting, ...]
    along_sight: Landing
    from_entry: Landing | None
    entry_mm: np.ndarray | None
    aim: Aim | None
    gap_table: tuple[GapRow, ...]
    cutoffs: tuple[CutoffRow, ...]
    neutral_deg: float | None
    ring: tuple[RingPlace, ...]
    margin_deg: dict[str, dict[str, float]]
    notes: tuple[str, ...]

    @property
    def sighting(self) -> Sighting:
        """The target's own sighting."""
        return self.sightings[0]

    def to_dict(self) -> dict[str, Any]:
        """What plan.json holds: plain data, full precision, null for what is missing."""
        from .. import __version__

        scene = self.scene
        return {
            "goniosim": "plan", "schema": 1, "version": __version__, "caution": CAUTION,
            "fingerprint": scene.fingerprint,
            "scene": {**scene.mapping, "marks": dict(scene.marks)},
            "eye": scene.eye.report,
            "line_of_sight": _direction(scene.sight),
            "neutral_line_of_sight": {"from_axis_deg": self.neutral_deg,
                                      "toward_clock": _away(self.target) if self.neutral_deg is not None else None},
            "scope": {"centre_mm": _vector(self.scope.centre_mm),
                      "pupils_mm": [_vector(self.scope.pupil(side)) for side in (-1.0, 1.0)]},
            "target": _target(self.target),
            "sightings": [_sighting(sighting, scene.settings) for sighting in self.sightings],
            "landing": {"along_sight": _landing(self.along_sight), "from_entry": _landing(self.from_entry)},
            "entry_mm": _vector(self.entry_mm),
            "aim": _aim(self.aim),
            "gap_table": [asdict(row) for row in self.gap_table],
            "cutoffs": [_cutoffs(row) for row in self.cutoffs],
            "ring": [asdict(place) for place in self.ring],
            "total_reflection_margin_deg": self.margin_deg,
            "notes": list(self.notes),
        }


def _vector(vector: np.ndarray | None) -> list[float] | None:
    return None if vector is None else [float(value) for value in vector]


def _direction(direction: np.ndarray) -> dict[str, float | None]:
    angle = from_axis_deg(direction)
    return {"from_axis_deg": angle,
            "toward_clock": clock_of(direction[0], direction[1]) if angle > STRAIGHT_ON_DEG else None}


def _away(target: Target) -> float:
    return (target.clock + 6.0) % 12.0 or 12.0


def _target(target: Target) -> dict[str, Any]:
    return {"structure": target.structure, "clock": target.clock, "true_mm": _vector(target.point_mm),
            "arc_from_spur_mm": target.arc_mm, "face": target.face, "wall_normal": _vector(target.normal)
            if target.on_wall else None, "anterior": _vector(target.anterior), "clockwise": _vector(target.clockwise)}


def _sighting(sighting: Sighting, settings) -> dict[str, Any]:
    """One entry of `sightings`; every key always there."""
    target, view = sighting.target, sighting.view
    record: dict[str, Any] = {
        "structure": target.structure, "clock": target.clock, "seen": sighting.seen,
        "clear": bool(sighting.seen and sighting.graze_deg is not None and is_clear(
            settings, view.middle.headroom_deg, sighting.blur and sighting.blur.rms_um, sighting.graze_deg)),
        "cause": sighting.cause, "true_mm": _vector(target.point_mm),
    }
    record.update(_view(view))
    foci, split, spread, magnified = sighting.foci, sighting.split, sighting.blur, sighting.magnification
    nearer, anterior, clockwise = split or (None, None, None)
    record.update({
        "shift_mm": _vector(view.apparent_mm - target.point_mm) if view else None,
        "seems_nearer_mm": nearer, "seems_anterior_mm": anterior, "seems_clockwise_mm": clockwise,
        "tangential_mm": _vector(foci.tangential_mm) if foci else None,
        "sagittal_mm": _vector(foci.sagittal_mm) if foci else None,
        "astigmatism_mm": foci.separation_mm if foci else None,
        "graze_deg": sighting.graze_deg,
        "blur_um": spread.rms_um if spread else None,
        "blur_share": spread.share if spread else None,
        "chromatic_um": spread.chromatic_um if spread else None,
        "magnification": None if magnified is None else {
            "clockwise": magnified.clockwise, "anterior": magnified.anterior, "ratio": magnified.ratio,
            "clockwise_points_deg": magnified.clockwise_points_deg,
            "anterior_points_deg": magnified.anterior_points_deg},
        "handed": None if magnified is None else magnified.handed,
        "others": [_view(other) for other in sighting.others],
    })
    return record


def _view(view: View | None) -> dict[str, Any]:
    """The figures of a view's middle path and stereo point."""
    keys = ("by", "apparent_mm", "stereo_gap_mm", "headroom_deg", "headroom_at", "throughput", "deviation_deg",
            "deviation_pd", "faces", "path_mm", "first_direction")
    if view is None:
        return dict.fromkeys(keys)
    path = view.middle
    values = (path.by, _vector(view.apparent_mm), view.gap_mm, path.headroom_deg, path.headroom_at, path.throughput,
              path.deviation_deg, prism_dioptres(path.deviation_deg),
              [name for name, _ in path.faces], [_vector(point) for point in path.points_mm], _vector(path.first))
    return dict(zip(keys, values))


def _landing(landing: Landing | None) -> dict[str, Any]:
    if landing is None:
        return {"structure": None, "anterior_mm": None, "point_mm": None}
    return {"structure": landing.structure, "anterior_mm": landing.anterior_mm, "point_mm": _vector(landing.point_mm)}


def _aim(aim: Aim | None) -> dict[str, float | None]:
    return dict.fromkeys(Aim.__dataclass_fields__) if aim is None else asdict(aim)


def _cutoffs(row: CutoffRow) -> dict[str, Any]:
    cut = row.cut
    first, last = (cut.causes[0][0], cut.causes[-1][1]) if cut.causes else (cut.never, cut.never)
    return {"lens": row.lens, "structure": row.structure, "clock": row.clock,
            "seen_deg": [list(interval) for interval in cut.seen_deg], "cause_below": first, "cause_above": last,
            "causes": [list(pair) for pair in cut.causes]}
