"""A seated lens stands off the cornea by exactly its gap, by brute force; placement follows the design's words."""

from __future__ import annotations

import numpy as np
import pytest

import goniosim
from goniosim.frames import clock_direction, lean_toward
from goniosim.scene.lens import lean_of, pose_on_eye

EYE = {"use": "adult-open", "side": "right"}
TORIC = {"use": "adult-toric", "side": "right"}


def scene_with(lens: dict, eye: dict = EYE, **more):
    return goniosim.load_scene({
        "goniosim": "scene", "schema": 1, "name": "seated", "eye": eye, "lens": lens,
        "scope": {"use": "stereo-200", "tilt_deg": 35, "focus_on": "target"},
        "head": {"turn_deg": 35, "turn_toward": "left", "chin_up_deg": 0}, "surgeon": {"seat_clock": 9},
        "target": {"structure": "pigmented-meshwork", "clock": 3}, "wavelength_nm": 555, **more})


def least_clearance_by_brute_force(scene) -> float:
    """Clearance along z over a dense grid of the contact face inside the rim."""
    faces = {face.name: face for face in scene.compiled.faces}
    contact, cornea, rim = faces["contact"], faces["cornea-front"], faces["rim"]
    line = np.linspace(-7.0, 7.0, 1401)
    u, v = (grid.ravel() for grid in np.meshgrid(line, line))
    kept = np.hypot(u, v) < 8.0
    radius = contact.shape.radius_mm
    u, v = u[kept], v[kept]
    height = -(radius - np.sqrt(radius**2 - u * u - v * v))
    points = contact.to_eye(np.stack([u, v, height], axis=-1))
    points = points[rim.side_value(points) <= 0.0]
    return float((points[:, 2] - cornea.shape.sag(points[:, 0], points[:, 1])).min())


@pytest.mark.parametrize("eye", [EYE, TORIC], ids=["round", "toric"])
@pytest.mark.parametrize("placed", [
    {"gap_um": 20}, {"gap_um": 150, "decentre_mm": [0.6, -0.4]}, {"gap_um": 50, "tip_deg": 4, "tip_toward_clock": 2},
    {"gap_um": 0, "decentre_mm": [-0.5, 0.2], "tip_deg": 3, "tip_toward_clock": 7},
], ids=["plain", "decentred", "tipped", "both"])
def test_least_clearance_is_the_gap(eye, placed):
    scene = scene_with({"use": "direct-face-48", "mark_at_clock": 9, "fluid": "saline", **placed}, eye)
    # The grid's points lie within 0.01 mm of the closest place: clearance there differs by less than 1e-4 mm.
    found = least_clearance_by_brute_force(scene)
    assert placed["gap_um"] / 1000.0 - 1e-9 <= found <= placed["gap_um"] / 1000.0 + 4e-3
    assert found == pytest.approx(placed["gap_um"] / 1000.0, abs=4e-3)


def test_the_mark_stands_at_its_clock_hour_and_the_lens_leans_toward_the_eyes():
    pose = pose_on_eye(9.0, [0.1, 0.2], 0.0, 12.0)
    assert pose.rotation @ [0.0, 1.0, 0.0] == pytest.approx(clock_direction(9.0), abs=1e-15)
    tipped = pose_on_eye(4.0, [0.0, 0.0], 10.0, 2.0)
    assert tipped.rotation @ [0.0, 0.0, 1.0] == pytest.approx(lean_toward(2.0, 10.0) @ [0.0, 0.0, 1.0], abs=1e-15)


def test_a_mirror_angle_is_180_less_the_lean():
    turned = lean_of({"mirror_angle_deg": 62.0, "lean_toward_clock": 12.0})
    assert turned == pytest.approx(lean_toward(12.0, 118.0), abs=1e-15)
    # The mirror's normal points out of the lens, toward its clock hour and down.
    normal = turned @ [0.0, 0.0, 1.0]
    assert normal[1] > 0.0 and normal[2] < 0.0


def test_a_level_face_stays_level_however_the_head_lies():
    scene = scene_with({"use": "saline-pool", "mark_at_clock": 9}, head={"turn_deg": 30, "turn_toward": "left", "chin_up_deg": 12},
                       gaze={"deg": 5, "toward_clock": 2})
    level = next(face for face in scene.compiled.faces if face.name not in scene.eye.faces and face.shape.name == "plane")
    assert scene.head @ level.rotation @ [0.0, 0.0, 1.0] == pytest.approx([0.0, 0.0, 1.0], abs=1e-12)
