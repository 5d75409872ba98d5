"""Newton's method on the first direction of a path: through a given point, or out in a given direction.

The unknown is the light's first direction at T, two numbers in its tangent plane; the residual is the
offset of the last ray from the point (mm), or of its direction from the one asked for. The path must
keep its code (the list of faces it meets) all the way.
"""

from __future__ import annotations

import math

import numpy as np

from . import kernel
from .arrays import LEFT
from .bundle import trace_ray

STEP = 1e-7  # radians, for the derivative by differences
MAX_STEPS = 25
MAX_HALVINGS = 10
TRIES = 4  # starts from which Newton is tried
APART_COS = 0.996  # cosine of 5 degrees: a start this near to one that failed is not tried
FOUND, NO_START, NOT_CONVERGED = range(3)


@kernel
def square_axes(w):
    """Two unit vectors square to a unit vector and to each other."""
    e = np.empty((2, 3))
    i = 0 if abs(w[0]) <= abs(w[1]) and abs(w[0]) <= abs(w[2]) else (1 if abs(w[1]) <= abs(w[2]) else 2)
    a = np.zeros(3)
    a[i] = 1.0
    e[0] = np.cross(w, a)
    e[0] /= math.sqrt(np.dot(e[0], e[0]))
    e[1] = np.cross(w, e[0])
    return e


@kernel
def exit_ray(s, body, origin, d, code, out_point, out_dir):
    """Trace to the air; True where the ray leaves by the path asked for."""
    face, point = np.empty(0, np.int64), np.empty((0, 3))
    (status, _, p0, p1, p2, d0, d1, d2, _, _, _, got, _, _) = trace_ray(
        s, body, origin[0], origin[1], origin[2], d[0], d[1], d[2], False, face, point, point)
    out_point[0], out_point[1], out_point[2] = p0, p1, p2
    out_dir[0], out_dir[1], out_dir[2] = d0, d1, d2
    return status == LEFT and got == code


@kernel
def residual(to_point, goal, axes, point, direction, out):
    """Offset of the last ray from the goal along two axes; True where it runs toward the goal."""
    if to_point:
        v0, v1, v2 = goal[0] - point[0], goal[1] - point[1], goal[2] - point[2]
        along = v0 * direction[0] + v1 * direction[1] + v2 * direction[2]
        v0, v1, v2 = v0 - along * direction[0], v1 - along * direction[1], v2 - along * direction[2]
        forward = along > 0.0
    else:
        v0, v1, v2 = direction[0], direction[1], direction[2]
        forward = v0 * goal[0] + v1 * goal[1] + v2 * goal[2] > 0.0
    out[0] = v0 * axes[0, 0] + v1 * axes[0, 1] + v2 * axes[0, 2]
    out[1] = v0 * axes[1, 0] + v1 * axes[1, 1] + v2 * axes[1, 2]
    return forward


@kernel
def tilted(d, tangent, a, b):
    """Unit vector d leaned by a, b along its two tangent axes."""
    e = d + a * tangent[0] + b * tangent[1]
    return e / math.sqrt(np.dot(e, e))


@kernel
def aim(s, body, origin, start, code, to_point, goal, tolerance, found_dir, out_point, out_dir):
    """Solve for the first direction. to_point: goal is a point in mm, else a unit direction.

    Fills found_dir, out_point, out_dir (3,) with the best reached; returns FOUND, NO_START or
    NOT_CONVERGED. tolerance: mm for a point, radians for a direction.
    """
    d = start.copy()
    if not exit_ray(s, body, origin, d, code, out_point, out_dir):
        return NO_START
    if to_point:
        towards = goal - out_point
        axes = square_axes(towards / math.sqrt(np.dot(towards, towards)))
    else:
        axes = square_axes(goal)
    r, ra, rb = np.empty(2), np.empty(2), np.empty(2)
    p, q = np.empty(3), np.empty(3)
    forward = residual(to_point, goal, axes, out_point, out_dir, r)
    size = math.hypot(r[0], r[1])
    for _ in range(MAX_STEPS):
        if forward and size <= tolerance:
            break
        tangent = square_axes(d)
        if not slope_along(s, body, origin, d, tangent, code, to_point, goal, axes, r, ra, rb, p, q):
            break
        det = ra[0] * rb[1] - rb[0] * ra[1]
        if det == 0.0:
            break
        a = -(r[0] * rb[1] - r[1] * rb[0]) / det
        b = -(r[1] * ra[0] - r[0] * ra[1]) / det
        length = math.hypot(a, b)
        if length > 0.2:
            a, b = a * 0.2 / length, b * 0.2 / length
        share, moved = 1.0, False
        for _ in range(MAX_HALVINGS):
            trial = tilted(d, tangent, share * a, share * b)
            if exit_ray(s, body, origin, trial, code, p, q):
                ahead = residual(to_point, goal, axes, p, q, ra)
                new = math.hypot(ra[0], ra[1])
                if new < size or (ahead and not forward):
                    moved = True
                    break
            share *= 0.5
        if not moved:
            break
        d[:] = trial
        out_point[:], out_dir[:] = p, q
        r[:], size, forward = ra, new, ahead
    found_dir[:] = d
    return FOUND if forward and size <= tolerance else NOT_CONVERGED


@kernel
def slope_along(s, body, origin, d, tangent, code, to_point, goal, axes, r, ra, rb, p, q):
    """Derivatives of the residual along both tangent axes into ra, rb; False at a path's very edge."""
    for axis in range(2):
        out = ra if axis == 0 else rb
        done = False
        for sign in (1.0, -1.0):
            h = sign * STEP
            trial = tilted(d, tangent, h if axis == 0 else 0.0, 0.0 if axis == 0 else h)
            if exit_ray(s, body, origin, trial, code, p, q):
                residual(to_point, goal, axes, p, q, out)
                out[0], out[1] = (out[0] - r[0]) / h, (out[1] - r[1]) / h
                done = True
                break
        if not done:
            return False
    return True


@kernel
def between(p1, d1, p2, d2, mid):
    """Midpoint of the shortest segment between two lines into mid; returns its length."""
    w = p1 - p2
    b = np.dot(d1, d2)
    d, e = np.dot(d1, w), np.dot(d2, w)
    under = 1.0 - b * b
    if under < 1e-15:
        return math.inf
    t, u = (b * e - d) / under, (e - b * d) / under
    a1, a2 = p1 + t * d1, p2 + u * d2
    mid[:] = 0.5 * (a1 + a2)
    gap = a1 - a2
    return math.sqrt(np.dot(gap, gap))


@kernel
def centred_sight(s, body, origin, start, code, w, right, distance_mm, half_base_mm, dirs, points, outs, centre, apparent):
    """The scope centred on a target's image, seen along w: axis path, both pupils, C and A.

    The axis is the path that leaves in exactly w; C is the axis point nearest to A; iterated until C
    moves less than 1e-9 mm. dirs, points, outs (3, 3): first direction, last point, last direction for
    left, right, middle. Fills centre and apparent (3,). Returns (code, gap, which): FOUND, and the
    stereo gap; else the failing path: 0 left, 1 right, 2 axis.
    """
    if aim(s, body, origin, start, code, False, w, 1e-13, dirs[2], points[2], outs[2]) != FOUND:
        return NOT_CONVERGED, math.inf, 2
    centre[:] = origin
    dirs[0], dirs[1] = dirs[2], dirs[2]
    gap = math.inf
    for _ in range(60):
        for eye in range(2):
            side = half_base_mm * (-1.0 if eye == 0 else 1.0)
            pupil = centre + distance_mm * w + side * right
            if aim(s, body, origin, dirs[eye].copy(), code, True, pupil, 1e-10, dirs[eye], points[eye], outs[eye]) != FOUND:
                return NOT_CONVERGED, math.inf, eye
        gap = between(points[0], outs[0], points[1], outs[1], apparent)
        moved_to = points[2] + np.dot(apparent - points[2], w) * w
        step = moved_to - centre
        centre[:] = moved_to
        if math.sqrt(np.dot(step, step)) < 1e-10:
            return FOUND, gap, -1
    return NOT_CONVERGED, gap, 2


@kernel
def power_of(s, body, origin, d):
    """Throughput of one ray."""
    face, point = np.empty(0, np.int64), np.empty((0, 3))
    out = trace_ray(s, body, origin[0], origin[1], origin[2], d[0], d[1], d[2], False, face, point, point)
    return out[8]


@kernel
def nearest_start(first, outward, w, widest_cos, failed):
    """Row of the ray that leaves nearest to w, apart from starts that failed; -1: none within widest_cos.

    Where the map from first to last direction folds, the nearest ray may lie on a branch that never
    reaches w; the next start is then looked for elsewhere.
    """
    best, row = widest_cos, -1
    for j in range(len(first)):
        near = outward[j, 0] * w[0] + outward[j, 1] * w[1] + outward[j, 2] * w[2]
        if near <= best:
            continue
        apart = True
        for k in range(len(failed)):
            if first[j, 0] * failed[k, 0] + first[j, 1] * failed[k, 1] + first[j, 2] * failed[k, 2] > APART_COS:
                apart = False
        if apart:
            best, row = near, j
    return row


@kernel
def sweep(s, body, origin, code, first, outward, sights, rights, distance_mm, half_base_mm, widest_cos, power):
    """For each line of sight, the lesser throughput to the two pupils by one list of faces, 0 where not seen.

    first, outward (n, 3): the fan's rays of that list. sights, rights (k, 3). power (k,) is raised, never lowered.
    """
    dirs, points, outs = np.empty((3, 3)), np.empty((3, 3)), np.empty((3, 3))
    centre, apparent = np.empty(3), np.empty(3)
    failed = np.empty((TRIES, 3))
    for i in range(len(sights)):
        w = sights[i]
        for attempt in range(TRIES):
            row = nearest_start(first, outward, w, widest_cos, failed[:attempt])
            if row < 0:
                break
            status, _, _ = centred_sight(s, body, origin, first[row].copy(), code, w, rights[i], distance_mm,
                                         half_base_mm, dirs, points, outs, centre, apparent)
            if status == FOUND:
                reached = min(power_of(s, body, origin, dirs[0]), power_of(s, body, origin, dirs[1]))
                power[i] = max(power[i], reached)
                break
            failed[attempt] = first[row]
