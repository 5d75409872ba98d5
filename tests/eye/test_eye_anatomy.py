"""Arc lengths, tangents and normals of the lining; faces that meet; a chamber that is closed."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import quad

from goniosim.eye import build, complete
from goniosim.eye.structures import ANGLE_STRUCTURES
from goniosim.kernels.arrays import ABSORBED, LEFT, MISSED
from goniosim.scene.compile import CompiledScene
from goniosim.scene.tracing import trace

from eyes import VARIED, built, section_height


class Glass:
    """A medium with one index."""

    absorption_per_mm = 0.0

    def __init__(self, index):
        self._index = index

    def index(self, wavelength_nm):
        return self._index


MEDIA = {
    "cornea": Glass(1.376),
    "aqueous": Glass(1.336),
    "lens-equivalent": Glass(1.42),
    "pmma": Glass(1.49),
    "vitreous": Glass(1.336),
    "air": Glass(1.0),
}


@pytest.mark.parametrize("name", ["usual", "toric", "conic"])
@pytest.mark.parametrize(
    "structure", ["scleral-spur", "pigmented-meshwork", "clear-meshwork", "schwalbe-line"]
)
def test_arc_length_agrees_with_scipy(name, structure):
    """scipy's quadrature of sqrt(1 + z'^2) over the face's own heights is the outside authority."""
    eye, clock = built(name), 2.3
    low, high = eye.anatomy.band(structure, clock)
    point = eye.anatomy.point(structure, clock)
    step = 1e-5

    def speed(r):
        z = section_height(eye, "cornea-back", [r - step, r + step], clock)
        return math.hypot(1.0, (z[1] - z[0]) / (2 * step))

    r = math.hypot(point[0], point[1])
    length, _ = quad(speed, r, eye.anatomy.spur_r_mm, epsabs=1e-11)
    assert length == pytest.approx((low + high) / 2, abs=1e-8)


@pytest.mark.parametrize("name", ["usual", "narrow", "toric", "artificial", "conic"])
def test_arc_of_undoes_wall_point(name):
    anatomy = built(name).anatomy
    for clock in (0.7, 3.0, 8.1, 12.0):
        for arc in (
            anatomy.bands.margin_mm + 1e-6,
            -2.0,
            -0.5,
            anatomy.bands.root_mm,
            -0.1,
            -1e-4,
            0.0,
            0.3,
            1.0,
            3.0,
            5.5,
        ):
            assert anatomy.arc_of(anatomy.wall_point(arc, clock)) == pytest.approx(arc, abs=1e-12)


@pytest.mark.parametrize("name", ["usual", "toric"])
def test_tangent_and_normal_of_the_lining(name):
    eye = built(name)
    anatomy, step = eye.anatomy, 1e-6
    for clock in (1.0, 3.0, 6.6):
        for arc in (-3.0, -0.4, -0.1, 0.2, 0.6, 2.5):
            ahead, back = anatomy.wall_point(arc + step, clock), anatomy.wall_point(arc - step, clock)
            np.testing.assert_allclose(anatomy.anterior(arc, clock), (ahead - back) / (2 * step), atol=1e-8)
            normal = anatomy.wall_normal(arc, clock)
            assert normal @ anatomy.anterior(arc, clock) == pytest.approx(0.0, abs=1e-12)
            assert np.linalg.norm(normal) == pytest.approx(1.0, abs=1e-12)
            # The normal leads into the chamber: a little along it lies on the chamber's side of the face.
            face = anatomy.face_at(arc)
            side = 1.0 if dict(eye.inner_sides)[face] == "ahead" else -1.0
            assert (
                side * eye.faces[face].side_value((anatomy.wall_point(arc, clock) + 1e-3 * normal)[None])[0]
                > 0.0
            )


def test_structures_are_found_where_they_lie():
    eye = built("usual")
    for structure in ANGLE_STRUCTURES:
        for clock in (3.0, 5.0, 12.0):
            arc = sum(eye.anatomy.band(structure, clock)) / 2
            point = eye.anatomy.point(structure, clock)
            assert eye.anatomy.structure_at(point, eye.anatomy.face_at(arc)) == structure
    assert eye.anatomy.structure_at(eye.anatomy.apex_mm, "cornea-back") == "cornea"
    assert eye.anatomy.structure_at(eye.anatomy.point("iris-mid", 4.0), "iris-front") == "iris"
    assert eye.anatomy.structure_at(np.array([0.0, 0.0, -3.5]), "lens-front") == "lens"
    assert built("no-lens").anatomy.structure_at(np.array([0.1, 0.0, -4.7]), "vitreous-front") == "pupil"


@pytest.mark.parametrize("name", ["usual", "toric", "narrow", "artificial", "no-lens", "conic"])
def test_neighbouring_faces_meet(name):
    eye = built(name)
    anatomy = eye.anatomy
    margin = anatomy.wall_point(anatomy.bands.margin_mm, 3.0)
    for clock in (0.3, 3.0, 7.7):
        spur, root = anatomy.wall_point(0.0, clock), anatomy.wall_point(anatomy.bands.root_mm, clock)
        for face, point in (("cornea-back", spur), ("ciliary-face", spur), ("ciliary-face", root)):
            assert eye.faces[face].side_value(point[None])[0] == pytest.approx(0.0, abs=1e-9)
    assert section_height(eye, "iris-front", anatomy.mean.iris.root[0] - 1e-12)[0] == pytest.approx(
        anatomy.mean.iris.root[1], abs=1e-9
    )
    cylinder = eye.faces["iris-margin"].shape
    assert cylinder.radius_mm == pytest.approx(math.hypot(*margin[:2]), abs=1e-12)
    assert cylinder.z_max_mm == pytest.approx(margin[2], abs=1e-8)


@pytest.mark.parametrize("name", [*VARIED, "bubble"])
def test_the_chamber_is_closed(name):
    """Light from inside ends on an opaque face or leaves by the cornea's front; none is lost."""
    mapping = {"chamber": {"fill": "air-bubble"}} if name == "bubble" else VARIED[name]
    eye = build(complete(mapping, "right")[0], "right", (0.5, 0.0, math.sqrt(0.75)))
    scene = CompiledScene(tuple(eye.faces.values()), tuple(eye.bodies), MEDIA)
    rng = np.random.default_rng(7)
    starts = []
    for _ in range(150):
        clock, arc = rng.uniform(0.01, 12.0), rng.uniform(eye.anatomy.bands.root_mm + 0.01, 5.0)
        starts.append(
            eye.anatomy.wall_point(arc, clock) + rng.uniform(0.01, 0.1) * eye.anatomy.wall_normal(arc, clock)
        )
    traced = trace(scene, np.repeat(starts, 60, axis=0), rng.normal(size=(9000, 3)), 555.0)
    assert set(np.unique(traced.status)) == {LEFT, ABSORBED}
    left = [face for face, status in zip(traced.ended_on, traced.status) if status == LEFT]
    assert set(left) == {"cornea-front"} and len(left) > 500
    outside = rng.normal(size=(9000, 3)) * [4.0, 4.0, 0.0] + [0.0, 0.0, 10.0]
    traced = trace(scene, outside, rng.normal(size=(9000, 3)) * [4.0, 4.0, 0.1] - outside, 555.0)
    allowed = {ABSORBED, MISSED, LEFT} if name == "bubble" else {ABSORBED, MISSED}
    assert set(np.unique(traced.status)) <= allowed


def test_a_bubble_floats_to_the_top_as_the_head_lies():
    vertical = np.array([0.6, 0.0, 0.8])
    mapping, _, _ = complete({"chamber": {"fill": "air-bubble", "bubble_height_mm": 1.2}}, "right")
    eye = build(mapping, "right", vertical)
    level = eye.faces["bubble-level"]
    np.testing.assert_allclose(level.rotation @ [0.0, 0.0, 1.0], vertical, atol=1e-12)
    r = np.linspace(0.0, eye.anatomy.spur_r_mm, 20001)
    highest = np.max(0.6 * r + 0.8 * section_height(eye, "cornea-back", r))
    assert highest - vertical @ level.origin_mm == pytest.approx(1.2, abs=1e-7)
    assert {body.name: body.medium for body in eye.bodies}["bubble"] == "air"


def test_entry_point_lies_on_the_cornea_inside_the_limbus():
    anatomy = built("usual").anatomy
    point = anatomy.entry_point(9.0, 1.0)
    assert point[0] == pytest.approx(-(5.9 - 1.0), abs=1e-12) and abs(point[1]) < 1e-12
    assert built("usual").faces["cornea-front"].side_value(point[None])[0] == pytest.approx(0.0, abs=1e-12)


def test_canal_lies_behind_the_meshwork():
    anatomy = built("usual").anatomy
    for end in anatomy.canal(3.0):
        assert built("usual").faces["cornea-back"].side_value(end[None])[0] > 0.1
    length = np.linalg.norm(np.subtract(*anatomy.canal(3.0)))
    assert 0.2 < length < 0.4  # meridional width 200 to 400 um by histology, from memory
    assert anatomy.canal_width_mm < anatomy.meshwork_height_mm(
        3.0
    )  # shorter than spur to Schwalbe (Luetjen-Drecoll & Rohen)
