"""Units: the few conversions that the program needs, each at one place."""

from __future__ import annotations

import math

KERATOMETER_INDEX = 1.3375
"""Index by which keratometers turn a front radius into dioptres (convention)."""


def prism_dioptres(deviation_deg: float) -> float | None:
    """Prism dioptres, 100 tan(delta), of a deviation in degrees; None from 90 degrees up.

    One prism dioptre displaces by 1 cm at 1 m (definition, figures checked in tests/authorities).
    """
    if deviation_deg >= 90.0:
        return None
    return 100.0 * math.tan(math.radians(deviation_deg))


def radius_mm_from_keratometry_d(power_d: float) -> float:
    """Front radius in mm from a keratometer reading in dioptres: R = 1000 (1.3375 - 1) / K."""
    return 1000.0 * (KERATOMETER_INDEX - 1.0) / power_d
