"""A lens plugin's mapping to placed faces and bodies, in the lens's own frame or on an eye."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Mapping

import numpy as np

from ..errors import Fault
from ..faces import SHAPES
from ..frames import lean_toward, rotation_about
from .bodies import Body, Face

CORNEA_SHAPE = "cornea"


@dataclass(frozen=True)
class Pose:
    """A rigid transform from the lens frame to the eye frame: rotation (3, 3), then shift_mm (3,)."""

    rotation: np.ndarray
    shift_mm: np.ndarray

    def moved_along_z(self, by_mm: float) -> "Pose":
        """The same pose slid along the eye's z."""
        return replace(self, shift_mm=self.shift_mm + np.array([0.0, 0.0, by_mm]))


def pose_on_eye(mark_at_clock: float, decentre_mm, tip_deg: float, tip_toward_clock: float) -> Pose:
    """Pose of a lens whose 12 o'clock lies at a clock hour of the eye, moved, then leaned about its vertex."""
    turn = rotation_about(np.array([0.0, 0.0, 1.0]), -30.0 * mark_at_clock)
    return Pose(lean_toward(tip_toward_clock, tip_deg) @ turn, np.array([decentre_mm[0], decentre_mm[1], 0.0]))


def lean_of(face: Mapping) -> np.ndarray:
    """Rotation of a face about its vertex in the lens frame; a mirror angle means a lean of 180 less it."""
    mirror_angle = face.get("mirror_angle_deg")
    lean = 180.0 - mirror_angle if mirror_angle is not None else (face.get("lean_deg") or 0.0)
    return lean_toward(face.get("lean_toward_clock") or 12.0, lean)


def borrows_cornea(lens: Mapping) -> bool:
    """Whether a face of the lens is the eye's front surface (a pool)."""
    return any(face.get("shape") == CORNEA_SHAPE for body in lens["bodies"] for face in body["faces"])


def contact_of(lens: Mapping) -> tuple[int, int] | None:
    """Body and face number of the contact face: named `contact`, else ahead with its vertex at the origin."""
    rows = [(b, f, face) for b, body in enumerate(lens["bodies"]) for f, face in enumerate(body["faces"])
            if face.get("shape") is not None]
    for b, f, face in rows:
        if face["name"] == "contact":
            return b, f
    for b, f, face in rows:
        if face["side"] == "ahead" and not np.any(face.get("vertex_mm") or (0.0, 0.0, 0.0)):
            return b, f
    return None


def placed_face(face: Mapping, pose: Pose, room_vertical: np.ndarray, cornea: Face) -> Face:
    """One face of a lens at its place on the eye."""
    if face["shape"] == CORNEA_SHAPE:
        return cornea
    rotation = pose.rotation @ lean_of(face)
    if face.get("level"):
        rotation = _rotation_to(room_vertical)
    return Face(
        name=face["name"],
        shape=SHAPES[face["shape"]].from_mapping(face),
        rotation=rotation,
        origin_mm=pose.rotation @ np.asarray(face.get("vertex_mm") or (0.0, 0.0, 0.0), dtype=float) + pose.shift_mm,
        finish=face.get("finish") or "clear",
        reflectance=face.get("reflectance"),
        works_by=face.get("works_by"),
    )


def _rotation_to(direction: np.ndarray) -> np.ndarray:
    """The least rotation that takes +z to a unit vector."""
    axis = np.array([-direction[1], direction[0], 0.0])
    sine = float(np.linalg.norm(axis))
    if sine < 1e-15:
        return np.eye(3) if direction[2] > 0.0 else rotation_about(np.array([1.0, 0.0, 0.0]), 180.0)
    return rotation_about(axis / sine, float(np.degrees(np.arctan2(sine, direction[2]))))


def lens_parts(lens: Mapping, pose: Pose, room_vertical: np.ndarray, cornea: Face) -> tuple[dict, list[Body]]:
    """Faces by name and bodies of a lens on an eye; names that would clash with the eye's are refused earlier."""
    faces, bodies = {}, []
    for body in lens["bodies"]:
        sides = []
        for face in body["faces"]:
            if face.get("shape") is not None:
                placed = placed_face(face, pose, room_vertical, cornea)
                faces[placed.name] = placed
                sides.append((placed.name, face["side"]))
            else:
                sides.append((face["name"], face["side"]))
        bodies.append(Body(body["name"], body["medium"], tuple(sides)))
    return faces, bodies


def fluid_body(lens: Mapping, medium: str, cornea_name: str) -> Body:
    """What fills the room between contact face and cornea, inside the other faces of the contact's body."""
    b, f = contact_of(lens)
    body = lens["bodies"][b]
    contact = body["faces"][f]
    edges = [(face["name"], face["side"]) for i, face in enumerate(body["faces"]) if i != f]
    return Body("fluid", medium, ((contact["name"], "behind"), (cornea_name, "ahead"), *edges))


def name_clashes(lens: Mapping, taken: set[str]) -> list[Fault]:
    """Faces of a lens that carry a name of the eye's own: a path could not tell them apart."""
    return [Fault(f"bodies[{b}].faces[{f}].name", f"'{face['name']}' is the name of a face of the eye; choose another")
            for b, body in enumerate(lens["bodies"]) for f, face in enumerate(body["faces"])
            if face.get("shape") not in (None, CORNEA_SHAPE) and face["name"] in taken]
