"""A small writer of SVG: shapes in millimetres of the drawing, text in points of the page."""

from __future__ import annotations

from xml.sax.saxutils import escape, quoteattr

import numpy as np

FONT = "Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif"


class Drawing:
    """Gathers shapes; millimetres (u to the right, z up) become page units at `scale` per mm.

    low, high : (u, z) corners of what is shown, mm. margins : left, top, right, bottom, in page units.
    """

    def __init__(self, low, high, scale: float, margins: tuple[float, float, float, float]):
        self.low, self.high, self.scale, self.margins = low, high, scale, margins
        self.width = (high[0] - low[0]) * scale + margins[0] + margins[2]
        self.height = (high[1] - low[1]) * scale + margins[1] + margins[3]
        self.parts: list[str] = []

    def at(self, point) -> tuple[float, float]:
        """Page place of a point (u, z) in mm."""
        return (self.margins[0] + (point[0] - self.low[0]) * self.scale,
                self.margins[1] + (self.high[1] - point[1]) * self.scale)

    def line(self, points, stroke: str, width: float, dash: str = "", fill: str = "none", closed: bool = False,
             opacity: float = 1.0, ident: str = "") -> None:
        """A polyline or polygon through points in mm."""
        path = " ".join(f"{x:.2f},{y:.2f}" for x, y in map(self.at, points))
        more = (f' stroke-dasharray="{dash}"' if dash else "") + (f' fill-opacity="{opacity:g}"' if opacity < 1 else "")
        more += f' id="{ident}"' if ident else ""
        self.parts.append(f'<{"polygon" if closed else "polyline"} points="{path}" fill="{fill}" stroke="{stroke}" '
                          f'stroke-width="{width:g}" stroke-linejoin="round" stroke-linecap="round"{more}/>')

    def dot(self, point, radius: float, stroke: str, fill: str, width: float = 1.5, ident: str = "") -> None:
        """A circle of a size in page units about a point in mm."""
        x, y = self.at(point)
        name = f' id="{ident}"' if ident else ""
        self.parts.append(f'<circle cx="{x:.2f}" cy="{y:.2f}" r="{radius:g}" fill="{fill}" stroke="{stroke}" '
                          f'stroke-width="{width:g}"{name}/>')

    def arrow(self, tip, direction, stroke: str, size: float = 9.0) -> None:
        """A filled arrow head at a tip in mm, along a direction (u, z)."""
        x, y = self.at(tip)
        d = np.array([direction[0], -direction[1]]) / np.hypot(*direction)
        s = np.array([-d[1], d[0]])
        tip_at = np.array([x, y])
        corners = [tip_at, *(tip_at - size * d + sign * 0.38 * size * s for sign in (1.0, -1.0))]
        path = " ".join(f"{a:.2f},{b:.2f}" for a, b in corners)
        self.parts.append(f'<polygon points="{path}" fill="{stroke}"/>')

    def text(self, x: float, y: float, words: str, size: float, anchor: str = "start", weight: str = "normal",
             fill: str = "#000000", halo: bool = False) -> None:
        """Text at a page place; a white halo keeps it readable over lines."""
        more = ' stroke="#ffffff" stroke-width="3.5" stroke-linejoin="round" paint-order="stroke"' if halo else ""
        self.parts.append(f'<text x="{x:.2f}" y="{y:.2f}" font-family={quoteattr(FONT)} font-size="{size:g}" '
                          f'text-anchor="{anchor}" font-weight="{weight}" fill="{fill}"{more}>{escape(words)}</text>')

    def label(self, point, words: str, size: float, dx: float = 0.0, dy: float = 0.0, anchor: str = "start",
              weight: str = "normal", fill: str = "#000000") -> None:
        """Text beside a point in mm, moved by page units."""
        x, y = self.at(point)
        self.text(x + dx, y + dy, words, size, anchor, weight, fill, halo=True)

    def written(self, title: str) -> str:
        """The whole SVG as text."""
        head = (f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {self.width:.2f} {self.height:.2f}" '
                f'width="{self.width:.0f}" height="{self.height:.0f}" role="img">')
        back = f'<rect width="{self.width:.2f}" height="{self.height:.2f}" fill="#ffffff"/>'
        return "\n".join([head, f"<title>{escape(title)}</title>", back, *self.parts, "</svg>"]) + "\n"
