"""Light, lines of sight and the tool's lines in the plane of a cross-section; all are projected on it."""

from __future__ import annotations

import numpy as np

from ..planning.record import Plan
from ..planning.words import in_a_mirror, on_the_bench
from .outline import Meridian
from .palette import BLACK, BLUE, GREY, ORANGE, VERMILION
from .svg import Drawing

STOPPED_RAYS_DEG = tuple(range(-80, 81, 10))  # from the wall's normal, in the plane
ARC_MM = 4.0  # radius of the arc that shows the correction
OUT_MM = 1.5  # a ray that leaves in some other direction is drawn this far


def draw_lines(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Light, the undeviated line, the tool's lines, true and apparent points."""
    target, view = plane.flat(plan.target.point_mm)[0], plan.sighting.view
    if view is None:
        _stopped_light(drawing, plan, plane)
        drawing.dot(target, 5.0, BLACK, VERMILION, 1.4, ident="true")
        return
    _undeviated(drawing, plan, plane)
    if shows_tool(plan):
        _tool(drawing, plan, plane)
    light = plane.flat([plan.target.point_mm, *view.middle.points_mm, end_of_light(plan)])
    drawing.line(light, ORANGE, 3.0, ident="light")
    drawing.arrow(light[-1], light[-1] - light[-2], ORANGE, 14.0)
    image = plane.flat(view.apparent_mm)[0]
    drawing.line([target, image], GREY, 1.2, dash="2 4")
    drawing.dot(image, 7.0, VERMILION, "#ffffff", 2.6, ident="apparent")
    if plan.along_sight.point_mm is not None:
        drawing.cross(plane.flat(plan.along_sight.point_mm)[0], 6.0, BLACK, 2.2, ident="landing")
    drawing.dot(target, 5.0, BLACK, VERMILION, 1.4, ident="true")


def end_of_light(plan: Plan) -> np.ndarray:
    """Where the light is drawn to, beyond the last face, (3,) mm."""
    path = plan.sighting.view.middle
    return path.last_point_mm + (20.0 if on_the_bench(plan) else 3.5) * path.outward


def shows_tool(plan: Plan) -> bool:
    """Whether lines from the entry say something: not where the picture is reversed."""
    return plan.aim is not None and not in_a_mirror(plan)


def off_plane_mm(plan: Plan, plane: Meridian) -> float:
    """How far light and image lie off the plane at most."""
    view = plan.sighting.view
    if view is None:
        return 0.0
    square = np.cross(plane.across, [0.0, 0.0, 1.0])
    return float(np.abs(np.array([*view.middle.points_mm, view.apparent_mm]) @ square).max())


def _stopped_light(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Where the target is not seen: what becomes of its light in this plane, ray by ray."""
    target = plan.target
    if not target.on_wall or abs(plane.across @ target.clockwise) > 1e-6:
        return
    angles = np.radians(STOPPED_RAYS_DEG)[:, None]
    first = np.cos(angles) * target.normal + np.sin(angles) * target.anterior
    traces = plan.scene.trace(target.point_mm, first, paths=True)
    for faces, points, directions in zip(traces.path_faces, traces.path_points_mm, traces.path_directions):
        if not faces:
            continue
        leaves = faces[-1][1] != "absorbed"
        tail = [points[-1] + OUT_MM * directions[-1]] if leaves else []
        path = plane.flat([target.point_mm, *points, *tail])
        turned = _first_stray(plan, faces)
        if turned is not None:
            drawing.line(path[: turned + 2], ORANGE, 1.4)
            on = (
                path[turned + 1] + _unit(path[turned + 2] - path[turned + 1]) * OUT_MM
                if len(path) > turned + 2
                else None
            )
            if on is not None:
                drawing.line([path[turned + 1], on], ORANGE, 1.2, dash="2 3")
                drawing.arrow(on, on - path[turned + 1], ORANGE, 7.0)
            continue
        drawing.line(path, ORANGE, 1.4)
        if leaves:
            drawing.arrow(path[-1], path[-1] - path[-2], ORANGE, 9.0)


def _first_stray(plan: Plan, faces: list[tuple[str, str]]) -> int | None:
    """Number of the first face that turns the light back without being meant to."""
    known = {face.name: face for face in plan.scene.compiled.faces}
    for step, (name, event) in enumerate(faces):
        if event == "reflected" and known[name].finish != "mirror" and not known[name].works_by:
            return step
    return None


def _undeviated(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The line of sight produced straight on, to where it lands or to the image."""
    landed = plan.along_sight.point_mm
    end = landed if landed is not None else plan.sighting.view.apparent_mm
    drawing.line(
        plane.flat([plan.sighting.view.middle.last_point_mm, end]), BLACK, 1.5, dash="9 5", ident="undeviated"
    )


def _tool(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The straight tool from the entry: toward the image, toward the target, and the turn between."""
    entry, target, image = (
        plane.flat(point)[0]
        for point in (plan.entry_mm, plan.target.point_mm, plan.sighting.view.apparent_mm)
    )
    drawing.line([entry, image], BLUE, 1.5, dash="3 4", ident="aimed-at-image")
    drawing.line([entry, target], BLUE, 2.2, ident="corrected")
    radius = min(ARC_MM, 0.7 * np.hypot(*(image - entry)), 0.7 * np.hypot(*(target - entry)))
    drawing.line(_arc(entry, image, target, radius), BLUE, 1.6, ident="correction")
    drawing.dot(entry, 4.0, BLUE, "#ffffff", 2.0, ident="entry")


def _arc(centre: np.ndarray, start: np.ndarray, end: np.ndarray, radius: float) -> np.ndarray:
    """The arc about a centre from the way to one point to the way to another, (n, 2)."""
    a, b = (np.arctan2(*(point - centre)[::-1]) for point in (start, end))
    turn = (b - a + np.pi) % (2.0 * np.pi) - np.pi
    angles = a + np.linspace(0.0, 1.0, 17) * turn
    return centre + radius * np.stack([np.cos(angles), np.sin(angles)], axis=-1)


def _unit(vector: np.ndarray) -> np.ndarray:
    return vector / np.hypot(*vector)
