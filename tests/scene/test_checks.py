"""A lens that cannot be is refused, with every fault in words."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.errors import BadInput
from goniosim.faces import CornealSurface, Cylinder, Plane, Sphere
from goniosim.scene.bodies import Body, Face
from goniosim.scene.checks import check_lens

CORNEA = Face("cornea-front", CornealSurface(7.79, 7.79, q=-0.18, slope_deg_at=(37.0, 6.6), straight_beyond_mm=6.6))
ADVICE = "A body is the set of points on the right side of every face: goniosim plugins explain lens"


def z(height: float) -> np.ndarray:
    return np.array([0.0, 0.0, height])


CONTACT = Face("contact", Sphere(8.4), origin_mm=z(0.1))
FRONT = Face("front", Plane(), origin_mm=z(5.0))
RIM = Face("rim", Cylinder(6.0), finish="ground")
GOOD = (("contact", "ahead"), ("front", "behind"), ("rim", "behind"))


def faults_of(faces: list[Face], *sides) -> BadInput:
    with pytest.raises(BadInput) as caught:
        check_lens("lens tried", {face.name: face for face in faces}, [Body("optic", "pmma", sides)], CORNEA)
    assert caught.value.where == "lens tried" and caught.value.advice == ADVICE
    return caught.value


def test_a_sound_lens_passes():
    check_lens("lens", {face.name: face for face in (CONTACT, FRONT, RIM)}, [Body("optic", "pmma", GOOD)], CORNEA)


def test_a_body_that_is_not_closed():
    fault, = faults_of([CONTACT, RIM], ("contact", "ahead"), ("rim", "behind")).faults
    assert fault.key == "optic" and fault.message.startswith("its faces do not close it: from (")
    assert fault.message.endswith("meets none of them")


def test_sides_that_contradict_each_other():
    fault, = faults_of([CONTACT, FRONT, RIM], ("contact", "behind"), ("front", "ahead"), ("rim", "behind")).faults
    assert fault.message == ("its faces leave no room: no point lies on the right side of all of them; "
                             "check each face's side")


def test_a_cap_that_ends_inside():
    dome = Face("dome", Sphere(5.0), origin_mm=z(9.0))
    faults = faults_of([CONTACT, dome, RIM, Face("lid", Plane(), origin_mm=z(12.0))], ("contact", "ahead"), ("dome", "behind"),
                       ("rim", "behind"), ("lid", "behind")).faults
    assert [fault.key for fault in faults] == ["optic.dome"]
    assert faults[0].message == "the cap ends, 5.000 mm from its axis, inside the body; another face must cut it off before that"


def test_a_body_that_cuts_into_the_eye():
    floor = Face("floor", Plane(), origin_mm=z(-1.0))
    fault, = faults_of([floor, FRONT, RIM], ("floor", "ahead"), ("front", "behind"), ("rim", "behind")).faults
    assert fault.message.startswith("cuts into the eye's front surface, for example at (")
