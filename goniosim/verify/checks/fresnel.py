"""Fresnel's equations and Brewster's angle against textbooks."""

from __future__ import annotations

from functools import partial

import numpy as np

from ...optics.fresnel import brewster_deg, normal_reflectance, powers, total_reflection_retardance_deg
from ..check import COMPUTED, EXACT, MEMORY, VERIFIED, Check


def percent(n1: float, n2: float) -> float:
    """Reflectance at normal incidence by the full equations, in percent."""
    return 100.0 * powers(n1, n2, 0.0).reflected


def worst_energy_error() -> float:
    """Greatest departure of R + T from 1, both polarisations, over angles and indices, total reflection included."""
    worst = 0.0
    for n1, n2 in ((1.0, 1.5), (1.5, 1.0), (1.336, 1.376), (1.376, 1.0), (1.4906, 1.0)):
        for tenth in range(0, 900):
            p = powers(n1, n2, tenth / 10.0)
            worst = np.max([worst, abs(p.reflected_s + p.transmitted_s - 1.0),
                            abs(p.reflected_p + p.transmitted_p - 1.0)])
    return worst


def p_left_at_brewster(n1: float, n2: float) -> float:
    """Reflectance of p light at Brewster's angle."""
    return powers(n1, n2, brewster_deg(n1, n2)).reflected_p


FORMULA = "(n1 - n2)^2 / (n1 + n2)^2"
BORN_WOLF = "Born & Wolf, Principles of Optics 1.5.4: index 1.51, two angles give a phase of 45 deg"

CHECKS = [
    Check("near-normal reflectance of crown glass, 1.522 (the sheet's printed 1.552 is an error)",
          "textbook solution", VERIFIED, 0.043, 0.0005, "", partial(normal_reflectance, 1.0, 1.522)),
    Check("its transmittance", "textbook solution", VERIFIED, 0.957, 0.0005, "",
          lambda: powers(1.0, 1.522, 0.0).transmitted),
    Check("glass 1.5 to air, normal", FORMULA, COMPUTED, 4.0, 5e-4, "%", partial(percent, 1.5, 1.0)),
    Check("cornea to air, normal", FORMULA, COMPUTED, 2.504, 5e-4, "%", partial(percent, 1.376, 1.0)),
    Check("PMMA to air, normal", FORMULA, COMPUTED, 3.880, 5e-4, "%", partial(percent, 1.4906, 1.0)),
    Check("aqueous to cornea, normal", FORMULA, COMPUTED, 0.02175, 5e-6, "%", partial(percent, 1.336, 1.376)),
    Check("PMMA to fluid 1.336, normal", FORMULA, COMPUTED, 0.2992, 5e-5, "%", partial(percent, 1.4906,
          1.336)),
    Check("PMMA to cornea, normal", FORMULA, COMPUTED, 0.1598, 5e-5, "%", partial(percent, 1.4906, 1.376)),
    Check("Brewster's angle of water", "textbook standard", MEMORY, 53.1, 0.05, "deg", partial(brewster_deg,
          1.0, 1.333)),
    Check("Brewster's angle of glass 1.52", "textbook standard", MEMORY, 56.7, 0.05, "deg",
          partial(brewster_deg, 1.0, 1.52)),
    Check("Brewster's angle of glass 1.5", "atan 1.5", COMPUTED, 56.31, 0.005, "deg", partial(brewster_deg,
          1.0, 1.5)),
    Check("no p light is reflected at Brewster's angle", "Brewster's law", EXACT, (0.0, 0.0), 1e-30, "",
          lambda: (p_left_at_brewster(1.0, 1.5), p_left_at_brewster(1.376, 1.0))),
    Check("reflected and transmitted power add up, 0 to 90 deg", "conservation of energy", EXACT, 0.0, 1e-14,
          "", worst_energy_error),
    Check("phase of total reflection, 48 deg 37' and 54 deg 37'", BORN_WOLF, MEMORY, (45.0, 45.0), 0.02,
          "deg", lambda: (total_reflection_retardance_deg(1.51, 1.0, 48.0 + 37.0 / 60.0),
                   total_reflection_retardance_deg(1.51, 1.0, 54.0 + 37.0 / 60.0))),
]
