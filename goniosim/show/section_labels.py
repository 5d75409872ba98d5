"""Labels of a cross-section, each put where it stands clear of lines and of the others."""

from __future__ import annotations

import numpy as np

from ..planning.record import Plan
from ..planning.words import on_the_bench
from .outline import Meridian
from .palette import BLACK, BLUE, GREY
from .section_eye import own_lens_label
from .section_light import end_of_light, shows_tool
from .svg import LETTER, Drawing

TEXT, SMALL = 15.0, 12.5


def draw_labels(
    drawing: Drawing, plan: Plan, plane: Meridian, outlines: list[tuple], right_edge: float
) -> None:
    """Names beside what they name, where they stand clear of lines and of each other."""
    own = None if on_the_bench(plan) else own_lens_label(plan)
    if own is not None:
        x, y = drawing.at(own[0])
        places = [(x + dx, y + dy) for dy in (14.0, 18.0, 22.0) for dx in (0.0, -40.0, 40.0, -70.0, 70.0)]
        _write(drawing, drawing.clearest(places, own[1], SMALL)[0], own[1], GREY, halo=False)
    if plan.sighting.view is not None:
        _scope_label(drawing, plan, plane, right_edge)
        if shows_tool(plan):
            _tool_labels(drawing, plan, plane)
    if outlines:
        _lens_label(drawing, plan, outlines)


def _scope_label(drawing: Drawing, plan: Plan, plane: Meridian, right_edge: float) -> None:
    """'to the microscope' by the tip of the light."""
    words = "to the phone" if on_the_bench(plan) else "to the microscope"
    tip = np.array(drawing.at(plane.flat(end_of_light(plan))[0]))
    half = 0.5 * LETTER * TEXT * len(words)
    places = [tip + np.array([sign * (half + 10.0), dy]) for sign in (1.0, -1.0) for dy in (-16.0, -4.0, 8.0)]
    places += [tip + np.array([dx, -18.0]) for dx in (0.0, 0.5 * half, -0.5 * half)]
    room = [place for place in places if 8.0 + half < place[0] < right_edge - half]
    _write(drawing, drawing.clearest(room or places, words, TEXT)[0], words, BLACK, TEXT)


def _tool_labels(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The entry and the angle of correction."""
    entry, target, image = (
        plane.flat(point)[0]
        for point in (plan.entry_mm, plan.target.point_mm, plan.sighting.view.apparent_mm)
    )
    at = np.array(drawing.at(entry))
    angles = np.radians(np.arange(0.0, 360.0, 15.0))
    ring = np.stack([np.cos(angles), np.sin(angles)], axis=-1)
    place, _ = drawing.clearest(
        np.concatenate([at + size * ring * np.array([1.2, 1.0]) for size in (30.0, 44.0, 58.0)]),
        "entry",
        SMALL,
    )
    _lead(drawing, place, at, "entry")
    _write(drawing, place, "entry", BLUE)
    words = f"{plan.aim.correction_deg:.1f} deg"
    ways = [(point - entry) / np.hypot(*(point - entry)) for point in (image, target)]
    middle = sum(ways) / np.hypot(*sum(ways))
    across = np.array([-middle[1], middle[0]])
    places = [
        drawing.at(entry + along * middle + aside * across)
        for along in np.arange(2.0, 7.1, 0.5)
        for aside in (0.0, 0.6, -0.6, 0.9, -0.9, 1.2, -1.2)
    ]
    place, _ = drawing.clearest(places, words, SMALL)
    _write(drawing, place, words, BLUE)


def _lens_label(drawing: Drawing, plan: Plan, outlines: list[tuple]) -> None:
    """The goniolens's own name, inside its largest body where there is room."""
    words = plan.scene.mapping["lens"]["use"]
    _, outline = max(outlines, key=lambda row: np.prod(np.ptp(row[1], axis=0)))
    u, z = np.meshgrid(
        *(np.linspace(low, high, 25) for low, high in zip(outline.min(axis=0), outline.max(axis=0)))
    )
    points = np.stack([u.ravel(), z.ravel()], axis=-1)
    places = [drawing.at(point) for point in points[_holds(outline, points)]]
    place, gap = drawing.clearest(places, words, TEXT)
    if gap < 3.0:
        # No room inside: beside its upper left corner.
        x, y = drawing.at((outline[:, 0].min(), outline[:, 1].max()))
        place = np.array([x + 0.5 * LETTER * TEXT * len(words), y - 14.0])
    _write(drawing, place, words, GREY, TEXT, halo=False)


def _holds(outline: np.ndarray, points: np.ndarray) -> np.ndarray:
    """Whether a closed outline holds points, (n,) (by crossings of a line to the right)."""
    (ax, ay), (bx, by) = outline.T, np.roll(outline, -1, axis=0).T
    x, y = points[:, :1], points[:, 1:]
    spans = (ay > y) != (by > y)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.count_nonzero(spans & (x < ax + (y - ay) * (bx - ax) / (by - ay)), axis=1) % 2 == 1


def _write(drawing: Drawing, centre, words: str, fill: str, size: float = SMALL, halo: bool = True) -> None:
    drawing.text(centre[0], centre[1] + 0.35 * size, words, size, "middle", fill=fill, halo=halo)


def _lead(drawing: Drawing, label: np.ndarray, at: np.ndarray, words: str) -> None:
    """A thin line from a label's edge to what it names."""
    way = at - label
    half = 0.5 * np.array([LETTER * SMALL * len(words), SMALL]) + 2.0
    share = min(half[i] / abs(way[i]) for i in range(2) if abs(way[i]) > 1e-9)
    start, end = label + share * way, at - 5.0 * way / np.hypot(*way)
    drawing.parts.append(
        f'<path d="M{start[0]:.2f},{start[1]:.2f} L{end[0]:.2f},{end[1]:.2f}" stroke="{BLUE}" '
        'stroke-width="0.9" fill="none"/>'
    )
