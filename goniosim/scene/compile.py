"""Compile placed faces and bodies to the flat arrays that the kernels read."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Mapping

import numpy as np

from .bodies import FINISHES, OPAQUE, Body, Face

AIR_BODY, OPAQUE_BODY = -1, -2


@dataclass
class CompiledScene:
    """Faces and bodies in a fixed order, and their arrays for any wavelength.

    faces, bodies : tuples; a face's or body's number is its place here.
    media : name -> object with `index(wavelength_nm)` and `absorption_per_mm`.
    """

    faces: tuple[Face, ...]
    bodies: tuple[Body, ...]
    media: Mapping[str, object]
    _fixed: dict = field(init=False, repr=False)
    _by_wavelength: dict = field(init=False, repr=False, default_factory=dict)

    def __post_init__(self):
        self.face_number = {face.name: i for i, face in enumerate(self.faces)}
        self._fixed = {**_face_arrays(self.faces), **self._body_arrays()}

    def arrays(self, wavelength_nm: float):
        """The scene as `SceneArrays` at a wavelength in nm; kept, so that asking again is free."""
        from ..kernels.arrays import SceneArrays

        if wavelength_nm not in self._by_wavelength:
            index = np.array([self._index(body.medium, wavelength_nm) for body in self.bodies])
            self._by_wavelength[wavelength_nm] = SceneArrays(index=index, **self._fixed)
        return self._by_wavelength[wavelength_nm]

    def _index(self, medium: str, wavelength_nm: float) -> float:
        return 1.0 if medium == OPAQUE else float(self.media[medium].index(wavelength_nm))

    def _body_arrays(self) -> dict:
        """Sides, neighbours and entry checks of all bodies."""
        sides = [(b, self.face_number[name], _sign(side))
                 for b, body in enumerate(self.bodies) for name, side in body.sides]
        checks = [body.sides if body.entry_checks is None else body.entry_checks for body in self.bodies]
        near = [[other for other, face, sign in sides if face == f and sign == -s and other != b]
                for b, f, s in sides]
        beyond = [OPAQUE_BODY if self.faces[f].beyond == "opaque" else AIR_BODY for _, f, _ in sides]
        air_side = [i for i, (b, _, _) in enumerate(sides) if self.bodies[b].open_to_air]
        return {
            "side_from": _offsets([len(body.sides) for body in self.bodies]),
            "side_face": np.array([f for _, f, _ in sides], dtype=np.int64),
            "side_sign": np.array([s for _, _, s in sides], dtype=np.float64),
            "beyond": np.array(beyond, dtype=np.int64),
            "near_from": _offsets([len(row) for row in near]),
            "near_body": np.array([b for row in near for b in row], dtype=np.int64),
            "check_from": _offsets([len(row) for row in checks]),
            "check_face": np.array([self.face_number[n] for row in checks for n, _ in row], dtype=np.int64),
            "check_sign": np.array([_sign(side) for row in checks for _, side in row], dtype=np.float64),
            "air_side": np.array(air_side, dtype=np.int64),
            "body_of": np.array([b for b, _, _ in sides], dtype=np.int64),
            "absorption": np.array([0.0 if body.medium == OPAQUE else self.media[body.medium].absorption_per_mm
                                    for body in self.bodies]),
            "opaque": np.array([int(body.medium == OPAQUE) for body in self.bodies], dtype=np.int64),
        }


def _sign(side: str) -> float:
    return 1.0 if side == "ahead" else -1.0


def _offsets(counts: list[int]) -> np.ndarray:
    return np.concatenate([[0], np.cumsum(counts)]).astype(np.int64)


def _face_arrays(faces: tuple[Face, ...]) -> dict:
    """Shapes, placements and finishes of all faces."""
    lowered = [face.shape.lower() for face in faces]
    rotation = np.array([face.rotation for face in faces], dtype=float)
    return {
        "kind": np.array([low.kind for low in lowered], dtype=np.int64),
        "par": np.array([low.parameters for low in lowered]),
        "ext": np.array([[low.r_min_mm, low.r_max_mm, low.z_min_mm, low.z_max_mm] for low in lowered]),
        "rot": np.ascontiguousarray(rotation),
        "org": np.array([face.origin_mm for face in faces], dtype=float),
        "turned": np.array([bool(np.any(r != np.eye(3))) for r in rotation]),
        "piece_from": _offsets([len(low.pieces) for low in lowered]),
        "pieces": np.ascontiguousarray(np.concatenate([low.pieces.reshape(-1, 8) for low in lowered])),
        "finish": np.array([FINISHES.index(face.finish) for face in faces], dtype=np.int64),
        "reflectance": np.array([face.reflectance or 0.0 for face in faces]),
        "intended": np.array([int(face.works_by == "total_reflection") for face in faces], dtype=np.int64),
    }
