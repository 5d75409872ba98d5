"""The non-sequential tracer: one ray from face to face until it leaves, and bundles of them.

Refraction: Snell's law in vector form. Power: unpolarised Fresnel. A ray in a body leaves through the
first face it crosses outward; the neighbour that shares the face and holds the point takes it, else
the air, or what the face says lies beyond.
"""

from __future__ import annotations

import math

import numpy as np

from . import kernel
from .arrays import (ABSORBED, AIR_BODY, COATED, GROUND, LEFT, LOST, MAX_FACES, MIRROR, MISSED, OPAQUE, OPAQUE_BODY,
                     TOO_MANY_FACES)
from .shapes import crossing, normal_at, side_of

TOUCH = 1e-9  # mm; a point this near to a bounding face still counts as inside


@kernel
def face_crossing(s, f, p0, p1, p2, d0, d1, d2, want):
    """Distance along a ray to the wanted crossing with face f."""
    x, y, z = p0 - s.org[f, 0], p1 - s.org[f, 1], p2 - s.org[f, 2]
    u, v, w = d0, d1, d2
    if s.turned[f]:
        r = s.rot[f]
        x, y, z = (r[0, 0] * x + r[1, 0] * y + r[2, 0] * z, r[0, 1] * x + r[1, 1] * y + r[2, 1] * z,
                   r[0, 2] * x + r[1, 2] * y + r[2, 2] * z)
        u, v, w = (r[0, 0] * u + r[1, 0] * v + r[2, 0] * w, r[0, 1] * u + r[1, 1] * v + r[2, 1] * w,
                   r[0, 2] * u + r[1, 2] * v + r[2, 2] * w)
    return crossing(s.kind[f], s.par[f], s.pieces, s.piece_from[f], s.piece_from[f + 1], s.ext[f],
                    x, y, z, u, v, w, want)


@kernel
def local_point(s, f, p0, p1, p2):
    """A point of the eye frame in the frame of face f."""
    x, y, z = p0 - s.org[f, 0], p1 - s.org[f, 1], p2 - s.org[f, 2]
    if s.turned[f]:
        r = s.rot[f]
        return (r[0, 0] * x + r[1, 0] * y + r[2, 0] * z, r[0, 1] * x + r[1, 1] * y + r[2, 1] * z,
                r[0, 2] * x + r[1, 2] * y + r[2, 2] * z)
    return x, y, z


@kernel
def face_normal(s, f, p0, p1, p2):
    """Forward unit normal of face f at a point on it, in the eye frame."""
    x, y, z = local_point(s, f, p0, p1, p2)
    n0, n1, n2 = normal_at(s.kind[f], s.par[f], s.pieces, s.piece_from[f], s.piece_from[f + 1], x, y, z)
    if s.turned[f]:
        r = s.rot[f]
        return (r[0, 0] * n0 + r[0, 1] * n1 + r[0, 2] * n2, r[1, 0] * n0 + r[1, 1] * n1 + r[1, 2] * n2,
                r[2, 0] * n0 + r[2, 1] * n1 + r[2, 2] * n2)
    return n0, n1, n2


@kernel
def holds(s, body, but_face, p0, p1, p2):
    """Whether a point on but_face lies on the right side of the body's other faces."""
    for i in range(s.check_from[body], s.check_from[body + 1]):
        f = s.check_face[i]
        if f == but_face:
            continue
        x, y, z = local_point(s, f, p0, p1, p2)
        side = side_of(s.kind[f], s.par[f], s.pieces, s.piece_from[f], s.piece_from[f + 1], s.ext[f], x, y, z)
        if side * s.check_sign[i] < -TOUCH:
            return False
    return True


@kernel
def way_out(s, body, p0, p1, p2, d0, d1, d2):
    """Row of the side through which a ray leaves its body, and the distance; row -1: none."""
    best, row = math.inf, -1
    for i in range(s.side_from[body], s.side_from[body + 1]):
        t = face_crossing(s, s.side_face[i], p0, p1, p2, d0, d1, d2, -s.side_sign[i])
        if t < best:
            best, row = t, i
    return row, best


@kernel
def way_in(s, p0, p1, p2, d0, d1, d2):
    """Row of the side through which a ray in air enters a body, and the distance; row -1: none."""
    best, row = math.inf, -1
    for j in range(len(s.air_side)):
        i = s.air_side[j]
        f = s.side_face[i]
        t = face_crossing(s, f, p0, p1, p2, d0, d1, d2, s.side_sign[i])
        if t < best and holds(s, s.body_of[i], f, p0 + t * d0, p1 + t * d1, p2 + t * d2):
            best, row = t, i
    return row, best


@kernel
def neighbour(s, row, p0, p1, p2):
    """The body that takes a ray which leaves through a side at a point."""
    for j in range(s.near_from[row], s.near_from[row + 1]):
        body = s.near_body[j]
        if holds(s, body, s.side_face[row], p0, p1, p2):
            return body
    return s.beyond[row]


@kernel
def locate(s, p0, p1, p2, d0, d1, d2):
    """The body in which a ray starts: the one that its first crossing leaves, else the air."""
    best, body = math.inf, AIR_BODY
    for b in range(len(s.side_from) - 1):
        for i in range(s.side_from[b], s.side_from[b + 1]):
            f = s.side_face[i]
            t = face_crossing(s, f, p0, p1, p2, d0, d1, d2, -s.side_sign[i])
            if t < best and holds(s, b, f, p0 + t * d0, p1 + t * d1, p2 + t * d2):
                best, body = t, b
    row, entry = way_in(s, p0, p1, p2, d0, d1, d2)
    return AIR_BODY if row >= 0 and entry < best - TOUCH else body


@kernel
def unpolarised_transmittance(n1, n2, cos1, cos2):
    """Fresnel's power transmittance of unpolarised light at a clear face."""
    rs = (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2)
    rp = (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)
    return 1.0 - 0.5 * (rs * rs + rp * rp)


@kernel
def trace_ray(s, body, p0, p1, p2, d0, d1, d2, keep, path_face, path_point, path_dir):
    """Follow one ray to its end.

    Returns status, last face, end point (3), end direction (3), throughput, headroom (radians),
    headroom face, path code, faces met, stray (total reflections that were not meant).
    path_face holds 2 f for a passage of face f and 2 f + 1 for a reflection, where keep is set;
    path_dir the direction with which the ray goes on.
    """
    power, headroom, headroom_face = 1.0, math.inf, -1
    code, last, stray = np.int64(1469598103934665603), -1, 0
    for met in range(MAX_FACES):
        if body == AIR_BODY:
            row, t = way_in(s, p0, p1, p2, d0, d1, d2)
            if row < 0:
                status = LEFT if met > 0 else MISSED
                return status, last, p0, p1, p2, d0, d1, d2, power, headroom, headroom_face, code, met, stray
            n1 = 1.0
        else:
            row, t = way_out(s, body, p0, p1, p2, d0, d1, d2)
            if row < 0:
                return LOST, last, p0, p1, p2, d0, d1, d2, power, headroom, headroom_face, code, met, stray
            n1 = s.index[body]
            if s.absorption[body] > 0.0:
                power *= math.exp(-s.absorption[body] * max(t, 0.0))
        f = s.side_face[row]
        p0, p1, p2 = p0 + t * d0, p1 + t * d1, p2 + t * d2
        last = f
        after = s.body_of[row] if body == AIR_BODY else neighbour(s, row, p0, p1, p2)
        finish = s.finish[f]
        stops = finish == GROUND or finish == OPAQUE or after == OPAQUE_BODY or (after >= 0 and s.opaque[after] == 1)
        if stops and finish != MIRROR:
            code = (code ^ (2 * f)) * np.int64(1099511628211)
            if keep:
                path_face[met] = 2 * f
                path_point[met, 0], path_point[met, 1], path_point[met, 2] = p0, p1, p2
                path_dir[met, 0], path_dir[met, 1], path_dir[met, 2] = d0, d1, d2
            return ABSORBED, f, p0, p1, p2, d0, d1, d2, power, headroom, headroom_face, code, met + 1, stray
        g0, g1, g2 = face_normal(s, f, p0, p1, p2)
        cos1 = g0 * d0 + g1 * d1 + g2 * d2
        if cos1 < 0.0:
            g0, g1, g2, cos1 = -g0, -g1, -g2, -cos1
        reflect = finish == MIRROR
        if reflect:
            power *= s.reflectance[f]
        else:
            n2 = 1.0 if after == AIR_BODY else s.index[after]
            ratio = n1 / n2
            # cos2^2 from sin^2 by differences that keep their digits near grazing incidence.
            sin1 = math.sqrt(max(1.0 - cos1 * cos1, 0.0))
            cos2_squared = (1.0 - ratio * sin1) * (1.0 + ratio * sin1)
            if cos2_squared <= 0.0:
                reflect = True
                stray += 1 - s.intended[f]
            else:
                if n1 > n2:
                    room = math.asin(n2 / n1) - math.asin(min(sin1, 1.0))
                    if room < headroom:
                        headroom, headroom_face = room, f
                cos2 = math.sqrt(cos2_squared)
                if finish == COATED:
                    power *= 1.0 - s.reflectance[f]
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
    return (TOO_MANY_FACES, last, p0, p1, p2, d0, d1, d2, power, headroom, headroom_face, code, MAX_FACES, stray)


@kernel
def trace_bundle(s, bodies, origins, directions, ended, status, points, outward, power, headroom, room_face,
                 code, met, stray, keep, path_face, path_point, path_dir):
    """Trace rays one by one into the arrays given; bodies < -2 asks for the start to be found.

    keep: 1 to fill path_face (n, 64), path_point and path_dir (n, 64, 3); else these may be of length one.
    """
    for i in range(len(origins)):
        p0, p1, p2 = origins[i, 0], origins[i, 1], origins[i, 2]
        d0, d1, d2 = directions[i, 0], directions[i, 1], directions[i, 2]
        body = bodies[i]
        if body < OPAQUE_BODY:
            body = locate(s, p0, p1, p2, d0, d1, d2)
        j = i if keep else 0
        (status[i], ended[i], points[i, 0], points[i, 1], points[i, 2], outward[i, 0], outward[i, 1], outward[i, 2],
         power[i], headroom[i], room_face[i], code[i], met[i], stray[i]) = trace_ray(
            s, body, p0, p1, p2, d0, d1, d2, keep, path_face[j], path_point[j], path_dir[j])
