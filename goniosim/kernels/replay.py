"""Replay: follow a block of like rays along the path of one of them, many rays at a time.

The leader of a block is traced by the general tracer. Its path is then replayed for the whole block, face by
face, in plain loops over arrays that the compiler turns into vector instructions. A step counts only where it is
sure that the general tracer would have taken it: the face is the first that the body's sides let the ray cross,
and the same neighbour takes it. Where a loop cannot tell (a periphery, an iris), that step is asked of the
general tracer for that ray; a ray that leaves the leader's path is traced anew from its start. Faces are quadrics
about their own axes here; see `arrays.py`.
"""

from __future__ import annotations

import math

import numpy as np

from . import kernel
from .arrays import (ABSORPTION, AIR_BODY, CAP_0, CAP_1, CHECK_FROM, CHECK_TO, COATED, EQUATOR_2, EXT, FACE, FINISH,
                     INDEX, LEFT, MIRROR, NEAR_FROM, NEAR_TO, ORG, QA, QB, QE, QG, REFLECTANCE, ROT, SIDE_FROM, SIDE_TO, SIGN,
                     SLAB_HIGH, SLAB_LOW, SURE, WITHIN_2)
from .bundle import angle_of, neighbour, trace_ray, way_in, way_out
from .shapes import T_MIN

BLOCK = 256
LONGEST = 24  # faces of a path that is replayed
X, Y, Z, U, V, W, LX, LY, LZ, LU, LV, LW, BEST, UNSURE, FAILED, POWER, ROOM, ROOM_FACE = range(18)
ROWS = 18
"""Rows of the working table, BLOCK numbers each: place, direction, both in a face's frame, distance to the next face, doubts, results."""
MARGIN = 1e-9
FAR = 1e9  # mm


@kernel
def into_frame(q, f, m, n):
    """Places and directions of n rays in the frame of face f."""
    ox, oy, oz = q[f, ORG], q[f, ORG + 1], q[f, ORG + 2]
    a0, a1, a2 = q[f, ROT], q[f, ROT + 1], q[f, ROT + 2]
    b0, b1, b2 = q[f, ROT + 3], q[f, ROT + 4], q[f, ROT + 5]
    c0, c1, c2 = q[f, ROT + 6], q[f, ROT + 7], q[f, ROT + 8]
    for i in range(n):
        x, y, z = m[X * BLOCK + i] - ox, m[Y * BLOCK + i] - oy, m[Z * BLOCK + i] - oz
        u, v, w = m[U * BLOCK + i], m[V * BLOCK + i], m[W * BLOCK + i]
        m[LX * BLOCK + i] = a0 * x + b0 * y + c0 * z
        m[LY * BLOCK + i] = a1 * x + b1 * y + c1 * z
        m[LZ * BLOCK + i] = a2 * x + b2 * y + c2 * z
        m[LU * BLOCK + i] = a0 * u + b0 * v + c0 * w
        m[LV * BLOCK + i] = a1 * u + b1 * v + c1 * w
        m[LW * BLOCK + i] = a2 * u + b2 * v + c2 * w


@kernel
def cross_next(q, f, want, m, n):
    """Distance of n rays to the face that the path crosses next, into BEST; unsure where that cannot be told."""
    into_frame(q, f, m, n)
    a, b, e, g = q[f, QA], q[f, QB], q[f, QE], q[f, QG]
    cap0, cap1, within = q[f, CAP_0], q[f, CAP_1], q[f, WITHIN_2]
    r0, r1, z0, z1 = q[f, EXT] - MARGIN, q[f, EXT + 1] + MARGIN, q[f, EXT + 2], q[f, EXT + 3]
    r0 = r0 * r0 if r0 > 0.0 else -1.0
    r1 = min(r1 * r1, within)
    if q[f, SURE] == 2.0:
        r1 = -1.0
    for i in range(n):
        x, y, z, u, v, w = m[LX * BLOCK + i], m[LY * BLOCK + i], m[LZ * BLOCK + i], m[LU * BLOCK + i], m[LV * BLOCK + i], m[LW * BLOCK + i]
        start = x * x + y * y
        second = a * (u * u + v * v) + b * w * w
        first = a * (x * u + y * v) + b * z * w + e * w
        none = a * start + b * z * z + 2.0 * e * z + g
        under = first * first - second * none
        root = want * math.sqrt(max(under, 0.0))
        stable = first * want > 0.0
        t = (-none if stable else root - first) / (first + root if stable else second)
        hx, hy, hz = x + t * u, y + t * v, z + t * w
        rho = hx * hx + hy * hy
        met = ((under >= 0.0) & (t >= T_MIN) & (t < FAR) & (cap0 + cap1 * hz > 0.0) & (rho >= r0) & (rho <= r1)
               & (hz >= z0) & (hz <= z1) & (start <= within))
        m[BEST * BLOCK + i] = t if met else 0.0
        m[UNSURE * BLOCK + i] = 0.0 if met else 1.0


@kernel
def stays(q, f, sign, m, n):
    """Mark as unsure the rays that may leave through another side of their body, on face f, before BEST.

    With G = sign f positive inside: a concave G that is positive at the end never fell below zero; a convex one
    did not if it also never fell, or fell all the way.
    """
    into_frame(q, f, m, n)
    sure, low, high = q[f, SURE], q[f, SLAB_LOW], q[f, SLAB_HIGH]
    a, b, e, g = sign * q[f, QA], sign * q[f, QB], sign * q[f, QE], sign * q[f, QG]
    within = q[f, WITHIN_2]
    for i in range(n):
        x, y, z, u, v, w, t = m[LX * BLOCK + i], m[LY * BLOCK + i], m[LZ * BLOCK + i], m[LU * BLOCK + i], m[LV * BLOCK + i], m[LW * BLOCK + i], m[BEST * BLOCK + i]
        second = a * (u * u + v * v) + b * w * w
        first = a * (x * u + y * v) + b * z * w + e * w
        hx, hy, hz = x + t * u, y + t * v, z + t * w
        rho = hx * hx + hy * hy
        end = a * rho + b * hz * hz + 2.0 * e * hz + g
        kept = (end > 0.0) & ((second <= 0.0) | (first >= 0.0) | (first + second * t <= 0.0))
        told = (sure == 0.0) | ((sure == 1.0) & (x * x + y * y <= within) & (rho <= within))
        passes = (min(z, hz) >= high) | (max(z, hz) <= low)
        # Slabs hold the periphery only: the quadric must be kept as well where it is part of the face.
        clear = (passes & (kept | (sure == 2.0))) | (kept & told)
        m[UNSURE * BLOCK + i] += 0.0 if clear else 1.0


@kernel
def misses(q, f, sign, m, n):
    """Mark as unsure the rays in air that may enter a body through its side on face f.

    Told for planes and convex quadrics: one that is left behind, or moved away from, is not met.
    """
    into_frame(q, f, m, n)
    sure, low, high = q[f, SURE], q[f, SLAB_LOW], q[f, SLAB_HIGH]
    a, b, e, g = q[f, QA], q[f, QB], q[f, QE], q[f, QG]
    for i in range(n):
        x, y, z, u, v, w = m[LX * BLOCK + i], m[LY * BLOCK + i], m[LZ * BLOCK + i], m[LU * BLOCK + i], m[LV * BLOCK + i], m[LW * BLOCK + i]
        second = a * (u * u + v * v) + b * w * w
        first = a * (x * u + y * v) + b * z * w + e * w
        value = a * (x * x + y * y) + b * z * z + 2.0 * e * z + g
        away = (second >= 0.0) & ((first >= 0.0) | (first * first < second * value))
        never = (away | ((second >= 0.0) & (value < 0.0))) if sign < 0.0 else (
            (away & (value >= 0.0)) | ((second == 0.0) & (value < 0.0) & (first <= 0.0)))
        passes = ((w >= 0.0) & (z >= high)) | ((w <= 0.0) & (z <= low))
        clear = (passes & (never | (sure != 1.0))) | (never & (sure == 0.0))
        m[UNSURE * BLOCK + i] += 0.0 if clear else 1.0


@kernel
def on_side(q, f, sign, m, n):
    """Mark as unsure the rays whose place is not surely on one side of face f."""
    into_frame(q, f, m, n)
    sure = q[f, SURE]
    a, b, e, g = q[f, QA], q[f, QB], q[f, QE], q[f, QG]
    cap0, cap1, within, equator = q[f, CAP_0], q[f, CAP_1], q[f, WITHIN_2], q[f, EQUATOR_2]
    if sign < 0.0:
        equator = math.inf
    for i in range(n):
        x, y, z = m[LX * BLOCK + i], m[LY * BLOCK + i], m[LZ * BLOCK + i]
        rho = x * x + y * y
        value = sign * (a * rho + b * z * z + 2.0 * e * z + g)
        right = (sure < 2.0) & (value > MARGIN) & (cap0 + cap1 * z > 0.0) & (rho <= within) & (rho < equator)
        m[UNSURE * BLOCK + i] += 0.0 if right else 1.0


@kernel
def step_over(q, f, reflects, n1, n2, absorption, m, n):
    """Take n rays to face f, which they all cross next, and on: Snell, Fresnel, headroom; failures are marked."""
    for i in range(n):
        t = m[BEST * BLOCK + i]
        m[X * BLOCK + i] += t * m[U * BLOCK + i]
        m[Y * BLOCK + i] += t * m[V * BLOCK + i]
        m[Z * BLOCK + i] += t * m[W * BLOCK + i]
    if absorption > 0.0:
        for i in range(n):
            m[POWER * BLOCK + i] *= math.exp(-absorption * max(m[BEST * BLOCK + i], 0.0))
    into_frame(q, f, m, n)
    a, b, e = q[f, QA], q[f, QB], q[f, QE]
    a0, a1, a2 = q[f, ROT], q[f, ROT + 1], q[f, ROT + 2]
    b0, b1, b2 = q[f, ROT + 3], q[f, ROT + 4], q[f, ROT + 5]
    c0, c1, c2 = q[f, ROT + 6], q[f, ROT + 7], q[f, ROT + 8]
    within = q[f, WITHIN_2]
    mirror, coated = q[f, FINISH] == MIRROR, q[f, FINISH] == COATED
    # What the face keeps of the power: by Fresnel where it is clear, else what it is said to.
    by_fresnel = 0.0 if reflects or coated else 1.0
    said = 1.0 - q[f, REFLECTANCE] if coated and not reflects else (q[f, REFLECTANCE] if mirror else 1.0)
    ratio = n1 / n2
    critical = n2 / n1 if n1 > n2 else 1.0
    inner = math.sqrt(max(1.0 - critical * critical, 0.0))
    to_lower = n1 > n2 and not reflects
    keep_d, cos_1, cos_2 = (1.0, -2.0, 0.0) if reflects else (ratio, -ratio, 1.0)
    expected = 1.0 if reflects else 0.0
    judged = 0.0 if mirror else 1.0
    for i in range(n):
        x, y, z, u, v, w = m[LX * BLOCK + i], m[LY * BLOCK + i], m[LZ * BLOCK + i], m[LU * BLOCK + i], m[LV * BLOCK + i], m[LW * BLOCK + i]
        gx, gy, gz = a * x, a * y, b * z + e
        along = gx * u + gy * v + gz * w
        size = (1.0 if along >= 0.0 else -1.0) / math.sqrt(gx * gx + gy * gy + gz * gz)
        gx, gy, gz, cos1 = gx * size, gy * size, gz * size, along * size
        sin1 = math.sqrt(max(1.0 - cos1 * cos1, 0.0))
        squared = (1.0 - ratio * sin1) * (1.0 + ratio * sin1)
        total = squared <= 0.0
        cos2 = math.sqrt(max(squared, 0.0))
        rs = (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2)
        rp = (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)
        through = 1.0 - 0.5 * (rs * rs + rp * rp)
        # Reflected: d - 2 cos1 g; refracted: ratio d + (cos2 - ratio cos1) g.
        add_g = cos_1 * cos1 + cos_2 * cos2
        u, v, w = keep_d * u + add_g * gx, keep_d * v + add_g * gy, keep_d * w + add_g * gz
        scale = 1.0 / math.sqrt(u * u + v * v + w * w)
        u, v, w = u * scale, v * scale, w * scale
        m[U * BLOCK + i] = a0 * u + a1 * v + a2 * w
        m[V * BLOCK + i] = b0 * u + b1 * v + b2 * w
        m[W * BLOCK + i] = c0 * u + c1 * v + c2 * w
        room = critical * cos1 - sin1 * inner
        less = to_lower & (room < m[ROOM * BLOCK + i])
        m[ROOM * BLOCK + i] = room if less else m[ROOM * BLOCK + i]
        m[ROOM_FACE * BLOCK + i] = f if less else m[ROOM_FACE * BLOCK + i]
        m[POWER * BLOCK + i] *= said + by_fresnel * (through - said)
        beyond = 1.0 if x * x + y * y > within else 0.0  # the normal of a periphery is not the quadric's
        m[FAILED * BLOCK + i] += judged * abs((1.0 if total else 0.0) - expected) + beyond


@kernel
def plan_path(s, body, met, path_face, path_point, rows, bodies_after):
    """Sides and next bodies of a traced path; False where it cannot be replayed."""
    q, pieces, sides, bodies, checks, near, _, _ = s
    for k in range(met):
        f, reflects = path_face[k] // 2, path_face[k] % 2
        rows[k] = -1
        for i in range(bodies[body, SIDE_FROM], bodies[body, SIDE_TO]):
            if sides[i, FACE] == f:
                rows[k] = i
        if rows[k] < 0:
            return False
        if reflects == 0:
            body = neighbour(q, pieces, sides, bodies, checks, near, rows[k], path_point[k, 0], path_point[k, 1],
                             path_point[k, 2])
        bodies_after[k] = body
        if body == AIR_BODY and k < met - 1:
            return False
    return True


@kernel
def ask_way_out(s, body, row, m, n):
    """Ask the general tracer where doubtful rays leave their body; those that go another way fail."""
    q, pieces, sides, bodies, _, _, _, _ = s
    for i in range(n):
        if m[UNSURE * BLOCK + i] > 0.0 and m[FAILED * BLOCK + i] == 0.0:
            got, t = way_out(q, pieces, sides, bodies, body, m[X * BLOCK + i], m[Y * BLOCK + i], m[Z * BLOCK + i], m[U * BLOCK + i], m[V * BLOCK + i], m[W * BLOCK + i])
            m[FAILED * BLOCK + i] += 0.0 if got == row else 1.0
            m[BEST * BLOCK + i] = t if got == row else 0.0


@kernel
def ask_neighbour(s, row, after, m, n):
    """Ask the general tracer which body takes doubtful rays; those that another one takes fail."""
    q, pieces, sides, bodies, checks, near, _, _ = s
    for i in range(n):
        if m[UNSURE * BLOCK + i] > 0.0 and m[FAILED * BLOCK + i] == 0.0:
            got = neighbour(q, pieces, sides, bodies, checks, near, row, m[X * BLOCK + i], m[Y * BLOCK + i], m[Z * BLOCK + i])
            m[FAILED * BLOCK + i] += 0.0 if got == after else 1.0


@kernel
def replay(s, body, met, path_face, rows, bodies_after, m, n):
    """Replay a path for n rays; rays that left it, or met the air's other bodies, have FAILED above zero."""
    q, pieces, sides, bodies, checks, near, air, optics = s
    for k in range(met):
        row, after, f = rows[k], bodies_after[k], path_face[k] // 2
        reflects = path_face[k] % 2 == 1
        cross_next(q, f, -float(sides[row, SIGN]), m, n)
        for i in range(bodies[body, SIDE_FROM], bodies[body, SIDE_TO]):
            if i != row:
                stays(q, sides[i, FACE], float(sides[i, SIGN]), m, n)
        ask_way_out(s, body, row, m, n)
        n1 = optics[body, INDEX]
        n2 = 1.0
        if reflects:
            # Total reflection is judged against what lies beyond, as the tracer does.
            beyond = neighbour(q, pieces, sides, bodies, checks, near, row, m[X * BLOCK], m[Y * BLOCK], m[Z * BLOCK])
            n2 = optics[beyond, INDEX] if beyond >= 0 else 1.0
        elif after >= 0:
            n2 = optics[after, INDEX]
        step_over(q, f, reflects, n1, n2, optics[body, ABSORPTION], m, n)
        if not reflects:
            for i in range(n):
                m[UNSURE * BLOCK + i] = 0.0
            if after >= 0:
                for i in range(bodies[after, CHECK_FROM], bodies[after, CHECK_TO]):
                    if checks[i, 0] != f:
                        on_side(q, checks[i, 0], float(checks[i, 1]), m, n)
            elif sides[row, NEAR_TO] > sides[row, NEAR_FROM]:
                for i in range(n):
                    m[UNSURE * BLOCK + i] = 1.0
            ask_neighbour(s, row, after, m, n)
            body = after
    for i in range(n):
        m[UNSURE * BLOCK + i] = 0.0
    last, sense = -1, 0
    for j in range(len(air)):
        i = air[j]
        if sides[i, FACE] != last or sides[i, SIGN] != sense:
            last, sense = sides[i, FACE], sides[i, SIGN]
            misses(q, last, float(sense), m, n)
    for i in range(n):
        if m[UNSURE * BLOCK + i] > 0.0 and m[FAILED * BLOCK + i] == 0.0:
            row, _ = way_in(q, pieces, sides, bodies, checks, air, m[X * BLOCK + i], m[Y * BLOCK + i], m[Z * BLOCK + i], m[U * BLOCK + i], m[V * BLOCK + i], m[W * BLOCK + i])
            m[FAILED * BLOCK + i] += 0.0 if row < 0 else 1.0


@kernel
def one_start(bodies, first, last):
    """Whether rays first to last start in one body that is not the air."""
    for i in range(first, last):
        if bodies[i] != bodies[first]:
            return False
    return bodies[first] >= 0


@kernel
def trace_blocks(s, bodies, origins, directions, ended, status, points, outward, power, headroom, room_face, code, met,
                 stray):
    """Trace rays in blocks: one of each generally, the rest by replaying its path where that holds.

    The same arrays and meaning as `trace_bundle` without paths. Which rays
    share a block depends on their order alone.
    """
    path_face, path_point, path_dir = np.empty(64, np.int64), np.empty((64, 3)), np.empty((64, 3))
    rows, after = np.empty(64, np.int64), np.empty(64, np.int64)
    m = np.empty(ROWS * BLOCK)
    for first in range(0, len(origins), BLOCK):
        n = min(BLOCK, len(origins) - first)
        lead = first + n // 2
        for i in range(n):
            m[FAILED * BLOCK + i] = 1.0
        last, count, path_code = np.int64(-1), 0, np.int64(0)
        if one_start(bodies, first, first + n):
            (end, last, _, _, _, _, _, _, _, _, _, path_code, count, lost) = trace_ray(
                s, bodies[lead], origins[lead, 0], origins[lead, 1], origins[lead, 2], directions[lead, 0],
                directions[lead, 1], directions[lead, 2], True, path_face, path_point, path_dir)
            if end == LEFT and count <= LONGEST and lost == 0 and plan_path(
                    s, bodies[lead], count, path_face, path_point, rows, after):
                for i in range(n):
                    k = first + i
                    m[X * BLOCK + i], m[Y * BLOCK + i], m[Z * BLOCK + i] = origins[k, 0], origins[k, 1], origins[k, 2]
                    m[U * BLOCK + i], m[V * BLOCK + i], m[W * BLOCK + i] = (directions[k, 0], directions[k, 1],
                                                                            directions[k, 2])
                    m[FAILED * BLOCK + i], m[POWER * BLOCK + i] = 0.0, 1.0
                    m[ROOM * BLOCK + i], m[ROOM_FACE * BLOCK + i] = math.inf, -1.0
                replay(s, bodies[lead], count, path_face, rows, after, m, n)
        for i in range(n):
            k = first + i
            if m[FAILED * BLOCK + i] == 0.0:
                status[k], ended[k], code[k], met[k], stray[k] = LEFT, last, path_code, count, 0
                points[k, 0], points[k, 1], points[k, 2] = m[X * BLOCK + i], m[Y * BLOCK + i], m[Z * BLOCK + i]
                outward[k, 0], outward[k, 1], outward[k, 2] = m[U * BLOCK + i], m[V * BLOCK + i], m[W * BLOCK + i]
                power[k], headroom[k] = m[POWER * BLOCK + i], angle_of(m[ROOM * BLOCK + i])
                room_face[k] = int(m[ROOM_FACE * BLOCK + i])
            else:
                (status[k], ended[k], points[k, 0], points[k, 1], points[k, 2], outward[k, 0], outward[k, 1],
                 outward[k, 2], power[k], headroom[k], room_face[k], code[k], met[k], stray[k]) = trace_ray(
                    s, bodies[k], origins[k, 0], origins[k, 1], origins[k, 2], directions[k, 0], directions[k, 1],
                    directions[k, 2], False, path_face, path_point, path_dir)
