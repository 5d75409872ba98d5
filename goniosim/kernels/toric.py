"""Height of a toric (biconic) cornea with its own periphery; faces/cornea.py has the equations.

`q` is the face table, `f` the face.
"""

from __future__ import annotations

import math

from . import kernel
from .arrays import PAR


@kernel
def toric_height(q, f, x, y):
    """z, dz/dx, dz/dy of a biconic with its own periphery; see faces/cornea.py for the equations."""
    cx, cy, k, cos, sin = q[f, PAR], q[f, PAR + 1], q[f, PAR + 2], q[f, PAR + 3], q[f, PAR + 4]
    join, mode, at, value, edge = q[f, PAR + 5], q[f, PAR + 6], q[f, PAR + 7], q[f, PAR + 8], q[f, PAR + 9]
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
