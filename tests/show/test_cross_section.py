"""The cross-section shows what plan.json says, where it says it."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ElementTree

import numpy as np
import pytest

import goniosim
from goniosim.show.cross_section import MARGINS, SCALE, cross_section
from goniosim.show.outline import thinned
from goniosim.show.palette import BANDS

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(scope="module")
def plans():
    return {name: goniosim.plan(goniosim.load_scene(name))
            for name in ("right-eye-temporal", "left-eye-temporal", "one-mirror", "no-lens", "bench-cup")}


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
            "left-eye-temporal": (False, True), "bench-cup": (False, False)}.get(name, (True, False))
        assert "<script" not in text and "href" not in text and "NaN" not in text and "nan" not in text.split("<title>")[0]
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
    right, left = (ElementTree.fromstring(cross_section(plans[name])) for name in ("right-eye-temporal", "left-eye-temporal"))
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
    for shape in root.iter():
        for x, y in re.findall(r"(-?[\d.]+),(-?[\d.]+)", shape.get("points") or ""):
            assert 0.0 <= float(x) <= width and 0.0 <= float(y) <= height


def test_thinning_keeps_corners():
    square = np.concatenate([np.linspace(a, b, 50, endpoint=False) for a, b in
                             (((0, 0), (4, 0)), ((4, 0), (4, 4)), ((4, 4), (0, 4)), ((0, 4), (0, 0)))])
    kept = thinned(square)
    assert len(kept) < 10
    for corner in ((0, 0), (4, 0), (4, 4), (0, 4)):
        assert np.abs(kept - corner).max(axis=1).min() < 1e-9
