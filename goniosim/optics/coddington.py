"""Coddington's equations: where a narrow oblique pencil focuses after one surface.

Distances run along the ray, positive the way the light goes, negative for an object ahead of the
surface. The radius is positive where the centre lies on the far side. Symbols as in Kingslake, Opt
Photon News 5(8) (1994); equations from memory; no published numeric example was found, so they are
also held to finite differences of the tracer.
"""

from __future__ import annotations

import math

from ..errors import Misuse
from .refraction import refracted_deg


def refracted_foci_mm(n1: float, n2: float, radius_mm: float, incidence_deg: float,
                      sagittal_mm: float, tangential_mm: float) -> tuple[float, float]:
    """Sagittal and tangential image distances (s', t') after refraction, in mm.

    n2 cos^2 a2 / t' - n1 cos^2 a1 / t = n2 / s' - n1 / s = (n2 cos a2 - n1 cos a1) / r.
    sagittal_mm, tangential_mm : object distances, infinite for parallel light; radius_mm may be
    infinite (a plane). Raises Misuse in total reflection.
    """
    refracted = refracted_deg(incidence_deg, n1, n2)
    if refracted is None:
        raise Misuse(f"light from index {n1:g} to {n2:g} is reflected totally at {incidence_deg:g} deg")
    c1, c2 = math.cos(math.radians(incidence_deg)), math.cos(math.radians(refracted))
    oblique_power = (n2 * c2 - n1 * c1) / radius_mm
    return (_distance(n2, oblique_power + n1 / sagittal_mm),
            _distance(n2 * c2 * c2, oblique_power + n1 * c1 * c1 / tangential_mm))


def reflected_foci_mm(radius_mm: float, incidence_deg: float,
                      sagittal_mm: float, tangential_mm: float) -> tuple[float, float]:
    """Sagittal and tangential image distances after a mirror, positive along the reflected ray, in mm.

    1/s' - 1/s = -2 cos a / r and 1/t' - 1/t = -2 / (r cos a), radius positive where the centre lies
    behind the mirror (a convex one).
    """
    cosine = math.cos(math.radians(incidence_deg))
    return (_distance(1.0, 1.0 / sagittal_mm - 2.0 * cosine / radius_mm),
            _distance(1.0, 1.0 / tangential_mm - 2.0 / (radius_mm * cosine)))


def _distance(numerator: float, vergence: float) -> float:
    return math.inf if vergence == 0.0 else numerator / vergence
