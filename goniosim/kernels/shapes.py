"""Where a ray crosses a surface, and on which side of it a point lies, one function per kind.

Frame: the surface's own, +z forward. A crossing is wanted in one sense only: `want` = +1 from behind
to ahead (along the forward normal), -1 the other way. That sense decides which root is meant, so that
a ray that starts on a surface needs no offset to leave it. Returns the distance t, infinite where there is none.

`q` is the face table, `f` the face; a cubic piece is handed on as its numbers r0, a, b, c, d.
"""

from __future__ import annotations

import math

from . import kernel, small_kernel
from .arrays import EXT, KIND, PAR, PIECE_FROM, PIECE_TO
from .toric import toric_height

T_MIN = -1e-9  # mm; a start that rounding put just outside still counts
SAMPLES = 8
CONVEX = -1.0  # bound on bending that marks a piece along which z - s(rho) is convex for every ray
FAR_MM = 60.0  # a toric face is searched for this far about its vertex
PLANE, CONIC, CYLINDER, CONE, PROFILE, RING_ARC, ROUND_CORNEA, TORIC = range(8)


@small_kernel
def quadratic_crossing(a, b, c, want):
    """Root of a t^2 + 2 b t + c where the gradient along the ray, a t + b, has the wanted sign."""
    under = b * b - a * c
    if under < 0.0:
        return math.inf
    s = want * math.sqrt(under)
    # Keep the form whose denominator does not cancel.
    if b * want > 0.0:
        return -c / (b + s)
    if a == 0.0:
        return math.inf
    return (-b + s) / a


@small_kernel
def conic_crossing(c, k, px, py, pz, dx, dy, dz, want):
    """Crossing of the cap c (r^2 + k z^2) + 2 z = 0 on the vertex's side of its centre."""
    a = c * (dx * dx + dy * dy + k * dz * dz)
    b = c * (px * dx + py * dy + k * pz * dz) + dz
    g = c * (px * px + py * py + k * pz * pz) + 2.0 * pz
    t = quadratic_crossing(a, b, g, want)
    if t < T_MIN or not t < math.inf or 1.0 + c * k * (pz + t * dz) <= 0.0:
        return math.inf
    return t


@small_kernel
def radial_interval(px, py, dx, dy, radius):
    """The t between which a ray's distance from the z axis is at most radius; empty: (1, 0)."""
    a = dx * dx + dy * dy
    b = px * dx + py * dy
    c = px * px + py * py - radius * radius
    if a < 1e-300:
        if c <= 0.0:
            return -math.inf, math.inf
        return 1.0, 0.0
    under = b * b - a * c
    if under < 0.0:
        return 1.0, 0.0
    s = math.sqrt(under)
    if b > 0.0:
        low = (-b - s) / a
        return low, (c / a / low if low != 0.0 else 0.0)
    high = (-b + s) / a
    return (c / a / high if high != 0.0 else 0.0), high


@small_kernel
def slab_interval(p, d, low, high):
    """The t between which p + t d lies between low and high; empty: (1, 0)."""
    if abs(d) < 1e-300:
        if low <= p <= high:
            return -math.inf, math.inf
        return 1.0, 0.0
    t0, t1 = (low - p) / d, (high - p) / d
    return (t0, t1) if t0 < t1 else (t1, t0)


@kernel
def sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, t):
    """g and dg/dt along a ray; g > 0 ahead. r0 to d: the cubic piece, for surfaces made of pieces."""
    x, y, z = px + t * dx, py + t * dy, pz + t * dz
    if kind == TORIC:
        height, zx, zy = toric_height(q, f, x, y)
        return z - height, dz - zx * dx - zy * dy
    rho = math.sqrt(x * x + y * y)
    run = (x * dx + y * dy) / rho if rho > 0.0 else 0.0
    if kind == RING_ARC:
        across = rho - q[f, PAR]
        distance = math.sqrt(across * across + z * z)
        if distance == 0.0:
            return -q[f, PAR + 1], 0.0
        return distance - q[f, PAR + 1], (across * run + z * dz) / distance
    u = rho - r0
    height = a + u * (b + u * (c + u * d))
    slope = b + u * (2.0 * c + 3.0 * u * d)
    return z - height, dz - slope * run


@kernel
def refine(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, want, low, high):
    """Root of g in the bracket, want g(low) <= 0 <= want g(high), by Newton kept inside it."""
    t = 0.5 * (low + high)
    for _ in range(80):
        g, slope = sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, t)
        if want * g > 0.0:
            high = t
        else:
            low = t
        step = t - g / slope if slope != 0.0 else math.inf
        if not (low <= step <= high):
            step = 0.5 * (low + high)
            if step == t:
                return t
        elif abs(step - t) <= 1e-9 * (1.0 + abs(t)):
            return step  # Newton doubles the digits: this step is good to the last one
        t = step
    return t


@kernel
def turning_point(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, want, low, high):
    """The t in a bracket where want g stops growing, by bisection on its slope."""
    for _ in range(50):
        m = 0.5 * (low + high)
        _, slope = sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, m)
        if want * slope > 0.0:
            low = m
        else:
            high = m
    return 0.5 * (low + high)


@kernel
def surely_below(ga, sa, gb, sb, bend, h):
    """Whether g stays below zero between two samples h apart where |g''| <= bend; ga, gb <= 0 there."""
    curve = 0.5 * bend * h * h
    return max(ga, gb) + 0.25 * curve < 0.0 or ga + sa * h + curve < 0.0 or gb - sb * h + curve < 0.0


@kernel
def first_crossing(kind, q, f, r0, a, b, c, d, bend, px, py, pz, dx, dy, dz, want, t0, t1):
    """First wanted crossing of g in [t0, t1]; infinite: none.

    Steps as long as a bound on g'' shows that none is jumped over; at the shortest step one pair of crossings
    between samples is still found, where the slope of g turns. Written with one call of each helper, because
    every call is compiled in place.
    """
    if not t0 < t1:
        return math.inf
    at, shortest, h = t0, (t1 - t0) / SAMPLES, t1 - t0
    if bend == math.inf:
        h = shortest
    low, high = t1, t1
    ga, sa = sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, at)
    ga, sa = want * ga, want * sa
    while at < t1:
        to = at + h
        if to > t1 - 0.01 * shortest:
            to = t1
        gb, sb = sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, to)
        gb, sb = want * gb, want * sb
        below, above = ga <= 0.0 and gb <= 0.0, ga > 0.0 and gb > 0.0
        if bend == CONVEX:
            # Along any ray g is convex: it rises through zero at most once, and falls through it at most once.
            if (want > 0.0 and (below or (ga > 0.0 and (sa >= 0.0 or sb <= 0.0)))) or (
                    want < 0.0 and (ga > 0.0 or (below and (sa <= 0.0 or sb >= 0.0)))):
                return math.inf
            if ga <= 0.0 and gb > 0.0:
                low, high = at, to
                break
            bend, h = math.inf, shortest
            continue
        if below and surely_below(ga, sa, gb, sb, bend, to - at):
            h *= 2.0
        elif above and surely_below(-ga, -sa, -gb, -sb, bend, to - at):
            h *= 2.0
        elif h > 1.5 * shortest:
            h *= 0.5
            continue
        elif ga <= 0.0 and gb > 0.0:
            low, high = at, to
            break
        elif (below and sa > 0.0 and sb < 0.0) or (above and sa < 0.0 and sb > 0.0):
            # Between the samples g may reach over zero, or dip below it, and come back.
            sense = want if below else -want
            turn = turning_point(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, sense, at, to)
            g, _ = sag_value(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, turn)
            if below and want * g > 0.0:
                low, high = at, turn
                break
            if above and want * g <= 0.0:
                low, high = turn, to
                break
        at, ga, sa = to, gb, sb
    if low == high:
        return math.inf
    return refine(kind, q, f, r0, a, b, c, d, px, py, pz, dx, dy, dz, want, low, high)


@kernel
def ring_crossing(kind, q, f, r0, a, b, c, d, bend, px, py, pz, dx, dy, dz, want, inner, outer, low, high, since, limit):
    """First wanted crossing with a surface between two radii and two heights, from since to limit."""
    za, zb = slab_interval(pz, dz, low, high)
    oa, ob = radial_interval(px, py, dx, dy, outer)
    t0, t1 = max(max(za, oa), since), min(min(zb, ob), limit)
    if not t0 < t1:
        return math.inf
    middle, resume = t1, t1
    if inner > 0.0:
        ia, ib = radial_interval(px, py, dx, dy, inner)
        if ia < ib and ib > t0 and ia < t1:
            # The ray dives inside the inner radius: search before, then after.
            middle, resume = ia, ib
    for part in range(2):
        start, end = (t0, middle) if part == 0 else (resume, t1)
        t = first_crossing(kind, q, f, r0, a, b, c, d, bend, px, py, pz, dx, dy, dz, want, start, end)
        if t < math.inf:
            return t
    return math.inf


@kernel
def pieced_crossing(kind, q, f, pieces, px, py, pz, dx, dy, dz, want, limit):
    """First wanted crossing with a surface that is searched for along the ray: cubic pieces, torus, toric cornea."""
    best = limit
    first, last = int(q[f, PIECE_FROM]), int(q[f, PIECE_TO])
    r0, a, b, c, d, bend = 0.0, 0.0, 0.0, 0.0, 0.0, math.inf
    inner, outer, low, high = q[f, EXT], q[f, EXT + 1], q[f, EXT + 2], q[f, EXT + 3]
    if kind == TORIC:
        inner, outer, low, high = 0.0, min(outer, FAR_MM), -FAR_MM, FAR_MM
    if kind == TORIC or kind == RING_ARC:
        first, last = 0, 1
    elif kind == ROUND_CORNEA:
        t = conic_crossing(q[f, PAR], q[f, PAR + 1], px, py, pz, dx, dy, dz, want)
        if t < math.inf:
            x, y = px + t * dx, py + t * dy
            join2 = q[f, PAR + 2] * q[f, PAR + 2]
            if x * x + y * y <= join2:
                if px * px + py * py <= join2:
                    # Start and hit lie within the centre, so the way between them does too.
                    return t
                best = min(best, t)
    found = best if best < limit else math.inf
    for i in range(first, last):
        if kind == PROFILE or kind == ROUND_CORNEA:
            r0, a, b, c, d, bend = pieces[i, 0], pieces[i, 2], pieces[i, 3], pieces[i, 4], pieces[i, 5], pieces[i, 8]
            inner, outer, low, high = r0, pieces[i, 1], pieces[i, 6], pieces[i, 7]
        since = T_MIN
        for _ in range(3):
            t = ring_crossing(kind, q, f, r0, a, b, c, d, bend, px, py, pz, dx, dy, dz, want, inner, outer, low, high,
                              since, best)
            if kind != RING_ARC or not t < math.inf:
                break
            x, y, z = px + t * dx, py + t * dy, pz + t * dz
            angle = math.atan2(z, math.sqrt(x * x + y * y) - q[f, PAR])
            if q[f, PAR + 2] - 1e-9 <= angle <= q[f, PAR + 3] + 1e-9:
                break
            since = t + 1e-9  # the hit lies on the rest of the torus: go on behind it
            t = math.inf
        if t < math.inf:
            best, found = t, t
    return found


@kernel
def crossing(q, f, pieces, px, py, pz, dx, dy, dz, want, limit):
    """Distance to the first wanted crossing with face f, in the face's own frame; infinite: none.

    Crossings farther than limit need not be found.
    """
    kind = int(q[f, KIND])
    t = math.inf
    if kind == PLANE:
        if dz * want > 0.0:
            t = -pz / dz
    elif kind == CONIC:
        t = conic_crossing(q[f, PAR], q[f, PAR + 1], px, py, pz, dx, dy, dz, want)
    elif kind == CYLINDER:
        radius = q[f, PAR]
        t = quadratic_crossing(dx * dx + dy * dy, px * dx + py * dy, px * px + py * py - radius * radius, want)
    elif kind == CONE:
        m = q[f, PAR + 1]
        r = q[f, PAR] + m * pz
        t = quadratic_crossing(dx * dx + dy * dy - m * m * dz * dz, px * dx + py * dy - m * r * dz,
                               px * px + py * py - r * r, want)
        if t < math.inf and r + m * t * dz < 0.0:
            return math.inf
    else:
        return pieced_crossing(kind, q, f, pieces, px, py, pz, dx, dy, dz, want, limit)
    if not T_MIN <= t < math.inf:
        return math.inf
    z = pz + t * dz
    if not q[f, EXT + 2] <= z <= q[f, EXT + 3]:
        return math.inf
    inner, outer = q[f, EXT], q[f, EXT + 1]
    if inner > 0.0 or outer < math.inf:
        x, y = px + t * dx, py + t * dy
        rho = math.sqrt(x * x + y * y)
        if rho < inner - 1e-9 or rho > outer + 1e-9:
            return math.inf
    return t


@kernel
def normal_at(q, f, pieces, x, y, z):
    """Forward unit normal at a point of face f, in the face's own frame."""
    kind = int(q[f, KIND])
    if kind == PLANE:
        return 0.0, 0.0, 1.0
    rho2 = x * x + y * y
    if kind == CONIC or (kind == ROUND_CORNEA and rho2 <= q[f, PAR + 2] * q[f, PAR + 2]):
        c = q[f, PAR]
        nx, ny, nz = c * x, c * y, 1.0 + c * q[f, PAR + 1] * z
    elif kind == CYLINDER:
        nx, ny, nz = x, y, 0.0
    elif kind == CONE:
        nx, ny, nz = x, y, -q[f, PAR + 1] * math.sqrt(rho2)
    elif kind == RING_ARC:
        rho = math.sqrt(rho2)
        out = (rho - q[f, PAR]) / rho
        nx, ny, nz = out * x, out * y, z
    elif kind == TORIC:
        _, zx, zy = toric_height(q, f, x, y)
        nx, ny, nz = -zx, -zy, 1.0
    else:
        rho = math.sqrt(rho2)
        i = piece_of(q, f, pieces, rho)
        u = rho - pieces[i, 0]
        slope = pieces[i, 3] + u * (2.0 * pieces[i, 4] + 3.0 * u * pieces[i, 5])
        over = slope / rho if rho > 0.0 else 0.0
        nx, ny, nz = -over * x, -over * y, 1.0
    scale = 1.0 / math.sqrt(nx * nx + ny * ny + nz * nz)
    return nx * scale, ny * scale, nz * scale


@kernel
def piece_of(q, f, pieces, rho):
    """Row of the cubic piece that holds a radius; the end pieces run on."""
    i, last = int(q[f, PIECE_FROM]), int(q[f, PIECE_TO])
    while i < last - 1 and rho > pieces[i, 1]:
        i += 1
    return i


@kernel
def side_of(q, f, pieces, x, y, z):
    """Positive ahead of face f, not positive behind it, in the face's own frame."""
    kind = int(q[f, KIND])
    if kind == PLANE:
        return z
    rho2 = x * x + y * y
    if kind == CONIC or (kind == ROUND_CORNEA and rho2 <= q[f, PAR + 2] * q[f, PAR + 2]):
        c = q[f, PAR]
        under = 1.0 - q[f, PAR + 1] * c * c * rho2
        if under <= 0.0:
            return -1.0
        return z + c * rho2 / (1.0 + math.sqrt(under))
    rho = math.sqrt(rho2)
    if kind == CYLINDER:
        return rho - q[f, PAR]
    if kind == CONE:
        return rho - (q[f, PAR] + q[f, PAR + 1] * z)
    if kind == RING_ARC:
        across = rho - q[f, PAR]
        return math.sqrt(across * across + z * z) - q[f, PAR + 1]
    if kind == TORIC:
        if q[f, PAR + 6] == 0.0 and rho >= q[f, EXT + 1]:
            return -1.0  # beyond its equator a bare biconic cap has nothing behind it; a periphery goes on
        height, _, _ = toric_height(q, f, x, y)
        return z - height
    if kind == PROFILE and (rho < q[f, EXT] - 1e-9 or rho > q[f, EXT + 1] + 1e-9):
        return -1.0
    i = piece_of(q, f, pieces, rho)
    u = rho - pieces[i, 0]
    return z - (pieces[i, 2] + u * (pieces[i, 3] + u * (pieces[i, 4] + u * pieces[i, 5])))
