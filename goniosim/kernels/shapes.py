"""Where a ray crosses a surface, and on which side of it a point lies, one function per kind.

Frame: the surface's own, +z forward. A crossing is wanted in one sense only: `want` = +1 from behind
to ahead (along the forward normal), -1 the other way. That sense decides which root is meant, so that
a ray that starts on a surface needs no offset to leave it. Returns the distance t (infinite: none)
and, from `meet`, the forward unit normal.
"""

from __future__ import annotations

import math

from . import kernel

T_MIN = -1e-9  # mm; a start that rounding put just outside still counts
SAMPLES = 8  # first subdivision of an interval that may hold several crossings
PLANE, CONIC, CYLINDER, CONE, PROFILE, RING_ARC, ROUND_CORNEA, TORIC = range(8)


@kernel
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


@kernel
def conic_crossing(c, k, px, py, pz, dx, dy, dz, want):
    """Crossing of the cap c (r^2 + k z^2) + 2 z = 0 on the vertex's side of its centre."""
    a = c * (dx * dx + dy * dy + k * dz * dz)
    b = c * (px * dx + py * dy + k * pz * dz) + dz
    g = c * (px * px + py * py + k * pz * pz) + 2.0 * pz
    t = quadratic_crossing(a, b, g, want)
    if t < T_MIN or not t < math.inf or 1.0 + c * k * (pz + t * dz) <= 0.0:
        return math.inf
    return t


@kernel
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


@kernel
def slab_interval(p, d, low, high):
    """The t between which p + t d lies between low and high; empty: (1, 0)."""
    if abs(d) < 1e-300:
        if low <= p <= high:
            return -math.inf, math.inf
        return 1.0, 0.0
    t0, t1 = (low - p) / d, (high - p) / d
    return (t0, t1) if t0 < t1 else (t1, t0)


@kernel
def sag_value(kind, par, row, px, py, pz, dx, dy, dz, t):
    """f and df/dt along a ray; f > 0 ahead. row: cubic piece, used by PROFILE and ROUND_CORNEA."""
    x, y, z = px + t * dx, py + t * dy, pz + t * dz
    if kind == TORIC:
        height, zx, zy = toric_height(par, x, y)
        return z - height, dz - zx * dx - zy * dy
    rho = math.sqrt(x * x + y * y)
    run = (x * dx + y * dy) / rho if rho > 0.0 else 0.0
    if kind == RING_ARC:
        across = rho - par[0]
        distance = math.sqrt(across * across + z * z)
        if distance == 0.0:
            return -par[1], 0.0
        return distance - par[1], (across * run + z * dz) / distance
    u = rho - row[0]
    height = row[2] + u * (row[3] + u * (row[4] + u * row[5]))
    slope = row[3] + u * (2.0 * row[4] + 3.0 * u * row[5])
    return z - height, dz - slope * run


@kernel
def refine(kind, par, row, px, py, pz, dx, dy, dz, want, a, b):
    """Root of f in the bracket [a, b], want f(a) <= 0 <= want f(b), by Newton kept inside it."""
    t = 0.5 * (a + b)
    for _ in range(80):
        f, slope = sag_value(kind, par, row, px, py, pz, dx, dy, dz, t)
        if want * f > 0.0:
            b = t
        else:
            a = t
        step = t - f / slope if slope != 0.0 else math.inf
        if not (a <= step <= b):
            step = 0.5 * (a + b)
        if abs(step - t) <= 2e-16 * (1.0 + abs(t)):
            return step
        t = step
    return t


@kernel
def highest_inside(kind, par, row, px, py, pz, dx, dy, dz, want, a, b):
    """The t in (a, b) where want f stops growing, by bisection on its slope."""
    for _ in range(50):
        m = 0.5 * (a + b)
        _, slope = sag_value(kind, par, row, px, py, pz, dx, dy, dz, m)
        if want * slope > 0.0:
            a = m
        else:
            b = m
    return 0.5 * (a + b)


@kernel
def first_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, t0, t1):
    """First wanted crossing of f in [t0, t1], found by subdivision; infinite: none.

    Between samples one pair of crossings is found too, where the slope of f turns.
    """
    if t0 < T_MIN:
        t0 = T_MIN
    if not t0 < t1:
        return math.inf
    fa, sa = sag_value(kind, par, row, px, py, pz, dx, dy, dz, t0)
    a = t0
    for i in range(1, SAMPLES + 1):
        b = t0 + (t1 - t0) * i / SAMPLES
        fb, sb = sag_value(kind, par, row, px, py, pz, dx, dy, dz, b)
        if want * fa <= 0.0:
            if want * fb > 0.0:
                return refine(kind, par, row, px, py, pz, dx, dy, dz, want, a, b)
            if want * sa > 0.0 and want * sb < 0.0:
                top = highest_inside(kind, par, row, px, py, pz, dx, dy, dz, want, a, b)
                ft, _ = sag_value(kind, par, row, px, py, pz, dx, dy, dz, top)
                if want * ft > 0.0:
                    return refine(kind, par, row, px, py, pz, dx, dy, dz, want, a, top)
        elif want * fb > 0.0 and want * sa < 0.0 and want * sb > 0.0:
            # want f dips between the samples: it may cross down and up again inside.
            low = highest_inside(kind, par, row, px, py, pz, dx, dy, dz, -want, a, b)
            fl, _ = sag_value(kind, par, row, px, py, pz, dx, dy, dz, low)
            if want * fl <= 0.0:
                return refine(kind, par, row, px, py, pz, dx, dy, dz, want, low, b)
        a, fa, sa = b, fb, sb
    return math.inf


@kernel
def ring_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, r0, r1, z0, z1):
    """First wanted crossing with a surface between two radii and two heights."""
    za, zb = slab_interval(pz, dz, z0, z1)
    if za > zb or zb < T_MIN:
        return math.inf
    oa, ob = radial_interval(px, py, dx, dy, r1)
    a, b = max(za, oa), min(zb, ob)
    if a > b or b < T_MIN:
        return math.inf
    ia, ib = radial_interval(px, py, dx, dy, r0) if r0 > 0.0 else (1.0, 0.0)
    if not ia < ib or ib <= a or ia >= b:
        return first_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, a, b)
    # The ray dives inside the inner radius: search before, then after.
    if ia > a:
        t = first_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, a, ia)
        if t < math.inf:
            return t
    return first_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, max(a, ib), b)


@kernel
def toric_height(par, x, y):
    """z, dz/dx, dz/dy of a biconic with its own periphery; see faces/cornea.py for the equations."""
    cx, cy, k, cos, sin = par[0], par[1], par[2], par[3], par[4]
    join, mode, at, value, edge = par[5], par[6], par[7], par[8], par[9]
    xs, ys = x * cos + y * sin, y * cos - x * sin
    r2 = xs * xs + ys * ys
    if r2 < 1e-24:
        return 0.0, 0.0, 0.0
    r = math.sqrt(r2)
    a = (cx * xs * xs + cy * ys * ys) / r2
    b = k * (cx * cx * xs * xs + cy * cy * ys * ys) / r2
    ax, ay = 2.0 * xs * (cx - a) / r2, 2.0 * ys * (cy - a) / r2
    bx, by = 2.0 * xs * (k * cx * cx - b) / r2, 2.0 * ys * (k * cy * cy - b) / r2
    if mode == 0.0 or r <= join:
        under = max(1.0 - b * r2, 1e-12)
        s = math.sqrt(under)
        height = -a * r2 / (1.0 + s)
        zr, za = -a * r / s, -r2 / (1.0 + s)
        zb = -a * r2 * r2 / (2.0 * s * (1.0 + s) * (1.0 + s))
    else:
        height, zr, za, zb = periphery_height(a, b, r, join, mode, at, value, edge)
    zx = zr * xs / r + za * ax + zb * bx
    zy = zr * ys / r + za * ay + zb * by
    return height, zx * cos - zy * sin, zx * sin + zy * cos


@kernel
def periphery_height(a, b, r, join, mode, at, value, edge):
    """z and its derivatives by r, A and B beyond the join of a toric cornea."""
    j2 = join * join
    s = math.sqrt(1.0 - b * j2)
    v, v_a, v_b = -a * j2 / (1.0 + s), -j2 / (1.0 + s), -a * j2 * j2 / (2.0 * s * (1.0 + s) * (1.0 + s))
    m, m_a, m_b = -a * join / s, -join / s, -a * join * j2 / (2.0 * s**3)
    h, h_a, h_b = -0.5 * a / s**3, -0.5 / s**3, -0.75 * a * j2 / s**5
    w = at - join
    if mode == 1.0:
        q = (-value - v - m * w - h * w * w) / w**3
        q_a, q_b = -(v_a + m_a * w + h_a * w * w) / w**3, -(v_b + m_b * w + h_b * w * w) / w**3
    else:
        q = (-value - m - 2.0 * h * w) / (3.0 * w * w)
        q_a, q_b = -(m_a + 2.0 * h_a * w) / (3.0 * w * w), -(m_b + 2.0 * h_b * w) / (3.0 * w * w)
    u = min(r, edge) - join
    rest = r - join - u
    z, z_a, z_b = (v + u * (m + u * (h + u * q)), v_a + u * (m_a + u * (h_a + u * q_a)),
                   v_b + u * (m_b + u * (h_b + u * q_b)))
    g, g_a, g_b = (m + u * (2.0 * h + 3.0 * u * q), m_a + u * (2.0 * h_a + 3.0 * u * q_a),
                   m_b + u * (2.0 * h_b + 3.0 * u * q_b))
    return z + g * rest, g, z_a + g_a * rest, z_b + g_b * rest


@kernel
def crossing(kind, par, pieces, first, last, ext, px, py, pz, dx, dy, dz, want):
    """Distance to the first wanted crossing with a face, in the face's frame; infinite: none.

    ext : r_min, r_max, z_min, z_max of the face. first, last : its rows in pieces.
    """
    t = math.inf
    if kind == PLANE:
        if dz * want > 0.0:
            t = -pz / dz
    elif kind == CONIC:
        t = conic_crossing(par[0], par[1], px, py, pz, dx, dy, dz, want)
    elif kind == CYLINDER:
        t = quadratic_crossing(dx * dx + dy * dy, px * dx + py * dy, px * px + py * py - par[0] * par[0], want)
    elif kind == CONE:
        r, m = par[0] + par[1] * pz, par[1]
        t = quadratic_crossing(dx * dx + dy * dy - m * m * dz * dz, px * dx + py * dy - m * r * dz,
                               px * px + py * py - r * r, want)
        if t < math.inf and r + m * t * dz < 0.0:
            return math.inf
    elif kind == RING_ARC:
        return arc_crossing(par, pieces, ext, px, py, pz, dx, dy, dz, want)
    elif kind == TORIC:
        return ring_crossing(kind, par, par, px, py, pz, dx, dy, dz, want, 0.0, min(ext[1], 60.0), -60.0, 60.0)
    else:
        if kind == ROUND_CORNEA:
            t = conic_crossing(par[0], par[1], px, py, pz, dx, dy, dz, want)
            if t < math.inf:
                x, y = px + t * dx, py + t * dy
                if x * x + y * y > par[2] * par[2]:
                    t = math.inf
        for i in range(first, last):
            row = pieces[i]
            other = ring_crossing(kind, par, row, px, py, pz, dx, dy, dz, want, row[0], row[1], row[6], row[7])
            t = min(t, other)
    if not T_MIN <= t < math.inf:
        return math.inf
    z = pz + t * dz
    if not ext[2] <= z <= ext[3]:
        return math.inf
    if ext[0] > 0.0 or ext[1] < math.inf:
        x, y = px + t * dx, py + t * dy
        rho = math.sqrt(x * x + y * y)
        if rho < ext[0] - 1e-9 or rho > ext[1] + 1e-9:
            return math.inf
    return t


@kernel
def arc_crossing(par, pieces, ext, px, py, pz, dx, dy, dz, want):
    """First wanted crossing with a piece of a torus, its angles respected."""
    after = T_MIN
    for _ in range(3):
        # Shift the start past hits that lie on the rest of the torus.
        t = ring_crossing(RING_ARC, par, par, px + after * dx, py + after * dy, pz + after * dz, dx, dy, dz,
                          want, ext[0], ext[1], ext[2], ext[3])
        if not t < math.inf:
            return math.inf
        t += after
        x, y, z = px + t * dx, py + t * dy, pz + t * dz
        angle = math.atan2(z, math.sqrt(x * x + y * y) - par[0])
        if par[2] - 1e-9 <= angle <= par[3] + 1e-9:
            return t
        after = t + 1e-9
    return math.inf


@kernel
def normal_at(kind, par, pieces, first, last, x, y, z):
    """Forward unit normal at a point of the surface, in the face's frame."""
    if kind == PLANE:
        return 0.0, 0.0, 1.0
    rho2 = x * x + y * y
    rho = math.sqrt(rho2)
    if kind == CONIC or (kind == ROUND_CORNEA and rho <= par[2]):
        nx, ny, nz = par[0] * x, par[0] * y, 1.0 + par[0] * par[1] * z
    elif kind == CYLINDER:
        nx, ny, nz = x, y, 0.0
    elif kind == CONE:
        nx, ny, nz = x, y, -par[1] * rho
    elif kind == RING_ARC:
        out = (rho - par[0]) / rho
        nx, ny, nz = out * x, out * y, z
    elif kind == TORIC:
        _, zx, zy = toric_height(par, x, y)
        nx, ny, nz = -zx, -zy, 1.0
    else:
        i = piece_of(pieces, first, last, rho)
        u = rho - pieces[i, 0]
        slope = pieces[i, 3] + u * (2.0 * pieces[i, 4] + 3.0 * u * pieces[i, 5])
        over = slope / rho if rho > 0.0 else 0.0
        nx, ny, nz = -over * x, -over * y, 1.0
    length = math.sqrt(nx * nx + ny * ny + nz * nz)
    return nx / length, ny / length, nz / length


@kernel
def piece_of(pieces, first, last, rho):
    """Row of the cubic piece that holds a radius; the end pieces run on."""
    i = first
    while i < last - 1 and rho > pieces[i, 1]:
        i += 1
    return i


@kernel
def side_of(kind, par, pieces, first, last, ext, x, y, z):
    """Positive ahead of a face, not positive behind it, in the face's frame."""
    if kind == PLANE:
        return z
    rho2 = x * x + y * y
    if kind == CONIC or (kind == ROUND_CORNEA and rho2 <= par[2] * par[2]):
        c, k = par[0], par[1]
        under = 1.0 - k * c * c * rho2
        if under <= 0.0:
            return -1.0
        return z + c * rho2 / (1.0 + math.sqrt(under))
    rho = math.sqrt(rho2)
    if kind == CYLINDER:
        return rho - par[0]
    if kind == CONE:
        return rho - (par[0] + par[1] * z)
    if kind == RING_ARC:
        return math.sqrt((rho - par[0]) ** 2 + z * z) - par[1]
    if kind == TORIC:
        if rho >= ext[1]:
            return -1.0
        height, _, _ = toric_height(par, x, y)
        return z - height
    if kind == PROFILE and (rho < ext[0] - 1e-9 or rho > ext[1] + 1e-9):
        return -1.0
    i = piece_of(pieces, first, last, rho)
    u = rho - pieces[i, 0]
    return z - (pieces[i, 2] + u * (pieces[i, 3] + u * (pieces[i, 4] + u * pieces[i, 5])))
