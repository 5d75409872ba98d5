"""Snell's law and reflection for bundles of rays, in plain numpy: the twin of the compiled tracer.

Snell: n1 sin a1 = n2 sin a2, in vector form d2 = r d1 + (cos a2 - r cos a1) g with r = n1 / n2 and g the
unit normal on the far side.
"""

from __future__ import annotations

import math

import numpy as np


def refract(directions: np.ndarray, normals: np.ndarray, n1: float, n2: float) -> tuple[np.ndarray, np.ndarray]:
    """Directions after a face between two media.

    directions, normals : (n, 3) unit vectors; the normals may point to either side.
    n1, n2 : indices before and behind the face, as the light goes.
    Returns (n, 3) unit vectors and (n,) bool: True where the light went through. Where it is
    reflected totally, its row holds the reflected direction.
    """
    d, g, cos1 = _facing(directions, normals)
    ratio = n1 / n2
    sin2_squared = ratio * ratio * (1.0 - cos1) * (1.0 + cos1)
    passed = sin2_squared < 1.0
    cos2 = np.sqrt(np.where(passed, 1.0 - sin2_squared, 0.0))
    through = ratio * d + (cos2 - ratio * cos1)[:, None] * g
    onward = np.where(passed[:, None], through, reflect(d, g))
    return onward / np.linalg.norm(onward, axis=1, keepdims=True), passed


def reflect(directions: np.ndarray, normals: np.ndarray) -> np.ndarray:
    """Directions after a mirror: d - 2 (d . g) g, (n, 3)."""
    d, g = np.atleast_2d(directions), np.atleast_2d(normals)
    return d - 2.0 * np.sum(d * g, axis=1, keepdims=True) * g


def _facing(directions: np.ndarray, normals: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Directions, normals turned to the side that the light goes to, and cosines of incidence."""
    d = np.atleast_2d(np.asarray(directions, dtype=float))
    g = np.broadcast_to(np.asarray(normals, dtype=float), d.shape)
    cosine = np.sum(d * g, axis=1)
    return d, np.where(cosine[:, None] < 0.0, -g, g), np.abs(cosine)


def refracted_deg(incidence_deg: float, n1: float, n2: float) -> float | None:
    """Angle of refraction in degrees; None where the light is reflected totally."""
    sine = n1 * math.sin(math.radians(incidence_deg)) / n2
    return math.degrees(math.asin(sine)) if abs(sine) < 1.0 else None


def critical_angle_deg(n1: float, n2: float = 1.0) -> float | None:
    """Angle of incidence in degrees from which light is reflected totally: asin(n2 / n1); None where n2 >= n1."""
    return math.degrees(math.asin(n2 / n1)) if n2 < n1 else None


def angle_deg(first: np.ndarray, second: np.ndarray) -> np.ndarray:
    """Angles in degrees between unit vectors (n, 3) and (n, 3), exact for small ones, (n,)."""
    first, second = np.atleast_2d(first), np.atleast_2d(second)
    sine = np.linalg.norm(np.cross(first, second), axis=1)
    return np.degrees(np.arctan2(sine, np.sum(first * second, axis=1)))
