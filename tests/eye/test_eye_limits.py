"""Contradicting measurements give way in the stated order; values no eye can have are refused."""

from __future__ import annotations

import pytest

from goniosim.eye import build, complete
from goniosim.eye.measurements import eye_faults
from goniosim.errors import BadInput


def eye_of(mapping):
    return build(complete(mapping, "right")[0], "right")


def test_vault_gives_way_first():
    eye = eye_of({"chamber": {"depth_mm": 3.0, "vault_mm": 1.3, "width_mm": 11.8}})
    measured = eye.report["measured_on_model"]
    assert measured["chamber_depth_mm"] == pytest.approx(3.0, abs=1e-9)
    assert measured["chamber_width_mm"] == pytest.approx(11.8, abs=1e-9)
    assert measured["lens_vault_mm"] < 1.3 - 0.1
    assert eye.report["put_in"]["lens_vault_mm"] == 1.3
    assert "contradict each other" in eye.notes[0] and "instead of 1.3 mm" in eye.notes[0]


def test_width_gives_way_where_the_vault_cannot():
    eye = eye_of({"chamber": {"depth_mm": 3.0, "vault_mm": 0.35, "width_mm": 9.0}, "iris": {"pupil_mm": 3.0}})
    measured = eye.report["measured_on_model"]
    assert measured["chamber_width_mm"] > 9.0 + 0.1
    assert measured["chamber_depth_mm"] == pytest.approx(3.0, abs=1e-9)
    assert "and a width of" in eye.notes[0]


def test_bow_gives_way_to_the_angle():
    eye = eye_of({"angle": {"width_deg": 20}, "iris": {"bow_mm": 0.1}})
    measured = eye.report["measured_on_model"]
    assert measured["angle_width_deg"] == pytest.approx(20.0, abs=1e-6)
    assert measured["iris_bow_mm"] > 0.3
    assert eye.notes == [
        f"a bow of 0.1 mm does not go with this angle: {measured['iris_bow_mm']:.3f} mm is used "
        "(the bow gives way)"
    ]


def test_insertion_gives_way_after_the_bow():
    eye = eye_of({"angle": {"width_deg": 68}, "iris": {"bow_mm": -0.1}})
    assert any("root is put" in note for note in eye.notes)
    assert eye.report["measured_on_model"]["angle_width_deg"] == pytest.approx(68.0, abs=1e-6)
    assert eye.anatomy.band("ciliary-band", 3.0)[0] < -0.18


def test_aod_that_no_insertion_gives_is_told():
    eye = eye_of({"angle": {"width_deg": 35, "aod500_mm": 1.2}})
    assert "contradict each other" in eye.notes[0]
    assert eye.report["measured_on_model"]["angle_width_deg"] == pytest.approx(35.0, abs=1e-6)


@pytest.mark.parametrize(
    "mapping, key, message",
    [
        (
            {"cornea": {"front": {"radius_mm": 43.25}}},
            "cornea.front.radius_mm",
            "must be from 5 to 11.5 mm; got 43.25. This looks like dioptres: 43.25 D is a radius of 7.80 mm",
        ),
        (
            {"cornea": {"thickness_um": 0.545}},
            "cornea.thickness_um",
            "must be from 250 to 1000 um; got 0.545. This looks like mm: 0.545 mm is 545 um",
        ),
        (
            {"chamber": {"depth_mm": 3000}},
            "chamber.depth_mm",
            "must be from 1 to 6.5 mm; got 3000. This looks like um: 3000 um is 3 mm",
        ),
        (
            {"cornea": {"front": {"radius_mm": 7.8, "flat_mm": 7.9, "steep_mm": 7.7}}},
            "cornea.front",
            "must have radius_mm, or flat_mm and steep_mm with steep_axis_deg; not both",
        ),
        (
            {"cornea": {"front": {"flat_mm": 7.9}}},
            "cornea.front.steep_mm",
            "is missing: a toric surface needs flat_mm and steep_mm",
        ),
        (
            {"cornea": {"front": {"flat_mm": 7.6, "steep_mm": 7.9}}},
            "cornea.front.flat_mm",
            "must be at least steep_mm, 7.9; got 7.6. The flat meridian has the larger radius",
        ),
        (
            {"cornea": {"periphery": "conic"}, "chamber": {"vault_mm": 0.3}},
            "chamber.vault_mm",
            "must be left out with periphery: conic: the vault is a result",
        ),
        (
            {"angle": {"width_deg": 30, "aod500_mm": 0.4, "ciliary_band_mm": 0.2}},
            "angle",
            "width_deg, aod500_mm and ciliary_band_mm are all given; any two fix the third",
        ),
        (
            {"angle": {"meshwork_height_um": {"nasal": 0.7}}},
            "angle.meshwork_height_um.nasal",
            "must be from 200 to 1400 um; got 0.7. This looks like mm: 0.7 mm is 700 um",
        ),
        (
            {"angle": {"meshwork_height_um": {"upper": 700}}},
            "angle.meshwork_height_um.upper",
            "is not a quadrant; quadrants are nasal, temporal, superior, inferior",
        ),
        (
            {"angle": {"meshwork_height_um": "tall"}},
            "angle.meshwork_height_um",
            "must be a number of um, or {nasal, temporal, superior, inferior}; got 'tall'",
        ),
        ({"iris": {"pupil_mm": float("nan")}}, "iris.pupil_mm", "must be a number; got nan"),
    ],
)
def test_what_no_eye_can_be(mapping, key, message):
    assert [(fault.key, fault.message) for fault in eye_faults(mapping)] == [(key, message)]
    with pytest.raises(BadInput):
        complete(mapping, "right")


def test_all_faults_at_once():
    with pytest.raises(BadInput) as caught:
        complete(
            {"cornea": {"front": {"radius_mm": 44}, "thickness_um": 5}, "iris": {"pupil_mm": 12}}, "right"
        )
    assert [fault.key for fault in caught.value.faults] == [
        "cornea.front.radius_mm",
        "cornea.thickness_um",
        "iris.pupil_mm",
    ]


def test_an_iris_against_the_cornea_is_refused():
    with pytest.raises(BadInput, match="touches the cornea"):
        eye_of(
            {
                "chamber": {"depth_mm": 1.0, "vault_mm": 2.0},
                "angle": {"width_deg": 2},
                "iris": {"bow_mm": 1.2},
            }
        )
