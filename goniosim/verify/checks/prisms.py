"""Prisms and prism dioptres against textbooks."""

from __future__ import annotations

import math
from functools import partial

from ...optics.prism import (deviation_deg, displacement_mm, index_from_minimum_deviation,
                             minimum_deviation_deg,
                             prentice_pd, thin_deviation_deg)
from ...units import prism_dioptres
from ..check import COMPUTED, EXACT, PRACTICE, SECONDARY, VERIFIED, Check


def least_by_search(apex_deg: float, index: float) -> float:
    """Least deviation over angles of incidence, by golden-section search on the general formula."""
    low, high = 1.0, 89.0
    shrink = (math.sqrt(5.0) - 1.0) / 2.0
    for _ in range(80):
        first, second = high - shrink * (high - low), low + shrink * (high - low)
        at_first = deviation_deg(apex_deg, index, first) or math.inf
        if at_first < (deviation_deg(apex_deg, index, second) or math.inf):
            high = second
        else:
            low = first
    return deviation_deg(apex_deg, index, 0.5 * (low + high))


def least_rad(index: float) -> float:
    """Least deviation of a 60 deg prism in radians."""
    return math.radians(minimum_deviation_deg(60.0, index))


SHEET = "textbook solution, prism of 60 deg"
DEFINITION = "definition: 1 prism dioptre displaces by 1 cm at 1 m"

CHECKS = [
    Check("least deviation, 60 deg prism of 1.525", SHEET, VERIFIED, 0.6872, 1e-4, "rad", partial(least_rad,
          1.525)),
    Check("least deviation, 60 deg prism of 1.535", SHEET, VERIFIED, 0.7026, 1e-4, "rad", partial(least_rad,
          1.535)),
    Check("least deviation, exactly, 1.525 and 1.535", "2 asin(n/2) - 60 deg", COMPUTED, (0.68714, 0.70267),
          5e-6, "rad", lambda: (least_rad(1.525), least_rad(1.535))),
    Check("least deviation 0.6794 rad means index 1.520", SHEET + ", index not shown there", VERIFIED, 1.520,
          5e-5, "", partial(index_from_minimum_deviation, 60.0, math.degrees(0.6794))),
    Check("the least of all deviations is the formula's", "prism formula, dictionary.obspm.fr", VERIFIED,
          math.degrees(2.0 * math.asin(1.525 / 2.0)) - 60.0, 1e-7, "deg", partial(least_by_search, 60.0,
                                                                                  1.525)),
    Check("thin prism of 10 deg, 1.5: thin and exact", "arithmetic", COMPUTED, (5.0, 5.0240), 5e-5, "deg",
          lambda: (thin_deviation_deg(10.0, 1.5), minimum_deviation_deg(10.0, 1.5))),
    Check("5 and 10 deg in prism dioptres", DEFINITION, SECONDARY, (8.7489, 17.6327), 5e-5, "pd",
          lambda: (prism_dioptres(5.0), prism_dioptres(10.0))),
    Check("0.57294 deg is one prism dioptre", DEFINITION, SECONDARY, 1.0, 1e-5, "pd", partial(prism_dioptres,
          0.57294)),
    Check("10 cm at 100 cm is 10 prism dioptres, and so at 25 cm and 6 m", "common practice", PRACTICE,
          (100.0, 25.0, 600.0), 1e-12, "mm",
          lambda: tuple(displacement_mm(10.0, distance) for distance in (1000.0, 250.0, 6000.0))),
    Check("Prentice: 5 mm off the axis of 4 D", "Prentice's rule: cm times dioptres", SECONDARY, 2.0, 1e-12,
          "pd", partial(prentice_pd, 5.0, 4.0)),
    Check("in a medium of its own index a prism deviates nothing", "Snell's law", EXACT, 0.0, 1e-12, "deg",
          lambda: deviation_deg(40.0, 1.376, 12.0, outside=1.376)),
]
