"""The body in which a ray starts, for rays of which only place and direction are known."""

from __future__ import annotations

import math

import numpy as np

from . import kernel
from .arrays import AIR_BODY, FACE, OPAQUE_BODY, SIDE_FROM, SIDE_TO, SIGN
from .bundle import TOUCH, face_crossing, holds, way_in


@kernel
def locate(s, p0, p1, p2, d0, d1, d2):
    """The body in which a ray starts: the one that its first crossing leaves, else the air."""
    q, pieces, sides, bodies, checks, _, air, _ = s
    best, body = math.inf, np.int64(AIR_BODY)
    for b in range(len(bodies)):
        for i in range(bodies[b, SIDE_FROM], bodies[b, SIDE_TO]):
            f = sides[i, FACE]
            t = face_crossing(q, f, pieces, p0, p1, p2, d0, d1, d2, -float(sides[i, SIGN]), best)
            if t < best and holds(q, pieces, bodies, checks, b, f, p0 + t * d0, p1 + t * d1, p2 + t * d2):
                best, body = t, np.int64(b)
    row, entry = way_in(q, pieces, sides, bodies, checks, air, p0, p1, p2, d0, d1, d2)
    return np.int64(AIR_BODY) if row >= 0 and entry < best - TOUCH else body


@kernel
def locate_bundle(s, bodies, origins, directions):
    """Fill in the starting bodies that are not known yet (numbers below OPAQUE_BODY)."""
    for i in range(len(origins)):
        if bodies[i] < OPAQUE_BODY:
            bodies[i] = locate(s, origins[i, 0], origins[i, 1], origins[i, 2], directions[i, 0], directions[i, 1],
                               directions[i, 2])
