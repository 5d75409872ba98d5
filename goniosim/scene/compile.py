"""Compile placed faces and bodies to the flat arrays that the kernels read."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Mapping

import numpy as np

from ..faces import Lowered
from ..faces.base import CONE, CONIC, CYLINDER, PLANE, ROUND_CORNEA, TORIC
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
        table, pieces = face_table(self.faces)
        self._fixed = {"faces": table, "pieces": pieces, **self._body_arrays()}

    def arrays(self, wavelength_nm: float):
        """The scene as `SceneArrays` at a wavelength in nm; kept, so that asking again is free."""
        from ..kernels.arrays import SceneArrays

        if wavelength_nm not in self._by_wavelength:
            optics = np.array([self._optics(body.medium, wavelength_nm) for body in self.bodies])
            self._by_wavelength[wavelength_nm] = SceneArrays(optics=optics, **self._fixed)
        return self._by_wavelength[wavelength_nm]

    def _optics(self, medium: str, wavelength_nm: float) -> tuple[float, float]:
        """Index and absorption per mm of a medium."""
        if medium == OPAQUE:
            return 1.0, 0.0
        return float(self.media[medium].index(wavelength_nm)), float(self.media[medium].absorption_per_mm)

    def _body_arrays(self) -> dict:
        """Sides, neighbours and entry checks of all bodies."""
        sides = [(b, self.face_number[name], _sign(side))
                 for b, body in enumerate(self.bodies) for name, side in body.sides]
        checks = [body.sides if body.entry_checks is None else body.entry_checks for body in self.bodies]
        near = [[other for other, face, sign in sides if face == f and sign == -s and other != b]
                for b, f, s in sides]
        near_from, side_from, check_from = (_offsets([len(row) for row in rows])
                                            for rows in (near, [body.sides for body in self.bodies], checks))
        beyond = [OPAQUE_BODY if self.faces[f].beyond == "opaque" else AIR_BODY for _, f, _ in sides]
        air = sorted((i for i, (b, f, _) in enumerate(sides) if self.bodies[b].meets_air_at(self.faces[f].name)),
                     key=lambda i: sides[i][1:])
        opaque = [int(body.medium == OPAQUE) for body in self.bodies]
        rows = [(f, s, outside, near_from[i], near_from[i + 1], b)
                for i, ((b, f, s), outside) in enumerate(zip(sides, beyond))]
        return {
            "sides": _whole(rows, 6),
            "bodies": _whole(list(zip(side_from[:-1], side_from[1:], check_from[:-1], check_from[1:], opaque)), 5),
            "checks": _whole([(self.face_number[n], _sign(side)) for row in checks for n, side in row], 2),
            "near": np.array([b for row in near for b in row], dtype=np.int64),
            "air": np.array(air, dtype=np.int64),
        }


def _whole(rows: list, columns: int) -> np.ndarray:
    """Rows of whole numbers as an array, also where there are none."""
    return np.array(rows, dtype=np.int64).reshape(-1, columns)


def _sign(side: str) -> int:
    return 1 if side == "ahead" else -1


def _offsets(counts: list[int]) -> list[int]:
    return [0, *np.cumsum(counts).tolist()]


def face_table(faces: tuple[Face, ...]) -> tuple[np.ndarray, np.ndarray]:
    """Shapes, placements and finishes of faces: the kernels' face table and its cubic pieces."""
    lowered = [face.shape.lower() for face in faces]
    piece_from = _offsets([len(low.pieces) for low in lowered])
    rows = [_face_row(face, low, piece_from[i], piece_from[i + 1]) for i, (face, low) in enumerate(zip(faces, lowered))]
    return np.array(rows), np.ascontiguousarray(np.concatenate([low.pieces.reshape(-1, 9) for low in lowered]))


def _face_row(face: Face, low: Lowered, piece_from: int, piece_to: int) -> np.ndarray:
    """One row of the face table; the columns are named in `kernels/arrays.py`."""
    # A turn about its own axis does nothing to a surface of revolution.
    turned = bool(np.any(face.rotation != np.eye(3)) if low.kind == TORIC else face.rotation[2, 2] != 1.0)
    return np.concatenate([
        [low.kind, FINISHES.index(face.finish), face.reflectance or 0.0, face.works_by == "total_reflection", turned,
         piece_from, piece_to],
        face.origin_mm, np.ravel(face.rotation), low.parameters,
        [low.r_min_mm, low.r_max_mm, low.z_min_mm, low.z_max_mm], _quadric(low)])


def _quadric(low: Lowered) -> list[float]:
    """The face as a quadric about its own axis, for replay; the columns are named in `kernels/arrays.py`."""
    first, second, join = low.parameters[:3]
    far = (low.z_min_mm, low.z_max_mm)
    if low.kind == PLANE:
        return [0.0, 0.0, 0.5, 0.0, 1.0, 0.0, 0, *far, np.inf, np.inf]
    if low.kind == CYLINDER:
        return [1.0, 0.0, 0.0, -first * first, 1.0, 0.0, 0, *far, np.inf, np.inf]
    if low.kind == CONE:
        return [1.0, -second * second, -second * first, -first * first, first, second, 0, *far, np.inf, np.inf]
    if low.kind in (CONIC, ROUND_CORNEA):
        equator = 1.0 / (first * first * second) if second > 0.0 else np.inf
        conic = [first, first * second, 1.0, 0.0, 1.0, first * second]
        if low.kind == CONIC:
            return [*conic, 0, *far, np.inf, equator]
        return [*conic, 1, low.pieces[:, 6].min(), low.pieces[:, 7].max(), join * join, equator]
    heights = (low.pieces[:, 6].min(), low.pieces[:, 7].max()) if len(low.pieces) else (low.z_min_mm, low.z_max_mm)
    return [0.0] * 6 + [2, *heights, 0.0, np.inf]
