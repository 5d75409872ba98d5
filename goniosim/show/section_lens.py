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
LEAST_MM = 1e-6
WIDEST_MM = 10.0
COLUMNS, HALVINGS = 401, 18


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
        drawing.line(
            outline,
            BLACK,
            1.4,
            fill=SKY_BLUE if liquid else PALE,
            closed=True,
            opacity=0.3 if liquid else 0.7,
        )
    for body, outline in outlines:
        for name, _ in body.sides:
            face = _faces(plan)[name]
            if face.finish == "mirror" or face.works_by:
                on = np.abs(face.side_value(plane.solid(outline[:, 0], outline[:, 1]))) < ON_FACE_MM
                if on.sum() > 1:
                    drawing.line(outline[on], BLACK, 4.5)


def _lens_bodies(plan: Plan) -> tuple[Body, ...]:
    return plan.scene.compiled.bodies[len(plan.scene.eye.bodies) :]


def _faces(plan: Plan) -> dict:
    return {face.name: face for face in plan.scene.compiled.faces}


def _fluid(drawing: Drawing, body: Body, plan: Plan, plane: Meridian) -> None:
    """The fluid between cornea and lens, column by column: it may be as thin as a hair's breadth."""
    faces = _faces(plan)
    reach = min(WIDEST_MM, 0.999 * faces[CORNEA_FRONT].shape.equator_mm())
    u = np.linspace(-reach, reach, COLUMNS)
    floor = faces[CORNEA_FRONT].shape.sag(u * plane.across[0], u * plane.across[1])
    depth = _depth(body, faces, plane, u, floor)
    wet = (depth > LEAST_MM).astype(int)
    for run in np.split(np.arange(len(u)), np.flatnonzero(np.diff(wet)) + 1):
        if wet[run[0]]:
            top, bed = (np.stack([u[run], z], axis=-1) for z in (floor[run] + depth[run], floor[run]))
            drawing.line([*top, *bed[::-1]], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.55)


def _depth(body: Body, faces: dict, plane: Meridian, u: np.ndarray, floor: np.ndarray) -> np.ndarray:
    """Depth of the fluid in each column, mm, by halving; 0 where there is none."""

    def held(up: np.ndarray) -> np.ndarray:
        return on_right_side(body, faces, plane.solid(u, floor + up))

    low, high = np.full(len(u), LEAST_MM), np.full(len(u), DEEPEST_FLUID_MM)
    wet = held(low)
    for _ in range(HALVINGS):
        middle = 0.5 * (low + high)
        inside = held(middle)
        low, high = np.where(inside, middle, low), np.where(inside, high, middle)
    return np.where(wet, low, 0.0)
