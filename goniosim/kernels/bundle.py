"""The non-sequential tracer: one ray from face to face until it leaves, and bundles of them.

Refraction: Snell's law in vector form. Power: unpolarised Fresnel. A ray in a body leaves through the
first face it crosses outward; the neighbour that shares the face and holds the point takes it, else
the air, or what the face says lies beyond.
"""

from __future__ import annotations

import math

import numpy as np

from . import kernel, small_kernel
from .arrays import (ABSORBED, ABSORPTION, AIR_BODY, BEYOND, BODY, CHECK_FROM, CHECK_TO, COATED, EXT, FACE, FINISH, GROUND, INDEX,
                     INTENDED, IS_OPAQUE, KIND, LEFT, LOST, MAX_FACES, MIRROR, MISSED, NEAR_FROM, NEAR_TO, OPAQUE,
                     OPAQUE_BODY, ORG, REFLECTANCE, ROT, SIDE_FROM, SIDE_TO, SIGN, TOO_MANY_FACES, TURNED)
from .shapes import PLANE, T_MIN, crossing, normal_at, side_of

TOUCH = 1e-9  # mm; a point this near to a bounding face still counts as inside


@small_kernel
def into_face(q, f, x, y, z):
    """A vector of the eye frame in the axes of a turned face."""
    return (q[f, ROT] * x + q[f, ROT + 3] * y + q[f, ROT + 6] * z,
            q[f, ROT + 1] * x + q[f, ROT + 4] * y + q[f, ROT + 7] * z,
            q[f, ROT + 2] * x + q[f, ROT + 5] * y + q[f, ROT + 8] * z)


@small_kernel
def face_crossing(q, f, pieces, p0, p1, p2, d0, d1, d2, want, limit):
    """Distance along a ray of the eye frame to the wanted crossing with face f."""
    if q[f, KIND] == PLANE and q[f, EXT + 1] == math.inf:
        # A plane needs no change of frame: its normal is the third column of the rotation.
        n0, n1, n2 = q[f, ROT + 2], q[f, ROT + 5], q[f, ROT + 8]
        along = n0 * d0 + n1 * d1 + n2 * d2
        if along * want <= 0.0:
            return math.inf
        t = (n0 * (q[f, ORG] - p0) + n1 * (q[f, ORG + 1] - p1) + n2 * (q[f, ORG + 2] - p2)) / along
        return t if t >= T_MIN else math.inf
    x, y, z = p0 - q[f, ORG], p1 - q[f, ORG + 1], p2 - q[f, ORG + 2]
    if q[f, TURNED] != 0.0:
        x, y, z = into_face(q, f, x, y, z)
        d0, d1, d2 = into_face(q, f, d0, d1, d2)
    return crossing(q, f, pieces, x, y, z, d0, d1, d2, want, limit)


@small_kernel
def local_point(q, f, p0, p1, p2):
    """A point of the eye frame in the frame of face f."""
    x, y, z = p0 - q[f, ORG], p1 - q[f, ORG + 1], p2 - q[f, ORG + 2]
    if q[f, TURNED] != 0.0:
        return into_face(q, f, x, y, z)
    return x, y, z


@kernel
def face_normal(q, f, pieces, p0, p1, p2):
    """Forward unit normal of face f at a point on it, in the eye frame."""
    x, y, z = local_point(q, f, p0, p1, p2)
    n0, n1, n2 = normal_at(q, f, pieces, x, y, z)
    if q[f, TURNED] != 0.0:
        return (q[f, ROT] * n0 + q[f, ROT + 1] * n1 + q[f, ROT + 2] * n2,
                q[f, ROT + 3] * n0 + q[f, ROT + 4] * n1 + q[f, ROT + 5] * n2,
                q[f, ROT + 6] * n0 + q[f, ROT + 7] * n1 + q[f, ROT + 8] * n2)
    return n0, n1, n2


@kernel
def holds(q, pieces, bodies, checks, body, but_face, p0, p1, p2):
    """Whether a point on but_face lies on the right side of the body's other faces."""
    for i in range(bodies[body, CHECK_FROM], bodies[body, CHECK_TO]):
        f = checks[i, 0]
        if f == but_face:
            continue
        x, y, z = local_point(q, f, p0, p1, p2)
        if side_of(q, f, pieces, x, y, z) * checks[i, 1] < -TOUCH:
            return False
    return True


@kernel
def way_out(q, pieces, sides, bodies, body, p0, p1, p2, d0, d1, d2):
    """Row of the side through which a ray leaves its body, and the distance; row -1: none."""
    best, row = math.inf, -1
    for i in range(bodies[body, SIDE_FROM], bodies[body, SIDE_TO]):
        t = face_crossing(q, sides[i, FACE], pieces, p0, p1, p2, d0, d1, d2, -float(sides[i, SIGN]), best)
        if t < best:
            best, row = t, i
    return row, best


@kernel
def way_in(q, pieces, sides, bodies, checks, air, p0, p1, p2, d0, d1, d2):
    """Row of the side through which a ray in air enters a body, and the distance; row -1: none."""
    best, row = math.inf, -1
    t, before, sense = math.inf, -1, 0
    for j in range(len(air)):
        i = air[j]
        f = sides[i, FACE]
        if f != before or sides[i, SIGN] != sense:  # bodies that share a face stand next to each other
            t = face_crossing(q, f, pieces, p0, p1, p2, d0, d1, d2, float(sides[i, SIGN]), best)
            before, sense = f, sides[i, SIGN]
        if t < best and holds(q, pieces, bodies, checks, sides[i, BODY], f, p0 + t * d0, p1 + t * d1, p2 + t * d2):
            best, row = t, i
    return row, best


@kernel
def neighbour(q, pieces, sides, bodies, checks, near, row, p0, p1, p2):
    """The body that takes a ray which leaves through a side at a point."""
    for j in range(sides[row, NEAR_FROM], sides[row, NEAR_TO]):
        if holds(q, pieces, bodies, checks, near[j], sides[row, FACE], p0, p1, p2):
            return near[j]
    return sides[row, BEYOND]


@small_kernel
def unpolarised_transmittance(n1, n2, cos1, cos2):
    """Fresnel's power transmittance of unpolarised light at a clear face."""
    rs = (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2)
    rp = (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)
    return 1.0 - 0.5 * (rs * rs + rp * rp)


@small_kernel
def angle_of(sine):
    """Headroom in radians from its sine; infinite stays infinite."""
    return math.asin(sine) if sine < 1.0 else sine


@kernel
def trace_ray(s, body, p0, p1, p2, d0, d1, d2, keep, path_face, path_point, path_dir):
    """Follow one ray to its end.

    Returns status, last face, end point (3), end direction (3), throughput, headroom (radians),
    headroom face, path code, faces met, stray (total reflections that were not meant).
    path_face holds 2 f for a passage of face f and 2 f + 1 for a reflection, where keep is set;
    path_dir the direction with which the ray goes on.
    """
    q, pieces, sides, bodies, checks, near, air, optics = s
    power, headroom, headroom_face = 1.0, math.inf, -1
    code, last, stray = np.int64(1469598103934665603), -1, 0
    for met in range(MAX_FACES):
        if body == AIR_BODY:
            row, t = way_in(q, pieces, sides, bodies, checks, air, p0, p1, p2, d0, d1, d2)
            if row < 0:
                status = LEFT if met > 0 else MISSED
                return status, last, p0, p1, p2, d0, d1, d2, power, angle_of(headroom), headroom_face, code, met, stray
            n1 = 1.0
        else:
            row, t = way_out(q, pieces, sides, bodies, body, p0, p1, p2, d0, d1, d2)
            if row < 0:
                return LOST, last, p0, p1, p2, d0, d1, d2, power, angle_of(headroom), headroom_face, code, met, stray
            n1 = optics[body, INDEX]
            if optics[body, ABSORPTION] > 0.0:
                power *= math.exp(-optics[body, ABSORPTION] * max(t, 0.0))
        f = sides[row, FACE]
        p0, p1, p2 = p0 + t * d0, p1 + t * d1, p2 + t * d2
        last = f
        after = sides[row, BODY] if body == AIR_BODY else neighbour(q, pieces, sides, bodies, checks, near, row, p0, p1, p2)
        finish = int(q[f, FINISH])
        stops = finish == GROUND or finish == OPAQUE or after == OPAQUE_BODY or (after >= 0 and bodies[after, IS_OPAQUE] == 1)
        if stops and finish != MIRROR:
            code = (code ^ (2 * f)) * np.int64(1099511628211)
            if keep:
                path_face[met] = 2 * f
                path_point[met, 0], path_point[met, 1], path_point[met, 2] = p0, p1, p2
                path_dir[met, 0], path_dir[met, 1], path_dir[met, 2] = d0, d1, d2
            return ABSORBED, f, p0, p1, p2, d0, d1, d2, power, angle_of(headroom), headroom_face, code, met + 1, stray
        g0, g1, g2 = face_normal(q, f, pieces, p0, p1, p2)
        cos1 = g0 * d0 + g1 * d1 + g2 * d2
        if cos1 < 0.0:
            g0, g1, g2, cos1 = -g0, -g1, -g2, -cos1
        reflect = finish == MIRROR
        if reflect:
            power *= q[f, REFLECTANCE]
        else:
            n2 = 1.0 if after == AIR_BODY else optics[after, INDEX]
            ratio = n1 / n2
            # cos2^2 from sin^2 by differences that keep their digits near grazing incidence.
            sin1 = math.sqrt(max(1.0 - cos1 * cos1, 0.0))
            cos2_squared = (1.0 - ratio * sin1) * (1.0 + ratio * sin1)
            if cos2_squared <= 0.0:
                reflect = True
                stray += 1 - int(q[f, INTENDED])
            else:
                if n1 > n2:
                    # sin(critical - incidence): grows with the headroom, so the least of it tells the face.
                    critical = n2 / n1
                    room = critical * cos1 - sin1 * math.sqrt(1.0 - critical * critical)
                    if room < headroom:
                        headroom, headroom_face = room, f
                cos2 = math.sqrt(cos2_squared)
                if finish == COATED:
                    power *= 1.0 - q[f, REFLECTANCE]
                else:
                    power *= unpolarised_transmittance(n1, n2, cos1, cos2)
                along = cos2 - ratio * cos1
                d0, d1, d2 = ratio * d0 + along * g0, ratio * d1 + along * g1, ratio * d2 + along * g2
                body = after
        if reflect:
            d0, d1, d2 = d0 - 2.0 * cos1 * g0, d1 - 2.0 * cos1 * g1, d2 - 2.0 * cos1 * g2
        scale = 1.0 / math.sqrt(d0 * d0 + d1 * d1 + d2 * d2)
        d0, d1, d2 = d0 * scale, d1 * scale, d2 * scale
        code = (code ^ (2 * f + (1 if reflect else 0))) * np.int64(1099511628211)
        if keep:
            path_face[met] = 2 * f + (1 if reflect else 0)
            path_point[met, 0], path_point[met, 1], path_point[met, 2] = p0, p1, p2
            path_dir[met, 0], path_dir[met, 1], path_dir[met, 2] = d0, d1, d2
    return (TOO_MANY_FACES, last, p0, p1, p2, d0, d1, d2, power, angle_of(headroom), headroom_face, code, MAX_FACES, stray)


@kernel
def trace_bundle(s, bodies, origins, directions, ended, status, points, outward, power, headroom, room_face,
                 code, met, stray, keep, path_face, path_point, path_dir):
    """Trace rays one by one into the arrays given; bodies (n,): where each starts.

    keep: 1 to fill path_face (n, 64), path_point and path_dir (n, 64, 3); else these may be of length one.
    """
    for i in range(len(origins)):
        p0, p1, p2 = origins[i, 0], origins[i, 1], origins[i, 2]
        d0, d1, d2 = directions[i, 0], directions[i, 1], directions[i, 2]
        j = i if keep else 0
        (status[i], ended[i], points[i, 0], points[i, 1], points[i, 2], outward[i, 0], outward[i, 1], outward[i, 2],
         power[i], headroom[i], room_face[i], code[i], met[i], stray[i]) = trace_ray(
            s, bodies[i], p0, p1, p2, d0, d1, d2, keep, path_face[j], path_point[j], path_dir[j])
