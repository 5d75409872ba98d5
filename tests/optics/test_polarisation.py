"""Polarisation along paths, against Fresnel, Malus and energy."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.errors import Misuse
from goniosim.frames import rotation_about
from goniosim.optics.fresnel import powers, total_reflection_retardance_deg
from goniosim.optics.polarisation import Event, path_matrix, unpolarised_throughput
from goniosim.optics.refraction import reflect, refract

UP = np.array([0.0, 0.0, 1.0])


def tilted(angle_deg):
    return np.array([np.sin(np.radians(angle_deg)), 0.0, np.cos(np.radians(angle_deg))])


def passage(before, normal, n1, n2):
    after, passed = refract(before[None], normal[None], n1, n2)
    return Event("through" if passed[0] else "reflected", normal, n1, n2, after[0])


@pytest.mark.parametrize("angle_deg", [0.0, 10.0, 40.0, 56.3, 80.0])
def test_one_face_is_fresnels_mean(angle_deg):
    event = passage(tilted(angle_deg), UP, 1.0, 1.5)
    assert unpolarised_throughput(tilted(angle_deg), [event]) == pytest.approx(
        powers(1.0, 1.5, angle_deg).transmitted, abs=1e-14)


def test_two_faces_in_one_plane_keep_s_and_p_apart():
    first = passage(tilted(50.0), UP, 1.0, 1.5)
    second = passage(first.after, UP, 1.5, 1.0)
    inside_deg = np.degrees(np.arcsin(np.sin(np.radians(50.0)) / 1.5))
    one, two = powers(1.0, 1.5, 50.0), powers(1.5, 1.0, inside_deg)
    expected = 0.5 * (one.transmitted_s * two.transmitted_s + one.transmitted_p * two.transmitted_p)
    assert unpolarised_throughput(tilted(50.0), [first, second]) == pytest.approx(expected, abs=1e-14)
    # Carried exactly, more light passes than the product of unpolarised transmittances says.
    assert expected > one.transmitted * two.transmitted + 1e-4


def test_planes_of_incidence_at_right_angles_swap_s_and_p():
    first = passage(tilted(50.0), UP, 1.0, 1.5)
    # A second face whose plane of incidence is square to the first, at the same angle inside.
    across = np.array([0.0, 1.0, 0.0])
    normal = rotation_about(np.cross(across, first.after), 30.0) @ first.after
    second = passage(first.after, normal, 1.5, 1.0)
    one, two = powers(1.0, 1.5, 50.0), powers(1.5, 1.0, 30.0)
    expected = 0.5 * (one.transmitted_s * two.transmitted_p + one.transmitted_p * two.transmitted_s)
    assert unpolarised_throughput(tilted(50.0), [first, second]) == pytest.approx(expected, abs=1e-13)


def test_what_is_reflected_and_what_passes_make_the_whole():
    d, normal = tilted(35.0), rotation_about(np.array([0.6, 0.8, 0.0]), 20.0) @ UP
    through = passage(d, normal, 1.376, 1.0)
    back = Event("reflected", normal, 1.376, 1.0, reflect(d, normal)[0])
    assert unpolarised_throughput(d, [through]) + unpolarised_throughput(d, [back]) == pytest.approx(1.0,
                                                                                                     abs=1e-14)


def test_total_reflection_keeps_the_power_and_turns_the_phase():
    d = tilted(60.0)
    event = passage(d, UP, 1.4906, 1.0)
    assert event.kind == "reflected"
    matrix = path_matrix(d, [event])
    s = np.array([0.0, 1.0, 0.0])
    p_in, p_out = np.cross(s, d), np.cross(s, event.after)
    phase = np.angle((p_out @ matrix @ p_in) / (s @ matrix @ s))
    assert abs(np.degrees(phase)) == pytest.approx(total_reflection_retardance_deg(1.4906, 1.0, 60.0),
                                                   abs=1e-10)
    assert unpolarised_throughput(d, [event]) == pytest.approx(1.0, abs=1e-14)


def test_at_brewsters_angle_reflected_light_is_polarised():
    d = tilted(np.degrees(np.arctan(1.5)))
    matrix = path_matrix(d, [Event("reflected", UP, 1.0, 1.5, reflect(d, UP)[0])])
    assert np.linalg.norm(matrix @ np.cross([0.0, 1.0, 0.0], d)) < 1e-15


def test_mirrors_and_coatings_treat_both_alike():
    d = tilted(30.0)
    mirror = Event("mirror", UP, 1.49, 1.0, reflect(d, UP)[0], reflectance=0.9)
    coated = Event("coated", UP, 1.49, 1.0, refract(d[None], UP, 1.49, 1.0)[0][0], reflectance=0.02)
    assert unpolarised_throughput(d, [mirror]) == pytest.approx(0.9, abs=1e-15)
    assert unpolarised_throughput(d, [coated]) == pytest.approx(0.98, abs=1e-15)


def test_fields_stay_across_the_light():
    d, events = tilted(20.0), []
    direction = d
    for axis, lean in (((1.0, 0.0, 0.0), 12.0), ((0.0, 1.0, 0.0), -9.0), ((0.6, 0.8, 0.0), 25.0)):
        normal = rotation_about(np.array(axis), lean) @ UP
        events.append(passage(direction, normal, 1.2, 1.1))
        direction = events[-1].after
    field = path_matrix(d, events) @ np.array([0.0, 1.0, 0.0])
    assert abs(field @ direction) < 1e-14


def test_an_unknown_event_is_refused():
    with pytest.raises(Misuse) as caught:
        unpolarised_throughput(UP, [Event("bent", UP, 1.0, 1.5, UP)])
    assert str(caught.value) == "event must be one of through, reflected, coated, mirror; got 'bent'"
