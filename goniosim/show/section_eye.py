"""The eye, or the cup of the bench, in the plane of a cross-section."""

from __future__ import annotations

from dataclasses import dataclass

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
SURFACE_POINTS, IRIS_POINTS, FACE_POINTS, BAND_POINTS = 161, 32, 10, 7
INSIDE_MM = 1e-6  # kept off the ends of a lining


@dataclass(frozen=True)
class Side:
    """One side of the axis, each line (n, 2) mm: outer surface from the limbus on, ciliary face from the spur
    to the iris root, iris front from the pupil margin to the root and back again behind, bands by name from
    the posterior edge on.
    """

    outer: np.ndarray
    face: np.ndarray
    iris: np.ndarray
    bands: dict[str, np.ndarray]


@dataclass(frozen=True)
class EyeSection:
    """The eye in the plane, worked out once for the drawing and its inset. Lines are (n, 2) mm.

    front : the outer surface, limbus to limbus. back : the inner surface, spur to spur. own_lens : the front
    of the natural or artificial lens, or None. left, right : the sides of the axis as drawn.
    """

    front: np.ndarray
    back: np.ndarray
    own_lens: np.ndarray | None
    left: Side
    right: Side

    def side_at(self, u: float) -> Side:
        """The side that holds a distance across."""
        return self.right if u > 0.0 else self.left


def eye_section(plan: Plan, plane: Meridian) -> EyeSection:
    """Cornea, sclera, angle bands, iris and lens in the plane."""
    eye = plan.scene.eye
    limbus, spur, back = eye.anatomy.limbus_radius_mm, eye.anatomy.spur_r_mm, eye.faces["cornea-back"]
    inside = _surface(back.shape, plane, -spur, spur) + np.array([0.0, back.origin_mm[2]])
    front = _surface(eye.faces["cornea-front"].shape, plane, -limbus, limbus)
    return EyeSection(
        front, inside, _own_lens(plan, plane), *(_side(plan, plane, sign) for sign in (-1.0, 1.0))
    )


def draw_eye(drawing: Drawing, section: EyeSection, band_width: float = BAND_WIDTH) -> None:
    """Cornea, sclera, angle bands, iris and lens."""
    drawing.line([*section.front, *section.back[::-1]], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.18)
    for side in (section.left, section.right):
        _sclera(drawing, side)
    drawing.line(section.front, BLACK, 1.6)
    drawing.line(section.back, BLACK, 1.4)
    if section.own_lens is not None:
        drawing.line(section.own_lens, "none", 0, fill=PALE, closed=True, opacity=0.7)
        drawing.line(section.own_lens, GREY, 1.4)
    for side in (section.left, section.right):
        drawing.line(side.iris, BLACK, 1.2, fill=MIDDLE, closed=True)
        drawing.line(side.face, BLACK, 1.4)
        for name, points in side.bands.items():
            drawing.stripe(points, BANDS[name], band_width)


def _surface(shape, plane: Meridian, start: float, end: float) -> np.ndarray:
    """A surface of the cornea between two distances from the axis, (n, 2)."""
    u = np.linspace(start, end, SURFACE_POINTS)
    return np.stack([u, shape.sag(u * plane.across[0], u * plane.across[1])], axis=-1)


def _side(plan: Plan, plane: Meridian, sign: float) -> Side:
    """Lines of one side of the axis."""
    anatomy = plan.scene.eye.anatomy
    hour = clock_of(*(sign * plane.across[:2]))
    lining = anatomy.lining(hour)

    def along(low: float, high: float, count: int) -> np.ndarray:
        return plane.flat([anatomy.wall_point(arc, hour) for arc in np.linspace(low, high, count)])

    front = plan.scene.eye.faces["cornea-front"].shape
    outer = _surface(front, plane, sign * anatomy.limbus_radius_mm, sign * EDGE_MM)
    iris = along(lining.margin_mm + INSIDE_MM, lining.root_mm - INSIDE_MM, IRIS_POINTS)
    bands = {
        name: along(*anatomy.band(name, hour), BAND_POINTS)
        for name in plan.scene.eye.structures
        if name != "iris-root"
    }
    face = along(0.0, lining.root_mm + INSIDE_MM, FACE_POINTS)
    return Side(outer, face, np.concatenate([iris, _behind(plan, iris)[::-1]]), bands)


def _behind(plan: Plan, front: np.ndarray) -> np.ndarray:
    """The back of the iris behind points of its front, (n, 2)."""
    back = plan.scene.eye.faces["iris-back"]
    pieces = back.shape.lower().pieces
    r = np.abs(front[:, 0])
    at = np.clip(np.searchsorted(pieces[:, 0], r, side="right") - 1, 0, len(pieces) - 1)
    w = r - pieces[at, 0]
    z = pieces[at, 2] + w * (pieces[at, 3] + w * (pieces[at, 4] + w * pieces[at, 5])) + back.origin_mm[2]
    return np.stack([front[:, 0], z], axis=-1)


def _sclera(drawing: Drawing, side: Side) -> None:
    """The white of the eye on one side: what lies behind the limbus lets no light through."""
    outer = side.outer
    along = (outer[-1] - outer[-2]) / np.hypot(*(outer[-1] - outer[-2]))
    inward = WALL_MM * np.array([along[1], -along[0]]) * np.sign(along[0])
    polygon = [*outer, outer[-1] + inward, *side.face[::-1]]
    drawing.line(polygon, "none", 0, fill=MIDDLE, closed=True, opacity=0.45)
    drawing.line(outer, GREY, 2.4)


def _own_lens(plan: Plan, plane: Meridian) -> np.ndarray | None:
    """The front of the natural or artificial lens, where there is one."""
    faces = plan.scene.eye.faces
    if "lens-front" not in faces:
        return None
    face = faces["lens-front"]
    edge = min(LENS_MM, 0.999 * face.shape.equator_mm())
    if "lens-equator" in faces:
        edge = min(edge, faces["lens-equator"].shape.radius_mm)
    u = np.linspace(-edge, edge, SURFACE_POINTS)
    flat = np.stack([u * plane.across[0], u * plane.across[1], np.zeros_like(u)], axis=-1)
    return np.stack([u, face.origin_mm[2] - face.shape.side_value(flat)], axis=-1)


def own_lens_label(plan: Plan) -> tuple[tuple[float, float], str] | None:
    """Where the eye's own lens is named, and what."""
    faces = plan.scene.eye.faces
    if "lens-front" not in faces:
        return None
    kind = plan.scene.mapping["eye"]["definition"]["lens"]["kind"]
    return (0.0, float(faces["lens-front"].origin_mm[2])), f"{kind} lens"


def draw_cup(drawing: Drawing, plan: Plan) -> None:
    """Water, wall and floor of a cup."""
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low, high = (
        cup["inside_radius_mm"],
        -cup["water_above_mark_mm"] - cup["water_below_mark_mm"],
        cup["wall_above_water_mm"],
    )
    drawing.line([(-r, 0), (-r, low), (r, low), (r, 0)], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.2)
    drawing.line([(-r, 0), (r, 0)], BLUE, 1.6)
    drawing.line([(-r, high), (-r, low), (r, low), (r, high)], BLACK, 4.0)


def reach_of_eye(plan: Plan) -> np.ndarray:
    """Corners of the part of an eye that is drawn, (2, 2) mm."""
    front = plan.scene.eye.faces["cornea-front"].shape
    z = float(
        min(np.min(front.sag(EDGE_MM * np.cos(a), EDGE_MM * np.sin(a))) for a in np.linspace(0.0, np.pi, 5))
    )
    lens = plan.scene.eye.faces.get("lens-front")
    low = min(z - WALL_MM, -5.0, float(lens.origin_mm[2]) - 1.0 if lens else 0.0)
    return np.array([[-EDGE_MM, low], [EDGE_MM, 0.5]])


def reach_of_cup(plan: Plan) -> np.ndarray:
    """Corners of a cup and the air over it, (2, 2) mm."""
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low = cup["inside_radius_mm"] + 3.0, -cup["water_above_mark_mm"] - cup["water_below_mark_mm"] - 3.0
    return np.array([[-r, low], [r, cup["wall_above_water_mm"] + 20.0]])
