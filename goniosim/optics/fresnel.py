"""Fresnel's equations at the face between two clear media.

s is the polarisation across the plane of incidence, p the one in it. Waves go as exp(-i w t); the p
vectors are s x k on each side, so at normal incidence rs = -rp. Equations: Born & Wolf, Principles of
Optics, section 1.5 (from memory); numbers checked in tests/authorities.
"""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass


@dataclass(frozen=True)
class Amplitudes:
    """Complex amplitude ratios of the electric field: reflected rs, rp and transmitted ts, tp."""

    rs: complex
    rp: complex
    ts: complex
    tp: complex
    power_factor: float  # (n2 cos a2) / (n1 cos a1): turns |t|^2 into power; 0 in total reflection


def amplitudes(n1: float, n2: float, incidence_deg: float) -> Amplitudes:
    """Amplitude ratios at an angle of incidence of 0 to below 90 degrees; total reflection included.

    rs = (n1 c1 - n2 c2) / (n1 c1 + n2 c2), rp = (n2 c1 - n1 c2) / (n2 c1 + n1 c2),
    ts = 2 n1 c1 / (n1 c1 + n2 c2), tp = 2 n1 c1 / (n2 c1 + n1 c2), with c2 imaginary beyond the
    critical angle.
    """
    c1 = math.cos(math.radians(incidence_deg))
    c2 = cmath.sqrt(1.0 - (n1 * math.sin(math.radians(incidence_deg)) / n2) ** 2)
    s_sum, p_sum = n1 * c1 + n2 * c2, n2 * c1 + n1 * c2
    return Amplitudes((n1 * c1 - n2 * c2) / s_sum, (n2 * c1 - n1 * c2) / p_sum,
                      2.0 * n1 * c1 / s_sum, 2.0 * n1 * c1 / p_sum, (n2 * c2.real) / (n1 * c1))


@dataclass(frozen=True)
class Powers:
    """Shares of the power: reflected Rs, Rp and transmitted Ts, Tp."""

    reflected_s: float
    reflected_p: float
    transmitted_s: float
    transmitted_p: float

    @property
    def reflected(self) -> float:
        """Reflectance of unpolarised light."""
        return 0.5 * (self.reflected_s + self.reflected_p)

    @property
    def transmitted(self) -> float:
        """Transmittance of unpolarised light."""
        return 0.5 * (self.transmitted_s + self.transmitted_p)


def powers(n1: float, n2: float, incidence_deg: float) -> Powers:
    """Shares of the power at an angle of incidence of 0 to below 90 degrees."""
    a = amplitudes(n1, n2, incidence_deg)
    return Powers(abs(a.rs) ** 2, abs(a.rp) ** 2, a.power_factor * abs(a.ts) ** 2,
                  a.power_factor * abs(a.tp) ** 2)


def normal_reflectance(n1: float, n2: float) -> float:
    """Reflectance at normal incidence: ((n1 - n2) / (n1 + n2))^2."""
    return ((n1 - n2) / (n1 + n2)) ** 2


def brewster_deg(n1: float, n2: float) -> float:
    """Angle of incidence in degrees at which no p light is reflected: atan(n2 / n1)."""
    return math.degrees(math.atan2(n2, n1))


def total_reflection_retardance_deg(n1: float, n2: float, incidence_deg: float) -> float:
    """Phase between p and s that a total reflection adds, in degrees, 0 to 180.

    tan(d / 2) = cos a sqrt(sin^2 a - n^2) / sin^2 a with n = n2 / n1 (Born & Wolf, from memory), taken
    here from the complex amplitudes; it is 0 at the critical angle and at grazing incidence.
    """
    a = amplitudes(n1, n2, incidence_deg)
    return abs(math.degrees(cmath.phase(a.rp / a.rs)))
