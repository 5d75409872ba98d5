"""The eye, or the cup of the bench, in the plane of a cross-section."""

from __future__ import annotations

import numpy as np

from ..frames import clock_of
from ..planning.record import Plan
from .outline import Meridian
from .palette import BANDS, BLACK, BLUE, GREY, MIDDLE, PALE, SKY_BLUE
from .svg import Drawing

EDGE_MM = 8.0  # the outer surface is drawn this far from the axis
WALL_MM = 0.9  # thickness of the sclera as drawn; the model has no inner border there
LENS_MM = 4.6  # the eye's own lens is drawn this far from the axis
BAND_WIDTH = 5.0


def draw_eye(drawing: Drawing, plan: Plan, plane: Meridian, band_width: float = BAND_WIDTH) -> None:
    """Cornea, sclera, angle bands, iris and lens in the plane."""
    front = plan.scene.eye.faces["cornea-front"].shape
    limbus = plan.scene.eye.anatomy.limbus_radius_mm
    inside = _wall(plan, plane)
    middle = _outer(front, plane, -limbus, limbus)
    drawing.line([*middle, *inside[::-1]], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.18)
    for sign in (-1.0, 1.0):
        hour = clock_of(*(sign * plane.across[:2]))
        _sclera(drawing, plan, plane, hour, _outer(front, plane, sign * limbus, sign * EDGE_MM))
    drawing.line(middle, BLACK, 1.6)
    drawing.line(inside, BLACK, 1.4)
    _own_lens(drawing, plan, plane)
    for sign in (-1.0, 1.0):
        hour = clock_of(*(sign * plane.across[:2]))
        _iris(drawing, plan, plane, hour)
        _bands(drawing, plan, plane, hour, band_width)


def band_line(plan: Plan, plane: Meridian, name: str, hour: float) -> np.ndarray:
    """A band of the angle in the plane, (n, 2) mm, from its posterior edge on."""
    anatomy = plan.scene.eye.anatomy
    low, high = anatomy.band(name, hour)
    return plane.flat([anatomy.wall_point(arc, hour) for arc in np.linspace(low, high, 12)])


def _outer(front, plane: Meridian, start: float, end: float) -> np.ndarray:
    """The eye's outer surface between two distances from the axis, (n, 2)."""
    u = np.linspace(start, end, 241)
    return np.stack([u, front.sag(u * plane.across[0], u * plane.across[1])], axis=-1)


def _wall(plan: Plan, plane: Meridian) -> np.ndarray:
    """The inner surface of cornea and wall, spur to spur, (n, 2)."""
    back, r = plan.scene.eye.faces["cornea-back"], plan.scene.eye.anatomy.spur_r_mm
    u = np.linspace(-r, r, 301)
    return np.stack([u, back.origin_mm[2] + back.shape.sag(u * plane.across[0], u * plane.across[1])], axis=-1)


def _sclera(drawing: Drawing, plan: Plan, plane: Meridian, hour: float, outer: np.ndarray) -> None:
    """The white of the eye on one side: what lies behind the limbus lets no light through."""
    anatomy = plan.scene.eye.anatomy
    lining = anatomy.lining(hour)
    face = plane.flat([anatomy.wall_point(arc, hour) for arc in np.linspace(0.0, lining.root_mm + 1e-9, 20)])
    drop = np.array([0.0, -WALL_MM])
    below = np.array([face[-1], [0.5 * (face[-1, 0] + outer[-1, 0]), outer[-1, 1]], outer[-1] + drop])
    drawing.line([*outer, *below[::-1], *face[::-1]], "none", 0, fill=MIDDLE, closed=True, opacity=0.45)
    drawing.line(outer, GREY, 2.4)


def _own_lens(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The natural or artificial lens, where there is one."""
    faces = plan.scene.eye.faces
    if "lens-front" not in faces:
        return
    face = faces["lens-front"]
    edge = min(LENS_MM, 0.999 * face.shape.equator_mm())
    if "lens-equator" in faces:
        edge = min(edge, faces["lens-equator"].shape.radius_mm)
    u = np.linspace(-edge, edge, 121)
    flat = np.stack([u * plane.across[0], u * plane.across[1], np.zeros_like(u)], axis=-1)
    z = face.origin_mm[2] - face.shape.side_value(flat)
    low = drawing.low[1]
    drawing.line([*np.stack([u, z], axis=-1), (edge, low), (-edge, low)], "none", 0, fill=PALE, closed=True, opacity=0.6)
    drawing.line(np.stack([u, z], axis=-1), GREY, 1.4)


def own_lens_label(plan: Plan) -> tuple[tuple[float, float], str] | None:
    """Where the eye's own lens is named, and what."""
    faces = plan.scene.eye.faces
    if "lens-front" not in faces:
        return None
    kind = plan.scene.mapping["eye"]["definition"]["lens"]["kind"]
    return (0.0, float(faces["lens-front"].origin_mm[2])), f"{kind} lens"


def _iris(drawing: Drawing, plan: Plan, plane: Meridian, hour: float) -> None:
    """Iris and ciliary face on one side."""
    anatomy = plan.scene.eye.anatomy
    lining = anatomy.lining(hour)
    arcs = np.linspace(lining.margin_mm + 1e-6, lining.root_mm - 1e-6, 60)
    front = plane.flat([anatomy.wall_point(arc, hour) for arc in arcs])
    back = plan.scene.eye.faces["iris-back"]
    pieces = back.shape.lower().pieces
    r = np.abs(front[:, 0])
    at = np.clip(np.searchsorted(pieces[:, 0], r, side="right") - 1, 0, len(pieces) - 1)
    w = r - pieces[at, 0]
    z = pieces[at, 2] + w * (pieces[at, 3] + w * (pieces[at, 4] + w * pieces[at, 5])) + back.origin_mm[2]
    under = np.stack([front[:, 0], z], axis=-1)
    drawing.line([*front, *under[::-1]], BLACK, 1.2, fill=MIDDLE, closed=True)
    face = [anatomy.wall_point(arc, hour) for arc in np.linspace(lining.root_mm + 1e-9, 0.0, 20)]
    drawing.line(plane.flat(face), BLACK, 1.4)


def _bands(drawing: Drawing, plan: Plan, plane: Meridian, hour: float, width: float) -> None:
    """Angle bands on the wall of one side."""
    for name in plan.scene.eye.structures:
        if name != "iris-root":
            points = band_line(plan, plane, name, hour)
            # Lines with square ends, so that a band is as long as it is; the ink lies on the wall's own line.
            path = " ".join(f"{x:.2f},{y:.2f}" for x, y in map(drawing.at, points))
            drawing.parts.append(f'<polyline points="{path}" fill="none" stroke="{BANDS[name]}" stroke-width="{width:g}"/>')


def draw_cup(drawing: Drawing, plan: Plan) -> None:
    """Water, wall and floor of a cup."""
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low, high = cup["inside_radius_mm"], -cup["water_above_mark_mm"] - cup["water_below_mark_mm"], cup["wall_above_water_mm"]
    drawing.line([(-r, 0), (-r, low), (r, low), (r, 0)], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.2)
    drawing.line([(-r, 0), (r, 0)], BLUE, 1.6)
    drawing.line([(-r, high), (-r, low), (r, low), (r, high)], BLACK, 4.0)


def reach_of_eye(plan: Plan) -> np.ndarray:
    """Corners of the part of an eye that is drawn, (2, 2) mm."""
    front = plan.scene.eye.faces["cornea-front"].shape
    z = float(min(np.min(front.sag(EDGE_MM * np.cos(a), EDGE_MM * np.sin(a))) for a in np.linspace(0.0, np.pi, 5)))
    return np.array([[-EDGE_MM, min(z - WALL_MM, -5.0)], [EDGE_MM, 0.5]])


def reach_of_cup(plan: Plan) -> np.ndarray:
    """Corners of a cup and the air over it, (2, 2) mm."""
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low = cup["inside_radius_mm"] + 3.0, -cup["water_above_mark_mm"] - cup["water_below_mark_mm"] - 3.0
    return np.array([[-r, low], [r, cup["wall_above_water_mm"] + 20.0]])
