"""The cross-section shows what plan.json says, where it says it."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ElementTree

import numpy as np
import pytest

import goniosim
from goniosim.show.cross_section import MARGINS, SCALE, cross_section
from goniosim.faces import SHAPES
from goniosim.scene.bodies import Body, Face
from goniosim.show.outline import Meridian, body_outline, thinned
from goniosim.show.palette import BANDS, ORANGE

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(scope="module")
def plans():
    return {
        name: goniosim.plan(goniosim.load_scene(name))
        for name in (
            "right-eye-temporal",
            "left-eye-temporal",
            "one-mirror",
            "no-lens",
            "bench-cup",
            "twin-mirror",
            "saline-pool",
            "dome",
            "artificial-lens",
        )
    }


def centre_of(root, ident: str) -> tuple[float, float]:
    circle = next(each for each in root.iter(f"{SVG}circle") if each.get("id") == ident)
    return float(circle.get("cx")), float(circle.get("cy"))


def test_true_and_apparent_point_stand_where_the_plan_puts_them(plans):
    for name in ("right-eye-temporal", "left-eye-temporal", "one-mirror"):
        root = ElementTree.fromstring(cross_section(plans[name]))
        sighting = plans[name].to_dict()["sightings"][0]
        true, apparent = (np.array(centre_of(root, ident)) for ident in ("true", "apparent"))
        moved = np.array(sighting["apparent_mm"]) - np.array(sighting["true_mm"])
        # In the meridian of 3 and 9 o'clock x is to the right and z is up; page units grow downward.
        assert (apparent - true) / SCALE == pytest.approx([moved[0], -moved[2]], abs=0.02)


def test_it_is_a_whole_page_of_its_own_with_side_answer_and_caution(plans):
    for name, plan in plans.items():
        text = cross_section(plan)
        root = ElementTree.fromstring(text)
        words = " ".join("".join(each.itertext()) for each in root.iter(f"{SVG}text"))
        assert "A planning aid, not a medical device" in words and plan.scene.fingerprint[:12] in words
        assert ("RIGHT EYE" in words, "LEFT EYE" in words) == {
            "left-eye-temporal": (False, True),
            "bench-cup": (False, False),
        }.get(name, (True, False))
        assert (
            "<script" not in text
            and "href" not in text
            and "NaN" not in text
            and "nan" not in text.split("<title>")[0]
        )
        assert words.count("Seen:") + words.count("Not seen:") == 1


def test_what_is_not_seen_says_why_and_shows_no_light(plans):
    root = ElementTree.fromstring(cross_section(plans["no-lens"]))
    words = " ".join("".join(each.itertext()) for each in root.iter(f"{SVG}text"))
    assert "total reflection at cornea-front" in " ".join(words.split())
    assert not [each for each in root.iter() if each.get("id") in ("light", "apparent", "undeviated")]


def test_bands_are_drawn_on_both_sides_in_their_colours(plans):
    root = ElementTree.fromstring(cross_section(plans["right-eye-temporal"]))
    strokes = [each.get("stroke") for each in root.iter(f"{SVG}polyline")]
    for band in ("clear-meshwork", "pigmented-meshwork", "scleral-spur", "ciliary-band"):
        assert strokes.count(BANDS[band]) >= 2, band


def test_a_left_eye_is_the_mirror_image(plans):
    right, left = (
        ElementTree.fromstring(cross_section(plans[name]))
        for name in ("right-eye-temporal", "left-eye-temporal")
    )
    (rx, ry), (lx, ly) = centre_of(right, "true"), centre_of(left, "true")
    width = float(right.get("width")) - MARGINS[0] - MARGINS[2]
    assert ly == pytest.approx(ry, abs=0.1)
    assert (lx - MARGINS[0]) == pytest.approx(width - (rx - MARGINS[0]), abs=15.0)


def test_the_same_plan_gives_the_same_bytes_and_everything_lies_on_the_page(plans):
    plan = plans["right-eye-temporal"]
    text = cross_section(plan)
    assert text == cross_section(plan)
    root = ElementTree.fromstring(text)
    width, height = float(root.get("viewBox").split()[2]), float(root.get("viewBox").split()[3])
    for shape in root.iterfind("*"):  # the inset, cut off at its edges, is an <svg> of its own
        for x, y in re.findall(r"(-?[\d.]+),(-?[\d.]+)", shape.get("points") or ""):
            assert 0.0 <= float(x) <= width and 0.0 <= float(y) <= height


def test_thinning_keeps_corners():
    square = np.concatenate(
        [
            np.linspace(a, b, 50, endpoint=False)
            for a, b in (((0, 0), (4, 0)), ((4, 0), (4, 4)), ((4, 4), (0, 4)), ((0, 4), (0, 0)))
        ]
    )
    kept = thinned(square)
    assert len(kept) < 10
    for corner in ((0, 0), (4, 0), (4, 4), (0, 4)):
        assert np.abs(kept - corner).max(axis=1).min() < 1e-9


def test_the_undeviated_line_ends_on_the_landing_and_the_tool_lines_start_at_the_entry(plans):
    plan = plans["right-eye-temporal"]
    root, written = ElementTree.fromstring(cross_section(plan)), plan.to_dict()
    true = np.array(centre_of(root, "true"))

    def page(point_mm):
        moved = np.array(point_mm) - np.array(written["target"]["true_mm"])
        return true + SCALE * np.array([moved[0], -moved[2]])

    ends = {
        each.get("id"): [np.array(pair.split(","), dtype=float) for pair in each.get("points").split()]
        for each in root.iter(f"{SVG}polyline")
        if each.get("id")
    }
    assert ends["undeviated"][-1] == pytest.approx(
        page(written["landing"]["along_sight"]["point_mm"]), abs=0.02
    )
    assert ends["corrected"][0] == pytest.approx(page(written["entry_mm"]), abs=0.02)
    assert ends["corrected"][-1] == pytest.approx(true, abs=0.02)
    assert ends["aimed-at-image"][-1] == pytest.approx(centre_of(root, "apparent"), abs=0.02)
    # Everything lies in the meridian here, so the arc at the entry shows the whole correction.
    start, end = (ends["correction"][i] - ends["corrected"][0] for i in (0, -1))
    turn = np.degrees(np.arccos(start @ end / np.hypot(*start) / np.hypot(*end)))
    assert turn == pytest.approx(written["aim"]["correction_deg"], abs=0.02)
    # The light is drawn through every point of the path.
    assert np.array(ends["light"][1:-1]) == pytest.approx(
        np.array([page(point) for point in written["sightings"][0]["path_mm"]]), abs=0.02
    )


def test_no_words_lie_on_other_words_in_drawings_of_many_kinds(plans):
    for name, plan in plans.items():
        boxes = [
            box(each)
            for each in ElementTree.fromstring(cross_section(plan)).iterfind(f"{SVG}text")
            if each.text
        ]
        for i, (words, a) in enumerate(boxes):
            for other, b in boxes[i + 1 :]:
                apart = (a[0] >= b[2]) or (b[0] >= a[2]) or (a[1] >= b[3]) or (b[1] >= a[3])
                assert apart, f"{name}: '{words}' and '{other}'"


def box(text) -> tuple[str, tuple[float, float, float, float]]:
    """Words and the box they take (left, top, right, bottom), letters half as wide as high."""
    x, y, size = (float(text.get(key)) for key in ("x", "y", "font-size"))
    wide = 0.5 * size * len(text.text)
    left = x - {"start": 0.0, "middle": 0.5, "end": 1.0}[text.get("text-anchor")] * wide
    return text.text, (left, y - 0.75 * size, left + wide, y + 0.2 * size)


def test_the_enlarged_angle_names_every_band_on_the_side_of_the_target(plans):
    for name, sign in (("right-eye-temporal", 1.0), ("left-eye-temporal", -1.0), ("no-lens", 1.0)):
        (inset,) = ElementTree.fromstring(cross_section(plans[name])).iterfind(f"{SVG}svg")
        words = [each.text for each in inset.iter(f"{SVG}text")]
        assert words[:5] == [
            "Schwalbe's line",
            "clear meshwork",
            "pigmented meshwork",
            "scleral spur",
            "ciliary band",
        ]
        anchors = {each.get("text-anchor") for each in list(inset.iter(f"{SVG}text"))[:5]}
        assert anchors == ({"start"} if sign > 0.0 else {"end"})


def test_light_that_is_stopped_is_shown_where_the_target_is_not_seen(plans):
    root = ElementTree.fromstring(cross_section(plans["no-lens"]))
    rays = [each for each in root.iterfind(f"{SVG}polyline") if each.get("stroke") == ORANGE]
    true = np.array(centre_of(root, "true"))
    from_target = [each for each in rays if np.allclose(first_point(each), true, atol=0.02)]
    turned_back = [each for each in rays if each.get("stroke-dasharray")]
    assert len(from_target) == 17 and len(turned_back) >= 2


def first_point(line) -> np.ndarray:
    return np.array(line.get("points").split()[0].split(","), dtype=float)


def test_an_outline_of_a_body_of_known_shape():
    # A cylinder of radius 3 about the axis, between planes at z 1 and 4: a rectangle in any meridian.
    faces = {
        "low": Face("low", SHAPES["plane"].from_mapping({}), origin_mm=np.array([0.0, 0.0, 1.0])),
        "high": Face("high", SHAPES["plane"].from_mapping({}), origin_mm=np.array([0.0, 0.0, 4.0])),
        "rim": Face("rim", SHAPES["cylinder"].from_mapping({"radius_mm": 3.0})),
    }
    body = Body("block", "pmma", (("low", "ahead"), ("high", "behind"), ("rim", "behind")))
    for clock in (3.0, 1.2, 12.0):
        outline = body_outline(body, faces, Meridian.of(clock))
        on_edge = np.minimum.reduce(
            [np.abs(np.abs(outline[:, 0]) - 3.0), np.abs(outline[:, 1] - 1.0), np.abs(outline[:, 1] - 4.0)]
        )
        assert on_edge.max() < 1e-9
        for corner in ((3.0, 1.0), (3.0, 4.0), (-3.0, 1.0), (-3.0, 4.0)):
            assert np.hypot(*(outline - corner).T).min() < 0.02


@pytest.mark.parametrize(
    "clock, right", [(3.0, (1, 0)), (9.0, (1, 0)), (12.0, (0, 1)), (6.0, (0, 1)), (1.5, (0.70711, 0.70711))]
)
def test_a_meridian_has_the_observers_right_at_the_right(clock, right):
    assert Meridian.of(clock).across[:2] == pytest.approx(right, abs=1e-5)
