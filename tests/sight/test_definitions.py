"""Every shipped scene's plan held to the definitions, computed again from what the tracer alone gives.

The twin here knows the scene only through `Scene.trace` and the plan only through plan.json's values; solving is
scipy's. Exact definitions are held to 1e-9 mm.
"""

from __future__ import annotations

import json

import numpy as np
import pytest
from scipy.optimize import root
from scipy.spatial.transform import Rotation

from goniosim.shipped import shipped_folder

SCENES = sorted(path.stem for path in shipped_folder("scenes").glob("*.yaml"))
SEEN = [name for name in SCENES if name not in ("no-lens", "narrow-angle-blocked")]
EYES_SEEN = [name for name in SEEN if name != "bench-cup"]

MM = 1e-9


def frame_about(way):
    first = np.cross(way, [0.3, 0.5, -0.8])
    first /= np.linalg.norm(first)
    return first, np.cross(way, first)


def path_through(scene, start, goal, guess):
    """First direction of the path from start whose last ray passes a point, by scipy from a nearby direction."""
    e, f = frame_about(guess)

    def miss(shares):
        way = guess + shares[0] * e + shares[1] * f
        rays = scene.trace(start, way)
        point, out = rays.points_mm[0], rays.directions[0]
        off = (goal - point) - ((goal - point) @ out) * out
        across = frame_about(out)
        return [off @ across[0], off @ across[1]]

    found = root(miss, [0.0, 0.0], tol=1e-14)
    way = guess + found.x[0] * e + found.x[1] * f
    return way / np.linalg.norm(way)


def last_ray(scene, start, way):
    rays = scene.trace(start, way)
    return rays.points_mm[0], rays.directions[0]


def off_line(point, line_point, line_way):
    gap = point - line_point
    return np.linalg.norm(gap - (gap @ line_way) * line_way)


@pytest.mark.parametrize("name", SCENES)
def test_plan_json_is_whole_plain_data(plans, name):
    plan = json.loads(json.dumps(plans[name].to_dict(), allow_nan=False))
    assert {"goniosim", "version", "caution", "scene", "line_of_sight", "target", "sightings", "landing", "aim", "gap_table",
            "cutoffs", "ring", "fingerprint"} <= set(plan)
    keys = {"structure", "clock", "seen", "cause", "by", "true_mm", "apparent_mm", "stereo_gap_mm", "tangential_mm",
            "sagittal_mm", "shift_mm", "seems_nearer_mm", "seems_anterior_mm", "seems_clockwise_mm", "headroom_deg",
            "headroom_at", "graze_deg", "throughput", "blur_um", "magnification", "handed", "deviation_deg", "deviation_pd",
            "faces"}
    for sighting in plan["sightings"]:
        assert keys <= set(sighting)
        assert (sighting["cause"] is None) == sighting["seen"]
    assert plan["sightings"][0]["structure"] == plan["target"]["structure"]
    assert set(plan["scene"]["marks"].values()) <= {"measured", "given", "assumed"}


@pytest.mark.parametrize("name", SCENES)
def test_line_of_sight_by_the_matrix_of_the_design(plans, name):
    scene = plans[name].scene
    m = scene.mapping
    turn = np.radians(m["head"]["turn_deg"]) * (1.0 if m["head"]["turn_toward"] == "left" else -1.0)
    chin, tilt = np.radians(m["head"]["chin_up_deg"]), np.radians(m["scope"]["tilt_deg"])
    ry = np.array([[np.cos(turn), 0, np.sin(turn)], [0, 1, 0], [-np.sin(turn), 0, np.cos(turn)]])
    rx = np.array([[1, 0, 0], [0, np.cos(chin), np.sin(chin)], [0, -np.sin(chin), np.cos(chin)]])
    toward, gaze = np.radians(30.0 * m["gaze"]["toward_clock"]), np.radians(m["gaze"]["deg"])
    # G leans z straight toward the clock hour: about z cross that direction (scipy's rotation, not ours).
    g = Rotation.from_rotvec(gaze * np.array([-np.cos(toward), np.sin(toward), 0.0])).as_matrix()
    assert g @ [0, 0, 1] == pytest.approx([np.sin(gaze) * np.sin(toward), np.sin(gaze) * np.cos(toward), np.cos(gaze)], abs=1e-15)
    seat = np.radians(30.0 * m["surgeon"]["seat_clock"])
    room = np.array([np.sin(tilt) * np.sin(seat), np.sin(tilt) * np.cos(seat), np.cos(tilt)])
    assert scene.sight == pytest.approx((ry @ rx @ g).T @ room, abs=1e-14)


def test_the_worked_check_of_the_line_of_sight(plans):
    sight = plans["right-eye-temporal"].to_dict()["line_of_sight"]
    assert sight == {"from_axis_deg": pytest.approx(70.0, abs=1e-12), "toward_clock": pytest.approx(9.0, abs=1e-12)}


@pytest.mark.parametrize("name", SEEN)
def test_chief_rays_apparent_point_and_centre(plans, name):
    plan = plans[name]
    scene, sighting = plan.scene, plan.to_dict()["sightings"][0]
    start, w = np.array(sighting["true_mm"]), scene.sight
    centre = np.array(plan.to_dict()["scope"]["centre_mm"])
    distance, base = scene.scope["working_distance_mm"], scene.scope["stereo_base_mm"]
    middle = np.array(sighting["first_direction"])
    point, out = last_ray(scene, start, middle)
    assert off_line(centre + distance * w, point, out) < MM, "the middle path passes the middle of the pupils"
    assert np.linalg.norm(out - w) < 1e-10, "and, centred on the target, leaves in exactly the line of sight"
    lines = []
    for side, pupil in zip((-1.0, 1.0), plan.to_dict()["scope"]["pupils_mm"]):
        pupil = np.array(pupil)
        assert pupil == pytest.approx(centre + distance * w + side * 0.5 * base * scene.right, abs=1e-12)
        way = path_through(scene, start, pupil, middle)
        lines.append(last_ray(scene, start, way))
        assert off_line(pupil, *lines[-1]) < 1e-8
    (p, d), (q, e) = lines
    t = np.linalg.solve(np.array([[d @ d, -d @ e], [d @ e, -e @ e]]), [(q - p) @ d, (q - p) @ e])
    apparent = 0.5 * (p + t[0] * d + q + t[1] * e)
    assert np.linalg.norm(apparent - sighting["apparent_mm"]) < 1e-6, "stereo midpoint of both external rays"
    assert np.linalg.norm(p + t[0] * d - q - t[1] * e) == pytest.approx(sighting["stereo_gap_mm"], abs=1e-7)
    nearest = point + ((np.array(sighting["apparent_mm"]) - point) @ w) * w
    assert np.linalg.norm(nearest - centre) < MM, "C is the point of the axis nearest to A"


@pytest.mark.parametrize("name", SEEN)
def test_headroom_throughput_and_deviation_along_the_path(plans, name):
    plan = plans[name]
    scene, sighting = plan.scene, plan.to_dict()["sightings"][0]
    rays = scene.trace(sighting["true_mm"], sighting["first_direction"], paths=True)
    faces = {face.name: face for face in scene.compiled.faces}
    ways = [np.array(sighting["first_direction"]), *rays.path_directions[0]]
    power, rooms = 1.0, {}
    for (face_name, event), point, before, after in zip(rays.path_faces[0], rays.path_points_mm[0], ways, ways[1:]):
        face = faces[face_name]
        normal = face.rotation @ face.shape.normal(face.to_local(point[None]))[0]
        cos1, cos2 = abs(before @ normal), abs(after @ normal)
        if event == "reflected":
            assert np.linalg.norm(after - (before - 2.0 * (before @ normal) * normal)) < 1e-12
            power *= face.reflectance if face.finish == "mirror" else 1.0
            continue
        sin1, sin2 = np.sqrt(1.0 - cos1**2), np.sqrt(1.0 - cos2**2)
        assert abs(np.linalg.det(np.stack([before, after, normal]))) < 1e-12, "rays and normal lie in one plane"
        if max(sin1, sin2) < 1e-6:
            # Squarely out of the lens: the loss is ((n - 1) / (n + 1))^2.
            lens = next(body for body in scene.compiled.bodies if face_name in dict(body.sides))
            n = scene.media[lens.medium].index(scene.wavelength_nm)
            power *= 1.0 - ((n - 1.0) / (n + 1.0)) ** 2
            rooms[face_name] = np.degrees(np.arcsin(1.0 / n))
            continue
        ratio = sin2 / sin1  # n1 / n2
        rs, rp = (ratio * cos1 - cos2) / (ratio * cos1 + cos2), (cos1 - ratio * cos2) / (cos1 + ratio * cos2)
        power *= 1.0 - 0.5 * (rs**2 + rp**2)
        if ratio > 1.0 + 1e-12:
            rooms[face_name] = np.degrees(np.arcsin(1.0 / ratio) - np.arctan2(sin1, cos1))
    assert sighting["throughput"] == pytest.approx(power, abs=1e-6)
    assert sighting["headroom_deg"] == pytest.approx(min(rooms.values()), abs=1e-4) and min(rooms.values()) > 0.0
    assert sighting["headroom_at"] == min(rooms, key=rooms.get)
    turned = np.degrees(np.arccos(np.clip(ways[0] @ ways[-1], -1.0, 1.0)))
    assert sighting["deviation_deg"] == pytest.approx(turned, abs=1e-6)
    assert sighting["deviation_pd"] == (pytest.approx(100.0 * np.tan(np.radians(turned)), rel=1e-6) if turned < 90 else None)


@pytest.mark.parametrize("name", SEEN)
def test_shift_split_graze_and_handedness(plans, name):
    plan = plans[name].to_dict()
    sighting, target = plan["sightings"][0], plan["target"]
    shift, w = np.array(sighting["shift_mm"]), plans[name].scene.sight
    assert shift == pytest.approx(np.array(sighting["apparent_mm"]) - sighting["true_mm"], abs=1e-12)
    parts = [sighting[key] for key in ("seems_nearer_mm", "seems_anterior_mm", "seems_clockwise_mm")]
    assert parts[0] == pytest.approx(shift @ w, abs=1e-12)
    assert np.linalg.norm(parts) == pytest.approx(np.linalg.norm(shift), abs=1e-12), "three directions square to each other"
    anterior = np.array(target["anterior"]) - (np.array(target["anterior"]) @ w) * w
    assert parts[1] == pytest.approx(shift @ anterior / np.linalg.norm(anterior), abs=1e-9)
    first = np.array(sighting["first_direction"])
    assert sighting["graze_deg"] == pytest.approx(90.0 - np.degrees(np.arccos(first @ target["wall_normal"])), abs=1e-6)
    mirrors = 0 if sighting["by"] == "direct" else len(sighting["by"].split("+"))
    assert sighting["handed"] == ("reversed" if mirrors % 2 else "true"), "an odd number of mirrors turns the picture"


@pytest.mark.parametrize("name", EYES_SEEN)
def test_landing_aim_and_gaps(plans, name):
    plan, record = plans[name], plans[name].to_dict()
    sighting = record["sightings"][0]
    true, apparent, entry = (np.array(each) for each in (sighting["true_mm"], sighting["apparent_mm"], record["entry_mm"]))
    landed = record["landing"]["along_sight"]
    if landed["point_mm"] is not None:
        point, out = last_ray(plan.scene, true, np.array(sighting["first_direction"]))
        assert off_line(np.array(landed["point_mm"]), point, out) < MM, "the landing lies on the undeviated line"
        surfaces = [plan.scene.eye.faces[face].side_value(np.array([landed["point_mm"]]))[0] for face, _ in plan.scene.eye.inner_sides]
        assert min(abs(value) for value in surfaces) < 1e-8, "and on an inner surface"
    to_true, to_image = (each - entry for each in (true, apparent))
    angle = np.degrees(np.arccos(to_true @ to_image / np.linalg.norm(to_true) / np.linalg.norm(to_image)))
    aim = record["aim"]
    assert aim["correction_deg"] == pytest.approx(angle, abs=1e-6)
    assert np.hypot(aim["toward_iris_deg"], aim["clockwise_deg"]) == pytest.approx(aim["correction_deg"], abs=1e-9)
    assert aim["correction_mm"] == pytest.approx(np.radians(angle) * np.linalg.norm(to_true), abs=1e-7)
    for row in record["gap_table"]:
        assert row["true_mm"] == pytest.approx((1.0 - row["share"]) * np.linalg.norm(to_true), abs=1e-12)
    assert record["gap_table"][-1]["seen_mm"] == 0.0


@pytest.mark.parametrize("name", ["right-eye-temporal", "dome", "saline-pool", "one-mirror"])
def test_blur_by_other_rays_over_the_pupil(plans, name):
    plan = plans[name]
    scope, apparent = plan.scope, plan.sighting.view.apparent_mm
    random = np.random.default_rng(3)
    radius, angle = 0.5 * scope.pupil_diameter_mm * np.sqrt(random.uniform(size=4000)), random.uniform(0.0, 2.0 * np.pi, 4000)
    pupils = scope.pupil(0.0) + (radius * np.cos(angle))[:, None] * scope.right + (radius * np.sin(angle))[:, None] * scope.up
    rays = plan.scene.trace(pupils, apparent - pupils)
    there = np.array([face == plan.target.face for face in rays.ended_on])
    landings = rays.points_mm[there]
    rms = 1000.0 * np.sqrt(((landings - landings.mean(axis=0)) ** 2).sum(axis=1).mean())
    assert there.mean() > 0.9
    assert plan.sighting.blur.rms_um == pytest.approx(rms, rel=0.05)


@pytest.mark.parametrize("name", SEEN)
def test_foci_are_where_a_narrow_pencil_comes_together(plans, name):
    plan = plans[name]
    sighting = plan.to_dict()["sightings"][0]
    start, first = np.array(sighting["true_mm"]), np.array(sighting["first_direction"])
    point, out = last_ray(plan.scene, start, first)
    angles = np.linspace(0.0, np.pi, 7)[:-1]
    e, f = frame_about(first)
    spread = {}
    for key in ("tangential_mm", "sagittal_mm"):
        focus = np.array(sighting[key])
        assert off_line(focus, point, out) < 1e-6
        # In the plane square to the ray through a focus the pencil is a line: its narrow width is of second order.
        hits = []
        for angle in np.linspace(0.0, 2.0 * np.pi, 24, endpoint=False):
            p, d = last_ray(plan.scene, start, first + 1e-4 * (np.cos(angle) * e + np.sin(angle) * f))
            hits.append(p + ((focus - p) @ out) / (d @ out) * d - focus)
        widths = np.linalg.svd(np.array(hits) - np.mean(hits, axis=0), compute_uv=False)
        spread[key] = widths
        assert widths[1] < 0.01 * widths[0] or widths[0] < 1e-6
    assert len(angles) == 6


def test_what_each_kind_of_lens_is_for(plans):
    at = {name: plans[name].to_dict() for name in SCENES}
    first = {name: at[name]["sightings"][0] for name in SCENES}
    assert first["right-eye-temporal"]["by"] == "direct" and first["dome"]["magnification"]["clockwise"] > 1.5
    assert first["one-mirror"]["handed"] == "reversed" and first["one-mirror"]["magnification"]["clockwise"] < 1.0
    assert first["four-mirror"]["handed"] == "reversed" and first["twin-mirror"]["handed"] == "true"
    assert first["twin-mirror"]["by"] == "first-mirror+second-mirror"
    margin = at["total-reflection"]["total_reflection_margin_deg"]["slope"]
    assert margin["dry"] > 0.0 > margin["wet"], "a slope that works by total reflection needs a dry outside"
    assert first["saline-pool"]["seems_anterior_mm"] > 0.0
    assert first["no-lens"]["cause"] == "total reflection at cornea-front"
    assert first["narrow-angle-blocked"]["cause"] == "blocked by iris-front"
    for row in at["right-eye-temporal"]["cutoffs"]:
        if row["lens"] == "none":
            assert all(low > 95.0 for low, _ in row["seen_deg"]), "no accessible line of sight shows a normal angle"


def test_a_left_eye_is_the_mirror_image_of_a_right_one(plans):
    right, left = (plans[name].to_dict() for name in ("right-eye-temporal", "left-eye-temporal"))
    flip = np.array([-1.0, 1.0, 1.0])
    for key in ("true_mm", "apparent_mm", "shift_mm", "sagittal_mm"):
        assert np.array(left["sightings"][0][key]) == pytest.approx(flip * right["sightings"][0][key], abs=1e-9)
    assert left["aim"]["toward_iris_deg"] == pytest.approx(right["aim"]["toward_iris_deg"], abs=1e-9)
    assert left["neutral_line_of_sight"]["from_axis_deg"] == pytest.approx(right["neutral_line_of_sight"]["from_axis_deg"], abs=1e-5)
