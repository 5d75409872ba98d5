"""The answer and the report in words say what plan.json says, and nothing else."""

from __future__ import annotations

import pytest

import goniosim
from goniosim.planning.report import _hours, report
from goniosim.planning.ring import RingPlace
from goniosim.planning.words import Numbers, quadrant, sentence

NAMES = (
    "right-eye-temporal",
    "left-eye-temporal",
    "one-mirror",
    "no-lens",
    "bench-cup",
    "small-turn",
    "measured-toric",
)


@pytest.fixture(scope="module")
def plans():
    return {name: goniosim.plan(goniosim.load_scene(name)) for name in NAMES}


def test_the_answer_carries_the_figures_of_plan_json(plans):
    for name in ("right-eye-temporal", "left-eye-temporal", "small-turn"):
        plan, words = plans[name].to_dict(), sentence(plans[name])
        sighting, along, aim = plan["sightings"][0], plan["landing"]["along_sight"], plan["aim"]
        assert sighting["seen"] and words.startswith("Seen: the pigmented meshwork at ")
        assert (
            f"{sighting['seems_nearer_mm']:.2f} mm nearer and "
            f"{sighting['seems_anterior_mm']:.2f} mm more anterior" in words
        )
        assert along["anterior_mm"] > 0.0 and f"lands {along['anterior_mm']:.2f} mm too anterior" in words
        assert (
            aim["toward_iris_deg"] > 0.0 and f"aim {aim['toward_iris_deg']:.1f} deg toward the iris" in words
        )
        assert f"({aim['correction_mm']:.2f} mm at the target)" in words


def test_right_and_left_eye_are_told_apart_and_mirror_each_other(plans):
    right, left = sentence(plans["right-eye-temporal"]), sentence(plans["left-eye-temporal"])
    assert "at 3 o'clock (nasal) of the right eye" in right and "From the entry at 9 o'clock" in right
    assert "at 9 o'clock (nasal) of the left eye" in left and "From the entry at 3 o'clock" in left
    swapped = (
        left.replace("left", "right")
        .replace("9 o'clock (", "3 o'clock (")
        .replace("at 3 o'clock, aim", "at 9 o'clock, aim")
    )
    assert swapped == right


@pytest.mark.parametrize(
    "clock, side, name",
    [
        (3.0, "right", "nasal"),
        (3.0, "left", "temporal"),
        (9.0, "left", "nasal"),
        (12.0, "left", "superior"),
        (6.2, "right", "inferior"),
        (0.5, "right", "superior"),
        (10.6, "right", "superior"),
        (10.4, "right", "temporal"),
    ],
)
def test_quadrants(clock, side, name):
    assert quadrant(clock, side) == name


def test_not_seen_gives_cause_and_what_to_try_and_no_shift(plans):
    words = sentence(plans["no-lens"])
    assert words == (
        "Not seen: the pigmented meshwork at 3 o'clock (nasal) of the right eye, without a lens. Cause: "
        "total reflection at cornea-front. Light from the angle does not get out through a bare cornea: "
        "put a goniolens or a saline pool on."
    )
    assert "a straight tool" not in report(plans["no-lens"])


def test_a_reversed_picture_gives_no_line_to_aim_along(plans):
    words, text = sentence(plans["one-mirror"]), report(plans["one-mirror"])
    assert plans["one-mirror"].to_dict()["sightings"][0]["handed"] == "reversed"
    assert "by mirror" in words and "the picture is reversed" in words and "aim" not in words
    assert "correction at the entry" not in text


def test_the_bench_speaks_of_cup_and_phone_and_never_of_the_eye(plans):
    words = sentence(plans["bench-cup"])
    shift = plans["bench-cup"].to_dict()["sightings"][0]["shift_mm"]
    assert words.startswith("Seen: the mark at 3 o'clock of the cup, through the water.")
    assert (
        f"It seems {shift[2]:.2f} mm higher than it is" in words and "mm too high, on the cup wall" in words
    )
    assert " eye" not in words and "anterior" not in words


def test_every_report_fits_the_terminal_and_ends_with_caution_version_and_inputs(plans):
    for name, plan in plans.items():
        text = report(plan)
        assert max(map(len, text.splitlines())) <= 100, name
        assert text.startswith(("Seen: ", "Not seen: "))
        assert "A planning aid, not a medical device." in text
        assert text.endswith(f"goniosim {goniosim.__version__}, inputs {plan.scene.fingerprint[:12]}")
        assert "nan" not in text.lower().split("anterior") and "None" not in text


def test_the_table_of_structures_has_each_once_with_the_word_of_plan_json(plans):
    for name in ("right-eye-temporal", "no-lens", "measured-toric"):
        lines = report(plans[name]).splitlines()
        for sighting in plans[name].to_dict()["sightings"]:
            shown = sighting["structure"].replace("-", " ").replace("schwalbe line", "Schwalbe's line")
            (line,) = [line for line in lines if line.startswith(f"{shown}  ")]
            word = "clear" if sighting["clear"] else "seen" if sighting["seen"] else "no"
            assert line.removeprefix(shown).split()[0] == word
            assert line.rstrip().endswith(sighting["by"] if sighting["seen"] else sighting["cause"])


def test_what_was_measured_is_named(plans):
    text = " ".join(report(plans["measured-toric"]).split())
    assert "5 values measured" in text and "cornea.front.steep_mm" in text and "chamber.depth_mm" in text
    assert "0 values measured" in report(plans["right-eye-temporal"])


def places(*steps: int) -> list[RingPlace]:
    return [RingPlace((step * 5.0 / 30.0) or 12.0, True, True, "direct", None, 1.0, 40.0) for step in steps]


def test_spans_of_clock_hours_join_over_twelve():
    assert _hours([]) == "nowhere"
    assert _hours(places(*range(72))) == "all round"
    assert _hours(places(18)) == "3 o'clock (5 deg)"
    assert _hours(places(70, 71, 0, 1, 2)) == "11.67 to 0.33 o'clock (25 deg)"
    assert _hours(places(12, 13, 14, 30, 31)) == "2 to 2.33 o'clock, 5 to 5.17 o'clock (25 deg)"


def test_figures_follow_the_settings(plans):
    numbers = Numbers(plans["right-eye-temporal"])
    assert (
        numbers.number(None) == "-" and numbers.number(-0.001) == "0.00" and numbers.number(-1.236) == "-1.24"
    )
    assert numbers.signed_mm(-0.5, "nearer", "farther away") == "0.50 mm farther away"
    numbers.small = "um"
    assert numbers.mm(0.345) == "345 um" and numbers.mm(1.5) == "1.50 mm"
