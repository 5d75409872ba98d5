"""The lens on the eye, and the fluid under it, in the plane of a cross-section."""

from __future__ import annotations

import numpy as np

from ..planning.record import Plan
from ..scene.bodies import Body
from ..scene.checks import on_right_side
from .outline import Meridian, body_outline
from .palette import BLACK, PALE, SKY_BLUE
from .svg import Drawing

CORNEA_FRONT = "cornea-front"
ON_FACE_MM = 0.02
DEEPEST_FLUID_MM = 4.0


def lens_outlines(plan: Plan, plane: Meridian) -> list[tuple[Body, np.ndarray]]:
    """Bodies of the lens with their outlines in the plane."""
    rows = []
    for body in _lens_bodies(plan):
        if body.name != "fluid":
            outline = body_outline(body, _faces(plan), plane)
            if outline is not None:
                rows.append((body, outline))
    return rows


def draw_lens(drawing: Drawing, plan: Plan, plane: Meridian, outlines: list[tuple[Body, np.ndarray]]) -> None:
    """Fluid, bodies lightly filled (a pool as the liquid it is), and mirrors drawn heavy."""
    for body in _lens_bodies(plan):
        if body.name == "fluid":
            _fluid(drawing, body, plan, plane)
    for body, outline in outlines:
        liquid = any(name == CORNEA_FRONT for name, _ in body.sides)
        drawing.line(outline, BLACK, 1.4, fill=SKY_BLUE if liquid else PALE, closed=True, opacity=0.3 if liquid else 0.7)
    for body, outline in outlines:
        for name, _ in body.sides:
            face = _faces(plan)[name]
            if face.finish == "mirror" or face.works_by:
                on = np.abs(face.side_value(plane.solid(outline[:, 0], outline[:, 1]))) < ON_FACE_MM
                if on.sum() > 1:
                    drawing.line(outline[on], BLACK, 4.5)


def _lens_bodies(plan: Plan) -> tuple[Body, ...]:
    return plan.scene.compiled.bodies[len(plan.scene.eye.bodies):]


def _faces(plan: Plan) -> dict:
    return {face.name: face for face in plan.scene.compiled.faces}


def _fluid(drawing: Drawing, body: Body, plan: Plan, plane: Meridian) -> None:
    """The fluid between cornea and lens, column by column: it may be as thin as a hair's breadth."""
    faces = _faces(plan)
    u = np.linspace(-10.0, 10.0, 501)
    u = u[np.abs(u) < min(10.0, 0.999 * faces[CORNEA_FRONT].shape.equator_mm())]
    floor = faces[CORNEA_FRONT].shape.sag(u * plane.across[0], u * plane.across[1])
    up = np.concatenate([[1e-6], np.linspace(0.01, DEEPEST_FLUID_MM, 400)])
    points = plane.solid(*np.broadcast_arrays(u[:, None], floor[:, None] + up))
    held = on_right_side(body, faces, points).reshape(len(u), len(up))
    depth = np.where(held.all(axis=1), DEEPEST_FLUID_MM, up[np.argmin(held, axis=1)])
    for run in np.split(np.arange(len(u)), np.flatnonzero(np.diff(held[:, 0].astype(int))) + 1):
        if held[run[0], 0]:
            top = np.stack([u[run], floor[run] + depth[run]], axis=-1)
            drawing.line([*top, *np.stack([u[run], floor[run]], axis=-1)[::-1]], "none", 0, fill=SKY_BLUE, closed=True,
                         opacity=0.55)
