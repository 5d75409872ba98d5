"""Paraxial sums and Coddington's equations against identities of optics."""

from __future__ import annotations

import math

import numpy as np
import pytest

from goniosim.errors import Misuse
from goniosim.optics.coddington import refracted_foci_mm
from goniosim.optics.fresnel import brewster_deg, powers
from goniosim.optics.paraxial import Surface, System, entrance_pupil, image_after, image_mm, surface_power_d
from goniosim.optics.prism import deviation_deg, minimum_deviation_deg

LENS = System((Surface(10.2, 1.42, 4.0), Surface(-6.0, 1.336)), 1.3374)


def test_system_matrices_have_the_determinant_one():
    assert np.linalg.det(LENS.matrix()) == pytest.approx(1.0, abs=1e-14)


def test_power_of_two_surfaces_is_gullstrands_formula():
    # F = F1 + F2 - (t/n) F1 F2, any textbook of ophthalmic optics.
    first, second = surface_power_d(1.3374, 1.42, 10.2), surface_power_d(1.42, 1.336, -6.0)
    assert LENS.power_d() == pytest.approx(first + second - 0.004 / 1.42 * first * second, abs=1e-12)


def test_light_from_behind_sees_the_same_power_and_the_same_principal_points():
    back = LENS.reversed()
    assert back.power_d() == pytest.approx(LENS.power_d(), abs=1e-12)
    assert back.reversed() == LENS
    first, second = LENS.principal_points_mm()
    assert back.principal_points_mm() == pytest.approx((4.0 - second, 4.0 - first), abs=1e-12)


def test_images_through_one_surface_agree_with_its_own_formula():
    one = System((Surface(40.0, 1.6),))
    assert image_after(one, -180.0)[0] == pytest.approx(image_mm(1.0, 1.6, 40.0, -180.0), abs=1e-10)


def test_plane_image_grows_by_the_ratio_of_indices_in_depth_and_not_in_size():
    depth, magnification = entrance_pupil((Surface(math.inf, 1.336),), 3.0)
    assert depth == pytest.approx(3.0 / 1.336, abs=1e-14)
    assert magnification == pytest.approx(1.0, abs=1e-14)


def test_coddington_has_no_pencil_in_total_reflection():
    with pytest.raises(Misuse) as caught:
        refracted_foci_mm(1.376, 1.0, -7.8, 50.0, -3.0, -3.0)
    assert str(caught.value) == "light from index 1.376 to 1 is reflected totally at 50 deg"


def test_coddington_afocal_is_infinite():
    assert refracted_foci_mm(1.5, 1.5, math.inf, 20.0, math.inf, math.inf) == (math.inf, math.inf)


def test_a_prism_that_reflects_totally_deviates_nothing():
    assert deviation_deg(90.0, 1.5, 0.0) is None
    assert minimum_deviation_deg(90.0, 1.5) is None


def test_brewsters_angle_and_its_refracted_ray_make_a_right_angle():
    angle = brewster_deg(1.336, 1.4906)
    inside = math.degrees(math.asin(1.336 * math.sin(math.radians(angle)) / 1.4906))
    assert angle + inside == pytest.approx(90.0, abs=1e-12)


def test_fresnel_is_the_same_from_either_side():
    # Stokes: the transmittance at an angle equals that of the way back.
    inside = math.degrees(math.asin(math.sin(math.radians(50.0)) / 1.5))
    there, back = powers(1.0, 1.5, 50.0), powers(1.5, 1.0, inside)
    assert (there.transmitted_s, there.transmitted_p) == pytest.approx((back.transmitted_s,
                                                                        back.transmitted_p), abs=1e-14)
