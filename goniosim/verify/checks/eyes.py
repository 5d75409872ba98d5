"""The built default eye against measured eyes."""

from __future__ import annotations

import numpy as np

from ...scene.bodies import Face
from ..check import VERIFIED, Check
from ..real_rays import shipped_scene

SPECULAR = "T(x) = Tm (1 + TV x^2), TV 0.0088 +- 0.0020 per mm^2, 80 eyes (scilit 8a7ae1c7)"


def thickness_mm(front: Face, back: Face, chord_mm: float, toward_deg: float = 0.0) -> float:
    """Corneal thickness along the front's normal, at a distance from the axis, by halving."""
    angle = np.radians(toward_deg)
    x, y = chord_mm * np.cos(angle), chord_mm * np.sin(angle)
    top = np.array([[x, y, 0.0]])
    top[0, 2] = -front.side_value(top)[0]
    normal = front.rotation @ front.shape.normal(front.to_local(top))[0]
    low, high = 0.0, 3.0
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if back.side_value(top - middle * normal)[0] > 0.0 else (low, middle)
    return low


def thickening_percent(chord_mm: float) -> float:
    """Thickness at a chord over the central one, less 1, in percent, mean of nasal and temporal."""
    faces = shipped_scene("right-eye-temporal").eye.faces
    front, back = faces["cornea-front"], faces["cornea-back"]
    centre = thickness_mm(front, back, 0.0)
    there = 0.5 * (thickness_mm(front, back, chord_mm, 0.0) + thickness_mm(front, back, chord_mm, 180.0))
    return 100.0 * (there / centre - 1.0)


def off_thickness_law() -> float:
    """Greatest departure from the measured law's own mean eye over 0 to 4 mm, in percent of the centre."""
    return max(abs(thickening_percent(x) - 0.88 * x * x) for x in np.arange(0.0, 4.01, 0.5))


CHECKS = [
    Check("default eye: the cornea thickens by 0.4 to 1.3 % at 1 mm", SPECULAR, VERIFIED, 0.85, 0.45, "%",
          lambda: thickening_percent(1.0)),
    Check("default eye: the cornea thickens by 12 to 32 % at 5 mm", SPECULAR, VERIFIED, 22.0, 10.0, "%",
          lambda: thickening_percent(5.0)),
    Check("default eye: within two deviations of the radial law out to 4 mm", SPECULAR, VERIFIED, 0.0,
          0.40 * 16.0, "%", off_thickness_law),
]
