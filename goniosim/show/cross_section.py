"""The cross-section: eye, lens, light, true and apparent place, in the meridian of the target, as SVG."""

from __future__ import annotations

import textwrap

import numpy as np

from ..cautions import CAUTION
from ..frames import clock_of
from ..planning.record import Plan
from ..planning.words import clock_words, on_the_bench, plain, quadrant, sentence
from .angle_inset import SIZE as INSET_SIZE
from .angle_inset import WINDOW_MM, angle_inset, window
from .outline import Meridian
from .palette import BLACK, BLUE, GREY, ORANGE, VERMILION
from .section_eye import EyeSection, draw_cup, draw_eye, eye_section, reach_of_cup, reach_of_eye
from .section_labels import SMALL, TEXT, draw_labels
from .section_lens import draw_lens, lens_outlines
from .section_light import draw_lines, end_of_light, off_plane_mm, shows_tool
from .svg import LETTER, Drawing

SCALE = 26.0  # page units per mm
CUP_SCALE = 7.0
MARGINS = (48.0, 92.0, 284.0, 78.0)  # left, top without the answer, right, bottom without the caution
LINE, FOOT_LINE = 19.0, 16.0
ROW = 24.0  # of the legend
OFF_PLANE_MM = 0.2  # less than this off the plane is not worth a word


def cross_section(plan: Plan) -> str:
    """The cross-section of a plan as SVG text; the same plan gives the same bytes."""
    plane = Meridian.of(plan.target.clock or 3.0)
    outlines = lens_outlines(plan, plane)
    drawing = _sheet(plan, plane, outlines)
    section = None if on_the_bench(plan) else eye_section(plan, plane)
    if section is None:
        draw_cup(drawing, plan)
    else:
        draw_eye(drawing, section)
    draw_lens(drawing, plan, plane, outlines)
    draw_lines(drawing, plan, plane)
    draw_labels(drawing, plan, plane, outlines, right_edge=drawing.width - MARGINS[2] + 30.0)
    _frame(drawing, plan, plane)
    below = _legend(drawing, plan)
    if _has_inset(plan):
        _inset(drawing, plan, plane, section, below)
    return drawing.written(f"Cross-section: {sentence(plan)}")


def _has_inset(plan: Plan) -> bool:
    return not on_the_bench(plan) and plan.target.clock is not None


def _sheet(plan: Plan, plane: Meridian, outlines: list[tuple]) -> Drawing:
    """A drawing wide enough for eye, lens, light and image, and high enough for what stands beside it."""
    points = [reach_of_cup(plan) if on_the_bench(plan) else reach_of_eye(plan)]
    points += [outline for _, outline in outlines]
    points.append(plane.flat(plan.target.point_mm))
    if plan.sighting.view is not None:
        points.append(plane.flat([plan.sighting.view.apparent_mm, end_of_light(plan)]))
    gathered = np.concatenate(points)
    low, high = gathered.min(axis=0) - 0.5, gathered.max(axis=0) + 0.8
    scale = CUP_SCALE if on_the_bench(plan) else SCALE
    beside = ROW * (len(_legend_rows(plan)) + 1) + (INSET_SIZE + 44.0 if _has_inset(plan) else 0.0)
    lacking = max(0.0, beside / scale - (high[1] - low[1]))
    low, high = low - np.array([0.0, 0.5 * lacking]), high + np.array([0.0, 0.5 * lacking])
    left, top, right, bottom = MARGINS
    width = (high[0] - low[0]) * scale + left + right
    return Drawing(
        low,
        high,
        scale,
        (
            left,
            top + LINE * len(_answer(plan, width)),
            right,
            bottom + FOOT_LINE * len(_foot(plan, plane, width)),
        ),
    )


def _answer(plan: Plan, width: float) -> list[str]:
    """The answer in lines that fit the page."""
    return textwrap.wrap(sentence(plan), int((width - 48.0) / (LETTER * TEXT)), break_on_hyphens=False)


def _foot(plan: Plan, plane: Meridian, width: float) -> list[str]:
    """How far off the plane the light runs, the caution, and which inputs these are, in lines."""
    words = f"{CAUTION} Inputs {plan.scene.fingerprint[:12]}."
    off = off_plane_mm(plan, plane)
    if off > OFF_PLANE_MM:
        words = (
            f"Light and image lie up to {off:.1f} mm off this plane and are drawn projected on it. {words}"
        )
    return textwrap.wrap(words, int((width - 48.0) / (LETTER * SMALL)))


def _frame(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Title, side of the eye, the answer, clock hours, scale and caution."""
    clock = plan.target.clock or 3.0
    across = (clock + 6.0) % 12.0 or 12.0
    head, rest = (
        ("BENCH", "a cup of water from the side")
        if on_the_bench(plan)
        else (
            f"{plan.scene.mapping['eye']['side'].upper()} EYE",
            f"section through {clock_words(clock)} and {clock_words(across)}: {plain(plan.target.structure)}",
        )
    )
    drawing.title(24.0, 42.0, head, rest, 27.0, TEXT)
    for i, line in enumerate(_answer(plan, drawing.width)):
        drawing.text(24.0, 70.0 + LINE * i, line, TEXT)
    foot = drawing.height - drawing.margins[3]
    _sides(drawing, plan, plane, foot)
    _scale_bar(drawing, 20.0 if on_the_bench(plan) else 5.0, foot)
    for i, line in enumerate(_foot(plan, plane, drawing.width)):
        drawing.text(24.0, foot + 76.0 + FOOT_LINE * i, line, SMALL, fill=GREY)


def _sides(drawing: Drawing, plan: Plan, plane: Meridian, foot: float) -> None:
    """Which side of the eye is which."""
    side = plan.scene.mapping["eye"]["side"]
    for sign, x, anchor in ((-1.0, 24.0, "start"), (1.0, drawing.width - MARGINS[2] + 24.0, "end")):
        hour = clock_of(*(sign * plane.across[:2])) or 3.0
        name = "" if on_the_bench(plan) else f"{quadrant(hour, side)}, "
        drawing.text(x, foot + 24.0, f"{name}{clock_words(hour)}", TEXT, anchor, "bold")


def _scale_bar(drawing: Drawing, length_mm: float, foot: float) -> None:
    middle = 0.5 * (24.0 + drawing.width - MARGINS[2] + 24.0)
    half, y = 0.5 * length_mm * drawing.scale, foot + 34.0
    drawing.parts.append(
        f'<path d="M{middle - half:.2f},{y - 5:.2f} v10 m0,-5 h{2 * half:.2f} m0,-5 v10" '
        f'stroke="{BLACK}" fill="none" stroke-width="1.6"/>'
    )
    drawing.text(middle, y + 18.0, f"{length_mm:g} mm", SMALL, "middle")


def _legend_rows(plan: Plan) -> list[tuple[str, str, str]]:
    """(sign, colour, words) of everything drawn."""
    rows = [("dot", VERMILION, "true place")]
    if plan.sighting.view is None:
        rows.append(("line", ORANGE, "light from it, in this plane"))
    else:
        rows += [
            ("ring", VERMILION, "apparent place"),
            ("line", ORANGE, "light, as it runs"),
            ("dash", BLACK, "line of sight, undeviated"),
        ]
        if plan.along_sight.structure is not None:
            rows.append(("cross", BLACK, "where that lands"))
        if shows_tool(plan):
            rows += [("thin", BLUE, "tool aimed at the image"), ("line", BLUE, "tool, aim corrected")]
    return rows


def _legend(drawing: Drawing, plan: Plan) -> float:
    """What the lines and marks are, at the right; returns the height at which it ends."""
    x, y = drawing.width - MARGINS[2] + 36.0, drawing.margins[1] + 12.0
    for kind, colour, words in _legend_rows(plan):
        _key(drawing, x, y, kind, colour)
        drawing.text(x + 40.0, y + 4.5, words, SMALL + 0.5)
        y += ROW
    return y


def _key(drawing: Drawing, x: float, y: float, kind: str, colour: str) -> None:
    """One sign of the legend."""
    dash = {"dash": "9 5", "thin": "3 4"}.get(kind, "")
    width = 2.6 if kind == "line" else 1.6
    if kind in ("dot", "ring"):
        fill, ring = (colour, BLACK) if kind == "dot" else ("#ffffff", colour)
        drawing.parts.append(
            f'<circle cx="{x + 16:.2f}" cy="{y:.2f}" r="6" fill="{fill}" stroke="{ring}" stroke-width="2"/>'
        )
    elif kind == "cross":
        drawing.parts.append(
            f'<path d="M{x + 11:.2f},{y - 5:.2f} l10,10 m0,-10 l-10,10" stroke="{colour}" stroke-width="2"/>'
        )
    else:
        more = f' stroke-dasharray="{dash}"' if dash else ""
        drawing.parts.append(
            f'<path d="M{x:.2f},{y:.2f} h32" stroke="{colour}" stroke-width="{width:g}"{more}/>'
        )


def _inset(drawing: Drawing, plan: Plan, plane: Meridian, section: EyeSection, top: float) -> None:
    """The enlarged angle under the legend, and its window in the drawing."""
    low, high = window(plan, plane, section)
    (x0, y0), (x1, y1) = drawing.at((low[0], high[1])), drawing.at((high[0], low[1]))
    drawing.parts.append(
        f'<rect x="{x0:.2f}" y="{y0:.2f}" width="{x1 - x0:.2f}" height="{y1 - y0:.2f}" fill="none" '
        f'stroke="{GREY}" stroke-width="0.9"/>'
    )
    x, y = drawing.width - MARGINS[2] + 36.0, top + 20.0
    times = INSET_SIZE / WINDOW_MM / drawing.scale
    drawing.text(x, y, f"the angle, enlarged {times:.1f} times", SMALL + 0.5)
    drawing.inset(angle_inset(plan, plane, section), x, y + 10.0)
