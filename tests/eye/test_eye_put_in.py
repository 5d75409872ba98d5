"""What is put in is measured back on the built surfaces; completing is idempotent; sides mirror."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.eye import complete, with_measured
from goniosim.eye.structures import ANGLE_STRUCTURES, STRUCTURES

from eyes import SHIPPED, VARIED, built, shipped_mapping

EVERY = (*VARIED, *SHIPPED)


def close(measured, stated, key):
    tolerance = 1e-6 if key.endswith("_mm") or key.endswith("_deg") else 1e-3  # um: a millionth of a mm
    assert measured == pytest.approx(stated, abs=tolerance), key


@pytest.mark.parametrize("name", EVERY)
def test_oct_returns_what_was_put_in(name):
    report = built(name).report
    checked = 0
    for key, stated in report["put_in"].items():
        measured = report["measured_on_model"][key]
        if isinstance(stated, dict):
            for quadrant, height in stated.items():
                close(measured[quadrant], height, key)
        elif stated is not None:
            close(measured, stated, key)
        checked += stated is not None
    assert checked >= 8
    assert built(name).notes == []


def test_aod_and_angle_width_fix_the_insertion():
    eye = built("aod-and-width")
    assert eye.report["measured_on_model"]["aod500_mm"] == pytest.approx(0.47, abs=1e-6)
    assert eye.report["measured_on_model"]["angle_width_deg"] == pytest.approx(35.0, abs=1e-6)
    low, high = eye.anatomy.band("ciliary-band", 3.0)
    assert low < -0.18 < high  # a wider opening at the same angle: the root lies farther back than usual


@pytest.mark.parametrize("name", EVERY)
def test_completing_a_complete_eye_changes_nothing(name):
    mapping = VARIED[name] if name in VARIED else shipped_mapping(name)
    once, assumed, _ = complete(mapping, "right")
    twice, again, _ = complete(once, "right")
    assert twice == once and not again
    assert list(twice) == list(once)
    assert assumed


def test_marks_name_what_was_filled_and_nothing_else():
    _, assumed, _ = complete(
        {"chamber": {"depth_mm": 2.6}, "angle": {"meshwork_height_um": {"nasal": 700}}}, "right"
    )
    assert "chamber.depth_mm" not in assumed
    assert {"chamber.vault_mm", "cornea.front.radius_mm", "angle.meshwork_height_um.temporal"} <= assumed
    assert "angle.meshwork_height_um.nasal" not in assumed


def test_measurements_replace_the_other_form_of_a_surface():
    merged = with_measured(
        shipped_mapping("adult-open"),
        {"cornea": {"front": {"flat_mm": 8.0, "steep_mm": 7.6}}, "chamber": {"depth_mm": 2.8}},
    )
    assert "radius_mm" not in merged["cornea"]["front"]
    assert merged["cornea"]["front"]["q"] == -0.18
    assert merged["chamber"] == {"depth_mm": 2.8, "width_mm": 11.8, "vault_mm": 0.35, "fill": "aqueous"}
    assert complete(merged, "right")[0]["cornea"]["front"]["steep_axis_deg"] == 90.0


def test_left_eye_is_the_mirror_image_of_the_right():
    right, left = built("adult-open").anatomy, built("adult-open", "left").anatomy
    for structure in STRUCTURES:
        for clock in (1.0, 2.5, 3.0, 7.0, 11.3):
            mirrored = right.point(structure, clock) * [-1.0, 1.0, 1.0]
            np.testing.assert_allclose(left.point(structure, 12.0 - clock), mirrored, atol=1e-12)


def test_nasal_is_at_three_in_a_right_eye_and_nine_in_a_left_one():
    assert built("adult-open").anatomy.meshwork_height_mm(3.0) == pytest.approx(0.712, abs=1e-15)
    assert built("adult-open", "left").anatomy.meshwork_height_mm(9.0) == pytest.approx(0.712, abs=1e-15)
    assert built("adult-open", "left").anatomy.meshwork_height_mm(3.0) == pytest.approx(0.724, abs=1e-15)


def test_meshwork_height_is_smooth_round_the_clock():
    anatomy = built("adult-open").anatomy
    clocks = np.linspace(0.001, 12.0, 4801)
    heights = np.array([anatomy.meshwork_height_mm(clock) for clock in clocks])
    assert heights.min() == pytest.approx(0.712, abs=1e-6) and heights.max() == pytest.approx(0.889, abs=1e-6)
    slope = np.diff(heights) / np.diff(clocks)
    assert np.abs(np.diff(slope)).max() < 1e-3  # no corner anywhere


def test_bands_follow_one_another_without_gaps():
    anatomy = built("adult-open").anatomy
    edges = [anatomy.band(structure, 4.2) for structure in ANGLE_STRUCTURES]
    for anterior, posterior in zip(edges[:4], edges[1:5]):
        assert anterior[0] == pytest.approx(posterior[1], abs=1e-15)
    assert edges[4][0] == pytest.approx(sum(edges[5]) / 2, abs=1e-15)  # the ciliary band ends at the root
