"""Scenes resolved: shipped ones, what is filled in, overrides, and the way back from a written resolved scene."""

from __future__ import annotations

import math

import numpy as np
import pytest

from goniosim.catalogue import resolve_scene, resolved_text, write_resolved_scene
from goniosim.catalogue.paths import dotted, leaves
from goniosim.errors import BadInput, Misuse
from goniosim.shipped import shipped_folder

SHIPPED = sorted(path.stem for path in shipped_folder("scenes").glob("*.yaml"))

SHORT = """goniosim: scene
schema: 1
name: short
eye: {use: adult-open, side: left}
target: {structure: scleral-spur, clock: 9}
"""


@pytest.fixture
def scene_file(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)

    def made(text: str):
        path = tmp_path / "case.yaml"
        path.write_text(text)
        return path

    return made


def refused(path, **overrides) -> str:
    with pytest.raises(BadInput) as caught:
        resolve_scene(path, overrides=overrides)
    return str(caught.value)


def test_enough_scenes_ship():
    assert len(SHIPPED) >= 8


@pytest.mark.parametrize("name", SHIPPED)
def test_resolved_scene_comes_back_exactly(name, tmp_path, monkeypatch):
    first = resolve_scene(name)
    write_resolved_scene(first, tmp_path / "resolved-scene.yaml")
    monkeypatch.chdir(tmp_path)
    again = resolve_scene("resolved-scene.yaml")
    assert repr(again.mapping) == repr(first.mapping)
    assert (again.marks, again.fingerprint, again.notes) == (first.marks, first.fingerprint, first.notes)
    assert resolved_text(again) == (tmp_path / "resolved-scene.yaml").read_text()


def test_resolved_scene_needs_no_plugin(tmp_path, monkeypatch):
    first = resolve_scene("right-eye-temporal")
    write_resolved_scene(first, tmp_path / "resolved-scene.yaml")
    (tmp_path / "plugins").mkdir()
    monkeypatch.setattr("goniosim.catalogue.search.shipped_folder", lambda kind: tmp_path / kind)
    assert resolve_scene(tmp_path / "resolved-scene.yaml").fingerprint == first.fingerprint


@pytest.mark.parametrize("name", SHIPPED)
def test_every_leaf_is_marked_and_finite(name):
    resolved = resolve_scene(name)
    for path, value in leaves(resolved.mapping):
        if path[0] in ("goniosim", "schema", "name", "title", "source"):
            continue
        assert resolved.marks[dotted(path)] in ("measured", "given", "assumed")
        for number in value if isinstance(value, list) else [value]:
            assert not isinstance(number, float) or math.isfinite(number)


def test_what_a_short_scene_leaves_out_is_filled(scene_file):
    resolved = resolve_scene(scene_file(SHORT))
    mapping, marks = resolved.mapping, resolved.marks
    assert mapping["lens"] == "none" and mapping["tool"] is None
    assert mapping["surgeon"] == {"seat_clock": 3.0} and mapping["head"]["turn_toward"] == "right"
    assert mapping["scope"]["use"] == "stereo-200" and mapping["wavelength_nm"] == 555.0
    assert mapping["target"] == {"structure": "scleral-spur", "clock": 9.0, "across": 0.5}
    assert {marks[key] for key in ("lens", "tool", "surgeon.seat_clock", "wavelength_nm", "target.across")} == {"assumed"}
    assert marks["target.clock"] == "given" and marks["eye.side"] == "given"


def test_lens_mark_lies_opposite_the_target(scene_file):
    resolved = resolve_scene(scene_file(SHORT + "lens: {use: direct-face-48}\n"))
    lens = resolved.mapping["lens"]
    assert (lens["mark_at_clock"], lens["gap_um"], lens["fluid"]) == (3.0, 20.0, "saline")
    assert resolved.marks["lens.mark_at_clock"] == "assumed" and "saline" in resolved.mapping["media"]


def test_measurements_are_marked_and_replace(scene_file):
    text = SHORT.replace("side: left", "side: left, measured: {chamber: {depth_mm: 2.75}}")
    resolved = resolve_scene(scene_file(text))
    assert resolved.mapping["eye"]["definition"]["chamber"]["depth_mm"] == 2.75
    assert resolved.marks["eye.definition.chamber.depth_mm"] == "measured"
    assert "measured" not in resolved.mapping["eye"]
    assert resolved.fingerprint != resolve_scene(scene_file(SHORT)).fingerprint


def test_air_is_built_in(scene_file):
    text = SHORT.replace("side: left", "side: left, measured: {chamber: {fill: air}}")
    assert resolve_scene(scene_file(text)).mapping["media"]["air"]["index"] == 1.0


def test_impossible_measurement_stands_beside_other_faults(scene_file):
    text = SHORT.replace("side: left", "side: left, measured: {cornea: {front: {radius_mm: 43.5}}}")
    words = refused(scene_file(text + "scope: {use: stereo-20}\n"))
    column = text.splitlines()[3].index("43.5") + 1
    assert f"line 4, column {column}  eye.measured.cornea.front.radius_mm  must be from 5 to 11.5 mm; got 43.5. This looks " \
           "like dioptres: 43.5 D is a radius of 7.76 mm" in words
    assert "scope.use" in words and "Did you mean 'stereo-200'?" in words


def test_toric_measurement_replaces_round_cornea():
    front = resolve_scene("measured-toric").mapping["eye"]["definition"]["cornea"]["front"]
    assert front["flat_mm"] == 7.95 and front.get("radius_mm") is None


def test_names_do_not_change_the_fingerprint(scene_file):
    first = resolve_scene(scene_file(SHORT)).fingerprint
    assert resolve_scene(scene_file(SHORT.replace("name: short", "name: other\ntitle: Other"))).fingerprint == first


def test_mapping_from_python_equals_the_file(scene_file):
    given = {"goniosim": "scene", "schema": 1, "name": "short", "eye": {"use": "adult-open", "side": "left"},
             "lens": {"use": "direct-face-48", "decentre_mm": np.array([0.1, 0])},
             "target": {"structure": "scleral-spur", "clock": np.int64(9)}}
    text = SHORT + "lens: {use: direct-face-48, decentre_mm: [0.1, 0]}\n"
    assert resolve_scene(given).fingerprint == resolve_scene(scene_file(text)).fingerprint


def test_nan_from_python_is_refused():
    given = {"goniosim": "scene", "schema": 1, "name": "short", "eye": {"use": "adult-open", "side": "left"},
             "scope": {"tilt_deg": float("nan")}, "target": {"point_mm": [0.0, 0.0, float("inf")]}}
    with pytest.raises(BadInput) as caught:
        resolve_scene(given)
    assert [fault.key for fault in caught.value.faults] == ["scope.tilt_deg", "target.point_mm[2]"]


def test_overrides_act_like_the_file(scene_file):
    text = SHORT + "scope: {tilt_deg: 40}\nlens: {use: direct-face-56}\n"
    over = resolve_scene(scene_file(SHORT + "lens: {use: direct-face-48}\n"),
                         overrides={"scope.tilt_deg": 40, "lens": "direct-face-56"})
    assert over.mapping == resolve_scene(scene_file(text)).mapping
    assert over.marks["scope.tilt_deg"] == "given"


def test_override_on_a_resolved_scene(tmp_path):
    write_resolved_scene(resolve_scene("right-eye-temporal"), tmp_path / "resolved-scene.yaml")
    over = {"lens": "none", "head.turn_deg": 10.0, "target.clock": 4.0}
    again = resolve_scene(tmp_path / "resolved-scene.yaml", overrides=over)
    assert again.mapping == resolve_scene("right-eye-temporal", overrides=over).mapping


def test_lens_override_to_a_pool_drops_gap_and_fluid():
    lens = resolve_scene("right-eye-temporal", overrides={"lens": "saline-pool"}).mapping["lens"]
    assert lens["gap_um"] is None and lens["fluid"] is None and lens["definition"]["name"] == "saline-pool"


@pytest.mark.parametrize("override, message", [
    ({"scope.tilt_deg": 140.0}, "scope.tilt_deg must be a number from 0 to 90 deg; got 140.0"),
    ({"target.clock": 13}, "target.clock must be a clock hour, greater than 0 and at most 12; got 13"),
    ({"eye.side": "rihgt"}, "eye.side must be right or left; got 'rihgt'. Did you mean 'right'?"),
])
def test_wrong_override_is_misuse(override, message):
    with pytest.raises(Misuse) as caught:
        resolve_scene("right-eye-temporal", overrides=override)
    assert str(caught.value) == message


def test_unknown_lens_lists_the_installed(scene_file):
    words = refused(scene_file(SHORT + "lens: {use: direct-fase-48}\n"))
    assert words.startswith("case.yaml has 1 problem\n  line 6, column 13  lens.use  no lens named 'direct-fase-48'. "
                            "Installed: direct-dome-pmma, ")
    assert "Did you mean 'direct-face-48'?" in words


@pytest.mark.parametrize("old, new, message", [
    ("structure: scleral-spur, clock: 9", "structure: sclera-spur, clock: 9", "Did you mean 'scleral-spur'?"),
    ("structure: scleral-spur, clock: 9", "clock: 9", "target  needs structure, or point_mm alone"),
    ("clock: 9", "clock: 9, point_mm: [0, 0, -3]", "is given beside point_mm; give a structure and its clock hour, or a "
     "point"),
    (", side: left", "", "eye.side  is missing: which eye of the patient"),
    ("use: adult-open, ", "", "eye.use  is missing: name of the eye"),
    ("schema: 1", "schema: 2", "schema  is 2; this program reads schema 1. Update goniosim"),
    ("side: left", "side: left, measured: {chamber: {deepth_mm: 3}}", "did you mean 'depth_mm'?"),
])
def test_bad_scenes(scene_file, old, new, message):
    assert message in refused(scene_file(SHORT.replace(old, new)))


def test_pool_takes_no_gap(scene_file):
    assert refused(scene_file(SHORT + "lens: {use: saline-pool, gap_um: 20}\n")) == (
        "case.yaml has 1 problem\n  line 6, column 26  lens.gap_um  must be left out: this lens is a pool that lies on "
        "the cornea itself\nMore: goniosim plugins explain scene")


def test_missing_scene_names_the_shipped_ones(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert "Did you mean 'right-eye-temporal'?" in refused("right-eye-tempral")
    assert refused("no/such.yaml") == "no/such.yaml has 1 problem\n  cannot be read: there is no such file"


def test_room_and_scene_replace_settings(scene_file):
    settings = resolve_scene(scene_file(SHORT + "room: {use: small-turn-room}\nsettings: {page: {size: letter}}\n"))
    assert settings.mapping["settings"]["page"]["size"] == "letter"
    assert settings.mapping["settings"]["cautions"].startswith("Head turn is limited here")
    assert settings.marks["settings.page.size"] == "given"
    assert settings.marks["settings.seen.throughput_floor"] == "assumed"


def test_written_file_is_whole_or_absent(tmp_path):
    with pytest.raises(Misuse, match="cannot be written"):
        write_resolved_scene(resolve_scene("no-lens"), tmp_path / "no" / "folder.yaml")
    assert list(tmp_path.iterdir()) == []
