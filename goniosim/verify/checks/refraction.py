"""Snell's law and critical angles against textbooks."""

from __future__ import annotations

from functools import partial

import numpy as np

from ...optics.paraxial import Surface, System, image_after
from ...optics.refraction import critical_angle_deg, refract, refracted_deg
from ..check import COMPUTED, MEMORY, SECONDARY, VERIFIED, Check


def snell(incidence_deg: float, n1: float, n2: float) -> float:
    """Angle of refraction by the vector form, in degrees."""
    angle = np.radians(incidence_deg)
    onward, passed = refract(np.array([[np.sin(angle), 0.0, np.cos(angle)]]), np.array([0.0, 0.0, 1.0]), n1,
                             n2)
    return float(np.degrees(np.arctan2(onward[0, 0], onward[0, 2]))) if passed[0] else float("nan")


def index_of(first_deg: float, second_deg: float) -> float:
    """Index of the second medium against the first, found by halving on Snell's law."""
    low, high = 1.0, 3.0
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if snell(first_deg, 1.0, middle) > second_deg else (low, middle)
    return low


def through_stack(incidence_deg: float, indices: tuple[float, ...]) -> float:
    """Last angle through parallel layers, in degrees."""
    for before, after in zip(indices, indices[1:]):
        incidence_deg = snell(incidence_deg, before, after)
    return incidence_deg


def apparent_depth_ratio(index: float) -> float:
    """Apparent over real depth, seen squarely through a flat surface from air."""
    image, _ = image_after(System((Surface(float("inf"), 1.0),), index), -1.0)
    return -image


COLLEGE = "OpenStax College Physics"
UNIVERSITY = "OpenStax University Physics 3, law of refraction"
DUANE = "Duane's Clinical Ophthalmology v3 ch44"

CHECKS = [
    Check("air 30.0 deg to 22.0 deg: index", UNIVERSITY, SECONDARY, 1.33, 0.005, "", partial(index_of, 30.0,
          22.0)),
    Check("air 30.0 deg to 22.0 deg: index, exactly", "arithmetic on " + UNIVERSITY, COMPUTED, 1.3347, 5e-5,
          "", partial(index_of, 30.0, 22.0)),
    Check("air 60 deg into 1.49", "textbook solution, masteringphysicssolutions.net", VERIFIED, 35.53, 0.01,
          "deg", partial(snell, 60.0, 1.0, 1.49)),
    Check("24.3 deg in 1.56 to air", "textbook solution, chapter 33 problem 64", VERIFIED, 40.0, 0.1, "deg",
          partial(snell, 24.3, 1.56, 1.0)),
    Check("25.0 deg in 1.66 to air", "textbook instructor manual, chapter 23", VERIFIED, 44.55, 0.005, "deg",
          partial(snell, 25.0, 1.66, 1.0)),
    Check("air 30 deg into diamond 2.419", COLLEGE + " 25.3", MEMORY, 11.9, 0.05, "deg",
          partial(snell, 30.0, 1.0, 2.419)),
    Check("30 deg inside 1.38 to air (the text's own index, a corneal value)", DUANE + " Fig. 2", VERIFIED,
          44.0, 0.5, "deg", partial(snell, 30.0, 1.38, 1.0)),
    Check("layers 1.60/1.40/1.20/1.00, 30.0 deg in the first", "textbook solution, chapter 22 problem 47",
          VERIFIED, 53.1, 0.05, "deg", partial(through_stack, 30.0, (1.6, 1.4, 1.2, 1.0))),
    Check("middle layers drop out", "same problem; sin a = 1.6 sin 30 deg", COMPUTED, 53.130, 0.0005, "deg",
          partial(snell, 30.0, 1.6, 1.0)),
    Check("critical angle of the first layer to air", "same problem", COMPUTED, 38.682, 0.0005, "deg",
          partial(critical_angle_deg, 1.6)),
    Check("critical angle, 1.49 to air", COLLEGE + " Example 25.4", VERIFIED, 42.2, 0.05, "deg",
          partial(critical_angle_deg, 1.49)),
    Check("critical angle, water to air", COLLEGE + " 25.4, follow-up", SECONDARY, 48.6, 0.05, "deg",
          partial(critical_angle_deg, 1.333)),
    Check("critical angle, 1.56 to air", "textbook solution, chapter 33 problem 64", VERIFIED, 39.9, 0.05,
          "deg", partial(critical_angle_deg, 1.56)),
    Check("critical angle, 1.66 to air", "textbook answer, assignmentexpert 124860", VERIFIED, 37.0, 0.05,
          "deg", partial(critical_angle_deg, 1.66)),
    Check("critical angle, cornea to air (1.376 and 1.38 stand on either side of 46.5)", DUANE + " Fig. 2b",
          VERIFIED, (46.5, 46.5), 0.12, "deg", lambda: (critical_angle_deg(1.376), critical_angle_deg(1.38))),
    Check("critical angle, cornea to air, rounded down", "Color Atlas of Gonioscopy, principles (aao.org)",
          VERIFIED, 46.0, 1.0, "deg", partial(critical_angle_deg, 1.376)),
    Check("water 4/3 looks 3/4 as deep", "textbook solution", VERIFIED, 0.75, 1e-12, "",
          partial(apparent_depth_ratio, 4.0 / 3.0)),
    Check("a fish seen through a flat wall moves at speed / 1.333",
          "textbook solution, chapter 23 problem 26", VERIFIED,
          1.0 / 1.333, 1e-12, "", partial(apparent_depth_ratio, 1.333)),
    Check("scalar and vector Snell agree", "60 deg into 1.49, exactly", COMPUTED, 35.537, 0.0005, "deg",
          partial(refracted_deg, 60.0, 1.0, 1.49)),
] + [
    Check(f"critical angle, {index:g} to air", "asin(1/n), arithmetic", COMPUTED, degrees, 0.005, "deg",
          partial(critical_angle_deg, index))
    for index, degrees in ((1.333, 48.61), (1.336, 48.46), (1.3374, 48.39), (1.376, 46.61), (1.4585, 43.29),
                           (1.4906, 42.13), (1.5168, 41.25), (1.5848, 39.12))
]
