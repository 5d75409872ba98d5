"""Facts of the trade, on the shipped eyes and lenses."""

from __future__ import annotations

from functools import lru_cache, partial

import numpy as np

from ... import load_scene, plan
from ...frames import from_axis_deg
from ...shipped import shipped_folder
from ...sight.target import structure_target
from ..check import ABOVE, BELOW, COMPUTED, EXACT, PRACTICE, VERIFIED, Check, Measured
from ..real_rays import over_hemisphere, shipped_scene

DUANE = "Duane's Clinical Ophthalmology v3 ch44 Fig. 2b"
ACCESSIBLE_DEG = 90.0  # a line of sight beyond this runs through the other side of the face


def _scene(lens="none", eye="adult-open", target=None, **blocks):
    """A right eye with straight head and microscope unless told otherwise."""
    mapping = {"goniosim": "scene", "schema": 1, "name": "trade", "eye": {"use": eye, "side": "right"},
               "lens": lens, "surgeon": {"seat_clock": 9},
               "target": target or {"structure": "pigmented-meshwork", "clock": 3}, **blocks}
    return load_scene(mapping, plugin_folders=[shipped_folder("plugins")])


def _on_eye(lens: str, fluid: str | None = "saline") -> dict:
    """A lens with its mark at 9 o'clock."""
    return {"use": lens, "mark_at_clock": 9, **({"gap_um": 20, "fluid": fluid} if fluid else {})}


def lowest_bare_exit_deg() -> Measured:
    """Least angle from the eye's axis at which light of the meshwork leaves a bare cornea, at four clock hours."""
    scene, least, rays = shipped_scene("no-lens"), 180.0, 0
    for clock in (3, 6, 9, 12):
        target = structure_target(scene.eye, "pigmented-meshwork", clock)
        traces = scene.trace(target.point_mm, over_hemisphere(target.normal, 20000))
        leaves = traces.directions[(traces.status == 0) & ~traces.stray]
        rays += len(traces.status)
        least = np.min([least, *(from_axis_deg(direction) for direction in leaves)])
    return Measured(least, rays)


def parting_incidence_deg() -> Measured:
    """Greatest incidence on the bare cornea's front that gets out, and least that does not."""
    scene = shipped_scene("no-lens")
    starts = np.repeat([[x, 0.0, -3.0] for x in (0.0, 1.5, 3.0, 4.5)], 1500, axis=0)
    traces = scene.trace(starts, over_hemisphere(np.array([0.0, 0.0, 1.0]), len(starts)), paths=True)
    passed, kept = [0.0], [90.0]
    front = scene.eye.faces["cornea-front"]
    for names, points, onward in zip(traces.path_faces, traces.path_points_mm, traces.path_directions):
        if len(names) < 2 or names[1][0] != "cornea-front":
            continue
        normal = front.rotation @ front.shape.normal(front.to_local(points[1][None]))[0]
        incidence = np.degrees(np.arccos(abs(normal @ onward[0])))
        if names[1][1] == "through":
            passed.append(incidence)
        elif names[1][1] == "reflected":
            kept.append(incidence)
    return Measured((max(passed), min(kept)), len(passed) + len(kept) - 2)


def shift_with_air_everywhere_mm() -> Measured:
    """Displacement of the meshwork where eye, fluid and lens all have the index of air."""
    names = ("cornea", "aqueous", "lens-equivalent", "vitreous", "saline", "pmma")
    air = {name: {"goniosim": "medium", "schema": 1, "name": name, "title": "air in place of it",
                  "source": "made for this check", "model": "constant", "index": 1.0} for name in names}
    scene = _scene(_on_eye("direct-face-48"), media=air, scope={"use": "stereo-200", "tilt_deg": 35},
                   head={"turn_deg": 35, "turn_toward": "left"})
    return Measured(np.linalg.norm(_shift(plan(scene))), 3)


def sideways_shift_squarely_mm(lens) -> Measured:
    """Sideways displacement of a point of the axis looked at straight along it."""
    scene = _scene(lens, target={"point_mm": [0.0, 0.0, -2.0]}, scope={"use": "stereo-200", "tilt_deg": 0})
    return Measured(np.hypot(*_shift(plan(scene))[:2]), 3)


def _shift(made) -> np.ndarray:
    view = made.sighting.view
    return view.apparent_mm - made.target.point_mm


@lru_cache(maxsize=None)
def _pool_plan(tilt_deg: float):
    return plan(_scene({"use": "saline-pool", "mark_at_clock": 9}, scope={"use": "stereo-200",
                                                                          "tilt_deg": tilt_deg},
                       head={"turn_deg": 30, "turn_toward": "left"},
                       tool={"use": "straight-23g", "entry": {"clock": 9, "inside_limbus_mm": 1.0}}))


def pool_anterior_mm(tilt_deg: float) -> Measured:
    """How much more anterior the meshwork seems through a level pool than it is."""
    return Measured(_pool_plan(tilt_deg).to_dict()["sightings"][0]["seems_anterior_mm"], 3)


def pool_landing_mm(tilt_deg: float) -> Measured:
    """How much too anterior a tool lands that is sent from the entry at what is seen through a level pool."""
    return Measured(_pool_plan(tilt_deg).from_entry.anterior_mm, 3)


def flat_face_anterior_mm(line_of_sight_deg: float) -> Measured:
    """How much more anterior the meshwork seems through the flat face leaned 48 deg, along a line of sight."""
    scene = _scene(_on_eye("direct-face-48"), scope={"use": "stereo-200",
                                                     "tilt_deg": line_of_sight_deg - 35.0},
                   head={"turn_deg": 35, "turn_toward": "left"})
    return Measured(plan(scene).to_dict()["sightings"][0]["seems_anterior_mm"], 3)


COMMON = "common practice"
TRIAL = "geometry: between aqueous and a denser flat lens light bends too"

CHECKS = [
    Check("no accessible line of sight shows the meshwork through a bare cornea", COMMON, PRACTICE,
          ACCESSIBLE_DEG, 0.0, "deg", lowest_bare_exit_deg, ABOVE),
    Check("light gets out of the cornea below about 46.5 deg of incidence, and none above", DUANE, VERIFIED,
          (46.5, 46.5), 0.25, "deg", parting_incidence_deg),
    Check("with air on both sides of everything nothing is displaced", COMMON, PRACTICE, 0.0, 1e-9, "mm",
          shift_with_air_everywhere_mm),
    Check("squarely through the bare cornea nothing is displaced sideways", COMMON, PRACTICE, 0.0, 1e-9, "mm",
          partial(sideways_shift_squarely_mm, "none")),
    Check("squarely through a dome nothing is displaced sideways", COMMON, PRACTICE, 0.0, 1e-9, "mm",
          lambda: sideways_shift_squarely_mm(_on_eye("direct-dome-pmma"))),
    Check("squarely through a level pool nothing is displaced sideways", COMMON, PRACTICE, 0.0, 1e-9, "mm",
          lambda: sideways_shift_squarely_mm({"use": "saline-pool", "mark_at_clock": 9})),
    Check("through a level pool, microscope leaned 15 and 30 deg, the meshwork seems too anterior", COMMON,
          PRACTICE,
          (0.0, 0.0), 0.1, "mm", lambda: [pool_anterior_mm(tilt).got for tilt in (15.0, 30.0)], ABOVE),
    Check("a tool sent from the entry at what is seen there lands too anterior", COMMON, PRACTICE, (0.0, 0.0),
          0.1, "mm", lambda: [pool_landing_mm(tilt).got for tilt in (15.0, 30.0)], ABOVE),
    Check("squarely through a flat PMMA face leaned 48 deg the meshwork seems posterior", TRIAL, COMPUTED,
          0.0, 0.1, "mm", partial(flat_face_anterior_mm, 48.0), BELOW),
    Check("and along a line of sight of 80 deg anterior", TRIAL, COMPUTED, 0.0, 0.1, "mm",
          partial(flat_face_anterior_mm, 80.0), ABOVE),
]
