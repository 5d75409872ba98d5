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
LONGEST_STEP = 0.2  # radians
MAX_CENTRINGS = 60
MAX_STEPS = 25
MAX_HALVINGS = 10
TRIES = 4  # starts from which Newton is tried
APART_COS = 0.996  # cosine of 5 degrees: a start this near to one that failed is not tried
FOUND, NO_START, NOT_CONVERGED = range(3)


@kernel
def dot(a, b):
    """Scalar product of two (3,) arrays."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


@kernel
def square_axes(w, axes):
    """Two unit vectors square to a unit vector and to each other, into axes (2, 3)."""
    x, y, z = w[0], w[1], w[2]
    # Cross with the axis to which w leans least.
    if abs(x) <= abs(y) and abs(x) <= abs(z):
        a, b, c = 0.0, z, -y
    elif abs(y) <= abs(z):
        a, b, c = -z, 0.0, x
    else:
        a, b, c = y, -x, 0.0
    scale = 1.0 / math.sqrt(a * a + b * b + c * c)
    a, b, c = a * scale, b * scale, c * scale
    axes[0, 0], axes[0, 1], axes[0, 2] = a, b, c
    axes[1, 0], axes[1, 1], axes[1, 2] = y * c - z * b, z * a - x * c, x * b - y * a


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
def tilt(d, tangent, a, b, out):
    """Unit vector d leaned by a, b along its two tangent axes, into out (3,)."""
    size = 0.0
    for k in range(3):
        out[k] = d[k] + a * tangent[0, k] + b * tangent[1, k]
        size += out[k] * out[k]
    copy(out, out, 1.0 / math.sqrt(size))


@kernel
def copy(source, target, factor):
    """Three numbers, times a factor, into target."""
    for k in range(3):
        target[k] = factor * source[k]


@kernel
def aim(s, body, origin, start, code, to_point, goal, tolerance, found_dir, out_point, out_dir):
    """Solve for the first direction. to_point: goal is a point in mm, else a unit direction.

    Fills found_dir, out_point, out_dir (3,) with the best reached; returns FOUND, NO_START or
    NOT_CONVERGED. tolerance: mm for a point, radians for a direction. start may be found_dir itself.
    """
    d, trial, p, q = np.empty(3), np.empty(3), np.empty(3), np.empty(3)
    r, ra, rb = np.empty(2), np.empty(2), np.empty(2)
    axes, tangent = np.empty((2, 3)), np.empty((2, 3))
    copy(start, d, 1.0)
    if not exit_ray(s, body, origin, d, code, out_point, out_dir):
        return NO_START
    copy(goal, p, 1.0)
    if to_point:
        for k in range(3):
            p[k] -= out_point[k]
        copy(p, p, 1.0 / math.sqrt(dot(p, p)))
    square_axes(p, axes)
    forward = residual(to_point, goal, axes, out_point, out_dir, r)
    size = math.hypot(r[0], r[1])
    for _ in range(MAX_STEPS):
        if forward and size <= tolerance:
            break
        square_axes(d, tangent)
        if not slope_along(s, body, origin, d, tangent, code, to_point, goal, axes, r, ra, rb, p, q, trial):
            break
        det = ra[0] * rb[1] - rb[0] * ra[1]
        if det == 0.0:
            break
        a = -(r[0] * rb[1] - r[1] * rb[0]) / det
        b = -(r[1] * ra[0] - r[0] * ra[1]) / det
        length = math.hypot(a, b)
        share, moved, new, ahead = min(1.0, LONGEST_STEP / length) if length > 0.0 else 1.0, False, size, forward
        for _ in range(MAX_HALVINGS):
            tilt(d, tangent, share * a, share * b, trial)
            if exit_ray(s, body, origin, trial, code, p, q):
                ahead = residual(to_point, goal, axes, p, q, ra)
                new = math.hypot(ra[0], ra[1])
                if new < size or (ahead and not forward):
                    moved = True
                    break
            share *= 0.5
        if not moved:
            break
        copy(trial, d, 1.0)
        copy(p, out_point, 1.0)
        copy(q, out_dir, 1.0)
        r[0], r[1] = ra[0], ra[1]
        size, forward = new, ahead
    copy(d, found_dir, 1.0)
    return FOUND if forward and size <= tolerance else NOT_CONVERGED


@kernel
def slope_along(s, body, origin, d, tangent, code, to_point, goal, axes, r, ra, rb, p, q, trial):
    """Derivatives of the residual along both tangent axes into ra, rb; False at a path's very edge."""
    done = False
    for attempt in range(4):
        axis, sign = attempt // 2, 1.0 - 2.0 * (attempt % 2)
        if attempt % 2 == 1 and done:
            continue
        out = ra if axis == 0 else rb
        h = sign * STEP
        tilt(d, tangent, h * (1 - axis), h * axis, trial)
        done = exit_ray(s, body, origin, trial, code, p, q)
        if done:
            residual(to_point, goal, axes, p, q, out)
            out[0], out[1] = (out[0] - r[0]) / h, (out[1] - r[1]) / h
        elif sign < 0.0:
            return False
    return True


@kernel
def between(p1, d1, p2, d2, mid):
    """Midpoint of the shortest segment between two lines into mid; returns its length."""
    w = np.empty(3)
    for k in range(3):
        w[k] = p1[k] - p2[k]
    b, d, e = dot(d1, d2), dot(d1, w), dot(d2, w)
    under = 1.0 - b * b
    if under < 1e-15:
        return math.inf
    t, u = (b * e - d) / under, (e - b * d) / under
    gap = 0.0
    for k in range(3):
        one, other = p1[k] + t * d1[k], p2[k] + u * d2[k]
        mid[k] = 0.5 * (one + other)
        gap += (one - other) ** 2
    return math.sqrt(gap)


@kernel
def centred_sight(s, body, origin, start, code, w, right, distance_mm, half_base_mm, dirs, points, outs, centre, apparent):
    """The scope centred on a target's image, seen along w: axis path, both pupils, C and A.

    The axis is the path that leaves in exactly w; C is the axis point nearest to A; iterated until C
    moves less than 1e-10 mm. dirs, points, outs (3, 3): first direction, last point, last direction for
    left, right, middle. Fills centre and apparent (3,). Returns (status, gap): FOUND, and the stereo gap.
    """
    goal, gap = np.empty(3), math.inf
    for turn in range(1 + 2 * MAX_CENTRINGS):
        # The axis first, then left and right in turn.
        which = 2 if turn == 0 else (turn - 1) % 2
        if turn == 0:
            copy(w, goal, 1.0)
            copy(start, dirs[2], 1.0)
        else:
            side = half_base_mm * (2.0 * which - 1.0)
            for k in range(3):
                goal[k] = centre[k] + distance_mm * w[k] + side * right[k]
            if turn < 3:
                copy(dirs[2], dirs[which], 1.0)
        if aim(s, body, origin, dirs[which], code, turn > 0, goal, 1e-10 if turn else 1e-13, dirs[which], points[which],
               outs[which]) != FOUND:
            return NOT_CONVERGED, math.inf
        if which == 2:
            # Begin on the axis, beside the target: pupils centred on the target itself may lie in a shadow.
            along = 0.0
            for k in range(3):
                along += (origin[k] - points[2, k]) * w[k]
            for k in range(3):
                centre[k] = points[2, k] + along * w[k]
        if which == 1:
            gap = between(points[0], outs[0], points[1], outs[1], apparent)
            along, step = 0.0, 0.0
            for k in range(3):
                along += (apparent[k] - points[2, k]) * w[k]
            for k in range(3):
                moved_to = points[2, k] + along * w[k]
                step += (moved_to - centre[k]) ** 2
                centre[k] = moved_to
            if math.sqrt(step) < 1e-10:
                return FOUND, gap
    return NOT_CONVERGED, gap


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
            status, _ = centred_sight(s, body, origin, first[row], code, w, rights[i], distance_mm,
                                         half_base_mm, dirs, points, outs, centre, apparent)
            if status == FOUND:
                reached = min(power_of(s, body, origin, dirs[0]), power_of(s, body, origin, dirs[1]))
                power[i] = max(power[i], reached)
                break
            copy(first[row], failed[attempt], 1.0)
