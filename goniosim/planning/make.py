"""Make the plan of a scene, step by step, each step one call to the package that owns it."""

from __future__ import annotations

from typing import Callable

import numpy as np

from ..eye.structures import ANGLE_STRUCTURES
from ..sight.cutoffs import cutoffs
from ..sight.landing import MISSED, Landing, land
from ..sight.paths import LightPath, Scoped
from ..sight.scene import Scene
from ..sight.sighting import Sighting, Viewer
from ..sight.target import Target, structure_target, target_of
from .aim import aim_correction, gap_table
from .bench import bench_notes
from .neutral import neutral_line
from .record import CutoffRow, Plan
from .ring import clock_ring

STEPS = ("looking for light paths", "sightings", "cut-offs", "clock ring", "aim and gaps")
RING_STRUCTURE = "pigmented-meshwork"


def make_plan(scene: Scene, progress: Callable[[str, int, int], None] | None = None) -> Plan:
    """Plan a scene. progress, where given, is called with (step in words, steps done, steps in all)."""

    def tell(step: int) -> None:
        if progress is not None:
            progress(STEPS[step], step, len(STEPS))

    tell(0)
    viewer = Viewer(scene)
    target = target_of(scene.eye, scene.mapping["target"])
    targets = [target, *_neighbours(scene, target)]
    fans = [viewer.fan(each) for each in targets]
    scope = viewer.centre_on(target, fans[0])
    tell(1)
    sightings = tuple(viewer.sighting(each, scope, fan) for each, fan in zip(targets, fans))
    tell(2)
    rows = _cutoff_rows(scene, viewer, targets, fans)
    neutral = neutral_line(viewer, target, fans[0], rows[0].cut) if rows and target.on_wall else None
    tell(3)
    ring = tuple(clock_ring(viewer, scene.eye.ring_structure)) if scene.eye.ring_structure else ()
    tell(4)
    sighting = sightings[0]
    entry = _entry(scene)
    correction, gaps, from_entry = None, (), None
    if sighting.view is not None and entry is not None and target.on_wall:
        apparent = sighting.view.apparent_mm
        correction = aim_correction(target, apparent, entry)
        gaps = tuple(gap_table(viewer, scope, target, apparent, entry, sighting.view.middle.by))
        toward = (apparent - entry) / np.linalg.norm(apparent - entry)
        from_entry = land(scene.eye, entry, toward, target.arc_mm, target.clock)
    landing = _along_sight(scene, target, sighting)
    return Plan(scene, scope, target, sightings, landing, from_entry, entry, correction, gaps, tuple(rows), neutral,
                ring, _margins(scene, sighting), _notes(scene, sighting, landing))


def _neighbours(scene: Scene, target: Target) -> list[Target]:
    """The other structures of the target's clock hour, at their mid-lines, from the cornea to the iris."""
    if target.clock is None:
        return []
    names = [name for name in scene.eye.structures if name != target.structure]
    return [structure_target(scene.eye, name, target.clock) for name in names]


def _cutoff_rows(scene: Scene, viewer: Viewer, targets: list[Target], fans: list) -> list[CutoffRow]:
    """Cut-offs of every structure through the lens, then without one."""
    lens = "none" if scene.mapping["lens"] == "none" else scene.mapping["lens"]["use"]
    walled = [(target, fan) for target, fan in zip(targets, fans) if target.on_wall]
    rows = [CutoffRow(lens, target.structure, target.clock, cutoffs(viewer, target, fan)) for target, fan in walled]
    if lens == "none":
        return rows
    bare = Viewer(scene, scene.bare)
    bare.through = None
    return rows + [CutoffRow("none", target.structure, target.clock,
                             cutoffs(bare, target, bare.fan(target, coarse=40, refined=False)))
                   for target, _ in walled]


def _entry(scene: Scene) -> np.ndarray | None:
    """Where the tool goes in, or None without a tool."""
    tool = scene.mapping["tool"]
    if tool is None:
        return None
    return scene.eye.anatomy.entry_point(tool["entry"]["clock"], tool["entry"]["inside_limbus_mm"])


def _along_sight(scene: Scene, target: Target, sighting: Sighting):
    """The middle external ray, produced straight on into the eye."""
    if sighting.view is None:
        return MISSED
    path = sighting.view.middle
    return land(scene.eye, path.last_point_mm, -path.outward, target.arc_mm, target.clock)


def _margins(scene: Scene, sighting: Sighting) -> dict[str, dict[str, float]]:
    """For faces that work by total reflection: angle of incidence less critical angle, outside dry and wet."""
    if sighting.view is None:
        return {}
    path = sighting.view.middle
    return {face.name: _margin(scene, path, step, face)
            for step, (name, event) in enumerate(path.faces) if event == "reflected"
            and (face := scene.compiled.faces[scene.compiled.face_number[name]]).works_by == "total_reflection"}


def _margin(scene: Scene, path: LightPath, step: int, face) -> dict[str, float]:
    before = path.onward[step - 1] if step else path.first
    normal = face.rotation @ face.shape.normal(face.to_local(path.points_mm[step][None]))[0]
    incidence = np.degrees(np.arccos(np.clip(abs(before @ normal), 0.0, 1.0)))
    inside = next(body for body in scene.compiled.bodies if any(name == face.name for name, _ in body.sides))
    index = scene.media[inside.medium].index(scene.wavelength_nm)
    fluid = scene.mapping["lens"]["fluid"]
    wet = scene.media[fluid].index(scene.wavelength_nm) if fluid else 1.0
    return {"dry": float(incidence - np.degrees(np.arcsin(1.0 / index))),
            "wet": float(incidence - np.degrees(np.arcsin(min(wet / index, 1.0))))}


STEREO_FOCUS_NOTE_MM = 0.1


def _notes(scene: Scene, sighting: Sighting, landing: Landing) -> tuple[str, ...]:
    """What the reader must know beside the figures."""
    notes = list(scene.notes)
    foci, view = sighting.foci, sighting.view
    if view is not None and foci is not None and foci.separation_mm is not None:
        if foci.separation_mm > STEREO_FOCUS_NOTE_MM:
            notes.append(f"depth by stereo and depth by focus differ: the image's two foci lie "
                         f"{foci.separation_mm:.1f} mm apart along the line of sight")
    notes += bench_notes(scene.mapping["eye"]["definition"], scene.mapping["scope"]["tilt_deg"], landing)
    return tuple(notes)
