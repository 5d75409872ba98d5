"""Prisms and displacement: deviation, minimum deviation, prism dioptres.

Prism dioptres of an angle are in `goniosim.units`.
"""

from __future__ import annotations

import math

from .refraction import refracted_deg


def deviation_deg(apex_deg: float, index: float, incidence_deg: float, outside: float = 1.0) -> float | None:
    """Deviation in degrees toward the base by a prism in its principal section.

    apex_deg : angle between the faces. incidence_deg : on the first face, positive from the base's
    side of its normal. Returns incidence + emergence - apex; None where the light is reflected
    totally at the second face.
    """
    inside = refracted_deg(incidence_deg, outside, index)
    if inside is None:
        return None
    emergence = refracted_deg(apex_deg - inside, index, outside)
    return None if emergence is None else incidence_deg + emergence - apex_deg


def minimum_deviation_deg(apex_deg: float, index: float, outside: float = 1.0) -> float | None:
    """Least deviation, 2 asin(n sin(A/2)) - A, in degrees; None where no light gets through that way."""
    emergence = refracted_deg(apex_deg / 2.0, index, outside)
    return None if emergence is None else 2.0 * emergence - apex_deg


def index_from_minimum_deviation(apex_deg: float, deviation_deg: float) -> float:
    """Index of a prism in air: sin((A + D) / 2) / sin(A / 2)."""
    return math.sin(math.radians(apex_deg + deviation_deg) / 2.0) / math.sin(math.radians(apex_deg) / 2.0)


def thin_deviation_deg(apex_deg: float, index: float) -> float:
    """Deviation of a thin prism in air: (n - 1) A, in degrees."""
    return (index - 1.0) * apex_deg


def prentice_pd(decentration_mm: float, power_d: float) -> float:
    """Prism dioptres of a thin lens off its axis: decentration in cm times power in dioptres (Prentice)."""
    return decentration_mm / 10.0 * power_d


def displacement_mm(power_pd: float, distance_mm: float) -> float:
    """Displacement at a distance by prism dioptres: 1 cm for each, at 1 m (definition)."""
    return power_pd / 100.0 * distance_mm
