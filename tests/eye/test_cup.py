"""The bench scene: a cup of water, a mark on its wall, a phone. Every landing against Snell's law by hand."""

from __future__ import annotations

import json
import math

import numpy as np
import pytest
import yaml
from scipy.optimize import brentq

import goniosim
from goniosim.catalogue import resolve_scene, write_resolved_scene
from goniosim.errors import BadInput, Misuse
from goniosim.eye import build, complete
from goniosim.optics.media import medium_from_mapping
from goniosim.shipped import shipped_folder

RADIUS_MM, DEPTH_MM, RIM_MM = 40.0, 50.0, 15.0
WATER = {"goniosim": "medium", "schema": 1, "name": "water", "title": "Water", "source": "made for this test",
         "model": "constant", "index": 1.333}
HANDBOOK_INDEX = 1.3330  # water at 20 deg C and 589.3 nm, CRC Handbook of Chemistry and Physics, from memory


def bench(**changes) -> dict:
    """The shipped scene as a mapping, some of its blocks replaced."""
    scene = yaml.safe_load((shipped_folder("scenes") / "bench-cup.yaml").read_text())
    return {**scene, **changes}


def cup(**changes) -> dict:
    """The scene's eye block, some keys of its cup replaced."""
    eye = bench()["eye"]
    definition = {**eye["definition"], "cup": {**eye["definition"]["cup"], **changes}}
    return {**eye, "definition": definition}


def landing_by_snell(tilt_deg: float, index: float, depth_mm: float = DEPTH_MM) -> float:
    """mm above the mark at which the undeviated line strikes the wall: Snell's law at a level surface.

    The light runs depth * tan(inside) across the cup; the straight line covers as much in
    depth * tan(inside) / tan(outside) of height.
    """
    outside = math.radians(tilt_deg)
    inside = math.asin(math.sin(outside) / index)
    return depth_mm * (1.0 - math.tan(inside) / math.tan(outside))


def planned(scene: dict):
    return goniosim.plan(goniosim.load_scene(scene))


@pytest.mark.parametrize("tilt", [5.0, 30.0, 45.0, 60.0])
@pytest.mark.parametrize("depth", [50.0, 35.0])
def test_landing_is_snells(tilt, depth):
    scope = {"use": "phone-300", "tilt_deg": tilt, "focus_on": "target"}
    plan = planned(bench(scope=scope, media={"water": WATER}, eye=cup(water_above_mark_mm=depth)))
    assert plan.sighting.seen and plan.along_sight.structure == "cup-wall"
    assert plan.along_sight.anterior_mm == pytest.approx(landing_by_snell(tilt, 1.333, depth), abs=1e-9)
    assert plan.to_dict()["sightings"][0]["faces"] == ["water-surface"]


def test_shipped_scene_agrees_with_the_handbook_index():
    plan = planned(bench(wavelength_nm=589.3))
    expected = landing_by_snell(45.0, HANDBOOK_INDEX)
    # A unit in the handbook's last digit moves the landing by 3 um.
    assert plan.along_sight.anterior_mm == pytest.approx(expected, abs=0.005)
    assert plan.notes[-1] == "a straight straw sent down the line of sight lands 18.7 mm above the mark"
    assert plan.notes[-4].startswith("to try it:") and "lean the phone 45 deg" in plan.notes[-3]


def test_landing_from_a_camera_at_its_distance_is_snells():
    """The camera need not look straight at the mark's image: the path then leaves aslant to its axis."""
    focus, tilt = np.array([20.0, 0.0, -10.0]), 40.0
    scope = {"use": "phone-300", "tilt_deg": tilt, "focus_on": {"point_mm": focus.tolist()}}
    plan = planned(bench(scope=scope, media={"water": WATER}))
    lean = math.radians(tilt)
    camera = focus + 300.0 * np.array([-math.sin(lean), 0.0, math.cos(lean)])  # the seat is at 9 o'clock

    def snell(x: float) -> float:
        inside = (RADIUS_MM - x) / math.hypot(RADIUS_MM - x, DEPTH_MM)
        outside = (x - camera[0]) / math.hypot(x - camera[0], camera[2])
        return 1.333 * inside - outside

    x = brentq(snell, -RADIUS_MM, RADIUS_MM, xtol=1e-14, rtol=1e-14)
    height = -camera[2] * (RADIUS_MM - x) / (x - camera[0])
    assert plan.sighting.view.middle.last_point_mm == pytest.approx([x, 0.0, 0.0], abs=1e-9)
    assert plan.along_sight.anterior_mm == pytest.approx(height + DEPTH_MM, abs=1e-9)


def test_without_refraction_the_straw_lands_on_the_mark():
    plan = planned(bench(media={"water": {**WATER, "index": 1.0}}))
    assert plan.along_sight.structure == "mark"
    assert plan.along_sight.anterior_mm == pytest.approx(0.0, abs=1e-9)


def test_landing_does_not_depend_on_the_camera():
    """The line of sight alone decides, not the distance, nor the base between the two shots."""
    phone = resolve_scene("bench-cup").mapping["scope"]["definition"]
    here = planned(bench()).along_sight.anterior_mm
    for change in ({"working_distance_mm": 180.0}, {"stereo_base_mm": 4.0}):
        scope = {"definition": {**phone, **change}, "tilt_deg": 45.0}
        assert planned(bench(scope=scope)).along_sight.anterior_mm == pytest.approx(here, abs=1e-9)


def test_rim_hides_the_mark_where_geometry_says():
    """The middle ray touches the near rim where 2 R - depth tan(inside) = rim tan(outside)."""
    def clears(tilt_deg: float) -> float:
        outside = math.radians(tilt_deg)
        inside = math.asin(math.sin(outside) / 1.333)
        return 2.0 * RADIUS_MM - DEPTH_MM * math.tan(inside) - RIM_MM * math.tan(outside)

    phone = {**resolve_scene("bench-cup").mapping["scope"]["definition"], "stereo_base_mm": 0.01}
    scope = {"definition": phone, "tilt_deg": 45.0}
    row = planned(bench(scope=scope, media={"water": WATER})).cutoffs[0]
    assert row.cut.seen_deg[-1][1] == pytest.approx(brentq(clears, 30.0, 80.0), abs=1e-3)
    assert row.cut.causes[-1][1] == "blocked by cup-wall"


def test_too_low_a_phone_sees_nothing_and_says_why():
    plan = planned(bench(scope={"use": "phone-300", "tilt_deg": 70.0}))
    assert not plan.sighting.seen and plan.sighting.cause == "blocked by cup-wall"
    assert plan.along_sight.structure is None and not any("lands" in note for note in plan.notes)


def test_ring_tool_and_neutral_line_are_left_out():
    record = planned(bench()).to_dict()
    assert record["ring"] == [] and record["aim"]["correction_deg"] is None
    assert record["neutral_line_of_sight"]["from_axis_deg"] is None
    assert record["eye"] == {"put_in": bench()["eye"]["definition"]["cup"]}


@pytest.mark.parametrize("origin, direction, ended", [
    ([0.0, 0.0, 100.0], [0.1, 0.0, -1.0], "cup-floor"),
    ([100.0, 0.0, -20.0], [-1.0, 0.0, 0.0], "cup-outside"),
    ([41.0, 0.0, 100.0], [0.0, 0.0, -1.0], "cup-rim"),
    ([0.0, 0.0, 5.0], [1.0, 0.0, 0.0], "cup-wall"),
    ([0.0, 0.0, -200.0], [0.0, 0.0, 1.0], "cup-foot"),
    ([5.0, 5.0, -20.0], [1.0, 0.0, 0.0], "cup-wall"),
])
def test_the_cup_stops_light_from_everywhere(origin, direction, ended):
    assert goniosim.load_scene("bench-cup").trace(origin, direction).ended_on == [ended]


def test_a_short_cup_is_filled_and_marked():
    mapping, assumed, _ = complete({"cup": {"inside_radius_mm": 30}}, "right")
    assert mapping["cup"]["inside_radius_mm"] == 30.0 and mapping["cup"]["water"] == "water"
    assert "cup.water_above_mark_mm" in assumed and "cup.inside_radius_mm" not in assumed
    assert complete(mapping, "right") == (mapping, set(), [])


def test_mark_lies_where_it_is_drawn():
    mapping, _, _ = complete({"cup": {"mark_height_mm": 4.0}}, "right")
    anatomy = build(mapping, "right").anatomy
    assert anatomy.point("mark", 3.0, across=1.0) == pytest.approx([RADIUS_MM, 0.0, -48.0])
    assert anatomy.structure_at(anatomy.wall_point(1.9, 3.0), "cup-wall") == "mark"
    assert anatomy.structure_at(anatomy.wall_point(2.1, 3.0), "cup-wall") == "cup-wall"
    # 20 mm down, then 10 mm along the floor
    assert anatomy.arc_of(np.array([30.0, 0.0, -70.0])) == pytest.approx(-30.0)


def test_measured_cup_replaces_the_files():
    eye = {**bench()["eye"], "measured": {"cup": {"water_above_mark_mm": 42}}}
    resolved = resolve_scene(bench(eye=eye))
    assert resolved.mapping["eye"]["definition"]["cup"]["water_above_mark_mm"] == 42.0
    assert resolved.marks["eye.definition.cup.water_above_mark_mm"] == "measured"


LENS = {"use": "direct-face-48", "mark_at_clock": 9}
TOOL = {"use": "straight-23g", "entry": {"clock": 9}}


@pytest.mark.parametrize("changes, key, message", [
    ({"lens": LENS}, "lens.use", "must be left out (lens: none): no goniolens stands on a cup"),
    ({"tool": TOOL}, "tool.use",
     "must be left out (tool: none): a cup has no entry; the straw goes down the line of sight"),
    ({"head": {"turn_deg": 20}}, "head.turn_deg", "must be 0: a cup of water cannot be turned; got 20"),
    ({"target": {"structure": "scleral-spur", "clock": 3}}, "target.structure",
     "must be mark, the only structure of a cup; got 'scleral-spur', and cup-80 is a cup"),
    ({"eye": {"use": "adult-open", "side": "right"}}, "target.structure",
     "must be a structure of the eye; mark is on the wall of a cup, and adult-open is an eye"),
    ({"eye": cup(water_above_mark_mm=0.5)}, "eye.definition.cup.water_above_mark_mm",
     "must be at least half of mark_height_mm, 2, or the mark reaches above the water; got 0.5"),
    ({"eye": cup(inside_radius_mm=-1)}, "eye.definition.cup.inside_radius_mm",
     "must be a number from 5 to 200 mm; got -1"),
])
def test_faults(changes, key, message):
    with pytest.raises(BadInput) as caught:
        resolve_scene(bench(**changes))
    fault, = caught.value.faults
    assert fault.key == key
    assert fault.message == message


def test_an_unknown_water_is_told_where_it_is_named():
    with pytest.raises(BadInput) as caught:
        resolve_scene(bench(eye=cup(water="watter")))
    fault, = caught.value.faults
    assert fault.key == "eye.definition.cup.water" and "Did you mean 'water'?" in fault.message


def test_all_mismatches_are_told_at_once():
    with pytest.raises(BadInput) as caught:
        resolve_scene(bench(lens=LENS, tool=TOOL, gaze={"deg": 5}, head={"chin_up_deg": 5}))
    told = {fault.key for fault in caught.value.faults}
    assert told == {"lens.use", "tool.use", "gaze.deg", "head.chin_up_deg"}


def test_a_cup_beside_an_eye_is_a_fault():
    eye = bench()["eye"]
    both = {**eye, "definition": {**eye["definition"], "chamber": {"depth_mm": 3.0}}}
    with pytest.raises(BadInput) as caught:
        resolve_scene(bench(eye=both))
    fault, = caught.value.faults
    assert fault.key == "eye.definition.chamber"
    assert fault.message == "must be left out: cup is given, and a cup holds no eye"


def test_a_lens_from_the_command_line_is_misuse():
    with pytest.raises(Misuse, match="no goniolens stands on a cup"):
        resolve_scene("bench-cup", overrides={"lens": "direct-face-48"})


def test_one_camera_needs_two_shots():
    phone = {**resolve_scene("bench-cup").mapping["scope"]["definition"], "stereo_base_mm": 0.0}
    with pytest.raises(BadInput, match="must be a number greater than 0"):
        resolve_scene(bench(scope={"definition": phone}))


def test_plan_comes_back_byte_for_byte(tmp_path, monkeypatch):
    first = json.dumps(goniosim.plan(goniosim.load_scene("bench-cup")).to_dict(), allow_nan=False)
    write_resolved_scene(resolve_scene("bench-cup"), tmp_path / "resolved-scene.yaml")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setattr("goniosim.catalogue.search.shipped_folder", lambda kind: tmp_path / kind)
    again = json.dumps(goniosim.plan(goniosim.load_scene("resolved-scene.yaml")).to_dict(), allow_nan=False)
    assert again == first


def test_shipped_water_is_the_handbooks():
    water = medium_from_mapping(resolve_scene("bench-cup").mapping["media"]["water"])
    assert water.index(589.3) == pytest.approx(HANDBOOK_INDEX, abs=1e-4)
