"""Spherical surfaces: textbook images, Coddington's equations."""

from __future__ import annotations

import math
from functools import partial

from ...optics.coddington import reflected_foci_mm, refracted_foci_mm
from ...optics.paraxial import image_mm
from ..check import COMPUTED, EXACT, VERIFIED, Check

ROD = "textbook solution, glass rod with a rounded end (toughstem.com 1071)"
KINGSLAKE = "Coddington's equations as in Kingslake, Opt Photon News 5(8) (1994), evaluated by hand"


def rod(object_mm: float) -> float:
    """Image behind the rounded end, R 40 mm, of a rod of 1.60 in air."""
    return image_mm(1.0, 1.6, 40.0, object_mm)


CHECKS = [
    Check("rod 1.60, R +4.00 cm: object far away, at 18.0 and at 4.00 cm", ROD, VERIFIED, (106.7, 169.4,
          -160.0), 0.05, "mm", lambda: (rod(-math.inf), rod(-180.0), rod(-40.0))),
    Check("the same, exactly", "n2/s' = n1/s + (n2 - n1)/R", COMPUTED, (106.667, 169.412, -160.0), 5e-4, "mm",
          lambda: (rod(-math.inf), rod(-180.0), rod(-40.0))),
    Check("a sphere of index 2 focuses sunlight on its far side", "textbook solution, chapter 23 problem 25",
          VERIFIED, 2.0, 1e-12, "radii", partial(image_mm, 1.0, 2.0, 1.0, -math.inf)),
    Check("Coddington, air to 1.5, R 50, 30 deg, far object: s', t'", KINGSLAKE, COMPUTED, (136.8143,
          121.6127), 5e-5, "mm", partial(refracted_foci_mm, 1.0, 1.5, 50.0, 30.0, math.inf, math.inf)),
    Check("Coddington, 1.376 to air, R -7.7, 30 deg, object at -3.6", KINGSLAKE, COMPUTED, (-3.1084, -2.3287),
          5e-5, "mm", partial(refracted_foci_mm, 1.376, 1.0, -7.7, 30.0, -3.6, -3.6)),
    Check("plane, 1.336 to air, 30 deg: s'/s, t'/t", KINGSLAKE, COMPUTED, (0.74850, 0.55267), 5e-6, "",
          partial(refracted_foci_mm, 1.336, 1.0, math.inf, 30.0, 1.0, 1.0)),
    Check("plane, 4/3 to air, 30 deg: s'/s = 3/4, t'/t = 5/9", KINGSLAKE, COMPUTED, (0.75, 5.0 / 9.0), 1e-12,
          "", partial(refracted_foci_mm, 4.0 / 3.0, 1.0, math.inf, 30.0, 1.0, 1.0)),
    Check("at normal incidence Coddington is the textbook's spherical surface", ROD, VERIFIED, (106.667,
          106.667), 5e-4, "mm", partial(refracted_foci_mm, 1.0, 1.6, 40.0, 0.0, math.inf, math.inf)),
    Check("a plane mirror images at equal distance, at any angle", "law of reflection", EXACT, (-70.0, -70.0),
          1e-12, "mm", partial(reflected_foci_mm, math.inf, 40.0, -70.0, -70.0)),
    Check("a concave mirror of R 100 at 60 deg: s' = R / (2 cos a), t' = R cos a / 2", "textbook standard",
          EXACT, (100.0, 25.0), 1e-12, "mm", partial(reflected_foci_mm, -100.0, 60.0, math.inf, math.inf)),
]
