"""A small writer of SVG: shapes in millimetres of the drawing, text in units of the page."""

from __future__ import annotations

from xml.sax.saxutils import escape, quoteattr

import numpy as np

FONT = "Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif"
LETTER = 0.56  # width of a letter over the size of the text, on the wide side
INK_STEP = 4.0  # page units between the points kept of a line, for labels to keep away from


class Drawing:
    """Gathers shapes; millimetres (u to the right, z up) become page units at `scale` per mm.

    low, high : (u, z) corners of what is shown, mm. margins : left, top, right, bottom, in page units.
    named : whether shapes carry their names; a drawing set into another one leaves them out.
    """

    def __init__(self, low, high, scale: float, margins=(0.0, 0.0, 0.0, 0.0), named: bool = True):
        self.low, self.high, self.scale, self.margins, self.named = low, high, scale, margins, named
        self.width = (high[0] - low[0]) * scale + margins[0] + margins[2]
        self.height = (high[1] - low[1]) * scale + margins[1] + margins[3]
        self.parts: list[str] = []
        self.ink: list[np.ndarray] = []

    def at(self, point) -> tuple[float, float]:
        """Page place of a point (u, z) in mm."""
        return (
            self.margins[0] + (point[0] - self.low[0]) * self.scale,
            self.margins[1] + (self.high[1] - point[1]) * self.scale,
        )

    def line(
        self,
        points,
        stroke: str,
        width: float,
        dash: str = "",
        fill: str = "none",
        closed: bool = False,
        opacity: float = 1.0,
        ident: str = "",
    ) -> None:
        """A polyline or polygon through points in mm."""
        places = [self.at(point) for point in points]
        if stroke != "none":
            self._keep_ink(places + places[:1] if closed else places)
        path = " ".join(f"{x:.2f},{y:.2f}" for x, y in places)
        more = (f' stroke-dasharray="{dash}"' if dash else "") + (
            f' fill-opacity="{opacity:g}"' if opacity < 1 else ""
        )
        self.parts.append(
            f'<{"polygon" if closed else "polyline"} points="{path}" fill="{fill}" stroke="{stroke}" '
            f'stroke-width="{width:g}" stroke-linejoin="round" stroke-linecap="round"{more}'
            f"{self._name(ident)}/>"
        )

    def stripe(self, points, stroke: str, width: float) -> None:
        """A line through points in mm with square ends: as long as what it stands for."""
        path = " ".join(f"{x:.2f},{y:.2f}" for x, y in map(self.at, points))
        self.parts.append(
            f'<polyline points="{path}" fill="none" stroke="{stroke}" stroke-width="{width:g}"/>'
        )

    def dot(self, point, radius: float, stroke: str, fill: str, width: float = 1.5, ident: str = "") -> None:
        """A circle of a size in page units about a point in mm."""
        x, y = self.at(point)
        self._keep_ink([(x - radius, y), (x + radius, y)])
        self.parts.append(
            f'<circle cx="{x:.2f}" cy="{y:.2f}" r="{radius:g}" fill="{fill}" stroke="{stroke}" '
            f'stroke-width="{width:g}"{self._name(ident)}/>'
        )

    def cross(self, point, arm: float, stroke: str, width: float = 2.0, ident: str = "") -> None:
        """A leaning cross of a size in page units at a point in mm."""
        x, y = self.at(point)
        self._keep_ink([(x - arm, y - arm), (x + arm, y + arm)])
        self.parts.append(
            f'<path d="M{x - arm:.2f},{y - arm:.2f} l{2 * arm:g},{2 * arm:g} m0,{-2 * arm:g} '
            f'l{-2 * arm:g},{2 * arm:g}" stroke="{stroke}" stroke-width="{width:g}" fill="none"'
            f"{self._name(ident)}/>"
        )

    def arrow(self, tip, direction, stroke: str, size: float = 9.0) -> None:
        """A filled arrow head at a tip in mm, along a direction (u, z)."""
        d = np.array([direction[0], -direction[1]]) / np.hypot(*direction)
        s = np.array([-d[1], d[0]])
        tip_at = np.array(self.at(tip))
        corners = [tip_at, *(tip_at - size * d + sign * 0.38 * size * s for sign in (1.0, -1.0))]
        path = " ".join(f"{a:.2f},{b:.2f}" for a, b in corners)
        self.parts.append(f'<polygon points="{path}" fill="{stroke}"/>')

    def text(
        self,
        x: float,
        y: float,
        words: str,
        size: float,
        anchor: str = "start",
        weight: str = "normal",
        fill: str = "#000000",
        halo: bool = False,
    ) -> None:
        """Text at a page place; a white halo keeps it readable over lines."""
        self._keep_box(x, y, words, size, anchor)
        more = (
            ' stroke="#ffffff" stroke-width="3.5" stroke-linejoin="round" paint-order="stroke"'
            if halo
            else ""
        )
        self.parts.append(
            f'<text x="{x:.2f}" y="{y:.2f}" font-family={quoteattr(FONT)} font-size="{size:g}" '
            f'text-anchor="{anchor}" font-weight="{weight}" fill="{fill}"{more}>{escape(words)}</text>'
        )

    def title(self, x: float, y: float, head: str, rest: str, head_size: float, size: float) -> None:
        """A heavy head and what follows it on the same line, whatever the letters' width."""
        self.parts.append(
            f'<text x="{x:.2f}" y="{y:.2f}" font-family={quoteattr(FONT)}><tspan font-size="{head_size:g}" '
            f'font-weight="bold">{escape(head)}</tspan><tspan dx="14" font-size="{size:g}">{escape(rest)}'
            "</tspan></text>"
        )

    def clearest(self, places, words: str, size: float) -> tuple[np.ndarray, float]:
        """The place (2,), page units, where words centred there stand farthest from ink, and how far."""
        places = np.asarray(places, dtype=float)
        half = 0.5 * np.array([LETTER * size * len(words), size])
        ink = np.concatenate(self.ink)
        off = np.abs(places[:, None, :] - ink[None, :, :]) - half
        # Outside the box the distance to it, inside it how deep.
        gap = np.linalg.norm(np.maximum(off, 0.0), axis=2) + np.minimum(off.max(axis=2), 0.0)
        best = int(np.argmax(np.round(gap.min(axis=1), 2)))
        return places[best], float(gap[best].min())

    def inset(self, inner: "Drawing", x: float, y: float) -> None:
        """Set another drawing into this one, its upper left corner at a page place, cut off at its edges."""
        size = f'width="{inner.width:.2f}" height="{inner.height:.2f}"'
        self.parts += [
            f'<svg x="{x:.2f}" y="{y:.2f}" {size} viewBox="0 0 {inner.width:.2f} {inner.height:.2f}" '
            'overflow="hidden">',
            f'<rect {size} fill="#ffffff"/>',
            *inner.parts,
            f'<rect x="0.75" y="0.75" width="{inner.width - 1.5:.2f}" height="{inner.height - 1.5:.2f}" '
            'fill="none" stroke="#707070" stroke-width="1.5"/>',
            "</svg>",
        ]

    def written(self, title: str) -> str:
        """The whole SVG as text."""
        head = (
            f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {self.width:.2f} {self.height:.2f}" '
            f'width="{self.width:.0f}" height="{self.height:.0f}" role="img">'
        )
        back = f'<rect width="{self.width:.2f}" height="{self.height:.2f}" fill="#ffffff"/>'
        return "\n".join([head, f"<title>{escape(title)}</title>", back, *self.parts, "</svg>"]) + "\n"

    def _name(self, ident: str) -> str:
        return f' id="{ident}"' if ident and self.named else ""

    def _keep_ink(self, places) -> None:
        """Points along a line, for labels to keep away from."""
        for a, b in zip(places[:-1], places[1:]):
            a, b = np.array(a), np.array(b)
            steps = int(np.hypot(*(b - a)) // INK_STEP) + 2
            self.ink.append(a + np.linspace(0.0, 1.0, steps)[:, None] * (b - a))

    def _keep_box(self, x: float, y: float, words: str, size: float, anchor: str) -> None:
        """Points of the middle line of a text."""
        wide = LETTER * size * len(words)
        left = x - {"start": 0.0, "middle": 0.5, "end": 1.0}[anchor] * wide
        self._keep_ink([(left, y), (left + wide, y)])
        self._keep_ink([(left, y - 0.7 * size), (left + wide, y - 0.7 * size)])
