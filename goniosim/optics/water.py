"""Refractive index of liquid water: IAPWS R9-97 with a density that follows from the temperature."""

from __future__ import annotations

import math

A0, A1, A2, A3 = 0.244257733, 9.74634476e-3, -3.73234996e-3, 2.68678472e-4
A4, A5, A6, A7 = 1.58920570e-3, 2.45934259e-3, 0.900704920, -1.66626219e-2
LAMBDA_UV, LAMBDA_IR = 0.2292020, 5.432937
REFERENCE_UM = 0.589  # not 0.5893: only this returns the release's own check values
WATER_RANGE_NM = (200.0, 1100.0)
DENSITY_RANGE_C = (0.0, 40.0)


def water_density_kg_m3(temperature_c: float) -> float:
    """Density of air-free water at 101 325 Pa in kg/m3, 0 to 40 deg C, to about 1 part in a million.

    Tanaka et al., Metrologia 38:301-309 (2001), equation (1), for standard mean ocean water;
    coefficients from memory, checked against IAPWS-95 in tests/authorities.
    """
    t = temperature_c
    return 999.974950 * (1.0 - (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881)))


def water_index_iapws(wavelength_nm: float, temperature_k: float, density_kg_m3: float) -> float:
    """Index of water against vacuum.

    (n^2 - 1) / (n^2 + 2) / rho = a0 + a1 rho + a2 T + a3 L^2 T + a4 / L^2 + a5 / (L^2 - Luv^2)
    + a6 / (L^2 - Lir^2) + a7 rho^2, with rho = density / 1000, T = temperature / 273.15 K,
    L = wavelength / 0.589 um. IAPWS R9-97; Harvey, Gallagher & Levelt Sengers, J Phys Chem Ref Data
    27:761 (1998). Scope 0.2 to 1.1 um, -12 to 500 deg C.
    """
    rho, t = density_kg_m3 / 1000.0, temperature_k / 273.15
    l2 = (wavelength_nm / 1000.0 / REFERENCE_UM) ** 2
    molar = rho * (A0 + A1 * rho + A2 * t + A3 * l2 * t + A4 / l2 + A5 / (l2 - LAMBDA_UV**2)
                   + A6 / (l2 - LAMBDA_IR**2) + A7 * rho * rho)
    return math.sqrt((1.0 + 2.0 * molar) / (1.0 - molar))


def water_index(wavelength_nm: float, temperature_c: float) -> float:
    """Index of water at atmospheric pressure against vacuum, at a temperature of 0 to 40 deg C."""
    return water_index_iapws(wavelength_nm, temperature_c + 273.15, water_density_kg_m3(temperature_c))
