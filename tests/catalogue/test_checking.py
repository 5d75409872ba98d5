"""Faults of single keys and between keys of lens files, whole messages."""

from __future__ import annotations

import pytest

from goniosim.catalogue.search import load_file

FACE_KEYS = ("name, shape, side, vertex_mm, lean_deg, lean_toward_clock, mirror_angle_deg, level, finish, reflectance, "
             "works_by")


def changed(text: str, old: str, new: str) -> str:
    assert text.count(old) == 1
    return text.replace(old, new)


def only(report: str) -> str:
    """The single fault of a report, spaces closed up."""
    head, *faults, advice = report.split("\n")
    assert head == "demo.yaml has 1 problem" and len(faults) == 1
    return " ".join(faults[0].split())


def test_good_lens_keeps_its_values(tmp_path, flat_lens):
    path = tmp_path / "demo.yaml"
    path.write_text(flat_lens)
    face = load_file("lens", path).values["bodies"][0]["faces"][1]
    assert face["vertex_mm"] == [0.0, 0.0, 5.0] and face["lean_deg"] == 48.0


def test_all_faults_at_once_in_file_order(report, flat_lens):
    columns = [line.index(word) + 1 for line, word in zip(flat_lens.splitlines()[9:12], ("radius", "48,", "6.0"))]
    text = changed(flat_lens, "radius_mm: 8.4", "radius_um: 8400")
    text = changed(text, "lean_deg: 48", "lean_deg: '48'")
    text = changed(text, "radius_mm: 6.0, side: behind", "radius_mm: -6.0, side: behnd")
    assert report(text) == (
        "demo.yaml has 5 problems\n"
        "  line 10, column 9   bodies[0].faces[0].radius_mm  is missing: radius of curvature at the vertex; greater "
        "than 0: centre behind the vertex; not 0\n"
        f"  line 10, column {columns[0]}  bodies[0].faces[0].radius_um  is not a known key; did you mean 'radius_mm'?\n"
        f"  line 11, column {columns[1]}  bodies[0].faces[1].lean_deg   must be a number from 0 to 180 deg; got '48' "
        "(leave out the quotes)\n"
        f"  line 12, column {columns[2]}  bodies[0].faces[2].radius_mm  must be a number greater than 0 and at most 1000 mm; "
        "got -6.0\n"
        f"  line 12, column {columns[2] + 12}  bodies[0].faces[2].side       must be behind or ahead; got 'behnd'. Did you mean "
        "'behind'?\n"
        f"Keys a face accepts: {FACE_KEYS}, radius_mm. More: goniosim plugins explain lens")


RIM = "{name: rim, shape: cylinder, radius_mm: 6.0, side: behind, finish: ground}"
PLANE_VALUES = "shape: plane, vertex_mm: [0, 0, 5.0], lean_deg: 48, lean_toward_clock: 12, "
LEAN_RULE = "bodies[0].faces[1].lean_deg must be a number from 0 to 180 deg; got"


def at_mark(text: str) -> tuple[str, str]:
    """The text without its mark @, and the place of the mark in words."""
    before = text[: text.index("@")]
    return text.replace("@", ""), f"line {before.count(chr(10)) + 1}, column {len(before) - before.rfind(chr(10))}"


@pytest.mark.parametrize("old, new, fault", [
    ("lean_deg: 48", "lean_deg: @017", f"{LEAN_RULE} '017' (a number must not begin with 0)"),
    ("lean_deg: 48", "lean_deg: @.nan", f"{LEAN_RULE} '.nan' (numbers must be finite)"),
    ("lean_deg: 48", "lean_deg: @12:30", f"{LEAN_RULE} '12:30'"),
    ("lean_deg: 48", "lean_deg: @true", f"{LEAN_RULE} true"),
    ("lean_deg: 48", "lean_deg: @-1e1", f"{LEAN_RULE} -10.0"),
    ("lean_toward_clock: 12", "lean_toward_clock: @0",
     "bodies[0].faces[1].lean_toward_clock must be a clock hour, greater than 0 and at most 12; got 0"),
    ("[0, 0, 5.0]", "@[0, 0]", "bodies[0].faces[1].vertex_mm must be a list of 3 numbers, in mm; got a list of 2"),
    ("[0, 0, 5.0]", "[0, 0, @tall]",
     "bodies[0].faces[1].vertex_mm[2] must be a number from -1000 to 1000 mm; got 'tall'"),
    ("name: demo", "name: @Demo Lens",
     "name must be a name of small letters, digits and single hyphens, such as 'direct-face-48'; got 'Demo Lens'"),
    ("schema: 1", "schema: @9", "schema is 9; this program reads schema 1. Update goniosim, or ask for the file in the "
     "older form"),
    ("goniosim: lens", "goniosim: @scope", "goniosim is a scope file; a lens file is needed here"),
    ("goniosim: lens", "goniosim: @lense", "goniosim must be lens; got 'lense'. Did you mean 'lens'?"),
    ("goniosim: lens\n", "@", "must begin with goniosim: lens, which names the kind of file"),
    ("goniosim: lens\nschema: 1", "schema: 1\n@goniosim: lens", "goniosim must be the first key: goniosim: lens"),
    ("goniosim: lens\nschema: 1\nname: demo\ntitle: Demo\n", "@goniosim: lens\nschema: 1\nname: demo\n",
     "title is missing: one line for the reader"),
    ("radius_mm: 8.4", "radius_mm: @0", "bodies[0].faces[0].radius_mm must not be 0"),
    ("shape: plane", "shape: @plan", "bodies[0].faces[1].shape no shape named 'plan'. Installed: plane, sphere, conic, "
     "toric, cylinder, cone, revolution, cornea. Did you mean 'plane'?"),
    ("name: front, shape: plane", "name: @contact, shape: plane",
     "bodies[0].faces[1].name another face of this body is named 'contact'"),
    ("lean_deg: 48", "lean_deg: 48, @mirror_angle_deg: 60", "bodies[0].faces[1].mirror_angle_deg is given beside "
     "lean_deg; give one of the two (lean = 180 - mirror angle)"),
    (RIM, "@" + RIM.replace("ground", "mirror"),
     "bodies[0].faces[2].reflectance is missing: a mirror face needs its reflectance, from 0 to 1"),
    ("finish: ground", "finish: ground, @reflectance: 0.5",
     "bodies[0].faces[2].reflectance is for mirror and coated faces; this face is ground"),
    ("finish: ground", "finish: mirror, reflectance: @1.5",
     "bodies[0].faces[2].reflectance must be a number from 0 to 1; got 1.5"),
    ("finish: ground", "finish: ground, @works_by: total_reflection",
     "bodies[0].faces[2].works_by is for clear faces; this face is ground"),
    ("finish: ground", "@level: true", "bodies[0].faces[2].level is for planes; this face is a cylinder"),
    ("{name: front, " + PLANE_VALUES, "@{name: front, ",
     "bodies[0].faces[1].shape face 'front' has no shape, and no other body describes it; add a shape"),
    ("name: optic", "name: @cornea", "bodies[0].name 'cornea' is the name of a body of the eye; choose another"),
    ("- name: optic\n    medium: pmma\n    faces:\n      - {name: contact, shape: sphere, radius_mm: 8.4, side: ahead}",
     "@- name: optic\n    medium: pmma\n    faces:\n      - {name: back, shape: sphere, radius_mm: 8.4, side: behind}",
     "bodies no face touches the eye: name one contact, or give the face at vertex_mm [0, 0, 0] side: ahead"),
])
def test_one_fault(report, flat_lens, old, new, fault):
    text, place = at_mark(changed(flat_lens, old, new))
    assert only(report(text)) == f"{place} {fault}"


def test_face_described_in_two_bodies(report, flat_lens):
    second = ("  - name: cap\n    medium: pmma\n    faces:\n"
              "      - {name: front, shape: plane, side: ahead}\n      - {name: rim, side: behind}\n")
    assert only(report(flat_lens + second)) == (
        "line 16, column 16 bodies[1].faces[0].name face 'front' is described twice, also in body 'optic'; "
        "here give only name and side")


def test_shared_face_takes_name_and_side_only(report, flat_lens):
    second = ("  - name: cap\n    medium: pmma\n    faces:\n      - {name: front, side: ahead, finish: ground}\n")
    assert only(report(flat_lens + second)) == (
        "line 16, column 36 bodies[1].faces[0].finish must be left out: a face without a shape is the neighbour's; "
        "give only name and side")


def test_not_a_mapping(report):
    assert report("- a\n- b\n") == ("demo.yaml has 1 problem\n  line 1, column 1  must be a mapping that begins with "
                                    "goniosim: lens; got a list of 2\nMore: goniosim plugins explain lens")


def test_revolution_points_must_rise(report, flat_lens):
    text = changed(flat_lens, "shape: plane, vertex_mm: [0, 0, 5.0], lean_deg: 48, lean_toward_clock: 12",
                   "shape: revolution, r_mm: [0, 4, 2], z_mm: [5, 4]")
    words = report(text)
    assert "z_mm  must have as many numbers as r_mm; got 2 for 3" in words
    assert "r_mm  must hold at least 3 radii, the first 0, each greater than the last" in words


def test_many_faults_are_counted(report, flat_lens):
    text = flat_lens + "".join(f"extra_{number}: 1\n" for number in range(100))
    words = report(text)
    assert words.startswith("demo.yaml has 41 problems") and "and 60 more" in words


def test_bent_tool_needs_its_bend(report):
    tool = ("goniosim: tool\nschema: 1\nname: demo\ntitle: Demo\nsource: made for this test\n"
            "shaft_diameter_mm: 0.5\nform: bent\ncurve_radius_mm: 20\n")
    words = report(tool, "tool")
    assert "bend_deg          is missing: a bent shaft needs it" in words
    assert "curve_radius_mm   is for a curved shaft; this one is bent" in words
