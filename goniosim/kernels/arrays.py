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


class SceneArrays(NamedTuple):
    """A scene at one wavelength. F faces, P cubic pieces, B bodies, S body sides.

    kind (F,) int64; par (F, 16); ext (F, 4) r_min, r_max, z_min, z_max; rot (F, 3, 3) shape to eye;
    org (F, 3); turned (F,) whether rot is not the identity; piece_from (F + 1,); pieces (P, 8);
    finish (F,); reflectance (F,); intended (F,) 1 where total reflection is meant;
    side_from (B + 1,) rows of a body in side_face, side_sign (+1: the body lies ahead of the face);
    beyond (S,) AIR_BODY or OPAQUE_BODY where no neighbour takes the ray; near_from (S + 1,), near_body;
    check_from (B + 1,), check_face, check_sign: sides that an entry from outside must respect;
    air_side: rows of S through which air leads into a body; body_of (S,);
    index (B,), absorption (B,) per mm, opaque (B,) 1 where the body swallows light.
    """

    kind: np.ndarray
    par: np.ndarray
    ext: np.ndarray
    rot: np.ndarray
    org: np.ndarray
    turned: np.ndarray
    piece_from: np.ndarray
    pieces: np.ndarray
    finish: np.ndarray
    reflectance: np.ndarray
    intended: np.ndarray
    side_from: np.ndarray
    side_face: np.ndarray
    side_sign: np.ndarray
    beyond: np.ndarray
    near_from: np.ndarray
    near_body: np.ndarray
    check_from: np.ndarray
    check_face: np.ndarray
    check_sign: np.ndarray
    air_side: np.ndarray
    body_of: np.ndarray
    index: np.ndarray
    absorption: np.ndarray
    opaque: np.ndarray
