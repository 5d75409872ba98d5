"""The flat arrays that a compiled scene hands to the kernels, and the codes of finishes and statuses."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

CLEAR, COATED, MIRROR, GROUND, OPAQUE = range(5)
"""Finishes of faces."""

LEFT, ABSORBED, MISSED, TOO_MANY_FACES, LOST = range(5)
STATUS_WORDS = {
    LEFT: "left into the air",
    ABSORBED: "absorbed",
    MISSED: "met nothing",
    TOO_MANY_FACES: "met more faces than are followed",
    LOST: "found no way out of a body: its faces do not close it",
}
"""How a ray ended, code to words."""

AIR_BODY = -1
OPAQUE_BODY = -2
MAX_FACES = 64

# Columns of the face table.
KIND, FINISH, REFLECTANCE, INTENDED, TURNED, PIECE_FROM, PIECE_TO = range(7)
ORG, ROT, PAR, EXT = 7, 10, 19, 35  # three, nine, sixteen and four columns from here
QA, QB, QE, QG, CAP_0, CAP_1, SURE, SLAB_LOW, SLAB_HIGH, WITHIN_2, EQUATOR_2 = range(39, 50)
"""The face as a quadric a (x^2 + y^2) + b z^2 + 2 e z + g = 0 that counts where CAP_0 + CAP_1 z > 0, for replay.

SURE: 0 the quadric is the whole face; 1 only within WITHIN_2 (radius squared) of its axis, the rest lies between
the two SLAB heights; 2 it tells nothing, the whole face lies between the SLAB heights. EQUATOR_2: radius
squared beyond which all is behind.
"""

# Columns of the side table: one row for each face of each body.
FACE, SIGN, BEYOND, NEAR_FROM, NEAR_TO, BODY = range(6)

# Columns of the body table, and of the optics of bodies.
SIDE_FROM, SIDE_TO, CHECK_FROM, CHECK_TO, IS_OPAQUE = range(5)
INDEX, ABSORPTION = range(2)


class SceneArrays(NamedTuple):
    """A scene at one wavelength, in few arrays, because every array that a kernel hands on costs time.

    faces (F, 50) float64: kind, finish, reflectance, 1 where total reflection is meant, 1 where turned, rows of
        its cubic pieces from and to, origin (3), rotation shape to eye (9), parameters (16), extent r_min,
        r_max, z_min, z_max (4).
    pieces (P, 9) float64: r0, r1, a, b, c, d, least and greatest z, bound on bending of each cubic piece.
    sides (S, 6) int64: face; +1 where the body lies ahead of it, -1 behind; what lies beyond (AIR_BODY or
        OPAQUE_BODY) where no neighbour takes the ray; neighbours from, to (rows of near); the body.
    bodies (B, 5) int64: sides from, to; entry checks from, to; 1 where it swallows light.
    checks (K, 2) int64: face and sign of the sides that an entry from outside must respect.
    near (N,) int64: neighbouring bodies. air (A,) int64: sides through which air leads into a body.
    optics (B, 2) float64: refractive index, absorption per mm.
    """

    faces: np.ndarray
    pieces: np.ndarray
    sides: np.ndarray
    bodies: np.ndarray
    checks: np.ndarray
    near: np.ndarray
    air: np.ndarray
    optics: np.ndarray
