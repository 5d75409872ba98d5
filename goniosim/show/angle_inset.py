"""The angle at the target, enlarged, with its structures named: an inset of the cross-section."""

from __future__ import annotations

import numpy as np

from ..planning.record import Plan
from ..planning.words import plain
from .outline import Meridian
from .palette import BLACK, GREY
from .section_eye import EyeSection, draw_eye
from .section_light import draw_lines
from .svg import Drawing

SIZE = 230.0  # page units
WINDOW_MM = 2.05
ASIDE_MM = 0.62  # how far the wall stands off the middle
BAND_WIDTH = 8.0
TEXT = 11.5
APART = 14.0  # least distance between names, page units
BAR_MM = 0.5


def window(plan: Plan, plane: Meridian, section: EyeSection) -> np.ndarray:
    """Corners of the part that is enlarged, (2, 2) mm: the wall off its middle, to leave names room."""
    points = np.concatenate(list(_bands(plan, plane, section).values()))
    middle = 0.5 * (points.min(axis=0) + points.max(axis=0))
    outward = 1.0 if middle[0] > 0.0 else -1.0
    middle = middle + np.array([ASIDE_MM * outward, 0.0])
    return np.stack([middle - 0.5 * WINDOW_MM, middle + 0.5 * WINDOW_MM])


def angle_inset(plan: Plan, plane: Meridian, section: EyeSection) -> Drawing:
    """The enlarged angle as a drawing of its own."""
    low, high = window(plan, plane, section)
    drawing = Drawing(low, high, SIZE / WINDOW_MM, named=False)
    draw_eye(drawing, section, BAND_WIDTH)
    draw_lines(drawing, plan, plane)
    _names(drawing, plan, plane, section)
    _bar(drawing, 1.0 if plane.flat(plan.target.point_mm)[0][0] > 0.0 else -1.0)
    return drawing


def _bands(plan: Plan, plane: Meridian, section: EyeSection) -> dict[str, np.ndarray]:
    """Bands on the target's side."""
    return section.side_at(plane.flat(plan.target.point_mm)[0][0]).bands


def _names(drawing: Drawing, plan: Plan, plane: Meridian, section: EyeSection) -> None:
    """Names beside the bands, on the outer side, kept apart and led to their bands."""
    outward = 1.0 if plane.flat(plan.target.point_mm)[0][0] > 0.0 else -1.0
    bands = _bands(plan, plane, section)
    middles = sorted(
        ((drawing.at(points[len(points) // 2]), name) for name, points in bands.items()),
        key=lambda row: row[0][1],
    )
    edge = max(outward * x for (x, _), _ in middles)
    start = outward * (edge + 20.0)
    heights = _kept_apart([y for (_, y), _ in middles])
    for ((x, y), name), height in zip(middles, heights):
        drawing.parts.append(
            f'<path d="M{x + 5.0 * outward:.2f},{y:.2f} '
            f'L{start - 3.0 * outward:.2f},{height - 0.35 * TEXT:.2f}" '
            f'stroke="{GREY}" stroke-width="0.9" fill="none"/>'
        )
        drawing.text(start, height, plain(name), TEXT, "start" if outward > 0.0 else "end", halo=True)


def _kept_apart(heights: list[float]) -> list[float]:
    """Base lines of names for bands at these heights: in order, APART or more from each other."""
    placed: list[float] = []
    for height in heights:
        placed.append(height if not placed else max(height, placed[-1] + APART))
    down = float(np.mean(placed) - np.mean(heights))
    return [height - down + 0.35 * TEXT for height in placed]


def _bar(drawing: Drawing, outward: float) -> None:
    """A scale bar in the lower corner behind the wall."""
    length = BAR_MM * drawing.scale
    x, y = drawing.width - 12.0 - length if outward > 0.0 else 12.0, drawing.height - 12.0
    drawing.text(x + 0.5 * length, y - 8.0, f"{BAR_MM:g} mm", TEXT, "middle", halo=True)
    drawing.parts.append(
        f'<path d="M{x:.2f},{y - 4:.2f} v8 m0,-4 h{length:.2f} m0,-4 v8" stroke="{BLACK}" fill="none" '
        'stroke-width="1.4"/>'
    )
