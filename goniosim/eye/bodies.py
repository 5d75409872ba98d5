"""Faces and bodies of a built eye.

The chamber is closed by faces with ends (no half-spaces): cornea and wall, ciliary face, front, margin and
back of the iris, lens, zonule and ciliary wall; it takes any ray that a neighbour hands it. Behind the lens
the vitreous runs to an opaque retina, so that every ray ends somewhere.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Mapping

import numpy as np

from ..faces import AnnularPlane, Conic, Cylinder, Profile, RingArc
from ..scene.bodies import OPAQUE, Body, Face
from .bubble import LEVEL, level_face
from .completing import chamber_medium
from .cornea import EYEBALL_MM, Cornea
from .iris import Iris
from .lens import EyeLens
from .limbus import limbus_face
from .recess import ARC_RADIUS_MM, Recess

RETINA_RADIUS_MM = 12.0  # Navarro's eye, retina R -12.0 (Escudero-Sanz & Navarro 1999, from memory)
SEAM_MM = 1e-9  # ends of faces overlap by this much


@dataclass(frozen=True)
class Parts:
    """The solved parts of an eye."""

    cornea: Cornea
    recess: Recess
    iris: Iris
    lens: EyeLens


def eye_faces(eye: Mapping, parts: Parts, tallest_mm: float, vertical: np.ndarray) -> dict[str, Face]:
    """Every face of the eye by name. tallest_mm : the tallest meshwork; vertical : the room's, in the eye
    frame.
    """
    faces = [
        *_cornea_faces(parts, tallest_mm),
        *_iris_faces(parts),
        *_lens_faces(parts),
        *_vitreous_faces(eye, parts),
    ]
    if eye["chamber"]["fill"] == "air-bubble":
        faces.append(level_face(parts.cornea, vertical, eye["chamber"]["bubble_height_mm"]))
    return {face.name: face for face in faces}


def eye_bodies(eye: Mapping, parts: Parts) -> list[Body]:
    """Bodies of the eye: cornea, sclera, chamber (and bubble), lens, vitreous."""
    media = eye["media"]
    cornea = Body(
        "cornea",
        media["cornea"],
        (("cornea-front", "behind"), ("cornea-back", "ahead"), ("limbus", "behind")),
    )
    sclera = Body("sclera", OPAQUE, (("cornea-front", "behind"), ("limbus", "ahead")))
    return [cornea, sclera, *_chamber_bodies(eye, parts), *_rear_bodies(media, parts)]


def chamber_sides(parts: Parts) -> tuple[tuple[str, str], ...]:
    """Faces that close the chamber, and the side of each on which the chamber lies."""
    front = (
        ("cornea-back", "behind"),
        ("ciliary-face", "behind"),
        ("iris-front", "ahead"),
        ("iris-margin", "behind"),
        ("iris-back", "behind"),
        ("ciliary-wall", "behind"),
    )
    if not parts.lens.present:
        return (*front, ("vitreous-front", "ahead"))
    return (*front, ("lens-front", "ahead"), ("lens-equator", "ahead"), ("zonule", "ahead"))


def _chamber_bodies(eye: Mapping, parts: Parts) -> list[Body]:
    # A level plane and the vitreous reach farther out than the chamber: light enters only inside its walls.
    inside = (("cornea-back", "behind"), ("ciliary-wall", "behind"))
    sides, medium = chamber_sides(parts), chamber_medium(eye)
    if eye["chamber"]["fill"] != "air-bubble":
        return [Body("chamber", medium, sides, inside, open_to_air=False)]
    below, above = ((LEVEL, "behind"),), ((LEVEL, "ahead"),)
    return [
        Body("chamber", medium, sides + below, inside + below, open_to_air=False),
        Body("bubble", "air", sides + above, inside + above, open_to_air=False),
    ]


def _rear_bodies(media: Mapping, parts: Parts) -> list[Body]:
    shell = (("vitreous-wall", "behind"), ("retina", "ahead"))
    if not parts.lens.present:
        return [
            Body("vitreous", media["vitreous"], (("vitreous-front", "behind"), *shell), (), open_to_air=False)
        ]
    lens = Body(
        "lens",
        media["lens"],
        (("lens-front", "behind"), ("lens-back", "ahead"), ("lens-equator", "behind")),
        open_to_air=False,
    )
    sides = (("lens-back", "behind"), ("lens-equator", "ahead"), ("zonule", "behind"), *shell)
    return [lens, Body("vitreous", media["vitreous"], sides, (), open_to_air=False)]


def _at_height(z: float) -> np.ndarray:
    return np.array([0.0, 0.0, z])


def _cornea_faces(parts: Parts, tallest_mm: float) -> list[Face]:
    cornea, recess = parts.cornea, parts.recess
    arc = RingArc(
        float(recess.centre[0]),
        ARC_RADIUS_MM,
        math.degrees(recess.root_angle),
        math.degrees(recess.spur_angle),
    )
    return [
        Face("cornea-front", cornea.front),
        Face("cornea-back", cornea.back, origin_mm=_at_height(-cornea.thickness_mm), beyond="opaque"),
        limbus_face(cornea, tallest_mm),
        Face(
            "ciliary-face",
            arc,
            origin_mm=_at_height(float(recess.centre[1])),
            finish="opaque",
            beyond="opaque",
        ),
    ]


def _iris_faces(parts: Parts) -> list[Face]:
    iris, lens = parts.iris, parts.lens
    r_margin, r_root = float(iris.margin[0]), float(iris.root[0])
    floor = lens.zonule_z_mm
    heights = (float(iris.back_root_z), float(iris.root[1]), floor)
    opaque = {"finish": "opaque", "beyond": "opaque"}
    return [
        Face("iris-front", Profile([[r_margin, r_root, *iris.front]]), **opaque),
        Face(
            "iris-margin",
            Cylinder(r_margin, float(iris.back[0]) - SEAM_MM, float(iris.front[0]) + SEAM_MM),
            **opaque,
        ),
        Face("iris-back", Profile([[r_margin, r_root, *iris.back]]), **opaque),
        Face("ciliary-wall", Cylinder(r_root, min(heights) - SEAM_MM, max(heights) + SEAM_MM), **opaque),
    ]


def _lens_faces(parts: Parts) -> list[Face]:
    lens = parts.lens
    if not lens.present:
        return [
            Face(
                "vitreous-front",
                AnnularPlane(0.0, EYEBALL_MM),
                origin_mm=_at_height(lens.front_z_mm),
                beyond="opaque",
            )
        ]
    low, high = lens.back_edge_z_mm, lens.front_edge_z_mm
    return [
        Face(
            "lens-front",
            Conic(lens.front_radius_mm, lens.front_q, lens.radius_mm),
            origin_mm=_at_height(lens.front_z_mm),
            beyond="opaque",
        ),
        Face(
            "lens-back",
            Conic(-lens.back_radius_mm, lens.back_q, lens.radius_mm),
            origin_mm=_at_height(lens.back_z_mm),
            beyond="opaque",
        ),
        Face(
            "lens-equator",
            Cylinder(lens.radius_mm, low - SEAM_MM, high + SEAM_MM),
            finish="opaque",
            beyond="opaque",
        ),
        Face(
            "zonule",
            AnnularPlane(lens.radius_mm, EYEBALL_MM),
            origin_mm=_at_height(lens.zonule_z_mm),
            finish="opaque",
            beyond="opaque",
        ),
    ]


def _vitreous_faces(eye: Mapping, parts: Parts) -> list[Face]:
    length, top = eye["axial_length_mm"], parts.lens.zonule_z_mm
    radius = min(RETINA_RADIUS_MM, 0.5 * length)
    return [
        Face("retina", Conic(-radius, 0.0), origin_mm=_at_height(-length), finish="opaque", beyond="opaque"),
        Face(
            "vitreous-wall",
            Cylinder(radius, -length + radius - SEAM_MM, top + SEAM_MM),
            finish="opaque",
            beyond="opaque",
        ),
    ]
