"""A scene put together: the eye, the lens on it, the scope and the head, ready to trace."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, Mapping

import numpy as np

from ..errors import BadInput
from ..eye import BuiltEye
from ..frames import clock_direction, head_matrix, line_of_sight, picture_axes
from ..scene.bodies import Body
from ..scene.checks import check_lens
from ..scene.compile import CompiledScene
from ..scene.lens import borrows_cornea, fluid_body, lens_parts, name_clashes, pose_on_eye
from ..scene.seating import seated_pose
from ..scene.tracing import Traces, trace

CORNEA_FRONT = "cornea-front"


@dataclass
class Scene:
    """One case: what `goniosim.load_scene` returns and `goniosim.plan` plans.

    mapping : the resolved scene, plain data (DEVELOPERS.md, 'The resolved scene').
    marks : dotted path -> 'measured' | 'given' | 'assumed'.
    fingerprint : hash of all inputs. notes : what the reader was told while resolving.
    eye : the built eye. compiled : faces and bodies of eye, fluid and lens, as arrays.
    head : (3, 3), eye frame to room. sight : (3,), unit vector from eye to scope, eye frame.
    right, up : (3,), axes of the picture.
    """

    mapping: Mapping[str, Any]
    marks: Mapping[str, str]
    fingerprint: str
    notes: tuple[str, ...]
    eye: BuiltEye
    media: Mapping[str, Any]
    head: np.ndarray
    sight: np.ndarray
    right: np.ndarray
    up: np.ndarray
    compiled: CompiledScene = field(repr=False)

    @property
    def wavelength_nm(self) -> float:
        """Wavelength at which the plan is made, in nm."""
        return float(self.mapping["wavelength_nm"])

    @property
    def scope(self) -> Mapping[str, Any]:
        """The scope's own measures."""
        return self.mapping["scope"]["definition"]

    @property
    def settings(self) -> Mapping[str, Any]:
        """Floors and habits from configs/, room and scene."""
        return self.mapping["settings"]

    @cached_property
    def bare(self) -> CompiledScene:
        """The same eye without a lens, in air."""
        return CompiledScene(tuple(self.eye.faces.values()), tuple(self.eye.bodies), self.media)

    def trace(self, origins_mm, directions, wavelength_nm: float | None = None, paths: bool = False) -> Traces:
        """Trace rays through the scene; see `goniosim.scene.tracing.trace`."""
        return trace(self.compiled, origins_mm, directions, wavelength_nm or self.wavelength_nm, paths)


def assemble(mapping: Mapping[str, Any], marks: Mapping[str, str], fingerprint: str, notes=(), where="scene") -> Scene:
    """Build the eye, seat the lens and compile a resolved scene.

    Raises BadInput for a lens that cannot stand on this eye or is not closed by its faces.
    """
    from .. import eye as eye_package
    from ..optics.media import medium_from_mapping

    head = head_matrix(**mapping["head"], gaze_deg=mapping["gaze"]["deg"],
                       gaze_toward_clock=mapping["gaze"]["toward_clock"])
    seat = mapping["surgeon"]["seat_clock"]
    sight = line_of_sight(head, mapping["scope"]["tilt_deg"], seat)
    right, up = picture_axes(sight, head.T @ clock_direction(seat))
    media = {name: medium_from_mapping(medium) for name, medium in mapping["media"].items()}
    vertical = head.T @ np.array([0.0, 0.0, 1.0])
    eye = eye_package.build(mapping["eye"]["definition"], mapping["eye"]["side"], vertical)
    faces, bodies = dict(eye.faces), list(eye.bodies)
    if mapping["lens"] != "none":
        lens_faces, lens_bodies = lens_on_eye(mapping["lens"], eye, vertical, where)
        faces.update(lens_faces)
        bodies += lens_bodies
    compiled = CompiledScene(tuple(faces.values()), tuple(bodies), media)
    return Scene(mapping, marks, fingerprint, tuple(notes) + tuple(eye.notes), eye, media, head, sight, right, up,
                 compiled)


def lens_on_eye(lens: Mapping[str, Any], eye: BuiltEye, vertical: np.ndarray, where: str) -> tuple[dict, list[Body]]:
    """Faces and bodies of a lens, its fluid included, seated on an eye."""
    definition = lens["definition"]
    faults = name_clashes(definition, set(eye.faces))
    if faults:
        raise BadInput(f"lens {lens['use']}", faults)
    cornea = eye.faces[CORNEA_FRONT]
    pose = pose_on_eye(lens["mark_at_clock"], lens["decentre_mm"], lens["tip_deg"], lens["tip_toward_clock"])
    pool = borrows_cornea(definition)
    if not pool:
        pose = seated_pose(definition, pose, lens["gap_um"] / 1000.0, cornea)
    faces, bodies = lens_parts(definition, pose, vertical, cornea)
    if not pool:
        bodies.append(fluid_body(definition, lens["fluid"], CORNEA_FRONT))
    check_lens(f"lens {lens['use']} on {where}", faces, bodies, cornea)
    return faces, bodies
