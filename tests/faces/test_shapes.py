"""Every built-in shape holds its contract, and a shape that breaks it is found out."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.faces import (SHAPES, AnnularPlane, Cone, Conic, CornealSurface, Cylinder, Plane, Profile, Revolution, RingArc,
                            Sphere, Toric)
from goniosim.testing import check_shape

BUILT_IN = [
    Plane(), AnnularPlane(2.0, 9.0), Sphere(8.4), Sphere(-8.4), Conic(7.79, -0.18), Conic(6.4, 0.5), Conic(5.0, -1.0),
    Conic(5.0, -1.6), Toric(7.9, 7.5, 70.0, -0.1), Cylinder(6.0), Cone(3.0, 20.0), Cone(4.0, -15.0),
    Revolution([0.0, 2.0, 4.0, 8.0], [0.0, -0.3, -1.1, -4.0]), Profile([[1.0, 9.0, 0.5, 0.1, -0.05, 0.002]]),
    RingArc(5.5, 2.0, -60.0, 80.0),
    CornealSurface(7.79, 7.79, q=-0.18, slope_deg_at=(37.0, 6.6), straight_beyond_mm=6.6),
    CornealSurface(7.9, 7.6, 20.0, q=-0.18, slope_deg_at=(37.0, 6.6), straight_beyond_mm=6.6),
    CornealSurface(6.53, 6.53, q=-0.38, through=(5.9, 3.35), r_max_mm=5.9),
    CornealSurface(6.6, 6.4, 20.0, q=-0.38, through=(5.9, 3.35), r_max_mm=5.9),
]


@pytest.mark.parametrize("shape", BUILT_IN, ids=lambda shape: f"{type(shape).__name__}-{BUILT_IN.index(shape)}")
def test_built_in_shapes_hold_the_contract(shape):
    check_shape(shape)


def test_every_shape_that_a_file_may_name_is_among_them():
    tested = {type(shape).__name__ for shape in BUILT_IN}
    assert {shape.__name__ for shape in SHAPES.values()} <= tested


class WrongNormal(Sphere):
    """A sphere that gives another sphere's normal."""

    def normal(self, points_mm):
        return Sphere(5.0).normal(points_mm)


class WrongSide(Conic):
    """A conic that takes ahead for behind."""

    def side_value(self, points_mm):
        return -super().side_value(points_mm)


@pytest.mark.parametrize("shape, words", [(WrongNormal(8.0), "normals differ"), (WrongSide(8.0, -0.2), "surface|side|normals")])
def test_a_broken_shape_is_found_out(shape, words):
    with pytest.raises(AssertionError, match=words):
        check_shape(shape)


def test_own_periphery_is_continuous_in_value_slope_and_curvature():
    # design: a cubic in r from 4 mm with value, slope, curvature of the conic, then through the spur or to 37 deg at 6.6.
    front = CornealSurface(7.79, 7.79, q=-0.18, slope_deg_at=(37.0, 6.6), straight_beyond_mm=6.6)
    back = CornealSurface(6.6, 6.4, 20.0, q=-0.38, through=(5.9, 3.35))
    for surface in (front, back):
        for angle in np.radians([0.0, 20.0, 77.0]):
            def height(r):
                return float(surface.sag(np.array([r * np.cos(angle)]), np.array([r * np.sin(angle)]))[0])

            h = 1e-3
            inner = [height(4.0 - k * h) for k in range(4)]
            outer = [height(4.0 + k * h) for k in range(4)]
            first = [(3 * s[0] - 4 * s[1] + s[2]) / (2 * h) for s in (inner, outer)]
            second = [(2 * s[0] - 5 * s[1] + 4 * s[2] - s[3]) / h**2 for s in (inner, outer)]
            assert first[0] == pytest.approx(-first[1], abs=1e-6)
            assert second[0] == pytest.approx(second[1], abs=2e-3)
    slope = (front.sag(np.array([6.6]), np.array([0.0])) - front.sag(np.array([6.6 - 1e-6]), np.array([0.0])))[0] / 1e-6
    assert np.degrees(np.arctan(-slope)) == pytest.approx(37.0, abs=1e-4)
    for angle in (0.0, 1.0, 2.0):
        assert back.sag(5.9 * np.cos([angle]), 5.9 * np.sin([angle]))[0] == pytest.approx(-3.35, abs=1e-12)
