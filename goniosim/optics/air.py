"""Refractive index of air against vacuum."""

from __future__ import annotations


def air_index_ciddor(wavelength_nm: float) -> float:
    """Index of standard air (dry, 15 deg C, 101 325 Pa, 450 ppm CO2) against vacuum.

    (n - 1) 1e8 = 5792105 / (238.0185 - s^2) + 167917 / (57.362 - s^2), s = 1 / wavelength in um.
    Ciddor, Appl Opt 35(9):1566-1573 (1996), doi 10.1364/AO.35.001566; coefficients from memory.
    """
    s2 = (1000.0 / wavelength_nm) ** 2
    return 1.0 + 1e-8 * (5792105.0 / (238.0185 - s2) + 167917.0 / (57.362 - s2))
